"""Axes: from values to pixels, and the ticks that a person would choose."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import NamedTuple

NARROWEST = 1 / 20
"""A band or transition that takes less of a frequency axis than this is hard to see."""

AROUND = 3.0
"""How far a logarithmic axis goes at least below the lowest edge and above the highest, as a factor."""

_LOG_STEPS = ((1, 2, 3, 4, 5, 6, 7, 8, 9), (1, 2, 3, 5, 7), (1, 2, 5), (1,))
_NICE = (1.0, 2.0, 5.0, 10.0)


class Scale(NamedTuple):
    """A stretch of values on a stretch of pixels."""

    start: float
    end: float
    first: float
    """Where `start` lies, in pixels."""
    last: float
    log: bool = False

    def px(self, value: float) -> float:
        """The pixel of a value; of an infinite one an infinite pixel."""
        if self.log:
            log = math.log(value / self.start) if value > 0.0 else -math.inf
            part = log / math.log(self.end / self.start)
        else:
            part = (value - self.start) / (self.end - self.start)
        return self.first + part * (self.last - self.first)

    def value(self, px: float) -> float:
        """The value at a pixel."""
        part = (px - self.first) / (self.last - self.first)
        if self.log:
            return self.start * math.exp(part * math.log(self.end / self.start))
        return self.start + part * (self.end - self.start)

    def within(self, value: float) -> float:
        """The value, or the end of the scale that is next to it."""
        return min(max(value, self.start), self.end)


def frequency_scale(edges: Sequence[float], nyquist: float, first: float, last: float) -> Scale:
    """The frequency axis on which the narrowest band or transition can be seen.

    `edges`: the edges strictly between 0 and `nyquist`, rising, in the unit of the axis. Of these ways the
    first is taken that gives each band and transition a twentieth of the width, or else the one whose
    narrowest of them is widest: linear from 0 to Nyquist; logarithmic, from a third of the lowest edge to
    three times the highest, or to Nyquist; linear around the edges, with as much on either side as they are
    apart.
    """
    whole = Scale(0.0, nyquist, first, last)
    if not edges:
        return whole
    low, high = edges[0], edges[-1]
    log = Scale(_nice(low / AROUND, "down"), min(_nice(high * AROUND, "up"), nyquist), first, last, log=True)
    ways = [whole, log]
    if high > low:
        span = high - low
        step = nice_step(3.0 * span, 8)
        start = max(math.floor((low - span) / step) * step, 0.0)
        ways.append(Scale(start, min(math.ceil((high + span) / step) * step, nyquist), first, last))
    shares = [_narrowest(edges, way) for way in ways]
    wide = (way for way, share in zip(ways, shares, strict=True) if share >= NARROWEST)
    return next(wide, ways[shares.index(max(shares))])


def _narrowest(edges: Sequence[float], scale: Scale) -> float:
    """The share of the axis that its narrowest stretch between edges takes."""
    places = [scale.first, *(scale.px(edge) for edge in edges), scale.last]
    widths = [after - before for before, after in pairwise(places) if after > before]
    return min(widths) / (scale.last - scale.first)


def nice_step(span: float, most: int) -> float:
    """The least of 1, 2, 5, 10, 20, ... that goes into `span` at most `most` times."""
    power = 10.0 ** math.floor(math.log10(span / most))
    return next(nice * power for nice in _NICE if nice * power * most >= span * (1.0 - 1e-12))


def ticks(scale: Scale, most: int) -> list[tuple[float, str]]:
    """The values to mark, at most about `most` of them, each with its label."""
    if scale.log:
        found = _log_ticks(scale, most)
        if len(found) > 2:
            return found
    step = nice_step(scale.end - scale.start, most)
    first, last = math.ceil(scale.start / step - 1e-9), math.floor(scale.end / step + 1e-9)
    decimals = max(0, -math.floor(math.log10(step) + 1e-9))
    return [(count * step, label(count * step, decimals)) for count in range(first, last + 1)]


def small_ticks(scale: Scale) -> list[float]:
    """The values of a logarithmic axis that are marked without a label: 1 to 9 in every decade."""
    return [value for value, _ in _of_decades(scale, _LOG_STEPS[0])] if scale.log else []


def label(value: float, decimals: int) -> str:
    """A number as it stands at an axis, with a minus sign and no needless digit."""
    text = f"{value:.{decimals}f}"
    return text.replace("-", "\N{MINUS SIGN}") if float(text) else "0"


def three_digits(value: float) -> str:
    """A number in three digits, or in as many as it has before the point."""
    shown = f"{abs(value):.3g}"
    return label(value, 0 if "e+" in shown else len(f"{float(shown):.9f}".rstrip("0").partition(".")[2]))


def _log_ticks(scale: Scale, most: int) -> list[tuple[float, str]]:
    choices = [_of_decades(scale, steps) for steps in _LOG_STEPS]
    return next((found for found in choices if len(found) <= most), choices[-1])


def _of_decades(scale: Scale, steps: Sequence[int]) -> list[tuple[float, str]]:
    low, high = (math.floor(math.log10(value)) for value in (scale.start, scale.end))
    return [
        (step * 10.0**decade, label(step * 10.0**decade, max(0, -decade)))
        for decade in range(low, high + 1)
        for step in steps
        if scale.start * (1.0 - 1e-9) <= step * 10.0**decade <= scale.end * (1.0 + 1e-9)
    ]


def _nice(value: float, direction: str) -> float:
    """The next of 1, 2, 5, 10, 20, ... below or above the value."""
    power = 10.0 ** math.floor(math.log10(value))
    steps = [nice * power for nice in _NICE]
    if direction == "down":
        return max(step for step in steps if step <= value * (1.0 + 1e-12))
    return min(step for step in steps if step >= value * (1.0 - 1e-12))
