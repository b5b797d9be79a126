"""The file is cut at the names of devices and filters, whatever state it is in."""

from __future__ import annotations

import pytest

from bandwright.bandfile.blocks import cut, reads_whole
from bandwright.bandfile.reader import read
from unit.bandfile.example import EXAMPLE, with_line

HEAD = "format: bandwright/1\nfilters:\n"


def blocks(text: str) -> list[str]:
    return [f"{block.kind} {block.name}" for block in read(text).blocks[1:]]


def test_the_pieces_are_the_whole_text_in_order() -> None:
    pieces = cut(EXAMPLE)
    assert "".join(EXAMPLE[piece.start : piece.end] for piece in pieces) == EXAMPLE
    assert [piece.kind for piece in pieces] == ["top", "device", "top", "filter", "filter"]
    for piece in pieces:
        assert EXAMPLE[: piece.start].count("\n") == piece.first_line


@pytest.mark.parametrize(
    ("text", "found"),
    [
        (HEAD + "  a:\n    x: 1\n  b:\n    x: 1\n", ["filter a", "filter b"]),
        (HEAD + "  a: {x: 1}\n  b: {\n    x: 1\n  }\n  c:\n", ["filter a", "filter b", "filter c"]),
        (HEAD + "  a:\n    purpose: |\n      b:\n        c: 1\n  b:\n", ["filter a", "filter b"]),
        (HEAD + "  \"a b\":\n    x: 1\n  'c':\n", ["filter a b", "filter c"]),
        (HEAD + "    a:\n        x: 1\n    # b:\n    b:\n", ["filter a", "filter b"]),
        (HEAD + "  a:\n    x: 1\n# a remark\n\n  b:\n", ["filter a", "filter b"]),
        (HEAD + "  a:\n    bands:\n    - pass: {}\n  b:\n", ["filter a", "filter b"]),
        ("filters:  # here\n  a:\ndevices:\n  d:\n", ["filter a", "device d"]),
        ("'filters':\n  a:\n", ["filter a"]),
        ("filters: {a: {x: 1}, b: {x: 2}}\n", ["filter a", "filter b"]),
        ("{filters: {a: {x: 1}},\ndevices: {d: {}}}\n", ["filter a", "device d"]),
        ("filters:\n- a\n- b\n", []),
        ("masks:\n  m:\n    x: 1\nfilters:\n  a:\n", ["filter a"]),
        # Names that stand ill-indented, or are being typed.
        (HEAD + "    a:\n        x: 1\n  b:\n        x: 1\n", ["filter a", "filter b"]),
        (HEAD + "  a:\n    order: 1\n   b:\n    order: 1\n  c:\n", ["filter a", "filter b", "filter c"]),
        (HEAD + "  a:\n    order: 1\nb:\n    order: 1\n  c:\n", ["filter a", "filter b", "filter c"]),
        (HEAD + "  a:\n    order: 1\n  new\n  c:\n", ["filter a", "filter new", "filter c"]),
        (HEAD + "  a:\n    order: 1\n   taps: 3\n  c:\n", ["filter a", "filter c"]),
        (HEAD + "  a:\n    order: 1\nstray word\n    taps: 3\n  c:\n", ["filter a", "filter c"]),
        (HEAD + "  bands:\n    order: 1\n  delay:\n    order: 1\n", ["filter bands", "filter delay"]),
        ("filters\n  a:\n    order: 1\n", ["filter a"]),
        ("filter:\n  a:\n    order: 1\n", ["filter a"]),
        # Quotes and brackets that reach over a line which looks like a name.
        (HEAD + '  a:\n    purpose: "one\n  two: three"\n  b:\n', ["filter a", "filter b"]),
        (HEAD + "  a: {\n  order: 3,\n  taps: 3\n  }\n  b:\n", ["filter a", "filter b"]),
        # One that is never closed does not swallow what follows.
        (HEAD + '  a:\n    purpose: "one\n  b:\n    order: 3\n', ["filter a", "filter b"]),
        (HEAD + "  a:\n    bands: [\n  b:\n    order: 3\n", ["filter a", "filter b"]),
    ],
)
def test_names_are_found(text: str, found: list[str]) -> None:
    assert blocks(text) == found
    assert blocks(text.replace("\n", "\r\n")) == found
    assert blocks(text.replace("\n", "\r")) == found
    assert blocks("\ufeff" + text) == found


def test_tabs_for_indents_cut_alike() -> None:
    text = EXAMPLE.replace("  ", "\t")
    assert blocks(text) == blocks(EXAMPLE)


@pytest.mark.parametrize(
    ("text", "whole"),
    [
        (EXAMPLE, False),
        (with_line(EXAMPLE, "hoist-node:  ", "hoist-node: &d"), True),
        (with_line(EXAMPLE, "    device: hoist-node\n", "    <<: *d\n"), True),
        (with_line(EXAMPLE, "Static load,", "Static & dynamic * load,"), False),
        ("# {\n---\nfilters:\n", False),
        ("\n{filters: {}}", True),
    ],
)
def test_only_anchors_and_brackets_need_the_whole_document(text: str, whole: bool) -> None:
    assert reads_whole(text) is whole
