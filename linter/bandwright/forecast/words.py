"""Figures as short texts for tables: three digits, and a sign in front of an estimate."""

from __future__ import annotations

import math
from collections.abc import Iterable

from bandwright.forecast.types import Figure

ESTIMATE = "~"
"""Stands before an estimate."""

_TIME_UNITS = (("s", 1.0), ("ms", 1e3), ("us", 1e6))


def shown(figure: Figure | None, factor: float = 1.0) -> str:
    """The figure times a factor: whole numbers in full, others in three digits; empty for None."""
    if figure is None:
        return ""
    if not math.isfinite(figure.value):
        return "none"
    sign = ESTIMATE if figure.certainty == "estimated" else ""
    return sign + number(figure.value * factor)


def number(value: float) -> str:
    """A number in three digits, or in as many as it has before the point."""
    if value == round(value) or abs(value) >= 99.95:
        return f"{value:.0f}"
    return f"{value:.{2 - math.floor(math.log10(max(abs(value), 1e-3)))}f}"


def time_unit(times: Iterable[Figure | None]) -> tuple[str, float]:
    """The unit, and how many of it make a second, in which the shortest of the times (s) is 1 or more."""
    shortest = min((time.value for time in times if time is not None), default=0.0)
    return next((unit for unit in _TIME_UNITS if shortest * unit[1] >= 1.0), _TIME_UNITS[-1])
