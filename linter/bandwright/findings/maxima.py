"""Which maxima a filter can't keep, each told once: the one that no allowed family keeps, or all together."""

from __future__ import annotations

from typing import NamedTuple

from bandwright.findings.case import Case
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import MAXIMA
from bandwright.forecast.types import Figure


class Excess(NamedTuple):
    """The candidate that comes nearest to a maximum, and by what figure it breaks it."""

    candidate: Candidate
    figure: Figure
    limit: float


def built(case: Case) -> list[Candidate]:
    """The candidates that the filter's keys admit and that can meet its mask."""
    return [one for one in case.forecast.candidates if one.allowed and (one.order or one.taps)]


def excess(case: Case, name: str) -> Excess | None:
    """The least figure of this name, where it is over its maximum for every allowed family.

    None where one of them keeps the maximum or is not limited by it, and where the filter as it will be
    built keeps all maxima.

    Raises:
        Waiting: an answer decides it that is not there yet.
    """
    limit = case.forecast.maximum(name)
    if limit is None or keeps_all(case):
        return None
    over = []
    for one in built(case):
        figure = case.forecast.figure(one, name)
        if figure is None or figure.high <= limit:
            return None
        over.append((one, figure))
    if not over or not all(case.exceeds(figure, limit) for _, figure in over):
        return None
    candidate, figure = min(over, key=lambda pair: pair[1].value)
    return Excess(candidate, figure, limit)


def keeps_all(case: Case) -> bool:
    """Whether the filter as it will be built keeps every maximum, as far as can be said.

    Raises:
        Waiting: an answer decides it that is not there yet.
    """
    return case.once("keeps all", lambda: _keeps_all(case))


def _keeps_all(case: Case) -> bool:
    chosen = case.chosen()
    if chosen is None:
        return True
    for name in MAXIMA:
        limit, figure = case.forecast.maximum(name), case.forecast.figure(chosen, name)
        if limit is not None and figure is not None and case.exceeds(figure, limit):
            return False
    return True


def way_out(case: Case, name: str, limit: float) -> tuple[Candidate, Figure] | None:
    """The candidate that the keys do not admit, and that keeps this maximum best."""
    admitted = [one.family for one in built(case)]
    fitting = [
        (figure.value, one.family, one, figure)
        for one in case.forecast.candidates
        if one.family not in admitted
        and (one.order or one.taps)
        and (figure := case.forecast.figure(one, name)) is not None
        and figure.high <= limit
    ]
    _, _, one, figure = min(fitting, default=(0.0, "", None, None))
    return (one, figure) if one is not None and figure is not None else None
