"""Remedies that store coefficients in a longer word."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.quantities import Word, parse_word
from bandwright.bandfile.values import Path, Place
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change

LONGER = {"float16": "float32", "float32": "float64", "q7": "q15", "q15": "q31", "q1.14": "q1.30"}
"""The next longer number format of the same kind."""


def longer_word(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store the coefficients in the least longer format that holds them."""
    chosen = forecast.chosen
    bits = forecast.own_bits(chosen) if chosen is not None else None
    for name, path in _longer(forecast, bits.value if bits is not None else 0.0):
        yield Change(
            "keeps-requirement",
            f"Store the coefficients as `{name}`, which holds the {{after[bits]}} bits that they need",
            ((path, name),),
        )


def sections_in_longer_word(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store second-order sections in the least longer format that holds their coefficients."""
    chosen, arithmetic = forecast.chosen, forecast.arithmetic
    if chosen is None or chosen.kind != "iir" or chosen.structure == "cascade" or arithmetic is None:
        return
    bits = forecast.bits(chosen, "cascade", arithmetic.number_format)
    if bits is None or bits.value <= arithmetic.coefficient_bits:
        return
    for name, path in _longer(forecast, bits.value):
        yield Change(
            "keeps-requirement",
            f"Store second-order sections as `{name}`, which holds the {{after[bits]}} bits that they need",
            ((("structure",), "cascade"), (path, name)),
        )


def _longer(forecast: Forecast, bits: float) -> Iterator[tuple[str, Path]]:
    """The least longer format that has so many bits, and where to write it; nothing where none has."""
    arithmetic = forecast.arithmetic
    path: Path = ("arithmetic",) if forecast.filter.text("arithmetic") else ("arithmetic", "coefficients")
    name = LONGER.get(arithmetic.coefficients.name) if arithmetic is not None else None
    while name is not None:
        word = parse_word(name)
        if isinstance(word, Word) and word.bits >= bits:
            yield name, path
            return
        name = LONGER.get(name)


def longer_data(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store data in the next longer format, and coefficients too where one name says both."""
    arithmetic = forecast.arithmetic
    longer = LONGER.get(arithmetic.data.name) if arithmetic is not None else None
    named = forecast.filter.text("arithmetic") is not None
    if longer is not None:
        path: Path = ("arithmetic",) if named else ("arithmetic", "data")
        what = "coefficients and data" if named else "data"
        yield Change("keeps-requirement", f"Store {what} as `{longer}`", ((path, longer),))
