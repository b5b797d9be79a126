"""Hovers: what they say of each thing in a band file, as Markdown and as plain text."""

from __future__ import annotations

import re
import time
from collections.abc import Iterator
from typing import Any

import pytest

from lsp_client import PATIENCE_S, Client, cut_out, position

URI = "file:///crane/hoist.bands.yaml"

TEXT = """\
format: bandwright/1

devices:
  hoist-node:
    sample_rate: 4 kHz
    arithmetic: q31
    at_most: {order: 16, multiplications: 60, delay: 25 ms}

filters:
  strain-slow:
    purpose: Static load, Überlast 🏗️
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
    structure: cascade

  gearbox-envelope:
    device: hoist-node
    sample_rate: 16 kHz
    bands:
      - stop: {to: 1.8 kHz, attenuation: 50 dB}
      - pass: {from: 2 kHz, to: 4 kHz, ripple: ±0.05 dB}
      - stop: {from: 4.4 kHz, gain: {max: 0.001 x}}
    phase: linear
    arithmetic: {coefficients: q1.14}
    structure: [cascade, symmetric]
    accepted:
      - {finding: cost/multiplications-over-maximum, up_to: 110, reason: It has a core of its own.}
"""

MARKDOWN = {"textDocument": {"hover": {"contentFormat": ["markdown", "plaintext"]}}}
PLAIN = {"textDocument": {"hover": {"contentFormat": ["plaintext"]}}}


@pytest.fixture(scope="module")
def markdown() -> Iterator[Client]:
    yield from _opened(MARKDOWN)


@pytest.fixture(scope="module")
def plain() -> Iterator[Client]:
    yield from _opened(PLAIN)


def _opened(abilities: dict[str, object]) -> Iterator[Client]:
    client = Client()
    client.initialize(abilities)
    client.open(URI, TEXT)
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


