"""The forecast of a filter for a terminal of 80 columns: the same words and table that editors show."""

from __future__ import annotations

from textwrap import fill

from bandwright.faces.command.terminal import printable
from bandwright.faces.forecast_table import parts
from bandwright.faces.markdown import Part, render
from bandwright.forecast.forecast import Forecast

WIDTH = 80


def text(forecast: Forecast) -> str:
    """The filter's name, what becomes of it, and a row for each family that can meet its mask."""
    return printable(forecast.filter.name) + "\n" + "\n\n".join(map(_plain, parts(forecast)))


def _plain(part: Part) -> str:
    plain = render([part], markdown=False)
    return fill(printable(plain), WIDTH) if isinstance(part, str) else plain
