"""`--plot`: the plot of a forecast as an SVG file."""

from __future__ import annotations

import math
from pathlib import Path

from bandwright.drawings.areas import areas
from bandwright.drawings.plot import plot
from bandwright.drawings.responses import Response, of_coefficients
from bandwright.faces.command.checking import write
from bandwright.faces.command.error import CommandError
from bandwright.forecast.forecast import Forecast

UNSEEN_DB = 1e-6
"""By how much a curve may enter a forbidden area: what rounding makes of it."""


def write_plot(forecast: Forecast, file: str) -> None:
    """Write the plot of one filter.

    Raises:
        CommandError: the filter makes no mask, or the file can't be written.
    """
    if forecast.mask is None:
        raise CommandError(f"{forecast.filter.name}: no plot while its bands can't be read.")
    write(Path(file), plot(forecast, _equiripple(forecast)))


def _equiripple(forecast: Forecast) -> tuple[Response, ...]:
    """The response of the equiripple filter, where the filter's keys admit it and its length is computed.

    None where it does not keep out of the areas that the plot hatches.
    """
    mask, one = forecast.mask, forecast.candidate("equiripple")
    if mask is None or one is None or not one.allowed or one.taps is None or not one.taps.exact:
        return ()
    from bandwright.theory.design.fir_length import least_length
    from bandwright.theory.design.fir_response import FirResponse

    designed = least_length(mask, forecast.filter.text("transitions") != "unbounded").design
    if designed is None:
        return ()
    coefficients = designed.impulse_response()
    response = FirResponse(coefficients)
    passes = [band for band in mask.bands if band.kind == "pass"]
    highest = max(response.range(band.low, band.high)[1] for band in passes)
    peak_db = _decibels(highest) if all(band.relative for band in passes) else 0.0
    # The drawn mask is one of those that a floating one stands for; the filter may keep to another one.
    for area in areas(mask):
        low, high = response.range(area.low, area.high)
        farthest = max(-low, high) if area.over else low
        beyond = (_decibels(farthest) - peak_db - area.level) * (1 if area.over else -1)
        if beyond > UNSEEN_DB:
            return ()
    chosen = one is forecast.chosen
    return (of_coefficients(one.family, coefficients.tolist(), peak_db, chosen=chosen),)


def _decibels(amplitude: float) -> float:
    return 20.0 * math.log10(amplitude) if amplitude > 0.0 else -math.inf
