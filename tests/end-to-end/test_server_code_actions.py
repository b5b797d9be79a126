"""Quick fixes: where they are, what they carry, and what they do to the text."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import pytest

from lsp_client import Client, applied, cut_out, position

URI = "file:///crane/hoist.bands.yaml"

LITERALS = {"codeActionLiteralSupport": {"codeActionKind": {"valueSet": ["quickfix", "source"]}}}
PLAIN: dict[str, Any] = {"textDocument": {"codeAction": LITERALS}}
LAZY: dict[str, Any] = {
    "textDocument": {
        "codeAction": {**LITERALS, "dataSupport": True, "resolveSupport": {"properties": ["edit"]}}
    },
    "workspace": {"workspaceEdit": {"documentChanges": True, "changeAnnotationSupport": {}}},
}

# Ahead of the findings: characters of 1 to 4 bytes, of 1 and 2 units in UTF-16, and two that only some
# programs take for the end of a line. Lines end in CR LF, and a byte-order mark comes first.
HARD = (
    "\ufeffformat: bandwright/1\r\n"
    "# Überwachung 起重机 🏗️, line separator \u2028 and next line \x85 inside\r\n"
    "filters:\r\n"
    "  dehnung: {purpose: '🏗️ é 漢', family: butterworth, structure: cascade, arithmetic: float64,\r\n"
    "    sample_rate: 4 kHz,\r\n"
    "    bands: [pass: {to: 20 Hz, ripple: ±0.05 dB}, stop: {from: 25 Hz, attenuation: 70 dB}]}\r\n"
    "  größer:\r\n"
    "    purpose: '🏗️'\r\n"
    "    sample_rate: 4 kHz\r\n"
    "    structure: cascade\r\n"
    "    arithmetic: float64\r\n"
    "    familly: elliptic   # „Ü 🏗️“\r\n"
    "    bands: [pass: {to: 20 Hz, ripple: ±0.05 dB}, stop: {from: 45 Hz, attenuation: 70 dB}]\r\n"
)


@pytest.fixture(params=["utf-8", "utf-16", "utf-32"])
def encoding(request: pytest.FixtureRequest) -> str:
    return str(request.param)


@pytest.fixture
def client() -> Iterator[Client]:
    client = Client()
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""


def ask(
    client: Client, text: str, at: str, *, encoding: str = "utf-16", **context: object
) -> list[dict[str, Any]]:
    """The code actions at the first place where the text says `at`."""
    place = position(text, text.index(at) + 1, encoding)
    return list(
        client.request(
            "textDocument/codeAction",
            {
                "textDocument": {"uri": URI},
                "range": {"start": place, "end": place},
                "context": {"diagnostics": [], **context},
            },
        )
    )


def edits_of(action: Mapping[str, Any]) -> list[dict[str, Any]]:
    if "changes" in action["edit"]:
        return list(action["edit"]["changes"][URI])
    (change,) = action["edit"]["documentChanges"]
    return list(change["edits"])


def test_places_and_edits_are_right_in_every_encoding(client: Client, encoding: str) -> None:
    client.initialize({**PLAIN, "general": {"positionEncodings": [encoding]}})
    client.open(URI, HARD)
    shown = {each["code"]: each for each in client.all_diagnostics(URI)}
    assert cut_out(HARD, shown["order/over-maximum"]["range"], encoding) == "butterworth"
    assert cut_out(HARD, shown["key/unknown-key"]["range"], encoding) == "familly"

    family = next(one for one in ask(client, HARD, "butterworth", encoding=encoding) if "isPreferred" in one)
    mended = applied(HARD, edits_of(family), encoding)
    assert mended == HARD.replace("butterworth", family["title"].split(" family")[0].removeprefix("Use the "))

    (key,) = ask(client, HARD, "familly", encoding=encoding)
    assert applied(HARD, edits_of(key), encoding) == HARD.replace("familly", "family")


def test_no_fix_is_offered_beside_the_findings(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    assert ask(client, HARD, "purpose") == []
    assert ask(client, HARD, "filters") == []


def test_a_place_beyond_the_text_has_no_fix(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    far = {"line": 10_000, "character": 10_000}
    params = {
        "textDocument": {"uri": URI},
        "range": {"start": far, "end": far},
        "context": {"diagnostics": []},
    }
    assert client.request("textDocument/codeAction", params) == []


def test_a_fix_carries_its_finding_and_at_most_one_is_preferred(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    shown = client.all_diagnostics(URI)
    everything = {"start": {"line": 0, "character": 0}, "end": {"line": 99, "character": 0}}
    params = {"textDocument": {"uri": URI}, "range": everything, "context": {"diagnostics": []}}
    actions = client.request("textDocument/codeAction", params)
    assert len(actions) > 2
    assert {action["kind"] for action in actions} == {"quickfix"}
    assert all(action["diagnostics"][0] in shown for action in actions)
    assert [action.get("isPreferred") for action in actions].count(True) == 1


def test_a_client_of_few_abilities_gets_plain_edits(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    for action in ask(client, HARD, "butterworth"):
        assert set(action["edit"]) == {"changes"}
        assert all(set(edit) == {"range", "newText"} for edit in edits_of(action))


def test_a_fix_that_changes_the_requirement_asks_first(client: Client) -> None:
    client.initialize(LAZY)
    client.open(URI, HARD, version=4)
    actions = ask(client, HARD, "butterworth")
    asking = [action for action in actions if "changeAnnotations" in action["edit"]]
    assert any("from 12 to 45" in action["title"] for action in asking), [a["title"] for a in actions]
    for action in asking:
        ((name, annotation),) = action["edit"]["changeAnnotations"].items()
        assert annotation["needsConfirmation"] is True
        assert annotation["description"] == action["title"]
        assert all(edit["annotationId"] == name for edit in edits_of(action))
        assert "isPreferred" not in action
    for action in actions:
        (change,) = action["edit"]["documentChanges"]
        assert change["textDocument"] == {"uri": URI, "version": 4}


def test_a_client_that_takes_no_edits_in_actions_gets_none(client: Client) -> None:
    client.initialize()
    client.open(URI, HARD)
    place = position(HARD, HARD.index("butterworth"))
    params = {
        "textDocument": {"uri": URI},
        "range": {"start": place, "end": place},
        "context": {"diagnostics": []},
    }
    assert client.request("textDocument/codeAction", params) is None


@pytest.mark.parametrize(
    ("only", "kinds"),
    [
        (["quickfix"], {"quickfix"}),
        (["source"], {"source.fixAll.bandwright"}),
        (["source.fixAll"], {"source.fixAll.bandwright"}),
        (["source.fixAll.bandwright"], {"source.fixAll.bandwright"}),
        (["source.fixAllOfIt"], set()),
        (["refactor"], set()),
        ([""], {"quickfix", "source.fixAll.bandwright"}),
    ],
)
def test_a_client_gets_the_kinds_that_it_asks_for(client: Client, only: list[str], kinds: set[str]) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    assert {action["kind"] for action in ask(client, HARD, "butterworth", only=only)} == kinds


@pytest.mark.parametrize("abilities", [PLAIN, LAZY], ids=["at once", "when chosen"])
def test_the_bulk_fix_applies_what_keeps_the_requirement(
    client: Client, abilities: dict[str, object], encoding: str
) -> None:
    client.initialize({**abilities, "general": {"positionEncodings": [encoding]}})
    client.open(URI, HARD)
    (action,) = ask(client, HARD, "format", encoding=encoding, only=["source.fixAll"])
    if abilities is LAZY:
        assert "edit" not in action
        action = client.request("codeAction/resolve", action)
    mended = applied(HARD, edits_of(action), encoding)
    assert "familly" not in mended
    assert "butterworth" not in mended
    for requirement in ("20 Hz", "±0.05 dB", "25 Hz", "70 dB", "🏗️", "\u2028", "\ufeff"):
        assert mended.count(requirement) == HARD.count(requirement)
    assert "\n" not in mended.replace("\r\n", ""), "the file's line ends are kept"
    client.change(URI, mended, 2)
    assert ask(client, mended, "format", encoding=encoding, only=["source.fixAll"]) == [] or abilities is LAZY


def test_what_the_client_sends_along_is_not_relied_on(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    made_up = {
        "range": {"start": {"line": 0, "character": 0}, "end": {"line": 0, "character": 1}},
        "message": "made up",
        "code": "order/over-maximum",
        "source": "bandwright",
    }
    assert ask(client, HARD, "purpose", diagnostics=[made_up]) == []


def test_a_light_bulb_that_comes_by_itself_shows_what_is_known(client: Client) -> None:
    client.initialize(PLAIN)
    client.open(URI, HARD)
    assert ask(client, HARD, "familly", triggerKind=2)


def test_a_file_that_is_not_open_has_no_fix(client: Client) -> None:
    client.initialize(PLAIN)
    everything = {"start": {"line": 0, "character": 0}, "end": {"line": 99, "character": 0}}
    params = {"textDocument": {"uri": URI}, "range": everything, "context": {"diagnostics": []}}
    assert client.request("textDocument/codeAction", params) is None
