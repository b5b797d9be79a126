"""Inlay hints: what stands beside families, transitions, devices and ripples, and where."""

from __future__ import annotations

from collections.abc import Iterator

import pytest

from lsp_client import Client, cut_out, offset, position

URI = "file:///crane/hoist.bands.yaml"

TEXT = """\
format: bandwright/1
devices:
  hoist-node:
    sample_rate: 4 kHz
    arithmetic: q31
    structure: [cascade, symmetric]
    at_most: {order: 16, delay: 300 ms}
filters:
  strain-slow:
    purpose: Überlast 🏗️ µ
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
  torsion: {purpose: '🏗️ µ', sample_rate: 4 kHz, family: elliptic, bands: [
    pass: {to: 20 Hz, ripple: 1 dB}, stop: {from: 40 Hz, attenuation: 60 dB}]}
  envelope:
    device: hoist-node
    sample_rate: 16 kHz
    purpose: '🏗️'
    bands:
      - stop: {to: 1.6 kHz, attenuation: 50 dB}
      - pass: {from: 2 kHz, to: 4 kHz, ripple: ±0.05 dB}
      - stop: {from: 4.6 kHz, attenuation: 60 dB}
    phase: linear
"""


@pytest.fixture(scope="module", params=["utf-8", "utf-16", "utf-32"])
def encoded(request: pytest.FixtureRequest) -> Iterator[tuple[Client, str]]:
    encoding = str(request.param)
    client = Client()
    client.initialize({"general": {"positionEncodings": [encoding]}})
    yield client, encoding
    assert client.shut_down() == 0
    assert client.errors() == ""


@pytest.fixture(scope="module")
def client() -> Iterator[Client]:
    client = Client()
    client.initialize()
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def hints(
    client: Client,
    text: str,
    within: tuple[int, int] | None = None,
    encoding: str = "utf-16",
    opened: bool = False,
) -> list[tuple[str, str]]:
    """Each hint with the part of its line that stands ahead of it."""
    if not opened:
        client.open(URI, text)
    start, end = within or (0, len(text))
    wanted = {"start": position(text, start, encoding), "end": position(text, end, encoding)}
    params = {"textDocument": {"uri": URI}, "range": wanted}
    found = []
    for hint in client.request("textDocument/inlayHint", params):
        assert hint["tooltip"]
        assert hint["paddingLeft"]
        line = {"line": hint["position"]["line"], "character": 0}
        ahead = cut_out(text, {"start": line, "end": hint["position"]}, encoding)
        found.append((ahead.strip(), hint["label"]))
    return found


def test_each_thing_has_its_figures_beside_it(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    text = TEXT.replace("\n", "\r\n")
    found = hints(client, text, encoding=encoding)
    shown = dict(found)
    assert shown["device: hoist-node"] == "q31, cascade or symmetric", "the last one has its own rate"
    assert ("device: hoist-node", "4 kHz, q31, cascade or symmetric") in found
    # 10^(0.1 / 20) = 1.01158, and (1.01158 - 1) / (1.01158 + 1) = 0.576 %.
    assert shown["- pass: {to: 20 Hz, ripple: 0.1 dB"] == "±0.05 dB, ±0.576 %"
    wide = "- pass: {from: 2 kHz, to: 4 kHz, ripple: ±0.05 dB"
    assert shown[wide] == "0.1 dB peak to peak, ±0.576 %"
    assert shown["- stop: {from: 25 Hz"] == "5 Hz wide, ratio 1.25"
    assert shown["- pass: {from: 2 kHz"] == "400 Hz wide, ratio 1.25"
    # scipy.signal.buttord gives 45 for this mask.
    assert shown["family: butterworth"] == "order 45"
    # scipy.signal.ellipord gives 5 for this mask.
    assert shown["torsion: {purpose: '🏗️ µ', sample_rate: 4 kHz, family: elliptic"] == "order 5"
    assert shown["envelope:"].startswith("equiripple, ~")
    assert shown["envelope:"].endswith(" taps")


def test_they_stand_in_the_order_of_the_text(client: Client) -> None:
    client.open(URI, TEXT)
    whole = {"start": position(TEXT, 0), "end": position(TEXT, len(TEXT))}
    params = {"textDocument": {"uri": URI}, "range": whole}
    places = [offset(TEXT, hint["position"]) for hint in client.request("textDocument/inlayHint", params)]
    assert places == sorted(places)
    assert len(places) > 8


def test_only_the_range_asked_for_is_answered(client: Client) -> None:
    start = TEXT.index("      - pass: {to")
    end = TEXT.index("      - stop: {from: 25")
    assert hints(client, TEXT, (start, end)) == [("- pass: {to: 20 Hz, ripple: 0.1 dB", "±0.05 dB, ±0.576 %")]
    assert hints(client, TEXT, (0, TEXT.index("filters"))) == []


def test_a_list_of_families_names_the_one_that_is_chosen(client: Client) -> None:
    text = TEXT.replace("family: butterworth", "family: [butterworth, elliptic]")
    # scipy.signal.ellipord gives 9 for this mask.
    assert dict(hints(client, text))["family: [butterworth, elliptic]"] == "elliptic, order 9"


def test_a_pinned_order_has_the_least_one_beside_its_family(client: Client) -> None:
    text = TEXT.replace("family: butterworth", "family: elliptic\n    order: 11")
    assert dict(hints(client, text))["family: elliptic"] == "least order 9"


def test_a_filter_that_does_not_parse_has_none_and_the_others_keep_theirs(client: Client) -> None:
    broken = TEXT.replace("ripple: 0.1 dB}", "ripple: 0.1 dB")
    ahead = [ahead for ahead, _ in hints(client, broken)]
    assert not any("ripple: 0.1 dB" in one or "butterworth" in one for one in ahead)
    assert "envelope:" in ahead


def test_a_mask_that_can_be_none_has_no_order(client: Client) -> None:
    found = hints(client, TEXT.replace("from: 25 Hz", "from: 15 Hz"))
    assert not any("butterworth" in ahead for ahead, _ in found)
    assert ("- pass: {to: 20 Hz, ripple: 0.1 dB", "±0.05 dB, ±0.576 %") in found


def test_a_file_that_is_not_open_has_none(client: Client) -> None:
    start = {"line": 0, "character": 0}
    params = {"textDocument": {"uri": "file:///other.bands.yaml"}, "range": {"start": start, "end": start}}
    assert client.request("textDocument/inlayHint", params) is None


def test_an_estimate_that_is_computed_meanwhile_comes_again() -> None:
    client = Client()
    client.initialize({"workspace": {"inlayHint": {"refreshSupport": True}}})
    text = TEXT[: TEXT.index("  strain")] + TEXT[TEXT.index("  envelope") :]
    assert dict(hints(client, text))["envelope:"].startswith("equiripple, ~")
    # A hover asks for the exact length.
    place = {"textDocument": {"uri": URI}, "position": position(text, text.index("envelope"))}
    assert client.request("textDocument/hover", place)
    refresh = client.wait(method="workspace/inlayHint/refresh")
    client.send(id=refresh["id"], result=None)
    while "~" in (words := dict(hints(client, text, opened=True))["envelope:"]):
        client.wait(method="workspace/inlayHint/refresh")
    assert words.startswith("equiripple, ")
    assert client.shut_down() == 0
