"""The table of a forecast: each candidate's figures side by side, as hovers and outputs show them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Question
from bandwright.forecast.structures import STRUCTURES
from bandwright.forecast.types import Binding, Figure
from bandwright.theory.closed_form import polynomials


@dataclass(frozen=True, slots=True)
class Row:
    """One candidate with all its figures; None is a figure that it has not."""

    family: str
    structure: str | None
    allowed: bool
    order: Figure | None
    order_unrounded: float | None
    taps: Figure | None
    tie: bool
    within_maxima: bool | None
    """None while an estimate straddles a maximum."""
    over: tuple[str, ...]
    """The maxima that it breaks."""
    why_not: str
    binding: Binding | None
    multiplications: Figure | None
    memory_bytes: Figure | None
    delay_worst_s: Figure | None
    delay_dc_s: Figure | None
    mantissa_bits: dict[str, Figure]
    word_bits: dict[str, Figure]
    coefficient_ratio: float | None


def rows(forecast: Forecast) -> tuple[Row, ...]:
    """A row for each candidate, cheapest first, those that can't meet the mask last."""
    ordered = sorted(
        forecast.candidates, key=lambda one: (one.order is None and one.taps is None, forecast.cost(one))
    )
    return tuple(_row(forecast, one) for one in ordered)


def questions(table: tuple[Row, ...]) -> Iterator[Question]:
    """The questions that would settle the figures of these rows, lengths before bits."""
    seen: set[Question] = set()
    for row in table:
        for figure in (row.taps, *row.mantissa_bits.values(), *row.word_bits.values()):
            question = figure.question if figure is not None and not figure.exact else None
            if question is not None and question not in seen:
                seen.add(question)
                yield question


def _row(forecast: Forecast, one: Candidate) -> Row:
    over, within = forecast.over(one), forecast.within(one)
    expanded = forecast.expanded(one)
    return Row(
        one.family,
        one.structure,
        one.allowed,
        forecast.figure(one, "order"),
        one.order_unrounded,
        one.taps,
        one.tie,
        within,
        over,
        forecast.why_not(one),
        one.binding,
        forecast.multiplications(one),
        forecast.memory(one),
        forecast.in_seconds(forecast.delay_worst(one)),
        forecast.in_seconds(forecast.delay_dc(one)),
        _bits(forecast, one, "floating"),
        _bits(forecast, one, "fixed"),
        polynomials.coefficient_ratio(*expanded) if expanded is not None else None,
    )


def _bits(forecast: Forecast, one: Candidate, number_format: str) -> dict[str, Figure]:
    found = {name: forecast.bits(one, name, number_format) for name in STRUCTURES}
    return {name: figure for name, figure in found.items() if figure is not None}
