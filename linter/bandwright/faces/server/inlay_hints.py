"""Inlay hints: the figures of a filter beside what they belong to."""

from __future__ import annotations

import asyncio
import time
from collections.abc import Iterator
from typing import Any, NamedTuple

from lsprotocol import types

from bandwright.bandfile import quantities
from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.quantities import show, show_number, show_quantity
from bandwright.bandfile.values import Block, Document, Filter, Path, Quantity, Span
from bandwright.faces.forecast_table import certainty, label
from bandwright.faces.server.client import Client
from bandwright.faces.server.hovers import device, edge
from bandwright.faces.server.session import SLICE_S, Session
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.gaps import gaps
from bandwright.forecast.neighbours import Transition
from bandwright.forecast.words import shown


class Hint(NamedTuple):
    """A few words behind the value at `path` (the filter's name where it is empty), and a few more."""

    path: Path
    words: str
    tooltip: str


async def inlay_hints(
    session: Session, client: Client, params: types.InlayHintParams
) -> list[dict[str, Any]] | None:
    """The hints within a range, in the order of the text."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    document, lines = session.read(file), session.lines(file)
    wanted = lines.span(params.range)
    found = []
    started = time.monotonic()
    for index, filter in document.filters:
        block = document.blocks[index]
        if not block.whole or not _is_within(block, wanted):
            continue
        for hint in _hints(session.newest_forecast(file, index, filter)):
            place = _place(document, block, hint.path)
            if place is not None and wanted[:2] <= place <= wanted[2:]:
                found.append((place, hint))
        if time.monotonic() - started > SLICE_S:
            await asyncio.sleep(0)
            if file.document is not document:
                return None  # it was edited meanwhile, and the client will ask again
            started = time.monotonic()
    return [
        {
            "position": lines.plain_range(Span(*place, *place))["start"],
            "label": hint.words,
            "tooltip": hint.tooltip,
            "paddingLeft": True,
        }
        for place, hint in sorted(found)
    ]


def _is_within(block: Block, wanted: Span) -> bool:
    last_line = block.first_line + block.marks[()].all.end_line
    return block.first_line <= wanted.end_line and wanted.line <= last_line


def _place(document: Document, block: Block, path: Path) -> tuple[int, int] | None:
    """Where a hint stands; None where what it belongs to is not written here itself."""
    marks = block.marks.get(path)
    if marks is None or marks.shared:
        return None
    span = in_document(document, block, marks.value if path else marks.key)
    line, column = span[2:]
    return (line, column) if path else (line, column + 1)


def _hints(forecast: Forecast) -> Iterator[Hint]:
    filter = forecast.filter
    yield from _built_as(forecast)
    yield from _brought(filter)
    for gap in gaps(filter, forecast.bands):
        if gap.width > 0.0:
            width = edge.width_in_words(forecast, Transition(gap.low, gap.high))
            yield Hint(gap.above, width, f"The transition from {gap.low_written} to {gap.high_written}.")
    for index, kind in filter.band_kinds():
        path = ("bands", index, kind, "ripple")
        ripple = filter.quantity(*path)
        if ripple is not None and ripple.number > 0.0:
            yield _ripple(path, ripple)


def _built_as(forecast: Forecast) -> Iterator[Hint]:
    """What the filter will be built as, beside its family or, where it names none or several, in full."""
    chosen = forecast.chosen
    if chosen is None:
        return
    family = forecast.filter.get("family")
    own = family is not None and family.origin == "own"
    alone = own and forecast.filter.names("family") == (chosen.family,)
    words = _size(chosen) if alone else f"{chosen.family}, {_size(chosen)}"
    yield Hint(("family",) if own else (), words, _explained(forecast, chosen))


def _size(one: Candidate) -> str:
    """The least order, or the length."""
    if one.least_order is None:
        return f"{shown(one.taps)} taps"
    return f"order {one.least_order}" if one.order == one.least_order else f"least order {one.least_order}"


def _explained(forecast: Forecast, one: Candidate) -> str:
    if one.taps is not None:
        return f"{forecast.summary()}: {label(one)}. {certainty([one.taps])}"
    unrounded = (
        "" if one.order_unrounded is None else f", {show_number(one.order_unrounded)} before rounding up"
    )
    return f"{forecast.summary()}: {one.family} meets the mask from order {one.least_order} on{unrounded}."


def _brought(filter: Filter) -> Iterator[Hint]:
    """What the device gives to this filter, without what the filter says itself."""
    every = [(path, one) for path, one in filter.settings if one.origin == "device" and one.known]
    if words := device.at_a_glance(every):
        all_of_it = ", ".join(f"{'.'.join(map(str, path))} {one.written}" for path, one in every)
        yield Hint(("device",), words, f"From {filter.text('device')}: {all_of_it}.")


def _ripple(path: Path, ripple: Quantity) -> Hint:
    """The other way to write a ripple, and the same as a deviation of the gain."""
    height = quantities.peak_to_peak(ripple)
    half = Quantity(height.number / 2.0, height.unit, symmetric=True)
    other = f"{show_quantity(height)} peak to peak" if ripple.symmetric else show_quantity(half)
    ratio = quantities.linear(height)
    # Gains from (1 - d) to (1 + d) times their middle, so that ratio = (1 + d) / (1 - d).
    share = show((ratio - 1.0) / (ratio + 1.0), "share", digits=3)
    whole = f"a ratio of {show_number(ratio, 5)} from lowest to highest"
    return Hint(path, f"{other}, ±{share}", f"The gain stays within ±{share} of its middle: {whole}.")
