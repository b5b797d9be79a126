"""An edge of a band: its frequency in other units, its transition, and what moving it would bring."""

from __future__ import annotations

import math

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Path, Quantity
from bandwright.faces.markdown import Part
from bandwright.faces.server.hovers.relaxing import relaxing
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.neighbours import Transition, transition

DIGITS = 5


def parts(forecast: Forecast, path: Path, edge: Quantity) -> list[Part]:
    """The edge at `path`."""
    name = f"{path[2]} edge" if len(path) > 2 else "frequency"
    return [" ".join([*_values(forecast, edge), *_width(forecast, path)]), *relaxing(forecast, path, name)]


def _values(forecast: Forecast, edge: Quantity) -> list[str]:
    """The frequency as written, then in the other conventions."""
    written = f"**{quantities.show_quantity(edge)}**"
    rate_hz = forecast.sample_rate_hz
    radians, hertz = quantities.radians(edge, rate_hz), quantities.hertz(edge, rate_hz)
    others = []
    if radians is not None:
        if edge.unit != "pi":
            others.append(f"{quantities.show_number(radians / math.pi, DIGITS)} pi rad/sample")
        if edge.unit != "fs":
            others.append(f"{quantities.show_number(radians / (2.0 * math.pi), DIGITS)} fs")
    if hertz is not None and quantities.UNITS[edge.unit].per_nyquist is not None:
        others.insert(0, quantities.show(hertz, "frequency", digits=DIGITS))
    return [" = ".join([written, *others]) + "."]


def _width(forecast: Forecast, path: Path) -> list[str]:
    gap = transition(forecast.filter, path)
    if gap is None or gap.width == 0.0:
        return []
    return [f"The transition is {width_in_words(forecast, gap)}."]


def width_in_words(forecast: Forecast, gap: Transition) -> str:
    """Width and ratio of a transition: "5 Hz wide, ratio 1.25"."""
    ratio = f", ratio {quantities.show_number(gap.ratio)}" if math.isfinite(gap.ratio) else ""
    return f"{_frequency(forecast, gap)} wide{ratio}"


def _frequency(forecast: Forecast, gap: Transition) -> str:
    rate_hz = forecast.sample_rate_hz
    if rate_hz is None:
        return f"{quantities.show_number(gap.width / math.pi)} pi"
    return quantities.show(gap.width / (2.0 * math.pi) * rate_hz, "frequency")
