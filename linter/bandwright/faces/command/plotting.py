"""`--plot`: the plot of a forecast as an SVG file."""

from __future__ import annotations

import math
from pathlib import Path

from bandwright.drawings.plot import plot
from bandwright.drawings.responses import Response, of_coefficients
from bandwright.faces.command.checking import write
from bandwright.faces.command.error import CommandError
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form.types import MaskBand

UNSEEN_DB = 1e-6
"""By how much a pass window may be missed: what rounding makes of it."""


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

    designed = least_length(mask, forecast.filter.text("transitions") != "unbounded").design
    if designed is None:
        return ()
    coefficients = designed.impulse_response()
    response = FirResponse(coefficients)
    passes = [band for band in mask.bands if band.kind == "pass"]
    ranges = [response.range(band.low, band.high) for band in passes]
    reached = [(_decibels(low), _decibels(high)) for low, high in ranges]
    peak_db = max(high for _, high in reached) if all(band.relative for band in passes) else 0.0
    # Windows that float apart do not fit the mask as it is drawn.
    if not all(
        _fits(band, low - peak_db, high - peak_db) for band, (low, high) in zip(passes, reached, strict=True)
    ):
        return ()
    chosen = one is forecast.chosen
    return (of_coefficients(one.family, coefficients.tolist(), peak_db, chosen=chosen),)


def _fits(band: MaskBand, low_db: float, high_db: float) -> bool:
    return (band.least is None or low_db >= band.least - UNSEEN_DB) and (
        band.most is None or high_db <= band.most + UNSEEN_DB
    )


def _decibels(amplitude: float) -> float:
    return 20.0 * math.log10(amplitude) if amplitude > 0.0 else -math.inf
