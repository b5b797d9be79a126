"""The figures that the titles of remedies quote, by name, of the candidate that a filter is built as."""

from __future__ import annotations

from bandwright.findings.case import Case
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.types import Figure


class UntoldError(Exception):
    """A title quotes a figure that the forecast has not got."""


class Quotes:
    """`quotes[name]` is a figure in words; names: family, structure, order, taps, bits, maximum_order,
    multiplications, delay, memory.

    Raises:
        Waiting: the figure's question is not answered yet.
        UntoldError: there is no such figure.
    """

    def __init__(self, forecast: Forecast) -> None:
        self._forecast = forecast
        self._case = Case(forecast.filter, forecast)

    def __getitem__(self, name: str) -> str:
        forecast, one = self._forecast, self._forecast.chosen
        if name.startswith("maximum_"):
            limit = forecast.maximum(name.removeprefix("maximum_"))
            if limit is None:
                raise UntoldError(name)
            return forecast.in_words(name.removeprefix("maximum_"), limit)
        if one is None:
            raise UntoldError(name)
        if name in ("family", "structure"):
            return str(getattr(one, name))
        if name == "bits":
            return f"{self._exact(forecast.own_bits(one)):g}"
        return forecast.in_words(name, self._exact(forecast.figure(one, name)))

    def _exact(self, figure: Figure | None) -> float:
        value = self._case.exact(figure) if figure is not None else None
        if value is None:
            raise UntoldError
        return value
