"""Completion: the keys, names, units and snippets that the grammar has for a place."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any

from lsprotocol import types

from bandwright.analysis.accepting import NEVER
from bandwright.analysis.types import Finding
from bandwright.bandfile import context, grammar
from bandwright.bandfile.context import Context
from bandwright.bandfile.grammar import Key
from bandwright.bandfile.quantities import UNITS
from bandwright.bandfile.values import Document, Span
from bandwright.faces.guide_pages import what_is_asked
from bandwright.faces.markdown import Part, render
from bandwright.faces.server import snippets
from bandwright.faces.server.client import Client
from bandwright.faces.server.hovers import device, key
from bandwright.faces.server.session import Session
from bandwright.faces.server.tokens import block_at
from bandwright.findings.catalogue import RULES
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.structures import STRUCTURES

_SNIPPET_FORMAT, _ADJUST_INDENT = 2, 2

_MEANINGS = {
    **grammar.FAMILIES,
    **grammar.STRUCTURES,
    **grammar.COMMON_FORMATS,
    **grammar.ROUNDINGS,
    **grammar.OVERFLOWS,
}
NOT_JUDGED = "This release reads it and judges nothing by it."

_KINDS = {"reference": types.CompletionItemKind.Reference, "finding": types.CompletionItemKind.Event}

Item = dict[str, Any]


async def completion(session: Session, client: Client, params: types.CompletionParams) -> list[Item] | None:
    """What may be written at a place, the likeliest first."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    document, lines = session.read(file), session.lines(file)
    place = context.context_at(document, *lines.place(params.position))
    if place is None:
        return []
    items = []
    block = block_at(document, place.span.line)
    current = [one for one in file.findings or () if one.block == block]
    for number, (item, parts, span) in enumerate(_items(document, client, place, current)):
        kind = "markdown" if client.markdown_completion else "plaintext"
        text = render(parts, markdown=client.markdown_completion)
        edit = {"range": lines.plain_range(span), "newText": item.pop("text")}
        items.append(
            {
                **item,
                "documentation": {"kind": kind, "value": text},
                "sortText": f"{number:03}",
                "textEdit": edit,
            }
        )
    return items


Offered = tuple[Item, list[Part], Span]


def _items(
    document: Document, client: Client, place: Context, current: Iterable[Finding]
) -> Iterator[Offered]:
    """Each item with its text, its documentation, and what it replaces."""
    if place.part == "name":
        if client.snippets and not place.has_colon and not place.flow:
            names = [block.name for block in document.blocks if block.kind == "device" and block.name]
            for one in snippets.blocks(str(place.path[0]), names):
                yield _snippet(one, place)
    elif place.part in ("key", "item"):
        yield from _keys(client, place)
    else:
        yield from _values(document, place, current)


def _keys(client: Client, place: Context) -> Iterator[Offered]:
    rows = context.keys(place)
    dash = "- " if place.part == "item" and not place.flow else ""
    if client.snippets and not place.has_colon:
        for one in snippets.bands({str(row.path[-1]) for row in rows}, place.path):
            yield _snippet(one, place, dash)
    for row in sorted(rows, key=lambda row: not row.judged):
        name = str(row.path[-1])
        item: Item = {
            "label": name,
            "kind": types.CompletionItemKind.Property.value,
            "detail": row.example,
            "filterText": f"{dash}{name}",
            "text": name if place.has_colon else f"{dash}{name}: ",
        }
        if client.snippets and not place.has_colon and (inside := _inside(place, row)):
            item["text"] = f"{dash}{name}:{inside}"
            item |= {"insertTextFormat": _SNIPPET_FORMAT, "insertTextMode": _ADJUST_INDENT}
        yield item, key.parts(row), place.span


def _inside(place: Context, row: Key) -> str:
    """What a new mapping or list starts with, as a snippet; empty for other values."""
    if row.kind == "list":
        return " [$0]" if place.flow else "\n  - $0"
    if row.kind == "mapping":
        return "\n  $0" if place.where == "top" and not place.flow else " {$0}"
    return ""


def _snippet(one: snippets.Snippet, place: Context, dash: str = "") -> Offered:
    item = {
        "label": one.label,
        "kind": types.CompletionItemKind.Snippet.value,
        "insertTextFormat": _SNIPPET_FORMAT,
        "insertTextMode": _ADJUST_INDENT,
        "filterText": f"{dash}{one.label}",
        "text": dash + one.text,
    }
    return item, [one.doc], place.span


def _values(document: Document, place: Context, current: Iterable[Finding]) -> Iterator[Offered]:
    row = context.value_row(place)
    units = context.units(place)
    if units is not None:
        typed, parted, names = units
        number = place.typed[: len(place.typed) - typed].strip()
        span = place.span._replace(column=place.span.column + len(place.typed) - typed)
        for name in names:
            item = {
                "label": name,
                "kind": types.CompletionItemKind.Unit.value,
                "detail": UNITS[name].doc,
                "filterText": name,
                "text": name if parted else f" {name}",
            }
            yield item, [f"`{number} {name}`: {number} {UNITS[name].doc}."], span
    elif row is not None and not place.typed[-1:].isspace() and place.typed[:1] not in ("'", '"'):
        kind = _KINDS.get(row.kind, types.CompletionItemKind.Value)
        for name, parts in _names(document, place, row, current):
            item = {"label": name, "kind": kind.value, "filterText": name, "text": place.lead + name}
            yield item, parts, place.span


def _names(
    document: Document, place: Context, row: Key, current: Iterable[Finding]
) -> Iterator[tuple[str, list[Part]]]:
    """The names that the value may be, each with what it means."""
    if row.kind == "reference":
        for block in document.blocks:
            if block.kind == "device" and block.name:
                yield block.name, device.parts(document, block)
    elif row.kind == "finding":
        here = {one.id: one.message for one in current}
        for id in sorted(RULES, key=lambda id: id not in here):
            if not id.startswith(NEVER):
                yield id, [what_is_asked(id), *([f"Here: {here[id]}"] if id in here else [])]
    else:
        names = grammar.COMMON_FORMATS if row.kind == "arithmetic" else row.names
        listed = place.there if isinstance(place.path[-1], int) else frozenset()
        for name in sorted(names, key=lambda name: not _is_judged(row, name)):
            if name not in listed:
                yield name, list(_meaning(row, name))


def _is_judged(row: Key, name: str) -> bool:
    if row.path[0] in ("family", "structure") and name not in FAMILIES and name not in STRUCTURES:
        return False
    return name not in row.unjudged_names and (row.judged or name == row.default)


def _meaning(row: Key, name: str) -> Iterator[Part]:
    yield _MEANINGS.get(name, row.doc)
    if name == row.default:
        yield "It is the default."
    if not _is_judged(row, name):
        yield NOT_JUDGED