def hover(client: Client, at: str, text: str = TEXT) -> dict[str, Any] | None:
    """The hover in the middle of the first place where the text says `at`."""
    place = position(text, text.index(at) + len(at) // 2)
    found = client.request("textDocument/hover", {"textDocument": {"uri": URI}, "position": place})
    return None if found is None else dict(found)


def says(client: Client, at: str, text: str = TEXT) -> str:
    """What the hover over `at` says; it must cover just that."""
    found = hover(client, at, text)
    assert found is not None
    assert cut_out(text, found["range"]) == at
    return str(found["contents"]["value"])


def cells(text: str) -> dict[str, list[str]]:
    """The rows of the table in a hover, by their first cell."""
    rows = [re.split(r" *\| *", line.strip("| ")) for line in text.splitlines() if line.startswith("|")]
    return {row[0].strip("*"): row[1:] for row in rows}


def test_the_name_shows_every_family_with_its_figures(markdown: Client) -> None:
    text = says(markdown, "strain-slow")
    assert text.startswith("**Low-pass, 20 Hz to 25 Hz at 4 kHz**: ")
    assert "no family keeps delay 25 ms" in text
    table = cells(text)
    assert table["family"] == ["order", "taps", "mult.", "delay ms", "bits", "over maximum"]
    # Orders: scipy.signal.buttord, cheb1ord, cheb2ord and ellipord give the same for this mask.
    orders = {"butterworth": "45", "chebyshev-1": "16", "chebyshev-2": "16", "elliptic": "9"}
    assert {name: table[name][0] for name in orders} == orders
    assert list(table)[2] == "elliptic", "the cheapest comes first"
    assert table["butterworth"][-1] == "order, delay"
    assert "| **butterworth**" in text, "what the filter will be built as is set off"
    assert "~ marks an estimate" in text
    assert max(map(len, text.split("\n\n")[1].splitlines())) <= 90


def test_the_family_and_the_maxima_show_the_same_table(markdown: Client) -> None:
    name = cells(says(markdown, "strain-slow"))
    assert cells(says(markdown, "butterworth")).keys() == name.keys()
    assert "Maximally flat" in says(markdown, "butterworth")
    assert cells(says(markdown, "family")).keys() == name.keys()


def test_estimates_become_computed_once_somebody_asked(markdown: Client) -> None:
    deadline = time.monotonic() + 60.0
    while "~" in cells(says(markdown, "gearbox-envelope"))["equiripple"][0]:
        assert time.monotonic() < deadline, "the length stays an estimate"
        time.sleep(0.2)
    # scipy.signal.remez on a dense grid meets this mask with 196 taps, and with 194 and 195 it does not.
    assert cells(says(markdown, "gearbox-envelope"))["equiripple"][0] == "196"


def test_an_edge_in_other_units_with_what_moving_it_brings(markdown: Client) -> None:
    text = says(markdown, "25 Hz")
    assert text.startswith(
        "**25 Hz** = 0.0125 pi rad/sample = 0.00625 fs. The transition is 5 Hz wide, ratio 1.25."
    )
    table = cells(text)
    assert table["stop edge"] == ["butterworth", "chebyshev", "elliptic"]
    assert table["25 Hz"] == ["45", "16", "9"]
    # scipy.signal.buttord, cheb2ord and ellipord for a stop edge at 30 Hz.
    assert table["30 Hz"] == ["25", "12", "7"]


def test_a_ripple_from_peak_to_peak(markdown: Client) -> None:
    text = says(markdown, "0.1 dB")
    # 10^(0.1/20) = 1.01158.
    assert text.startswith("**0.1 dB peak to peak** = 0.05 dB either side of its middle = a ratio of 1.0116")
    # From the strictest to the loosest, below the head and its rule.
    assert list(cells(text))[2:] == ["0.05 dB", "0.1 dB", "0.2 dB"]


def test_a_ripple_with_a_plus_minus_sign_says_both(markdown: Client) -> None:
    assert says(markdown, "±0.05 dB").startswith("**±0.05 dB = 0.1 dB peak to peak**")


def test_an_attenuation_as_a_ratio(markdown: Client) -> None:
    # 10^(70/20) = 3162.3.
    assert "1 : 3162." in says(markdown, "70 dB")


def test_a_gain_in_decibels(markdown: Client) -> None:
    # 20 log10(0.001) = -60.
    assert says(markdown, "0.001 x").startswith("**0.001 x** = -60 dB")


def test_a_structure_with_the_bits_that_it_needs(markdown: Client) -> None:
    place = position(TEXT, TEXT.index("structure: cascade") + len("structure: ca"))
    found = markdown.request("textDocument/hover", {"textDocument": {"uri": URI}, "position": place})
    text = found["contents"]["value"]
    assert text.startswith("Second-order sections in series")
    table = cells(text)
    assert set(table) >= {"structure, butterworth order 45", "cascade", "direct-form-2"}
    assert table["cascade"][1:] == ["32", "yes"]
    assert table["direct-form-2"][1:] == ["32", "no"]


def test_a_structure_that_does_not_suit_the_filter_says_so(markdown: Client) -> None:
    place = position(TEXT, TEXT.index("[cascade") + 2)
    found = markdown.request("textDocument/hover", {"textDocument": {"uri": URI}, "position": place})
    assert cut_out(TEXT, found["range"]) == "cascade"
    assert "does not suit equiripple" in found["contents"]["value"]
    assert "`q1.14` has" in says(markdown, "symmetric")


def test_a_number_format_with_its_range_and_step(markdown: Client) -> None:
    # 2^-31 = 4.66e-10.
    assert says(markdown, "q31") == (
        "`q31`, 32-bit words with 31 fraction bits: from -1 to just below 1, in steps of 4.7e-10."
    )
    text = says(markdown, "q1.14")
    assert "from -2 to just below 2" in text
    assert "equiripple" in text, "what the filter needs of it"


def test_a_device_with_what_it_brings(markdown: Client) -> None:
    text = says(markdown, "hoist-node")
    assert "`sample_rate` 4 kHz" in text
    assert "Used by `strain-slow`, `gearbox-envelope`" in text
    place = position(TEXT, TEXT.index("device: hoist-node") + len("device: ho"))
    found = markdown.request("textDocument/hover", {"textDocument": {"uri": URI}, "position": place})
    assert found["contents"]["value"] == text


def test_a_sample_rate_with_nyquist(markdown: Client) -> None:
    assert says(markdown, "16 kHz") == "**16 kHz**: Nyquist is 8 kHz, one sample lasts 62.5 us."


def test_a_key_with_its_meaning(markdown: Client) -> None:
    assert says(markdown, "purpose").startswith("What the filter is for")
    assert "Default: `any`" in says(markdown, "phase")


def test_a_finding_with_the_way_to_its_page(markdown: Client) -> None:
    markdown.all_diagnostics(URI)
    text = says(markdown, "butterworth")
    assert "error `order/over-maximum`: Butterworth needs order 45, maximum 16" in text
    assert re.search(r"\[About order/over-maximum\]\(file:///\S+/order/over-maximum\.md\)", text)


def test_an_accepted_finding_is_told_as_such(markdown: Client) -> None:
    """It waits for the exact length, and as it is not on show nothing tells that it has come."""
    deadline = time.monotonic() + PATIENCE_S
    while "accepted `cost/multiplications-over-maximum`" not in says(markdown, "1.8 kHz"):
        assert time.monotonic() < deadline
        time.sleep(0.05)


@pytest.mark.parametrize("at", ["  - ", "\n\n", "Static load"])
def test_where_there_is_nothing_to_say(markdown: Client, at: str) -> None:
    found = hover(markdown, at)
    assert found is None or "shown in outlines" in found["contents"]["value"]


def test_every_hover_reads_as_plain_text(plain: Client) -> None:
    for at in ("strain-slow", "25 Hz", "0.1 dB", "q31", "purpose", "hoist-node", "butterworth", "16 kHz"):
        found = hover(plain, at)
        assert found is not None
        assert found["contents"]["kind"] == "plaintext"
        assert not re.search(r"\*\*|`|\|", found["contents"]["value"])
    assert "> 25 Hz" in says(plain, "25 Hz"), "the present value is set off"


def test_while_a_filter_can_not_be_read_its_last_figures_stay_on_show(markdown: Client) -> None:
    half = TEXT.replace("ripple: 0.1 dB}", "ripple: 0.1 dB")
    markdown.all_diagnostics(URI)
    markdown.change(URI, half, 2)
    text = says(markdown, "strain-slow", half)
    assert "elliptic" in text
    assert text.endswith("As it was before the last edit, which can't be read yet.")
    assert "As it was" not in says(markdown, "gearbox-envelope", half)
    markdown.change(URI, TEXT, 3)
    assert "As it was" not in says(markdown, "strain-slow")


def test_a_filter_without_a_mask_says_so(plain: Client) -> None:
    text = TEXT.replace("to: 20 Hz", "to: twenty")
    plain.change(URI, text, 2)
    assert "no forecast while its bands can't be read" in says(plain, "strain-slow", text)
    plain.change(URI, TEXT, 3)
