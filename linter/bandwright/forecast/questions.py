"""The questions that only exact work answers. A question is its own key: equal questions, equal answers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from bandwright.theory.closed_form.types import Mask


@dataclass(frozen=True, slots=True)
class FirLength:
    """What is the least length of an equiripple linear-phase filter that meets this mask?

    Answered by `FirLengthAnswer`.
    """

    mask: Mask
    bounded_transitions: bool = True


@dataclass(frozen=True, slots=True)
class FirLengthAnswer:
    """`taps` meets the mask while one and two taps fewer cannot; None where the limits ended the search."""

    taps: int | None
    low: int
    """No shorter filter of this or the other parity meets the mask."""
    probes: int
    """Designs that were tried."""


@dataclass(frozen=True, slots=True)
class CoefficientBits:
    """How many bits do the coefficients of this IIR candidate's reference design need?

    Answered by `CoefficientBitsAnswer`. `family` and `order` name the reference design of the mask.
    """

    mask: Mask
    family: str
    order: int
    structure: str
    number_format: Literal["floating", "fixed"]


@dataclass(frozen=True, slots=True)
class CoefficientBitsAnswer:
    """The least word at which nine of ten seeded roundings, and plain rounding, keep the mask."""

    bits: int | None
    """None where the search came to its limit."""


@dataclass(frozen=True, slots=True)
class RoundedStability:
    """Is the reference design of this IIR candidate still stable once its coefficients are rounded to `bits`?

    Answered by `RoundedStabilityAnswer`.
    """

    mask: Mask
    family: str
    order: int
    structure: str
    number_format: Literal["floating", "fixed"]
    bits: int


@dataclass(frozen=True, slots=True)
class RoundedStabilityAnswer:
    """Whether every pole stays inside the unit circle under rounding to nearest."""

    stable: bool


Question = FirLength | CoefficientBits | RoundedStability
Answer = FirLengthAnswer | CoefficientBitsAnswer | RoundedStabilityAnswer
Answers = Mapping[Question, Answer]
"""The answers that there are so far. An answer never changes, so more of them only settle more."""
