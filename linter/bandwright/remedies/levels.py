"""Remedies for levels that can't be meant as they are written."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Place, Quantity
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change, Remedy


def without_sign(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Write the level without its minus sign."""
    level = forecast.filter.quantity(*place.path)
    if level is not None and level.number < 0:
        text = quantities.show_quantity(Quantity(-level.number, level.unit, level.symmetric))
        yield Change("keeps-requirement", f"Write `{text}`", ((place.path, text),))


def swap_gains(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Let `min` and `max` of a gain window change places."""
    gain = place.path[:-1]
    least, most = forecast.filter.get(*gain, "min"), forecast.filter.get(*gain, "max")
    if least is not None and most is not None and least.written != most.written:
        yield Change(
            "keeps-requirement",
            f"Swap the bounds: min {most.written}, max {least.written}",
            (((*gain, "min"), most.written), ((*gain, "max"), least.written)),
        )


def in_decibels(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the number for a linear gain, and write it in dB."""
    level = forecast.filter.quantity(*place.path)
    if level is None or level.number <= 0:
        return
    decibels = 20.0 * math.log10(level.number)
    if place.path[-1] == "attenuation":
        text = quantities.show(-decibels, "level")
        yield Change(
            "changes-requirement", f"Write `{text}`, a gain of {level.number:g}", ((place.path, text),)
        )


def as_factors(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the numbers of a gain in dB for factors, and write them so."""
    gain = place.path[:-1]
    texts = [
        ((*gain, side), quantities.show_quantity(Quantity(level.number, "x")))
        for side in ("min", "max")
        if (level := forecast.filter.quantity(*gain, side)) is not None and level.unit == "dB"
    ]
    if texts:
        words = " and ".join(f"`{text}`" for _, text in texts)
        yield Change("changes-requirement", f"Write {words}, as factors", tuple(texts))


def as_decibels(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the numbers of a gain in factors for dB; a stop band's gain lies below 0 dB."""
    gain = place.path[:-1]
    texts = []
    for side in ("min", "max"):
        level = forecast.filter.quantity(*gain, side)
        if level is not None and level.unit in ("x", "%"):
            number = -abs(level.number) if place.path[2] == "stop" else level.number
            texts.append(((*gain, side), quantities.show_quantity(Quantity(number, "dB"))))
    if texts:
        words = " and ".join(f"`{text}`" for _, text in texts)
        yield Change("changes-requirement", f"Write {words}", tuple(texts))


def down_to(floor_db: Callable[[Forecast], float]) -> Remedy:
    """Ask for no more attenuation than leads to a floor, dB below 0."""

    def shallower(forecast: Forecast, place: Place) -> Iterator[Change]:
        attenuation = place.path[-1] == "attenuation"
        number = math.floor(floor_db(forecast)) * (1 if attenuation else -1)
        text = quantities.show(number, "level", "dB")
        yield Change("changes-requirement", f"Ask for {text}", ((place.path, text),))

    return shallower
