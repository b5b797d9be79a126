"""The plot of one filter: its mask, the responses of its candidates, and the edges that set their orders.

Two panels share the axis of frequencies: the upper one enlarges the window of the pass bands, the lower one
shows the whole range of gains. A window of 0.1 dB and a stop band at -70 dB can so be read in one plot.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from bandwright.drawings import areas, axes, colours, curves, labels, panels, words
from bandwright.drawings.axes import Scale
from bandwright.drawings.edges import ROW, Edge, Raised, flags, named_edges, raised
from bandwright.drawings.labels import Box, LineLabel
from bandwright.drawings.marks import mark
from bandwright.drawings.panels import Lines, Panel
from bandwright.drawings.responses import Response, responses
from bandwright.drawings.svg import element, escaped, line, rectangle
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form.types import Mask

WIDTH, MARGIN = 860.0, 12.0
LEFT, RIGHT = 78.0, 768.0
"""Where the panels begin and end."""
FLAGS_TOP = 38.0
ENLARGED_HEIGHT, WHOLE_HEIGHT, PANEL_GAP = 150.0, 300.0, 16.0
TITLE_SIZE, SIZE, LINE = 16.0, 12.0, 17.0
RING = 6.0

MOST_TICKS = 9
MOST_BYTES = 40_000
STEPS = (1.0, 2.0, 4.0, 8.0)
"""Coarser and coarser samples, in pixels, until the plot has no more than `MOST_BYTES`."""

HATCH = element(
    "pattern",
    element("path", class_="hatch", d="M-2 2L2 -2M0 8L8 0M6 10L10 6"),
    id=colours.HATCH,
    patternUnits="userSpaceOnUse",
    width=8.0,
    height=8.0,
)


@dataclass(frozen=True, slots=True)
class Layout:
    """What is drawn, and where."""

    mask: Mask
    shown: tuple[Response, ...]
    edges: tuple[Edge, ...]
    flags: list[Raised]
    enlarged: Panel
    whole: Panel

    @property
    def lowest_flag(self) -> float:
        """The baseline of the lowest row of flags."""
        return self.enlarged.box.top - 10.0


def plot(forecast: Forecast, designed: Sequence[Response] = ()) -> str:
    """The plot as an SVG document; the same for the same values.

    `designed` are responses of candidates that the forecast has no design of: those of FIR filters.

    Raises:
        ValueError: the filter makes no mask.
    """
    if forecast.mask is None:
        raise ValueError(f"{forecast.filter.name} makes no mask")
    placed = layout(forecast, forecast.mask, (*responses(forecast), *designed))
    for step in STEPS:
        text = _document(forecast, placed, step)
        if len(text.encode()) <= MOST_BYTES:
            break
    return text


def layout(forecast: Forecast, mask: Mask, shown: tuple[Response, ...]) -> Layout:
    """The places of flags and panels."""
    edges = named_edges(forecast, mask, shown)
    per_radian = _unit(forecast.sample_rate_hz)[1]
    shown_edges = sorted({edge.w * per_radian for edge in edges})
    levels = Scale(*areas.enlarged(mask), ENLARGED_HEIGHT, 0.0), Scale(*areas.whole(mask), WHOLE_HEIGHT, 0.0)
    left = max(LEFT, *(panels.gain_axis_width(level) for level in levels))
    own = axes.frequency_scale(shown_edges, math.pi * per_radian, left, RIGHT)
    frequency = _times(own, 1.0 / per_radian)
    found = raised(edges, frequency, MARGIN, WIDTH - MARGIN)
    top = FLAGS_TOP + ROW * (1 + max((one.row for one in found), default=-1)) + 6.0
    enlarged = Panel(frequency, _lowered(levels[0], top))
    whole = Panel(frequency, _lowered(levels[1], enlarged.box.bottom + PANEL_GAP))
    return Layout(mask, shown, edges, found, enlarged, whole)


def _lowered(level: Scale, by: float) -> Scale:
    return level._replace(first=level.first + by, last=level.last + by)


def _document(forecast: Forecast, placed: Layout, step: float) -> str:
    left = placed.whole.box.left
    caption = words.caption(forecast, placed.mask, placed.shown, placed.whole.frequency)
    rows = labels.wrapped(caption, SIZE, WIDTH - left - MARGIN)
    axes_bottom = placed.whole.box.bottom + 102.0
    height = axes_bottom + LINE * len(rows) + MARGIN
    title = words.title(forecast)
    parts = [
        element("title", escaped(title)),
        element("desc", escaped(words.description(forecast, placed.mask, placed.shown, placed.edges))),
        element("style", colours.style_sheet()),
        element("defs", HATCH),
        rectangle("ground", 0.0, 0.0, WIDTH, height),
        _text(
            labels.shortened(title, TITLE_SIZE, WIDTH - 2 * MARGIN, strong=True),
            MARGIN,
            26.0,
            "ink strong",
            size=TITLE_SIZE,
        ),
        *_panels(placed, step),
        *_frequency_axes(forecast.sample_rate_hz, placed.whole),
        *(_text(row, left, axes_bottom + LINE * at, "quiet") for at, row in enumerate(rows)),
    ]
    return (
        element(
            "svg",
            "\n".join(("", *parts, "")),
            xmlns="http://www.w3.org/2000/svg",
            class_="bandwright-plot",
            role="img",
            viewBox=f"0 0 {WIDTH:.0f} {height:.0f}",
            width=WIDTH,
            height=round(height),
        )
        + "\n"
    )


def _panels(placed: Layout, step: float) -> Iterator[str]:
    forbidden = areas.areas(placed.mask)
    knots = tuple(edge.w for edge in placed.edges)
    both = (placed.enlarged, placed.whole)
    drawn = {
        panel: [
            curves.polylines(one.gain_db, (*knots, *one.knots), panel.frequency, panel.level, step)
            for one in placed.shown
        ]
        for panel in both
    }
    for panel in both:
        yield from panels.ground(panel, forbidden)
    yield from flags(placed.flags, placed.lowest_flag, placed.whole.box.bottom)
    # The chosen one comes last, over the others.
    order = sorted(range(len(placed.shown)), key=lambda at: placed.shown[at].chosen)
    for panel in both:
        for at in order:
            yield from panels.curve_lines(placed.shown[at], drawn[panel][at])
    places = _curve_places(placed, drawn[placed.whole])
    reserved = [place.anchor for place in places if place is not None] + _binding_corners(placed)
    for panel in both:
        for at in order:
            phase = (at + 0.5) / len(order)
            yield from panels.curve_marks(placed.shown[at], panel, drawn[panel][at], phase, reserved)
    yield from _rings(placed)
    yield from _curve_labels(placed, places)
    bounds = [level for band in placed.mask.bands if band.kind != "stop" for level in (band.least, band.most)]
    yield from panels.notes(placed.enlarged, [level for level in bounds if level is not None])
    yield from panels.notes(placed.whole, [area.level for area in forbidden if area.over])
    yield from panels.gain_axis(placed.enlarged, "Pass band, dB")
    yield from panels.gain_axis(placed.whole, "Gain, dB")


def _binding_corners(placed: Layout) -> list[tuple[float, float]]:
    """The corners of the mask at the edges that set an order, in pixels."""
    panel = placed.whole
    return [
        (panel.frequency.px(edge.w), panel.level.px(edge.most_db))
        for edge in placed.edges
        if edge.sets and edge.most_db is not None
    ]


def _rings(placed: Layout) -> Iterator[str]:
    for x, y in _binding_corners(placed):
        yield element("circle", class_="ring", cx=x, cy=y, r=RING)


def _curve_places(placed: Layout, lines: Sequence[Lines]) -> list[LineLabel | None]:
    sizes = [(labels.text_width(one.label, SIZE, strong=one.chosen) + 6.0, 18.0) for one in placed.shown]
    rings = [Box(x, y, x, y).grown(RING + 2.0) for x, y in _binding_corners(placed)]
    walls = sorted({placed.whole.frequency.px(edge.w) for edge in placed.edges})
    return labels.label_lines([panels.pairs(one) for one in lines], sizes, placed.whole.box, rings, walls)


def _curve_labels(placed: Layout, places: Sequence[LineLabel | None]) -> Iterator[str]:
    """Each response's label, with a line to a marker on it."""
    for one, place in zip(placed.shown, places, strict=True):
        if place is None:
            continue
        box, (x, y) = place
        end = min(max(x, box.left), box.right), min(max(y, box.top), box.bottom)
        yield line("leader", x, y, *end)
        yield rectangle("plate", *box)
        yield mark(one.family, x, y)
        kind = "ink strong" if one.chosen else "ink"
        if x >= box.right:
            yield _text(one.label, box.right - 3.0, box.bottom - 5.0, kind, "end")
        else:
            yield _text(one.label, box.left + 3.0, box.bottom - 5.0, kind)


