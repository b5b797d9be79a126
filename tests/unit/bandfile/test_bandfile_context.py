"""What stands at a place of a text that need not parse."""

from __future__ import annotations

from pathlib import Path

import pytest

from bandwright.bandfile import grammar
from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.context import Context, context_at, keys, units, value_row
from bandwright.bandfile.reader import read

DEMO = Path(__file__).resolve().parents[3] / "linter/bandwright/demo/hoist.bands.yaml"

HEAD = "format: bandwright/1\nfilters:\n  a:\n    device: d\n"


def at(text: str) -> Context | None:
    """The context at the `|` of a text."""
    before, _, after = text.partition("|")
    return context_at(read(before + after), before.count("\n"), len(before) - before.rfind("\n") - 1)


def test_every_entry_of_a_whole_file_is_where_the_reader_has_it() -> None:
    document = read(DEMO.read_text(encoding="utf-8"))
    seen = 0
    for block in document.blocks[1:]:
        for path, marks in block.marks.items():
            row = grammar.key(block.kind, path)
            if row is None or isinstance(path[-1], int) or row.kind in ("mapping", "list"):
                continue
            span = in_document(document, block, marks.key)
            found = context_at(document, span.line, span.column + 1)
            assert found is not None
            assert (found.where, found.path, found.part) == (block.kind, path[:-1], "key")
            assert found.span == span
            assert found.has_colon
            assert path[-1] not in found.there
            assert row in keys(found)
            value = in_document(document, block, marks.value)
            found = context_at(document, value.line, value.column)
            listed = document.text.splitlines()[value.line][value.column] in "[{"
            assert found is not None
            assert listed or value_row(found) == row
            seen += 1
    assert seen > 60


@pytest.mark.parametrize("cut", range(0, 1600, 7))
def test_any_start_of_a_file_has_a_context_or_none(cut: int) -> None:
    text = DEMO.read_text(encoding="utf-8")[:cut]
    document = read(text)
    last = text.rpartition("\n")[2]
    found = context_at(document, text.count("\n"), len(last))
    if found is not None:
        assert found.span.end_column == len(last)
        assert last.endswith(found.typed)


@pytest.mark.parametrize(
    "text",
    ["|", "\t|", "- |", "[|", "{|", "'|", "a: &x |", "*|", "]|", "}|", ": |", "? |", "|\n---\n"],
)
def test_odd_texts_are_survived(text: str) -> None:
    found = at(text)
    assert found is None or found.where == "top"


def test_a_place_beyond_the_text_has_none() -> None:
    assert context_at(read("format: x\n"), 7, 0) is None


def test_text_behind_a_bar_is_text_until_the_indent_ends() -> None:
    literal = f"{HEAD}    purpose: >-\n      Load\n      ¦\n    fam\n"
    assert at(literal.replace("¦", "|")) is None
    after = at(literal.replace("¦", "").replace("fam", "fam|"))
    assert after is not None
    assert after.typed == "fam"
    assert "purpose" in after.there


@pytest.mark.parametrize(
    ("typed", "expected"),
    [
        ("20", (0, False)),
        ("20 ", (0, True)),
        ("20 k", (1, True)),
        ("20k", (1, False)),
        ("\N{MINUS SIGN}3 d", (1, True)),
        ("±.05 ", (0, True)),
        ("1e-3 ", (0, True)),
    ],
)
def test_a_unit_may_follow_a_number(typed: str, expected: tuple[int, bool]) -> None:
    found = at(f"{HEAD}    bands: [pass: {{to: {typed}|}}]\n")
    assert found is not None
    answer = units(found)
    assert answer is not None
    assert answer[:2] == expected


@pytest.mark.parametrize("typed", ["", "k", "Hz 2", "20 k 3"])
def test_no_unit_follows_what_is_no_number(typed: str) -> None:
    found = at(f"{HEAD}    bands: [pass: {{to: {typed}|}}]\n")
    assert found is not None
    assert units(found) is None
