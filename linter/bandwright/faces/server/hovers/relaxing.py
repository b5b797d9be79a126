"""The small table of neighbouring values of a number of the mask, against what each of them takes."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Path
from bandwright.faces.markdown import Column, Part, table
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.neighbours import Neighbour, neighbours
from bandwright.forecast.questions import Question
from bandwright.forecast.words import ESTIMATE, shown, time_unit

IIR_COLUMNS = (("butterworth", "butterworth"), ("chebyshev", "chebyshev-2"), ("elliptic", "elliptic"))
"""Head and family. Both Chebyshev families take the same order."""


def relaxing(forecast: Forecast, path: Path, name: str) -> list[Part]:
    """The table, or nothing where neighbouring values make no mask."""
    tried = neighbours(forecast.filter, path, forecast.answers)
    if not tried:
        return []
    columns = _orders(tried) or _lengths(tried)
    if not columns:
        return []
    values: Column = (name, "left", [quantities.show_quantity(one.quantity) for one in tried])
    return [table([values, *columns], next((at for at, one in enumerate(tried) if one.own), None))]


def questions(forecast: Forecast, path: Path) -> Iterator[Question]:
    """What would settle the lengths of the table."""
    for one in neighbours(forecast.filter, path, forecast.answers):
        candidate = one.forecast.candidate("equiripple")
        if candidate is not None and candidate.taps is not None and candidate.taps.question is not None:
            yield candidate.taps.question


def _orders(tried: Sequence[Neighbour]) -> list[Column]:
    """The least orders of the classical families; empty where none can serve."""
    columns: list[Column] = []
    for head, family in IIR_COLUMNS:
        found = [one.forecast.candidate(family) for one in tried]
        orders = [None if candidate is None else candidate.least_order for candidate in found]
        if any(order is not None for order in orders):
            columns.append((head, "right", ["none" if order is None else str(order) for order in orders]))
    return columns


def _lengths(tried: Sequence[Neighbour]) -> list[Column]:
    """Length and cost of the shortest linear-phase filter."""
    rows = [(one.forecast, candidate) for one in tried if (candidate := one.forecast.candidate("equiripple"))]
    if len(rows) < len(tried) or any(candidate.taps is None for _, candidate in rows):
        return []
    delays = [forecast.in_seconds(forecast.delay_worst(candidate)) for forecast, candidate in rows]
    unit, factor = time_unit(delays)
    return [
        ("taps", "right", [shown(candidate.taps) for _, candidate in rows]),
        ("mult.", "right", [shown(forecast.multiplications(candidate)) for forecast, candidate in rows]),
        (f"delay {unit}", "right", [shown(delay, factor) for delay in delays]),
        ("keeps maxima", "left", [_keeps(forecast, candidate) for forecast, candidate in rows]),
    ]


def _keeps(forecast: Forecast, candidate: Candidate) -> str:
    """Whether the maxima are kept, with the sign of an estimate where that is not settled."""
    likely = "no" if forecast.over(candidate) else "yes"
    return likely if forecast.within(candidate) is not None else ESTIMATE + likely
