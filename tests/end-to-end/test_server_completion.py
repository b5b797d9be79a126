"""Completion: what is offered at each kind of place, in half-typed text, and what it does to the text."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import pytest

from lsp_client import Client, applied, position

URI = "file:///crane/hoist.bands.yaml"

HEAD = """\
format: bandwright/1
devices:
  hoist-node:
    sample_rate: 4 kHz
  größer-node: {sample_rate: 8 kHz}
filters:
  strain-slow:
    device: hoist-node
"""
FREQUENCIES = ["Hz", "kHz", "MHz", "GHz", "mHz", "pi", "fs", "nyquist"]

SNIPPETS = {"completion": {"completionItem": {"snippetSupport": True, "documentationFormat": ["markdown"]}}}


@pytest.fixture(scope="module")
def plain() -> Iterator[Client]:
    yield from connected({})


@pytest.fixture(scope="module")
def rich() -> Iterator[Client]:
    yield from connected({"textDocument": SNIPPETS})


@pytest.fixture(scope="module", params=["utf-8", "utf-16", "utf-32"])
def encoded(request: pytest.FixtureRequest) -> Iterator[tuple[Client, str]]:
    encoding = str(request.param)
    for client in connected({"general": {"positionEncodings": [encoding]}}):
        yield client, encoding


def connected(abilities: dict[str, object]) -> Iterator[Client]:
    client = Client()
    client.initialize(abilities)
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def items(client: Client, text: str, encoding: str = "utf-16") -> list[dict[str, Any]]:
    """What is offered where the text has a `|`."""
    before, _, after = text.partition("|")
    client.open(URI, before + after)
    params = {
        "textDocument": {"uri": URI},
        "position": position(before + after, len(before), encoding),
    }
    return list(client.request("textDocument/completion", params))


def labels(client: Client, text: str) -> list[str]:
    return [item["label"] for item in items(client, text)]


def chosen(client: Client, text: str, label: str, encoding: str = "utf-16") -> str:
    """The text after an item was taken."""
    item = next(one for one in items(client, text, encoding) if one["label"] == label)
    assert item["textEdit"]["range"]["start"]["line"] == item["textEdit"]["range"]["end"]["line"]
    return applied(text.replace("|", "", 1), [item["textEdit"]], encoding)


@pytest.mark.parametrize(
    ("text", "some", "none"),
    [
        ("|", {"format", "devices", "filters"}, {"family"}),
        (f"{HEAD}|", set(), {"format", "devices", "filters"}),
        ("format: bandwright/1\ndevices:\n  a:\n    |", {"sample_rate", "at_most"}, {"bands", "device"}),
        (f"{HEAD}    |", {"bands", "family", "accepted"}, {"device", "devices"}),
        (f"{HEAD}    ba|\n    family: elliptic\n", {"bands"}, {"family", "device"}),
        (f"{HEAD}    bands:\n      - |\n", {"pass", "stop", "bounds"}, {"from"}),
        (f"{HEAD}    bands:\n      |\n", {"pass", "stop", "bounds"}, {"from"}),
        (f"{HEAD}    bands: [|]\n", {"pass", "stop", "bounds"}, {"from"}),
        (f"{HEAD}    bands:\n      - pass: {{to: 20 Hz}}\n        |\n", set(), {"pass", "stop"}),
        (f"{HEAD}    bands:\n      - pass: {{|}}\n", {"from", "at", "ripple", "gain"}, {"attenuation"}),
        (f"{HEAD}    bands:\n      - pass: {{|, ripple: 0.1 dB}}\n", {"to"}, {"ripple", "gain"}),
        (f"{HEAD}    bands:\n      - pass: {{to: 20 Hz, |", {"from", "ripple"}, {"to", "at"}),
        (f"{HEAD}    bands:\n      - pass:\n          to: 20 Hz\n          |", {"ripple"}, {"to"}),
        (f"{HEAD}    bands:\n      - stop: {{gain: {{|}}}}\n", {"max"}, {"min"}),
        (f"{HEAD}    bands:\n      - bounds: {{points: [{{|}}]}}\n", {"at", "level", "plus"}, {"from"}),
        (f"{HEAD}    at_most: {{order: 9, |}}\n", {"taps", "delay"}, {"order"}),
        (f"{HEAD}    at_most:\n      |\n", {"order", "delay"}, {"family"}),
        (f"{HEAD}    signal: {{|}}\n", {"peak", "allowed_noise"}, set()),
        (f"{HEAD}    step: {{settle: {{|}}}}\n", {"to", "within"}, {"overshoot"}),
        (f"{HEAD}    arithmetic: {{|}}\n", {"coefficients", "rounding"}, {"q15"}),
        (f"{HEAD}    accepted:\n      - |\n", {"finding", "reason"}, set()),
        (f"{HEAD}    accepted:\n      - finding: order/tie\n        |\n", {"reason", "until"}, {"finding"}),
    ],
)
def test_keys_fit_their_place_and_are_not_there_yet(
    plain: Client, text: str, some: set[str], none: set[str]
) -> None:
    offered = set(labels(plain, text))
    assert some <= offered
    assert not none & offered


@pytest.mark.parametrize(
    ("text", "first"),
    [
        (f"{HEAD}    family: |", ["butterworth", "chebyshev-1", "chebyshev-2", "elliptic"]),
        (f"{HEAD}    family:\n      - elliptic\n      - |", ["butterworth", "chebyshev-1", "chebyshev-2"]),
        (f"{HEAD}    family: [butterworth, |]\n", ["chebyshev-1", "chebyshev-2", "elliptic"]),
        (f"{HEAD}    structure: |\n", ["direct-form-1", "direct-form-2"]),
        (f"{HEAD}    arithmetic: |\n", ["float64", "float32", "float16", "q31"]),
        (f"{HEAD}    arithmetic: {{rounding: |}}\n", ["nearest-even", "nearest-up"]),
        (f"{HEAD}    phase: |\n", ["any", "linear"]),
        (f"{HEAD}    zero_db: |\n", ["unity", "free"]),
        (f"{HEAD}    transitions: |\n", ["bounded", "unbounded"]),
        ("format: |", ["bandwright/1"]),
        (f"{HEAD}  other:\n    device: |", ["hoist-node", "größer-node"]),
    ],
)
def test_names_fit_their_key(plain: Client, text: str, first: list[str]) -> None:
    assert labels(plain, text)[: len(first)] == first


@pytest.mark.parametrize(
    ("text", "units"),
    [
        (f"{HEAD}    bands:\n      - pass: {{to: 20 |", FREQUENCIES),
        (f"{HEAD}    bands:\n      - pass: {{to: 20|", FREQUENCIES),
        (f"{HEAD}    bands:\n      - pass: {{to: 0.2 p|}}\n", FREQUENCIES),
        (f"{HEAD}    bands: [pass: {{to: 1e3 |", FREQUENCIES),
        (f"{HEAD}    sample_rate: 4 |", ["Hz", "kHz", "MHz", "GHz", "mHz"]),
        (f"{HEAD}    bands:\n      - pass: {{ripple: ±0.05 |}}\n", ["dB"]),
        (f"{HEAD}    bands:\n      - stop: {{gain: {{max: -20 |", ["dB", "x", "%"]),
        (f"{HEAD}    at_most: {{delay: 25 |}}\n", ["ms", "s", "us", "samples"]),
        (f"{HEAD}    step: {{overshoot: 5 |}}\n", ["%", "ppm"]),
        (f"{HEAD}    bands:\n      - bounds: {{lag: {{max: 8 |}}}}\n", ["deg"]),
        (f"{HEAD}    at_most: {{order: 16 |}}\n", []),
    ],
)
def test_units_are_those_that_the_key_asks_for(plain: Client, text: str, units: list[str]) -> None:
    assert labels(plain, text) == units


@pytest.mark.parametrize(
    "text",
    [
        f"{HEAD}    purpose: Load |\n",
        f"{HEAD}    # a comm|ent\n",
        f"{HEAD}    family: elliptic # |\n",
        f"{HEAD}    familly: |\n",
        f"{HEAD}    family: elliptic |\n",
        f"{HEAD}    family: elliptic\n      |\n",
        f"{HEAD}    family: [elliptic] |\n",
        f"{HEAD}    purpose: |\n      fam",
        f"{HEAD}  |  phase: any\n",
        f"{HEAD}  new-na|",
    ],
)
def test_nothing_is_offered_where_nothing_is_known(plain: Client, text: str) -> None:
    assert labels(plain, text) == []


def test_an_open_bracket_above_disturbs_only_its_own_line(plain: Client) -> None:
    bands = "      - pass: {to: 20 Hz, ripple: 0.1 dB\n      - stop: {f|\n"
    text = f"{HEAD}    bands:\n{bands}    family: elliptic\n"
    assert "from" in labels(plain, text)
    assert "phase" in labels(plain, text.replace("f|", "").replace("family", "|family"))


def test_only_findings_that_can_be_accepted_are_offered_and_those_there_come_first(plain: Client) -> None:
    text = f"""{HEAD}    bands:
      - pass: {{to: 20 Hz, ripple: 0.1 dB}}
      - stop: {{from: 25 Hz, attenuation: 70 dB}}
    family: butterworth
    accepted:
      - finding: |
