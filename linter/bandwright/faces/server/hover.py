"""Hover: what the thing under the pointer means, with the figures of its own filter."""

from __future__ import annotations

from typing import Any

from lsprotocol import types

from bandwright.analysis.types import Finding
from bandwright.bandfile import grammar
from bandwright.bandfile.values import Document, Filter, Path, Quantity
from bandwright.faces import forecast_table
from bandwright.faces.markdown import Link, Part, render
from bandwright.faces.server.client import Client
from bandwright.faces.server.guide import guide_uri
from bandwright.faces.server.hovers import arithmetic, device, edge, key, level, rate, relaxing, structure
from bandwright.faces.server.session import OpenFile, Session
from bandwright.faces.server.tokens import Token, token_at
from bandwright.findings.catalogue import RULES
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
    """What the token itself calls for; its key's meaning where nothing more is known."""
    if token.block.kind == "device" and not token.path:
        return device.parts(document, token.block)
    filter, aged = _filter(file, token)
    known = Forecast(filter, session.answers.kept)
    parts: list[Part] = []
    if token.block.kind == "filter" and _shows_forecast(token):
        parts = [*forecast_table.parts(known), *_meanings(token.path, filter)]
        session.want(file, forecast_table.questions(known))
    elif token.part == "value" and token.path:
        parts = _value(document, token.path, known)
        if token.path[0] == "bands" and known.mask is not None and known.mask.phase == "linear":
            session.want(file, relaxing.questions(known, token.path))
    if parts:
        return [*parts, "As it was before the last edit, which can't be read yet."] if aged else parts
    described = grammar.key(token.block.kind, token.path)
    return key.parts(described) if described is not None else []


def _filter(file: OpenFile, token: Token) -> tuple[Filter, bool]:
    """The filter to show figures of, and whether it is of an earlier version that could be read."""
    if token.filter is None:
        return Filter(token.block.name, token.block.own), False
    last_good = file.last_good.get(token.filter.name)
    if token.block.whole or last_good is None:
        return token.filter, False
    return last_good.filter, True


def _shows_forecast(token: Token) -> bool:
    if not token.path or token.path[0] in ("family", "order"):
        return True
    return token.path[0] == "at_most" and token.part == "value"


def _meanings(path: Path, filter: Filter) -> list[Part]:
    """What the families are that were asked for, where these were pointed at."""
    names = filter.names("family") or () if path[:1] == ("family",) else ()
    return [f"`{name}`: {grammar.FAMILIES[name]}" for name in names if name in grammar.FAMILIES]


def _value(document: Document, path: Path, known: Forecast) -> list[Part]:
    """What a value means by itself; nothing where only its key tells."""
    setting = known.filter.get(*path) or known.filter.get(*path[:-1])
    match path[0], setting.value if setting is not None else None:
        case "bands", Quantity() as quantity if path[-1] in EDGES:
            return edge.parts(known, path, quantity)
        case "bands", Quantity() as quantity if path[-1] in LEVELS:
            return level.parts(known, path, quantity)
        case "sample_rate", Quantity() as quantity:
            return rate.parts(quantity)
        case "structure", (str(), *_) as names:
            at = path[-1] if isinstance(path[-1], int) else 0
            return structure.parts(known, str(names[at]))
        case "arithmetic", str(name):
            return arithmetic.parts(known, name)
        case "device", str(name):
            named = (one for one in document.blocks if one.kind == "device" and one.name == name)
            return [part for block in named for part in device.parts(document, block)]
        case "accepted", str(id) if id in RULES and path[-1] == "finding":
            return [f"`{id}`, {RULES[id].severity}", *_page(id)]
    return []


def _of_findings(findings: list[Finding]) -> list[Part]:
    """Each finding's sentence, and the way to its page."""
    parts: list[Part] = []
    for one in findings:
        state = "accepted" if one.accepted else one.severity
        parts += [f"{state} `{one.id}`: {one.message}", *_page(one.id)]
    return parts


def _page(id: str) -> list[Part]:
    page = guide_uri(id)
    return [Link(f"About {id}", page)] if page is not None else []