def _frequency_axes(rate_hz: float | None, panel: Panel) -> Iterator[str]:
    """Two axes below the panel: Hz, or parts of pi where no sample rate is known; and parts of it."""
    unit, per_radian = _unit(rate_hz)
    if rate_hz is not None:
        end = panel.frequency.end * per_radian
        unit, factor = next(one for one in _UNITS if end >= 10.0 * one[1] or one[1] == 1.0)
        per_radian /= factor
    upper = (per_radian, f"Frequency, {unit}")
    lower = (1.0 / math.tau, "Fraction of the sample rate")
    for top, (factor, title) in ((panel.box.bottom, upper), (panel.box.bottom + 46.0, lower)):
        own = _times(panel.frequency, factor)
        yield line("frame", own.first, top, own.last, top)
        for value in axes.small_ticks(own):
            yield line("frame", own.px(value), top, own.px(value), top + 3.0)
        for value, text in axes.ticks(own, MOST_TICKS):
            yield line("frame", own.px(value), top, own.px(value), top + panels.TICK)
            yield _text(text, own.px(value), top + 19.0, "quiet", "middle")
        yield _text(title, 0.5 * (own.first + own.last), top + 35.0, "ink", "middle")


_UNITS = (("GHz", 1e9), ("MHz", 1e6), ("kHz", 1e3), ("Hz", 1.0))
"""A unit is taken where the axis would else have numbers of five digits."""


def _unit(rate_hz: float | None) -> tuple[str, float]:
    """The unit of frequencies, and how many of it are 1 rad/sample."""
    return ("pi rad/sample", 1.0 / math.pi) if rate_hz is None else ("Hz", rate_hz / math.tau)


def _times(scale: Scale, factor: float) -> Scale:
    """The same scale in another unit."""
    return scale._replace(start=scale.start * factor, end=scale.end * factor)


def _text(text: str, x: float, y: float, kind: str, anchor: str = "start", *, size: float = SIZE) -> str:
    return element("text", escaped(text), class_=kind, x=x, y=y, font_size=size, text_anchor=anchor)
