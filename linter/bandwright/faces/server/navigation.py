"""Definition and references: from a filter to its device, and from a device to its filters."""

from __future__ import annotations

from typing import Any, Literal, NamedTuple

from lsprotocol import types

from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.values import Document, Path, Span
from bandwright.faces.server.client import Client
from bandwright.faces.server.session import OpenFile, Session
from bandwright.faces.server.tokens import token_at

DEVICE: Path = ("device",)


class Named(NamedTuple):
    """A device or filter whose name stands at a place."""

    kind: Literal["device", "filter"]
    name: str
    span: Span
    """Of the name at that place, in the document."""
    block: int
    """Index of the block that the place is in."""
    declared: bool
    """Whether this is where it gets its name."""


async def definition(
    session: Session, client: Client, params: types.DefinitionParams
) -> list[dict[str, Any]] | None:
    """Where the device or filter named at a place gets its name."""
    found = found_at(session, params.text_document.uri, params.position)
    if found is None:
        return None
    file, document, named = found
    return _locations(session, file, [span for _, span in declarations(document, named)])


async def references(
    session: Session, client: Client, params: types.ReferenceParams
) -> list[dict[str, Any]] | None:
    """Every place that names the device or filter at a place."""
    found = found_at(session, params.text_document.uri, params.position)
    if found is None:
        return None
    file, document, named = found
    spans = [span for _, span in uses(document, named)]
    if params.context.include_declaration:
        spans += [span for _, span in declarations(document, named)]
    return _locations(session, file, sorted(spans))


def found_at(session: Session, uri: str, position: types.Position) -> tuple[OpenFile, Document, Named] | None:
    """The device or filter whose name stands at the place that a request is about, with its open file."""
    file = session.files.get(uri)
    if file is None:
        return None
    document = session.read(file)
    named = named_at(document, *session.lines(file).place(position))
    return (file, document, named) if named is not None else None


def _locations(session: Session, file: OpenFile, spans: list[Span]) -> list[dict[str, Any]]:
    lines = session.lines(file)
    return [{"uri": file.uri, "range": lines.plain_range(span)} for span in spans]


def named_at(document: Document, line: int, column: int) -> Named | None:
    """The device or filter whose name stands at a place."""
    token = token_at(document, line, column)
    if token is None or token.block.kind == "top":
        return None
    if not token.path and token.part == "key" and token.block.name:
        return Named(token.block.kind, token.block.name, token.span, token.index, True)
    if token.path == DEVICE and token.part == "value" and token.block.kind == "filter":
        name = dict(token.block.own).get(DEVICE)
        if name is not None and isinstance(name.value, str):
            return Named("device", name.value, token.span, token.index, False)
    return None


def declarations(document: Document, named: Named) -> list[tuple[int, Span]]:
    """Where the name is given, with the index of the block; several where it is given twice."""
    return [
        (index, in_document(document, block, block.marks[()].key))
        for index, block in enumerate(document.blocks)
        if block.kind == named.kind and block.name == named.name and () in block.marks
    ]


def uses(document: Document, named: Named) -> list[tuple[int, Span]]:
    """Where a device is named by a filter, with the index of the block."""
    if named.kind == "filter":
        return []
    found = []
    for index, block in enumerate(document.blocks):
        marks, own = block.marks.get(DEVICE), dict(block.own).get(DEVICE)
        if block.kind == "filter" and marks is not None and own is not None and own.value == named.name:
            found.append((index, in_document(document, block, marks.value)))
    return found
