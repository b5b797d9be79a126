"""The figures of a forecast: what they are, how sure they are, and what would settle them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from bandwright.forecast.questions import Question

Certainty = Literal["estimated", "computed", "proved"]


@dataclass(frozen=True, slots=True)
class Figure:
    """A number with its band: the truth lies within `low`..`high`, whatever is computed later."""

    value: float
    low: float
    high: float
    certainty: Certainty
    unit: str = ""
    question: Question | None = None
    """What to ask for the exact value; None where the figure is exact, or where nobody can say more."""

    @property
    def exact(self) -> bool:
        return self.low == self.high


def computed(value: float, unit: str = "") -> Figure:
    """A figure that is exact as far as double precision goes."""
    return Figure(value, value, value, "computed", unit)


@dataclass(frozen=True, slots=True)
class Binding:
    """The edge that sets the order, and what is left at the other ones."""

    band: int
    """Index of the band item."""
    side: Literal["low", "high"]
    """Which edge of that band."""
    spare_db: float
    """How much deeper than asked the stop band gets at this edge with the order rounded up, dB."""
