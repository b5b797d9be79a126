"""The edges of a mask by name, and the flags above the panels that bear the names."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from bandwright.drawings.areas import most_db
from bandwright.drawings.axes import Scale
from bandwright.drawings.labels import Flag, Side, raise_flags, shortened, text_width
from bandwright.drawings.responses import Response
from bandwright.drawings.svg import element, escaped, line
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form.types import Mask

SIZE = 12.0
ROW = 18.0
"""Pixels from one row of flags to the next."""
GAP = 5.0
"""Pixels between a flag and the line of its edge."""
LONGEST = 300.0
"""Pixels that a flag may take."""


@dataclass(frozen=True, slots=True)
class Edge:
    """An edge of a band that lies between 0 and Nyquist."""

    item: int
    """Index of its band item."""
    w: float
    """rad/sample"""
    name: str
    """What it is, as the file writes its frequency: "stop from 25 Hz"."""
    band_side: Side
    """On which side of the edge its band lies."""
    most_db: float | None
    """The highest gain that its band admits."""
    sets: tuple[str, ...]
    """The families drawn whose order it sets."""
    orders: int
    """How many orders there are to be set."""

    @property
    def text(self) -> str:
        """Its name, and which orders it sets."""
        if not self.sets:
            return self.name
        if len(self.sets) == self.orders:
            return f"{self.name}, sets the order"
        return f"{self.name}, sets {len(self.sets)} of {self.orders} orders"


@dataclass(frozen=True, slots=True)
class Raised:
    """An edge whose flag has a place."""

    edge: Edge
    x: float
    row: int
    side: Side
    text: str


def named_edges(forecast: Forecast, mask: Mask, shown: Sequence[Response]) -> tuple[Edge, ...]:
    """The edges of the mask, rising; two where bands touch."""
    bound = [((one.binding.band, one.binding.side), one) for one in shown if one.binding is not None]
    found = []
    for band in mask.bands:
        for w, side, word in ((band.low, "low", "from"), (band.high, "high", "to")):
            if not 0.0 < w < math.pi:
                continue
            written = forecast.filter.get("bands", band.item, band.kind, word)
            sets = tuple(one.family for place, one in bound if place == (band.item, side))
            found.append(
                Edge(
                    band.item,
                    w,
                    " ".join(f"{band.kind} {word} {written.written if written else ''}".split()),
                    "right" if side == "low" else "left",
                    most_db(mask, band),
                    sets,
                    len(bound),
                )
            )
    return tuple(sorted(found, key=lambda edge: edge.w))


def raised(edges: Sequence[Edge], frequency: Scale, left: float, right: float) -> list[Raised]:
    """The edges with a place for their flags; where there is none for all, those that set orders first."""
    kept = sorted(edges, key=lambda edge: (not edge.sets, edge.w))
    while kept:
        ordered = sorted(kept, key=lambda edge: edge.w)
        texts = [shortened(edge.text, SIZE, LONGEST, strong=bool(edge.sets)) for edge in ordered]
        flags = [
            Flag(frequency.px(edge.w), text_width(text, SIZE, strong=bool(edge.sets)), edge.band_side)
            for edge, text in zip(ordered, texts, strict=True)
        ]
        ways = raise_flags(flags, left, right, GAP)
        if ways is not None:
            return [
                Raised(edge, flag.x, row, side, text)
                for edge, flag, text, (row, side) in zip(ordered, flags, texts, ways, strict=True)
            ]
        kept.pop()
    return []


def flags(found: Sequence[Raised], lowest: float, bottom: float) -> Iterator[str]:
    """The lines of the edges down to `bottom`, and their flags, the lowest row on the baseline `lowest`."""
    for one in found:
        baseline = lowest - one.row * ROW
        yield line("edge", one.x, baseline - 0.9 * SIZE, one.x, bottom)
        yield element(
            "text",
            escaped(one.text),
            class_="ink strong" if one.edge.sets else "ink",
            x=one.x + GAP if one.side == "right" else one.x - GAP,
            y=baseline,
            font_size=SIZE,
            text_anchor="start" if one.side == "right" else "end",
        )
