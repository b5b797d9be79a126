"""Definition, references and rename of devices and filters."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import pytest

from lsp_client import Client, applied, cut_out, position

URI = "file:///crane/hoist.bands.yaml"

TEXT = """\
format: bandwright/1
devices:
  größer-node: # 🏗️
    sample_rate: 4 kHz
  other-node:
    sample_rate: 8 kHz
filters:
  strain-slow:
    device: größer-node
    bands: [pass: {to: 20 Hz, ripple: 1 dB}, stop: {from: 40 Hz, attenuation: 40 dB}]
  torsion: {purpose: '🏗️ µ', device: "größer-node", bands: [
    pass: {to: 20 Hz, ripple: 1 dB}, stop: {from: 40 Hz, attenuation: 40 dB}]}
  free:
    device: other-node
    bands: [pass: {to: 20 Hz, ripple: 1 dB}, stop: {from: 40 Hz, attenuation: 40 dB}]
"""
REQUEST_FAILED = -32803


@pytest.fixture(scope="module", params=["utf-8", "utf-16", "utf-32"])
def encoded(request: pytest.FixtureRequest) -> Iterator[tuple[Client, str]]:
    encoding = str(request.param)
    for client in connected({"general": {"positionEncodings": [encoding]}}):
        yield client, encoding


@pytest.fixture(scope="module")
def client() -> Iterator[Client]:
    yield from connected({"textDocument": {"rename": {"prepareSupport": True}}})


def connected(abilities: dict[str, object]) -> Iterator[Client]:
    client = Client()
    client.initialize(abilities)
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def at(text: str, what: str, encoding: str = "utf-16", number: int = 0) -> dict[str, Any]:
    """The place inside the occurrence of `what` with this number."""
    start = -1
    for _ in range(number + 1):
        start = text.index(what, start + 1)
    return {"textDocument": {"uri": URI}, "position": position(text, start + 2, encoding)}


def renamed(
    client: Client, text: str, what: str, name: str, encoding: str = "utf-16", number: int = 0
) -> str:
    params = {**at(text, what, encoding, number), "newName": name}
    answer = client.request("textDocument/rename", params)
    return applied(text, answer["changes"][URI], encoding)


def refusal(client: Client, text: str, what: str, name: str, number: int = 0) -> str:
    """Why a name is refused."""
    client.open(URI, text)
    params = {**at(text, what, number=number), "newName": name}
    error = client.wait(id=client.ask("textDocument/rename", params))["error"]
    assert error["code"] == REQUEST_FAILED
    return str(error["message"])


def test_a_device_is_found_from_its_filters_and_the_other_way_round(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    text = "\ufeff" + TEXT.replace("\n", "\r\n")
    client.open(URI, text)
    for number in range(3):
        place = at(text, "größer-node", encoding, number)
        (found,) = client.request("textDocument/definition", place)
        assert found["uri"] == URI
        assert found["range"]["start"] == position(text, text.index("größer-node"), encoding)
        assert cut_out(text, found["range"], encoding) == "größer-node"
        uses = client.request("textDocument/references", {**place, "context": {"includeDeclaration": False}})
        assert [one["range"]["start"]["line"] for one in uses] == [8, 10]
        assert [cut_out(text, one["range"], encoding).strip('"') for one in uses] == ["größer-node"] * 2
        every = client.request("textDocument/references", {**place, "context": {"includeDeclaration": True}})
        assert [one["range"]["start"]["line"] for one in every] == [2, 8, 10]


@pytest.mark.parametrize("what", ["format", "ripple", "20 Hz", "purpose", "sample_rate"])
def test_other_words_lead_nowhere(client: Client, what: str) -> None:
    client.open(URI, TEXT)
    place = at(TEXT, what)
    assert client.request("textDocument/definition", place) is None
    assert client.request("textDocument/prepareRename", place) is None
    assert client.request("textDocument/rename", {**place, "newName": "x"}) is None
    assert (
        client.request("textDocument/references", {**place, "context": {"includeDeclaration": True}}) is None
    )


def test_a_device_that_is_not_there_has_no_definition(client: Client) -> None:
    text = TEXT.replace("device: other-node", "device: lost-node")
    client.open(URI, text)
    assert client.request("textDocument/definition", at(text, "lost-node")) == []


def test_a_device_is_renamed_with_every_filter_that_names_it(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    text = TEXT.replace("\n", "\r\n")
    client.open(URI, text)
    expected = text.replace('"größer-node"', "hoist").replace("größer-node", "hoist")
    for number in range(3):
        assert renamed(client, text, "größer-node", "hoist", encoding, number) == expected


def test_a_filter_is_renamed_alone(client: Client) -> None:
    client.open(URI, TEXT)
    shown = client.request("textDocument/prepareRename", at(TEXT, "torsion"))
    assert shown["placeholder"] == "torsion"
    assert cut_out(TEXT, shown["range"]) == "torsion"
    assert renamed(client, TEXT, "torsion", "längs-2.a") == TEXT.replace("torsion", "längs-2.a")
    # A filter may be called like a device.
    assert renamed(client, TEXT, "torsion", "other-node") == TEXT.replace("torsion", "other-node")


@pytest.mark.parametrize(
    ("name", "why"),
    [
        ("two words", "is no plain name"),
        ("", "is no plain name"),
        ("a: b", "is no plain name"),
        ("-a", "is no plain name"),
        ("a\nb", "is no plain name"),
        ("strain-slow", "A filter is called `strain-slow` already"),
        ("bands", "`bands` is a key of the band file"),
        ("filters", "`filters` is a key of the band file"),
    ],
)
def test_a_name_that_will_not_do_is_refused_with_the_reason(client: Client, name: str, why: str) -> None:
    assert why in refusal(client, TEXT, "torsion", name)


def test_of_two_devices_with_one_name_only_that_at_the_place_is_renamed(client: Client) -> None:
    text = TEXT.replace("other-node:", "größer-node:")
    client.open(URI, text)
    assert renamed(client, text, "größer-node", "hoist") == text.replace("größer-node", "hoist", 1)
    assert "2 devices are called `größer-node`" in refusal(client, text, "größer-node", "hoist", number=2)


def test_the_edits_carry_the_version_where_the_client_takes_it() -> None:
    for client in connected({"workspace": {"workspaceEdit": {"documentChanges": True}}}):
        client.open(URI, TEXT, version=5)
        answer = client.request("textDocument/rename", {**at(TEXT, "torsion"), "newName": "twist"})
        (change,) = answer["documentChanges"]
        assert change["textDocument"] == {"uri": URI, "version": 5}
