"""Selection ranges: from the word under the cursor outwards to the whole file."""

from __future__ import annotations

from typing import Any

from lsprotocol import types

from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.values import Document, Span
from bandwright.faces.server.client import Client
from bandwright.faces.server.positions import lines_of
from bandwright.faces.server.session import Session
from bandwright.faces.server.tokens import block_at, sections


async def selection_ranges(
    session: Session, client: Client, params: types.SelectionRangeParams
) -> list[dict[str, Any]] | None:
    """For each position, its word in its value in its entry, and so on outwards."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    document, lines = session.read(file), session.lines(file)
    found = []
    for position in params.positions:
        chain: dict[str, Any] = {}
        for span in _around(document, lines.place(position)):
            chain = {"range": lines.plain_range(span), **({"parent": chain} if chain else {})}
        found.append(chain)
    return found


def _around(document: Document, place: tuple[int, int]) -> list[Span]:
    """What contains the place, from the outside in, each inside the one before."""
    text_lines = lines_of(document.text)
    whole = Span(0, 0, len(text_lines) - 1, len(text_lines[-1]))
    index = block_at(document, place[0])
    blocks = {0: document.blocks[0], index: document.blocks[index]}
    spans = {
        in_document(document, block, span)
        for number, block in blocks.items()
        for path, marks in block.marks.items()
        if number > 0 or path
        for span in (marks.key, marks.value, marks.all)
    }
    spans |= set(sections(document))
    chain = [whole]
    for span in sorted(spans, key=lambda span: (span[:2], (-span.end_line, -span.end_column))):
        outer = chain[-1]
        holds = span[:2] <= place <= span[2:] and span[:2] != span[2:]
        if holds and span != outer and outer[:2] <= span[:2] and span[2:] <= outer[2:]:
            chain.append(span)
    return chain
