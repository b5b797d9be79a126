"""Hover: what the thing under the pointer means, with the figures of its own filter."""

from __future__ import annotations

from typing import Any

from lsprotocol import types

from bandwright.analysis.types import Finding
from bandwright.bandfile import grammar
from bandwright.bandfile.values import Document, Quantity
from bandwright.faces.server.client import Client
from bandwright.faces.server.guide import guide_uri
from bandwright.faces.server.hovers import arithmetic, device, edge, forecast, key, level, rate, structure
from bandwright.faces.server.markdown import Link, Part, render
from bandwright.faces.server.session import OpenFile, Session
from bandwright.faces.server.tokens import Token, token_at
from bandwright.forecast.forecast import Forecast

EDGES = ("from", "to")
LEVELS = ("ripple", "attenuation", "min", "max")


async def hover(session: Session, client: Client, params: types.HoverParams) -> dict[str, Any] | None:
    """What there is to say about a place: the figures first, then the findings there."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    document, lines = session.read(file), session.lines(file)
    place = lines.place(params.position)
    token = token_at(document, *place)
    found = [one for one in file.findings or () if one.span[:2] <= place <= one.span[2:]]
    parts = [*(_about(session, file, document, token) if token else ()), *_of_findings(found)]
    span = token.span if token is not None else found[0].span if found else None
    if not parts or span is None:
        return None
    kind = "markdown" if client.markdown else "plaintext"
    return {
        "contents": {"kind": kind, "value": render(parts, markdown=client.markdown)},
        "range": lines.plain_range(span),
    }


def _about(session: Session, file: OpenFile, document: Document, token: Token) -> list[Part]:
    """What the token itself calls for."""
    if token.block.kind == "device" and not token.path:
        return device.parts(document, token.block)
    name = token.path[0] if token.path else ""
    shows_forecast = (
        not token.path or name in ("family", "order") or (name == "at_most" and token.part == "value")
    )
    if token.filter is not None and (shows_forecast or token.part == "value"):
        filter, aged = token.filter, False
        if not token.block.whole and filter.name in file.last_good:
            filter, aged = file.last_good[filter.name].filter, True
        known = Forecast(filter, session.answers.kept)
        parts = forecast.parts(known) if shows_forecast else _value(document, token, known)
        if shows_forecast:
            session.want(file, forecast.questions(known))
        if parts:
            return [*parts, "As it was before the last edit, which can't be read yet."] if aged else parts
    described = grammar.key(token.block.kind, token.path)
    return key.parts(described) if described is not None else []


def _value(document: Document, token: Token, known: Forecast) -> list[Part]:
    """What a value of a filter means; nothing where only its key tells."""
    path, filter = token.path, known.filter
    quantity = filter.quantity(*path)
    if path[0] == "bands" and isinstance(quantity, Quantity):
        if path[-1] in EDGES:
            return edge.parts(known, path, quantity)
        return level.parts(known, path, quantity) if path[-1] in LEVELS else []
    if path == ("sample_rate",) and quantity is not None:
        return rate.parts(quantity)
    names = filter.names(path[0]) if path[0] == "structure" else None
    if names:
        at = path[1] if len(path) > 1 and isinstance(path[1], int) else 0
        return structure.parts(known, names[min(at, len(names) - 1)])
    written = filter.text(*path)
    if path[0] == "arithmetic" and written is not None:
        return arithmetic.parts(known, written)
    if path == ("device",):
        named = next((one for one in document.blocks if one.kind == "device" and one.name == written), None)
        return device.parts(document, named) if named is not None else []
    return []


def _of_findings(findings: list[Finding]) -> list[Part]:
    """Each finding's sentence, and the way to its page."""
    parts: list[Part] = []
    for one in findings:
        state = "accepted" if one.accepted else one.severity
        parts.append(f"{state} `{one.id}`: {one.message}")
        page = guide_uri(one.id)
        if page is not None:
            parts.append(Link(f"About {one.id}", page))
    return parts
