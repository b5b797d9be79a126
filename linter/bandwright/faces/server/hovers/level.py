"""A ripple, an attenuation or a gain: the same as a ratio or in dB, and what another value would bring."""

from __future__ import annotations

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Path, Quantity
from bandwright.faces.markdown import Part
from bandwright.faces.server.hovers.relaxing import relaxing
from bandwright.forecast.forecast import Forecast

DIGITS = 4


def parts(forecast: Forecast, path: Path, level: Quantity) -> list[Part]:
    """The level at `path`."""
    kind, key = path[2], str(path[-1])
    says = {"ripple": _ripple, "attenuation": _attenuation}.get(key, _gain)
    name = key if key in ("ripple", "attenuation") else f"{kind} gain"
    return [says(level), *relaxing(forecast, path, name)]


def _ripple(level: Quantity) -> str:
    height = quantities.peak_to_peak(level)
    half = quantities.show(height.number / 2.0, "level")
    ratio = quantities.show_number(quantities.linear(height), 5)
    written = f"{quantities.show_quantity(level)} = " if level.symmetric else ""
    return (
        f"**{written}{quantities.show_quantity(height)} peak to peak** = {half} either side of its middle"
        f" = a ratio of {ratio} from lowest to highest gain."
    )


def _attenuation(level: Quantity) -> str:
    factor = quantities.linear(level)
    share, times = quantities.show_number(1.0 / factor, DIGITS), quantities.show_number(factor, DIGITS)
    return (
        f"**{quantities.show_quantity(level)}** below the highest gain in the pass bands: {share} of it,"
        f" or 1 : {times}."
    )


def _gain(level: Quantity) -> str:
    other = (
        f"a factor of {quantities.show_number(quantities.linear(level), DIGITS)}"
        if level.unit == "dB"
        else quantities.show(quantities.decibels(level), "level", digits=DIGITS)
    )
    return f"**{quantities.show_quantity(level)}** = {other}, counted from 0 dB."
