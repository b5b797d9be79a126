"""The plot of one filter: its mask, the responses of its candidates, and the edges that set their orders."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from bandwright.drawings import areas, axes, colours, curves, labels, marks
from bandwright.drawings.axes import Scale
from bandwright.drawings.labels import Box, Flag
from bandwright.drawings.responses import Response, responses
from bandwright.drawings.svg import element, escaped, line, number, rectangle
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form.types import Mask

WIDTH = 860.0
LEFT, RIGHT = 78.0, 784.0
"""Where the panels begin and end."""
ENLARGED_HEIGHT, WHOLE_HEIGHT, GAP = 150.0, 300.0, 16.0
TITLE_SIZE, TEXT_SIZE = 16.0, 12.0
ROW = 18.0
FLAG_GAP = 5.0
MARK_EVERY = 110.0
"""Pixels along a curve between its markers."""

MOST_CHARACTERS = 40_000
STEPS = (1.0, 2.0, 4.0, 8.0)
"""Coarser and coarser samples, until the plot is no longer than `MOST_CHARACTERS`."""

MOST_TICKS = 9


@dataclass(frozen=True, slots=True)
class Edge:
    """An edge of a band that lies between 0 and Nyquist."""

    w: float
    """rad/sample"""
    name: str
    """ "stop from 25 Hz" """
    side: labels.Side
    """On which side of the edge its band lies."""
    level: float | None
    """dB: the most that a stop band admits."""
    sets: tuple[str, ...]
    """The families drawn whose order it sets."""


@dataclass(frozen=True, slots=True)
class Panel:
    """One of the two panels: the same frequencies, another stretch of gain."""

    frequency: Scale
    """rad/sample"""
    level: Scale
    """dB"""

    @property
    def box(self) -> Box:
        return Box(self.frequency.first, self.level.last, self.frequency.last, self.level.first)


def plot(forecast: Forecast, designed: Sequence[Response] = ()) -> str:
    """The SVG document; the same for the same values.

    `designed` are responses that the forecast has no design of, such as those of FIR filters.

    Raises:
        ValueError: the filter makes no mask.
    """
    mask = forecast.mask
    if mask is None:
        raise ValueError(f"{forecast.filter.name} makes no mask")
    shown = (*responses(forecast), *designed)
    edges = _edges(forecast, mask, shown)
    drawn = (_Drawing(forecast, mask, shown, edges, step).document() for step in STEPS)
    return next((text for text in drawn if len(text) <= MOST_CHARACTERS), "") or (
        _Drawing(forecast, mask, (), edges, STEPS[-1]).document()
    )


class _Drawing:
    """One attempt at a plot, with samples of one fineness."""

    def __init__(
        self, forecast: Forecast, mask: Mask, shown: Sequence[Response], edges: Sequence[Edge], step: float
    ) -> None:
        self.forecast, self.mask, self.shown, self.edges = forecast, mask, shown, edges
        self.areas = areas.areas(mask)
        frequency = axes.frequency_scale(sorted({edge.w for edge in edges}), math.pi, LEFT, RIGHT)
        self.flags, self.flag_rows = _flags(edges, frequency)
        top = 44.0 + self.flag_rows * ROW + 6.0
        low, high = areas.enlarged(mask)
        self.enlarged = Panel(frequency, Scale(low, high, top + ENLARGED_HEIGHT, top))
        top += ENLARGED_HEIGHT + GAP
        low, high = areas.whole(mask)
        self.whole = Panel(frequency, Scale(low, high, top + WHOLE_HEIGHT, top))
        self.flag_top = 44.0
        knots = [edge.w for edge in edges]
        self.lines = {
            panel: [
                curves.polylines(one.gain_db, (*knots, *one.knots), frequency, panel.level, step)
                for one in shown
            ]
            for panel in (self.enlarged, self.whole)
        }
