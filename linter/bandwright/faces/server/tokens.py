"""What stands at a place of a document: a key or a value of the grammar."""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass
from typing import Literal

from bandwright.bandfile.blocks import SECTIONS, in_document
from bandwright.bandfile.values import Block, Document, Filter, Path, Span


@dataclass(frozen=True, slots=True)
class Token:
    """The smallest entry at a place: its path in its block, and which part of it is there."""

    block: Block
    index: int
    """Of the block in the document."""
    filter: Filter | None
    """The filter of a filter's block."""
    path: Path
    part: Literal["key", "value"]
    span: Span
    """In the document."""


def token_at(document: Document, line: int, column: int) -> Token | None:
    """The token that contains the place, or ends there; None between tokens."""
    index = block_at(document, line)
    if index > 0 and (token := _in_block(document, index, line, column)) is not None:
        return token
    return _in_block(document, 0, line, column)


def block_at(document: Document, line: int) -> int:
    """The index of the block that a line belongs to; 0, the top level, ahead of all others."""
    return bisect_right(document.blocks, line, lo=1, key=lambda block: block.first_line) - 1


def sections(document: Document) -> list[Span]:
    """`devices` and `filters`, each from its key to the end of its last block."""
    top = document.blocks[0]
    found = []
    for name, kind in SECTIONS.items():
        inside = [one for one in document.blocks if one.kind == kind and () in one.marks]
        if inside and (marks := top.marks.get((name,))) is not None:
            start = in_document(document, top, marks.key)
            end = in_document(document, inside[-1], inside[-1].marks[()].all)
            found.append(Span(*start[:2], *end[2:]))
    return found


def _in_block(document: Document, index: int, line: int, column: int) -> Token | None:
    block = document.blocks[index]
    containers = {path[:-1] for path in block.marks if path}
    for path, marks in block.marks.items():
        # An item of a list has no key, and what holds entries is told by these.
        spans: list[tuple[Literal["key", "value"], Span]] = []
        if not path or isinstance(path[-1], str):
            spans.append(("key", marks.key))
        if path not in containers:
            spans.append(("value", marks.value))
        for part, within in spans:
            span = in_document(document, block, within)
            if span[:2] <= (line, column) <= span[2:] and span[:2] != span[2:]:
                return Token(block, index, dict(document.filters).get(index), path, part, span)
    return None
