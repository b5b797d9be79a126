"""Any text gives a document: never an exception, every place inside the text, every fault in the table."""

from __future__ import annotations

import random
import re

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from bandwright.bandfile.blocks import locate
from bandwright.bandfile.edits import apply, mend_edits
from bandwright.bandfile.faults import FAULTS
from bandwright.bandfile.reader import decode, read
from bandwright.bandfile.values import Document, Span
from unit.bandfile.example import EXAMPLE, lines

RICH = """\
format: bandwright/1
filters:
  a:
    sample_rate: 8 kHz
    zero_db: 1 kHz
    bands:
    - bounds:
        points:
          - {at: 10 Hz, min: -1 dB, max: 1 dB}
          - at: 20 Hz
            level: -3 dB
    - pass: {to: 0.2 pi, gain: {min: 0.9 x, max: 1}}
    - stop:
        from: 3 kHz
        gain:
          max: 1 %
    family: [elliptic, "butterworth"]
    arithmetic: {coefficients: q31, data: q15, coefficient_shift: free}
    coefficients: {sections: [{b: [1, 2, 1], a: [1, -0.5]}], scale: 2^-30, feedback: added}
    purpose: |
      long: text
        more
    accepted: [{finding: a/b, reason: 'x, y'}]
  "b c": {device: d, bands: [pass: {to: 1 kHz, ripple: 1 dB}]}
devices:
  d: {sample_rate: 1 MHz}
"""
ANCHORED = RICH + "  e: &e\n    at_most: {order: 3}\n  f:\n    <<: *e\n    signal: {peak: 1}\n"
SEEDS = (EXAMPLE, RICH, ANCHORED)
PIECES = [
    *"{}[]:,-#'\"&*!|>%@`?~\t\n \r\x00\x0c\x85µ",
    "\ufeff",
    "\u2028",
    "🏗️",
    "\ud800",
    "e\u0301",
    "- ",
    ": ",
    "  ",
]
PIECES += [
    "\r\n",
    "\n---\n",
    "\n...\n",
    "<<: ",
    "0,1",
    "pass",
    "\nfilters:\n",
    "\ndevices:\n",
    "\n  new:\n",
    "*e",
    "&e ",
]


def mutated(text: str, dice: random.Random) -> str:
    """The text after a few changes, of characters, of lines, or of its end."""
    for _ in range(dice.choice([1, 1, 1, 2, 4])):
        kind = dice.random()
        at = dice.randrange(len(text) + 1)
        rows = text.split("\n")
        row = dice.randrange(len(rows))
        if kind < 0.4:
            text = text[:at] + dice.choice(PIECES) + text[at:]
        elif kind < 0.6:
            text = text[:at] + text[at + dice.choice([1, 1, 2, 5, 20]) :]
        elif kind < 0.65:
            text = text[:at]
        elif kind < 0.7:
            text = text.replace("\n", dice.choice(["\r\n", "\r"]))
        else:
            new = {
                0: [],
                1: [rows[row], rows[dice.randrange(len(rows))]],
                2: [" " * dice.randrange(9) + rows[row].lstrip()],
                3: [rows[row].replace("  ", "\t")],
                4: [rows[row][: dice.randrange(len(rows[row]) + 1)]],
            }[dice.randrange(5)]
            text = "\n".join([*rows[:row], *new, *rows[row + 1 :]])
    return text


def inside(span: Span, rows: list[str]) -> bool:
    return (
        0 <= span.line <= span.end_line < len(rows)
        and 0 <= span.column <= len(rows[span.line])
        and 0 <= span.end_column <= len(rows[span.end_line])
        and span[:2] <= span[2:]
    )


def check(document: Document) -> None:
    """What holds of every document."""
    rows = lines(document.text)
    assert document.blocks[0].kind == "top"
    for index, block in enumerate(document.blocks):
        for fault in block.faults:
            expected = FAULTS[fault.id][fault.form]
            names = [name for name, _ in fault.facts]
            assert names == [name for name in (e.rstrip("?") for e in expected) if name in names], fault
            assert set(names) >= {e for e in expected if not e.endswith("?")}, fault
            for place in (fault.place, *fault.related):
                assert inside(locate(document, index, place), rows), fault
            for mend in fault.mends:
                assert apply(document.text, mend_edits(document, index, mend)) != document.text, mend
        for path, marks in block.marks.items():
            for span in (marks.key, marks.value, marks.all):
                moved = span._replace(
                    line=span.line + block.first_line, end_line=span.end_line + block.first_line
                )
                assert inside(moved, rows), path
        assert block.whole or block.faults
    for _, found in document.filters:
        assert len({path for path, _ in found.settings}) == len(found.settings)


@pytest.mark.parametrize("seed", range(300))
def test_mutations(seed: int) -> None:
    dice = random.Random(seed)
    before = dice.choice(SEEDS)
    text = mutated(before, dice)
    document = read(text)
    check(document)
    assert read(text, read(before)) == document
    assert read(before, document) == read(before)


@settings(max_examples=100, deadline=None)
@example([": ", ": "])
@given(st.lists(st.sampled_from([*PIECES, *re.findall(r"[\w./]+|\n *", RICH)]), max_size=60))
def test_heaps_of_pieces(pieces: list[str]) -> None:
    check(read("".join(pieces)))


@settings(max_examples=100, deadline=None)
@given(st.binary(max_size=200))
def test_bytes(data: bytes) -> None:
    text, _, fault = decode(data)
    document = read(text, fault=fault)
    check(document)
    assert (fault is None) == (not any(f.id == "syntax/not-utf-8" for f in document.blocks[0].faults))


def test_unchanged_blocks_are_used_again() -> None:
    before = read(EXAMPLE)
    after = read(EXAMPLE.replace("20 Hz", "21 Hz"), before)
    assert after.blocks[3].marks is before.blocks[3].marks
    assert after.filters[1][1] is before.filters[1][1]
    moved = read(EXAMPLE.replace("filters:", "# a remark\nfilters:"), before)
    assert moved.blocks[3].marks is before.blocks[3].marks
    assert moved.blocks[3].first_line == before.blocks[3].first_line + 1
