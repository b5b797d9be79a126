"""What somebody at a keyboard sees: findings come while typing, remedies end them, and closing clears all."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import pytest

from lsp_client import Client, applied, cut_out, position

URI = "file:///crane/hoist.bands.yaml"

WIDE = """\
format: bandwright/1

filters:
  strain-slow:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 55 Hz, attenuation: 70 dB}
    family: butterworth   # as the old monitor had it
    structure: cascade
    arithmetic: float64
"""
NARROW = WIDE.replace("55 Hz", "25 Hz")

ABILITIES = {
    "textDocument": {
        "publishDiagnostics": {"relatedInformation": True, "tagSupport": {"valueSet": [1, 2]}},
        "codeAction": {"codeActionLiteralSupport": {"codeActionKind": {"valueSet": ["quickfix"]}}},
    },
    "workspace": {"workspaceEdit": {"documentChanges": True, "changeAnnotationSupport": {}}},
}


@pytest.fixture
def client() -> Iterator[Client]:
    client = Client()
    client.initialize(ABILITIES)
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def quick_fixes(client: Client, text: str, at: str) -> list[dict[str, Any]]:
    place = position(text, text.index(at))
    wanted = {"start": place, "end": place}
    params = {"textDocument": {"uri": URI}, "range": wanted, "context": {"diagnostics": []}}
    return list(client.request("textDocument/codeAction", params))


def test_a_narrower_edge_brings_a_finding_and_its_remedy_takes_it_away(client: Client) -> None:
    client.open(URI, WIDE)
    assert client.diagnostics(URI, 1) == []

    client.change(URI, NARROW, 2)
    (finding,) = client.diagnostics(URI, 2)
    assert finding["code"] == "order/over-maximum"
    assert finding["severity"] == 1
    assert finding["source"] == "bandwright"
    assert cut_out(NARROW, finding["range"]) == "butterworth"
    # Orders 45 and 9: scipy.signal.buttord and ellipord give the same for this mask.
    assert "order 45, maximum 12" in finding["message"]
    assert "elliptic filter needs order 9" in finding["message"]
    assert finding["codeDescription"]["href"].startswith("file:///")
    assert finding["codeDescription"]["href"].endswith("/guide/findings/order/over-maximum.md")

    best = next(action for action in quick_fixes(client, NARROW, "butterworth") if action.get("isPreferred"))
    assert best["kind"] == "quickfix"
    assert best["diagnostics"] == [finding]
    (change,) = best["edit"]["documentChanges"]
    assert change["textDocument"] == {"uri": URI, "version": 2}
    mended = applied(NARROW, change["edits"])
    assert mended.count("\n") == NARROW.count("\n")
    assert "# as the old monitor had it" in mended

    client.change(URI, mended, 3)
    assert finding["code"] not in [each["code"] for each in client.diagnostics(URI, 3)]


def test_closing_a_file_clears_it(client: Client) -> None:
    client.open(URI, NARROW)
    assert client.diagnostics(URI, 1)
    client.notify("textDocument/didClose", {"textDocument": {"uri": URI}})
    assert client.diagnostics(URI, None) == []


def test_a_file_that_is_opened_again_is_looked_at_afresh(client: Client) -> None:
    client.open(URI, NARROW)
    client.open(URI, WIDE, version=7)
    assert client.diagnostics(URI, 7) == []


def test_nothing_is_published_for_a_version_that_has_passed(client: Client) -> None:
    client.open(URI, WIDE)
    for version in range(2, 60):
        client.change(URI, NARROW if version % 2 else WIDE, version)
    assert [each["code"] for each in client.diagnostics(URI, 59)] == ["order/over-maximum"]
    shown = [message["params"] for message in client.received]
    assert [params["version"] for params in shown] == sorted({params["version"] for params in shown})
    for params in shown:
        assert bool(params["diagnostics"]) == (params["version"] % 2 == 1 and params["version"] > 1)


def test_a_figure_that_takes_exact_work_comes_after_a_pause(client: Client) -> None:
    text = NARROW
    for old, new in (("butterworth", "elliptic"), ("cascade", "direct-form-2"), ("float64", "q31")):
        text = text.replace(old, new)
    client.open(URI, text)
    at_first = [each["code"] for each in client.diagnostics(URI, 1)]
    later = [each["code"] for each in client.diagnostics(URI, 1)]
    assert set(later) - set(at_first) == {"coefficient/too-few-bits"}


def test_other_yaml_files_are_left_alone(client: Client) -> None:
    other = "file:///crane/compose.yaml"
    client.open(other, "services: 3\n")
    client.open(URI, WIDE)
    assert client.diagnostics(URI, 1) == []
    assert client.received == []
    place = {"textDocument": {"uri": other}, "position": {"line": 0, "character": 0}}
    assert client.request("textDocument/hover", place) is None


def test_an_unsaved_file_is_a_band_file_if_its_editor_says_so(client: Client) -> None:
    client.open("untitled:Untitled-1", NARROW)
    assert [each["code"] for each in client.diagnostics("untitled:Untitled-1", 1)] == ["order/over-maximum"]


def test_accepted_findings_are_no_problems(client: Client) -> None:
    entry = "{finding: order/over-maximum, up_to: 45, reason: It runs once a day.}"
    client.open(URI, f"{NARROW}    accepted:\n      - {entry}\n")
    assert client.diagnostics(URI, 1) == []