"""
    plain.open(URI, text.replace("|", ""))
    assert "order/over-maximum" in {one["code"] for one in plain.all_diagnostics(URI)}
    before, _, after = text.partition("|")
    params = {"textDocument": {"uri": URI}, "position": position(before + after, len(before))}
    offered = plain.request("textDocument/completion", params)
    first = offered[0]
    assert first["label"] == "order/over-maximum"
    assert "order 45, maximum 12" in first["documentation"]["value"]
    assert "cost/delay-over-maximum" in {one["label"] for one in offered}
    assert not {one["label"].partition("/")[0] for one in offered} & {"syntax", "key", "accepted"}


def test_what_is_taken_replaces_the_word_and_nothing_else(plain: Client) -> None:
    assert chosen(plain, f"{HEAD}    fam|\n", "family") == f"{HEAD}    family: \n"
    assert chosen(plain, f"{HEAD}    fam|ly: elliptic\n", "family") == f"{HEAD}    family: elliptic\n"
    assert chosen(plain, f"{HEAD}    family:|\n", "elliptic") == f"{HEAD}    family: elliptic\n"
    assert (
        chosen(plain, f"{HEAD}    at_most: {{delay: 25|}}\n", "ms")
        == f"{HEAD}    at_most: {{delay: 25 ms}}\n"
    )
    text = f"{HEAD}    bands:\n      |\n"
    assert chosen(plain, text, "pass") == f"{HEAD}    bands:\n      - pass: \n"


def test_ranges_are_right_after_any_text(encoded: tuple[Client, str]) -> None:
    client, encoding = encoded
    hard = "\ufeff" + HEAD.replace("\n", "\r\n")
    text = f"{hard}    at_most: {{order: 9, delay: 20 µ|}} # 🏗️\r\n"
    assert chosen(client, text, "us", encoding) == text.replace("µ|", "us")
    text = f"{hard}  🏗️ é 漢: {{purpose: '🏗️ é \u2028', device: größ|, phase: any}}\r\n"
    assert chosen(client, text, "größer-node", encoding) == text.replace("größ|", "größer-node")
    text = f"{hard}  b: {{purpose: '🏗️', fam|}}\r\n"
    assert chosen(client, text, "family", encoding) == text.replace("fam|", "family: ")
    assert chosen(client, "\ufefffo|", "format", encoding) == "\ufeffformat: "


def test_every_item_is_documented_and_what_is_not_judged_yet_says_so(rich: Client) -> None:
    offered = items(rich, f"{HEAD}    |\n")
    assert all(item["documentation"]["kind"] == "markdown" for item in offered)
    assert all(item["documentation"]["value"] for item in offered)
    said = {item["label"]: item["documentation"]["value"] for item in offered}
    assert "judges nothing by it" in said["decimate"]
    assert "judges nothing by it" not in said["family"]
    order = [item["label"] for item in sorted(offered, key=lambda item: str(item["sortText"]))]
    assert order.index("accepted") < order.index("decimate")
    families = items(rich, f"{HEAD}    family: |\n")
    said = {item["label"]: item["documentation"]["value"] for item in families}
    assert "judges nothing by it" in said["bessel"]
    assert "judges nothing by it" not in said["elliptic"]


def test_snippets_come_only_to_clients_that_take_them(plain: Client, rich: Client) -> None:
    place = f"{HEAD}  |\n"
    assert labels(plain, place) == []
    offered = items(rich, place)
    assert "low-pass filter" in {item["label"] for item in offered}
    assert all(item["insertTextFormat"] == 2 for item in offered)
    assert all("${2|hoist-node,größer-node|}" in item["textEdit"]["newText"] for item in offered)
    bands = {item["label"] for item in items(rich, f"{HEAD}    bands:\n      - |\n")}
    assert {"pass band", "stop band", "bounds"} <= bands
    assert "pass band" not in labels(plain, f"{HEAD}    bands:\n      - |\n")


def test_what_a_snippet_writes_is_whole(rich: Client) -> None:
    devices = HEAD[: HEAD.index("  strain")]
    for item in items(rich, f"{devices}  |\n"):
        # The client indents further lines as the first.
        text = devices + "  " + filled_in(item["textEdit"]["newText"]).replace("\n", "\n  ").rstrip() + "\n"
        rich.open(URI, text)
        found = {one["code"] for one in rich.all_diagnostics(URI) if one["severity"] <= 2}
        assert not found, item["label"]
        assert item["label"].startswith(text[len(devices) :].strip().partition(":")[0])


def filled_in(text: str) -> str:
    """A snippet whose places are left as they come."""
    text = re.sub(r"\$\{\d+\|([^,|]*)[^|]*\|\}", r"\1", text)
    return re.sub(r"\$\{\d+:([^}]*)\}", r"\1", text)
