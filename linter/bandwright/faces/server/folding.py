"""Folding: sections, devices, filters, whatever else takes several lines, and comments."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

from lsprotocol import types

from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.values import Document, Span
from bandwright.faces.server.client import Client
from bandwright.faces.server.positions import lines_of
from bandwright.faces.server.session import Session
from bandwright.faces.server.tokens import sections


async def folding(
    session: Session, client: Client, params: types.FoldingRangeParams
) -> list[dict[str, Any]] | None:
    """The ranges of whole lines that can be folded, in the order of the text."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    document = session.read(file)
    longest: dict[int, int] = {}
    for span in (*_entries(document), *sections(document)):
        last = span.end_line - (span.end_column == 0)
        longest[span.line] = max(last, longest.get(span.line, 0))
    folds: list[dict[str, Any]] = [
        {"startLine": first, "endLine": last} for first, last in longest.items() if last > first
    ]
    comments = _comments([line.strip() for line in lines_of(document.text)])
    folds += [{"startLine": first, "endLine": last, "kind": "comment"} for first, last in comments]
    return sorted(folds, key=lambda fold: (fold["startLine"], -fold["endLine"]))


def _entries(document: Document) -> Iterator[Span]:
    """Every entry and item of the devices and filters, whole."""
    for block in document.blocks[1:]:
        yield from (in_document(document, block, marks.all) for marks in block.marks.values())


def _comments(lines: Sequence[str]) -> Iterator[tuple[int, int]]:
    """First and last line of every comment that takes several."""
    first: int | None = None
    for number, line in enumerate([*lines, ""]):
        if line.startswith("#"):
            first = number if first is None else first
        elif first is not None:
            if number - first > 1:
                yield first, number - 1
            first = None
