"""Positions in the three encodings of the protocol, held against Python's own codecs."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from lsprotocol import types

from bandwright.bandfile.values import Span
from bandwright.faces.server.fix_all import changed_lines
from bandwright.faces.server.positions import Encoding, LineIndex, lines_of

ENCODINGS: tuple[Encoding, ...] = ("utf-8", "utf-16", "utf-32")
UNIT_BYTES = {"utf-8": 1, "utf-16": 2, "utf-32": 4}

TEXTS = st.text(st.sampled_from("ab é±Ω漢😀\u2028\u0085\x0c\ufeff\t\r\n"), max_size=40)


def units(text: str, encoding: Encoding) -> int:
    """How many units a text takes, from the codec of Python."""
    codec = encoding if encoding == "utf-8" else f"{encoding}-le"
    return len(text.encode(codec)) // UNIT_BYTES[encoding]


@pytest.mark.parametrize("encoding", ENCODINGS)
@given(text=TEXTS, data=st.data())
def test_every_place_comes_back_from_the_clients_position(
    encoding: Encoding, text: str, data: st.DataObject
) -> None:
    index = LineIndex(text, encoding)
    lines = [line.rstrip("\r\n") for line in lines_of(text)]
    number = data.draw(st.integers(0, len(lines) - 1))
    column = data.draw(st.integers(0, len(lines[number])))
    shown = index.plain_range(Span(number, column, number, column))["start"]
    assert shown == {"line": number, "character": units(lines[number][:column], encoding)}
    assert index.place(types.Position(**shown)) == (number, column)


@given(text=TEXTS)
def test_lines_end_where_the_protocol_says(text: str) -> None:
    lines = lines_of(text)
    assert "".join(lines) == text
    joined = text.replace("\r\n", "\n").replace("\r", "\n")
    assert [line.rstrip("\r\n") for line in lines] == joined.split("\n")


@pytest.mark.parametrize(
    ("encoding", "character", "column"),
    [("utf-16", 2, 1), ("utf-8", 2, 1), ("utf-8", 4, 1), ("utf-16", 3, 2), ("utf-8", 5, 2)],
)
def test_a_position_inside_a_character_means_its_start(
    encoding: Encoding, character: int, column: int
) -> None:
    # U+1F600 is 2 units in UTF-16 and 4 bytes in UTF-8; "a" ahead of it is 1 in both.
    assert LineIndex("a😀b", encoding).place(types.Position(0, character)) == (0, column)


def test_positions_outside_the_text_mean_its_nearest_end() -> None:
    index = LineIndex("ab\r\ncd", "utf-16")
    assert index.place(types.Position(0, 99)) == (0, 2)
    assert index.place(types.Position(7, 0)) == (1, 2)


def test_a_lone_surrogate_counts_as_one_unit() -> None:
    index = LineIndex("\ud800x", "utf-16")
    assert index.plain_range(Span(0, 1, 0, 2))["start"] == {"line": 0, "character": 1}
    assert LineIndex("\ud800x", "utf-8").place(types.Position(0, 3)) == (0, 1)


@given(before=TEXTS, after=TEXTS)
def test_edits_by_lines_make_the_one_text_of_the_other(before: str, after: str) -> None:
    lines = lines_of(before)
    starts = [sum(map(len, lines[:number])) for number in range(len(lines))]
    text = before
    for edit in reversed(changed_lines(before, after)):
        start = starts[edit.span.line] + edit.span.column
        end = starts[edit.span.end_line] + edit.span.end_column
        text = text[:start] + edit.text + text[end:]
    assert text == after
