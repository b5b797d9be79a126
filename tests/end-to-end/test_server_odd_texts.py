"""Texts that nobody would write, but editors may send: each is answered, and none ends the server."""

from __future__ import annotations

import random
from collections.abc import Iterator
from pathlib import Path

import pytest

from lsp_client import Client, offset

URI = "file:///crane/hoist.bands.yaml"
DEMO = Path(__file__).resolve().parents[2] / "linter/bandwright/demo/hoist.bands.yaml"

ODD = {
    "nothing": "",
    "a mark alone": "\ufeff",
    "blank lines": "\n\r\n\r",
    "a lone surrogate": "format: bandwright/1\nfilters:\n  \ud800: {purpose: \udc00}\n",
    "zeros": "\x00" * 300,
    "form feeds": "format: bandwright/1\x0c\x0c\nfilters:\x0c\n  a:\x0c\n",
    "separators": "format: bandwright/1\u2028filters:\u2029  a:\x85    bands: []\n",
    "returns only": "format: bandwright/1\rfilters:\r  a:\r    purpose: b\r    familly: elliptic\r",
    "deep brackets": "filters: " + "[" * 10_000,
    "one long line": "filters: {a: {purpose: " + "x" * 200_000 + "}}",
    "tabs": "filters:\n\ta:\n\t\tbands:\n\t\t\t- pass: {to: 1 Hz}\n",
    "aliases": "a: &a [x]\nb: &b [*a, *a]\nfilters: *b\n",
    "two documents": "---\nfilters: {}\n---\nfilters: {}\n",
    "not text": "".join(map(chr, range(1, 1000))),
}


@pytest.fixture(scope="module")
def client() -> Iterator[Client]:
    client = Client()
    client.initialize({"textDocument": {"hover": {"contentFormat": ["markdown"]}}})
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def look_around(client: Client, text: str, dice: random.Random) -> None:
    """Ask for hovers at a few places, in the text and beyond."""
    for _ in range(3):
        line, character = dice.randrange(30), dice.randrange(60)
        place = {"textDocument": {"uri": URI}, "position": {"line": line, "character": character}}
        found = client.request("textDocument/hover", place)
        if found is not None:
            assert offset(text, found["range"]["start"]) <= offset(text, found["range"]["end"])


@pytest.mark.parametrize("text", ODD.values(), ids=ODD)
def test_an_odd_text_is_answered(client: Client, text: str) -> None:
    client.open(URI, text)
    for finding in client.diagnostics(URI, 1):
        assert finding["message"]
        start, end = finding["range"]["start"], finding["range"]["end"]
        assert (start["line"], start["character"]) <= (end["line"], end["character"])
    if not any("\ud800" <= letter <= "\udfff" for letter in text):  # these have no codec to count them with
        look_around(client, text, random.Random(1))


def test_a_text_that_falls_apart_is_answered_at_every_step(client: Client) -> None:
    dice, text = random.Random(3), DEMO.read_text(encoding="utf-8")
    client.open(URI, text)
    for version in range(2, 150):
        at = dice.randrange(len(text))
        piece = dice.choice(
            ("", "", "\n", "{", "]", "'", "#", ": ", "🏗️", "\t", "- ", "&x ", text[at : at + 40])
        )
        text = text[:at] + piece + text[at + dice.randrange(6) :]
        client.change(URI, text, version)
        client.diagnostics(URI, version)
        look_around(client, text, dice)
