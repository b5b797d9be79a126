"""`--plot`: the plot of a forecast as an SVG file."""

from __future__ import annotations

import math
from pathlib import Path

from bandwright.drawings.plot import plot
from bandwright.drawings.responses import Response, of_coefficients
from bandwright.faces.command.checking import write
from bandwright.faces.command.error import CommandError
from bandwright.forecast.forecast import Forecast


def write_plot(forecast: Forecast, file: str) -> None:
    """Write the plot of one filter.

    Raises:
        CommandError: the filter makes no mask, or the file can't be written.
    """
    if forecast.mask is None:
        raise CommandError(f"{forecast.filter.name}: no plot while its bands can't be read.")
    write(Path(file), plot(forecast, _equiripple(forecast)))


def _equiripple(forecast: Forecast) -> tuple[Response, ...]:
    """The response of the equiripple filter, where the filter's keys admit it and its length is computed."""
    mask, one = forecast.mask, forecast.candidate("equiripple")
    if mask is None or one is None or not one.allowed or one.taps is None or not one.taps.exact:
        return ()
    from bandwright.theory.design.fir_length import least_length
    from bandwright.theory.design.fir_response import FirResponse

    designed = least_length(mask, forecast.filter.text("transitions") != "unbounded").best
    if designed is None:
        return ()
    coefficients = designed.impulse_response()
    response = FirResponse(coefficients)
    highest = [response.range(band.low, band.high)[1] for band in mask.bands if band.kind == "pass"]
    floats = any(band.relative for band in mask.bands if band.kind == "pass")
    peak_db = 20.0 * math.log10(max(highest)) if floats else 0.0
    drawn = of_coefficients(one.family, coefficients.tolist(), peak_db, chosen=one is forecast.chosen)
    return (drawn,)
