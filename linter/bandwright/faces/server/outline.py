"""The outline of a file: devices, filters with a few words about each, and the bands in them."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, NamedTuple

from lsprotocol import types

from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.values import Block, Document, Filter, Span
from bandwright.faces.server.client import Client
from bandwright.faces.server.hovers import device
from bandwright.faces.server.session import Session
from bandwright.forecast.summary import summary

KINDS = {
    "device": types.SymbolKind.Struct.value,
    "filter": types.SymbolKind.Function.value,
    "band": types.SymbolKind.Property.value,
}


class Symbol(NamedTuple):
    """Something with a name, and what is inside it."""

    name: str
    kind: str
    """A key of `KINDS`."""
    detail: str
    whole: Span
    """In the document."""
    own: Span
    """The name alone."""
    inside: tuple[Symbol, ...] = ()


async def outline(
    session: Session, client: Client, params: types.DocumentSymbolParams
) -> list[dict[str, Any]] | None:
    """The symbols of a file: bands inside their filters where the client takes that, else beside them."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    lines = session.lines(file)

    def nested(one: Symbol) -> dict[str, Any]:
        return {
            "name": one.name,
            "kind": KINDS[one.kind],
            "detail": one.detail,
            "range": lines.plain_range(one.whole),
            "selectionRange": lines.plain_range(one.own),
            "children": [nested(inner) for inner in one.inside],
        }

    def flat(one: Symbol, container: str) -> Iterator[dict[str, Any]]:
        location = {"uri": file.uri, "range": lines.plain_range(one.whole)}
        named = {"containerName": container} if container else {}
        yield {"name": one.name, "kind": KINDS[one.kind], "location": location, **named}
        for inner in one.inside:
            yield from flat(inner, one.name)

    found = symbols(session.read(file))
    if client.nested_outline:
        return [nested(one) for one in found]
    return [shown for one in found for shown in flat(one, "")]


def symbols(document: Document) -> tuple[Symbol, ...]:
    """The devices and filters of a document that have a name, in its order."""
    filters = dict(document.filters)
    found = []
    for index, block in enumerate(document.blocks):
        marks = block.marks.get(())
        if index == 0 or marks is None or not block.name.strip():
            continue
        filter = filters.get(index)
        detail = device.at_a_glance(block.own) if filter is None else summary(filter)
        whole, own = in_document(document, block, marks.all), in_document(document, block, marks.key)
        inside = () if filter is None else tuple(_bands(document, block, filter))
        found.append(Symbol(block.name, block.kind, detail, whole, own, inside))
    return tuple(found)


def _bands(document: Document, block: Block, filter: Filter) -> Iterator[Symbol]:
    for index, kind in filter.band_kinds():
        marks = block.marks.get(("bands", index, kind))
        if marks is None:
            continue
        written = [
            f"{word} {setting.written}"
            for word in ("from", "to", "at")
            if (setting := filter.get("bands", index, kind, word)) is not None
        ]
        whole, own = in_document(document, block, marks.all), in_document(document, block, marks.key)
        name = " ".join([kind, *written])
        yield Symbol(name, "band", _asked(filter, index, kind), whole, own)


def _asked(filter: Filter, index: int, kind: str) -> str:
    """What the band asks for: "ripple 0.1 dB", "gain -0.2 dB to 0.1 dB"."""
    for word in ("ripple", "attenuation"):
        if (setting := filter.get("bands", index, kind, word)) is not None:
            return f"{word} {setting.written}"
    sides = [filter.get("bands", index, kind, "gain", side) for side in ("min", "max")]
    gain = " to ".join(setting.written for setting in sides if setting is not None)
    return f"gain {gain}" if gain else ""
