"""A mask as the areas that a response may not enter, and the stretches of gain that show them."""

from __future__ import annotations

import math
from typing import NamedTuple

from bandwright.drawings.axes import nice_step
from bandwright.theory.closed_form.types import Mask, MaskBand

LONE_WINDOW_DB = 1.0
"""The height that is enlarged where pass bands are bounded on one side only."""

DEEPER = 1.3
"""How deep the plot goes, over the deepest level asked."""

BELOW_PASS_DB = 20.0
"""How deep it goes below the pass bands where no level is asked."""


class Area(NamedTuple):
    """Where the gain may not be: over or under a level (dB), between two frequencies (rad/sample)."""

    low: float
    high: float
    level: float
    over: bool


def areas(mask: Mask) -> tuple[Area, ...]:
    """The forbidden areas of a mask.

    A floating pass window is drawn with its top at 0 dB; a relative stop level counts from there.
    """
    found = []
    for band in mask.bands:
        most = most_db(mask, band)
        if most is not None:
            found.append(Area(band.low, band.high, most, over=True))
        if band.least is not None:
            found.append(Area(band.low, band.high, band.least, over=False))
    return tuple(found)


def most_db(mask: Mask, band: MaskBand) -> float | None:
    """The highest gain that a band admits, dB; None where it admits any."""
    if band.most is None or band.kind != "stop" or not band.relative:
        return band.most
    tops = [one.most for one in mask.bands if one.kind == "pass" and one.most is not None]
    return band.most + min(tops, default=0.0)


def pass_levels(mask: Mask) -> tuple[float, float]:
    """The lowest and the highest bound of the pass bands, dB; never the same."""
    passes = [band for band in mask.bands if band.kind == "pass"]
    bounds = [level for band in passes for level in (band.least, band.most) if level is not None]
    low, high = min(bounds), max(bounds)
    if high > low:
        return low, high
    return (low, low + LONE_WINDOW_DB) if passes[0].most is None else (high - LONE_WINDOW_DB, high)


def enlarged(mask: Mask) -> tuple[float, float]:
    """The stretch of gain (dB) that shows the pass bands' window in its middle."""
    low, high = pass_levels(mask)
    return low - 0.9 * (high - low), high + 0.6 * (high - low)


def whole(mask: Mask) -> tuple[float, float]:
    """The stretch of gain (dB) that shows every level, with room above and below."""
    least, most = pass_levels(mask)
    levels = [area.level for area in areas(mask)]
    high = max(*levels, most)
    asked = min(level for level in (*levels, least))
    low = high - DEEPER * (high - asked) if asked < least else least - BELOW_PASS_DB
    step = nice_step(high - low, 10)
    return math.floor(low / step + 1e-9) * step, high + 0.08 * (high - low)
