"""The gain responses that a plot shows."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.types import Binding
from bandwright.theory.closed_form import response
from bandwright.theory.closed_form.types import Design

NOTHING_DB = -1e4
"""Stands for the gain at a zero."""


@dataclass(frozen=True, slots=True)
class Response:
    """The gain of one candidate."""

    family: str
    label: str
    """What it is in two or three words: "elliptic order 9"."""
    gain_db: Callable[[float], float]
    """dB at a frequency in rad/sample."""
    knots: tuple[float, ...]
    """rad/sample: where the gain bends sharply."""
    chosen: bool = False
    """Drawn thick: what the filter will most likely be built as."""
    binding: Binding | None = None


def responses(forecast: Forecast) -> tuple[Response, ...]:
    """The IIR candidates that the filter's keys admit, cheapest first; where the keys name one family, the
    cheapest other one besides."""
    able = sorted((one for one in forecast.candidates if forecast.design(one)), key=forecast.cost)
    shown = [one for one in able if one.allowed]
    named = forecast.filter.names("family")
    if named is not None and len(named) == 1:
        shown += [one for one in able if not one.allowed][:1]
    return tuple(
        _of_design(one, design, chosen=one is forecast.chosen)
        for one in shown
        if (design := forecast.design(one)) is not None
    )


def of_coefficients(
    family: str, coefficients: Sequence[float], peak_db: float = 0.0, *, chosen: bool = False
) -> Response:
    """The response of a symmetric FIR filter; `peak_db` is taken off its gain."""
    taps = len(coefficients)
    half = [(2.0 * one, 0.5 * (taps - 1) - at) for at, one in enumerate(coefficients[: taps // 2])]
    middle = coefficients[taps // 2] if taps % 2 else 0.0

    def gain_db(w: float) -> float:
        amplitude = abs(middle + sum(weight * math.cos(delay * w) for weight, delay in half))
        return 20.0 * math.log10(amplitude) - peak_db if amplitude > 0.0 else NOTHING_DB

    knots = tuple(math.pi * at / (2 * taps) for at in range(2 * taps))
    return Response(family, f"{family}, {taps} taps", gain_db, knots, chosen)


def _of_design(one: Candidate, design: Design, *, chosen: bool) -> Response:
    def gain_db(w: float) -> float:
        return max(response.gain_db(design, w), NOTHING_DB)

    return Response(
        one.family, f"{one.family} order {one.order}", gain_db, _knots(design), chosen, one.binding
    )


def _knots(design: Design) -> tuple[float, ...]:
    """The angles of poles and zeros, and the middle between neighbours of a kind: crests and troughs."""
    found: list[float] = []
    for roots in (design.poles, design.zeros):
        angles = sorted({root.angle for root in roots})
        found += angles
        found += [0.5 * (one + other) for one, other in pairwise(angles)]
    return tuple(sorted(found))
