"""The outline, workspace symbols, folding and selection ranges of a file."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from typing import Any

import pytest

from lsp_client import Client, cut_out, position

URI = "file:///crane/hoist.bands.yaml"
OTHER = "file:///crane/slew.bands.yaml"

TEXT = """\
# Filters of the hoist 🏗️,
# as they are built.
format: bandwright/1

devices:
  hoist-node:
    sample_rate: 4 kHz
    arithmetic: {coefficients: q31, data: q15}

filters:
  strain-slow:
    purpose: Überlast 🏗️ µ
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop:
          from: 25 Hz
          attenuation: 70 dB
    family: butterworth   # the old one

  größer: {purpose: '🏗️ µ', sample_rate: 4 kHz, bands: [pass: {to: 20 Hz, gain: {min: 0.9 x, max: 1}}]}
"""
NESTED = {"textDocument": {"documentSymbol": {"hierarchicalDocumentSymbolSupport": True}}}


def connected(abilities: dict[str, object]) -> Iterator[Client]:
    client = Client()
    client.initialize(abilities)
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


@pytest.fixture(scope="module", params=["utf-8", "utf-16", "utf-32"])
def encoded(request: pytest.FixtureRequest) -> Iterator[tuple[Client, str]]:
    encoding = str(request.param)
    for client in connected({**NESTED, "general": {"positionEncodings": [encoding]}}):
        yield client, encoding


@pytest.fixture(scope="module")
def plain() -> Iterator[Client]:
    yield from connected({})


@pytest.fixture(scope="module")
def nested() -> Iterator[Client]:
    yield from connected(NESTED)


def ask(client: Client, method: str, text: str | None = TEXT, **params: object) -> list[Any]:
    if text is not None:
        client.open(URI, text)
    return list(client.request(method, {"textDocument": {"uri": URI}, **params}))


def test_the_outline_nests_bands_in_their_filters(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    text = "\ufeff" + TEXT.replace("\n", "\r\n")
    device, slow, bigger = ask(client, "textDocument/documentSymbol", text)
    assert (device["name"], device["detail"]) == ("hoist-node", "4 kHz, q31")
    assert (slow["name"], slow["detail"]) == ("strain-slow", "Low-pass, 20 Hz to 25 Hz at 4 kHz")
    bands = [(band["name"], band["detail"]) for band in slow["children"]]
    assert bands == [("pass to 20 Hz", "ripple 0.1 dB"), ("stop from 25 Hz", "attenuation 70 dB")]
    assert [band["detail"] for band in bigger["children"]] == ["gain 0.9 x to 1"]
    assert cut_out(text, bigger["selectionRange"], encoding) == "größer"
    assert cut_out(text, bigger["range"], encoding).endswith("max: 1}}]}")
    whole = cut_out(text, slow["range"], encoding)
    assert whole.startswith("strain-slow")
    assert whole.endswith("butterworth")
    for symbol in (*slow["children"], device, slow, bigger):
        assert cut_out(text, symbol["selectionRange"], encoding) in cut_out(text, symbol["range"], encoding)


def test_the_outline_is_flat_where_the_client_wants_it(plain: Client) -> None:
    found = ask(plain, "textDocument/documentSymbol")
    names = [(one["name"], one.get("containerName")) for one in found]
    assert names == [
        ("hoist-node", None),
        ("strain-slow", None),
        ("pass to 20 Hz", "strain-slow"),
        ("stop from 25 Hz", "strain-slow"),
        ("größer", None),
        ("pass to 20 Hz", "größer"),
    ]
    assert {one["location"]["uri"] for one in found} == {URI}


@pytest.mark.parametrize(
    "text", ["", "filters: 3", "filters:\n  a", "filters:\n  a:\n    bands: [", "\t", "- x"]
)
def test_half_a_file_has_half_an_outline(nested: Client, text: str) -> None:
    found = ask(nested, "textDocument/documentSymbol", text)
    assert [one["name"] for one in found] == (["a"] if "a" in text else [])
    assert isinstance(ask(nested, "textDocument/foldingRange", None), list)
    assert len(ask(nested, "textDocument/selectionRange", None, positions=[position(text, len(text))])) == 1


def test_workspace_symbols_are_of_all_open_files(plain: Client) -> None:
    plain.open(URI, TEXT)
    plain.open(OTHER, TEXT.replace("strain-slow", "slew-rate"))

    def found(query: str) -> list[tuple[str, str]]:
        answer = plain.request("workspace/symbol", {"query": query})
        return [(one["name"], one["location"]["uri"]) for one in answer]

    assert found("strain") == [("strain-slow", URI)]
    assert found("HNODE") == [("hoist-node", URI), ("hoist-node", OTHER)]
    assert len(found("")) == 6
    assert found("nowhere") == []
    plain.notify("textDocument/didClose", {"textDocument": {"uri": OTHER}})
    assert found("slew") == []


def test_what_takes_several_lines_folds(plain: Client) -> None:
    lines = TEXT.splitlines()
    folds = ask(plain, "textDocument/foldingRange")
    shown = [(lines[fold["startLine"]].strip(), lines[fold["endLine"]].strip()) for fold in folds]
    last = lines[-1].strip()
    butterworth = "family: butterworth   # the old one"
    assert shown == [
        (lines[0], lines[1]),
        ("devices:", "arithmetic: {coefficients: q31, data: q15}"),
        ("hoist-node:", "arithmetic: {coefficients: q31, data: q15}"),
        ("filters:", last),
        ("strain-slow:", butterworth),
        ("bands:", "attenuation: 70 dB"),
        ("- stop:", "attenuation: 70 dB"),
    ]
    assert [fold.get("kind") for fold in folds] == ["comment", *[None] * 6]


def test_a_selection_grows_from_the_word_to_the_file(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    text = TEXT.replace("\n", "\r\n")
    places = [text.index("20 Hz, gain") + 1, text.index("25 Hz")]
    positions = [position(text, place, encoding) for place in places]
    in_flow, in_block = ask(client, "textDocument/selectionRange", text, positions=positions)
    assert selected(text, in_flow, encoding)[:3] == [
        "20 Hz",
        "to: 20 Hz",
        "{to: 20 Hz, gain: {min: 0.9 x, max: 1}}",
    ]
    words = selected(text, in_block, encoding)
    assert words[:2] == ["25 Hz", "from: 25 Hz"]
    assert words[-1] == text
    assert words[-2].startswith("filters:")
    assert all(inner in outer for inner, outer in pairwise(words))
    assert any(word.startswith("strain-slow:") for word in words)


def selected(text: str, chain: dict[str, Any], encoding: str) -> list[str]:
    """The texts of a chain, from the inside out."""
    found = [cut_out(text, chain["range"], encoding)]
    return [*found, *selected(text, chain["parent"], encoding)] if "parent" in chain else found
