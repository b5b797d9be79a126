"""Remedies that store coefficients in a longer word."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.values import Path, Place
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change

LONGER = {"float16": "float32", "float32": "float64", "q7": "q15", "q15": "q31", "q1.14": "q1.30"}
"""The next longer number format of the same kind."""


def longer_word(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store the coefficients in the least longer format that holds them."""
    arithmetic, chosen = forecast.arithmetic, forecast.chosen
    bits = forecast.own_bits(chosen) if chosen is not None else None
    if arithmetic is None or bits is None:
        return
    name = LONGER.get(arithmetic.coefficients.name)
    path: Path = ("arithmetic",) if forecast.filter.text("arithmetic") else ("arithmetic", "coefficients")
    while name is not None:
        yield Change(
            "keeps-requirement",
            f"Store coefficients as `{name}`, which holds the {{after[bits]}} bits that they need",
            ((path, name),),
        )
        name = LONGER.get(name)
