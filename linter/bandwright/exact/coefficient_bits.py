"""Answers the questions about the coefficients of a recursive candidate."""

from __future__ import annotations

from importlib import import_module

from bandwright.forecast.questions import (
    CoefficientBits,
    CoefficientBitsAnswer,
    RoundedStability,
    RoundedStabilityAnswer,
)
from bandwright.theory.closed_form import iir
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Design
from bandwright.theory.design.coefficient_bits import is_stable_when_rounded, required_bits


def answer(question: CoefficientBits) -> CoefficientBitsAnswer:
    """The answer; bounded by `limits.MAX_SEARCHED_WORD_BITS` and a fixed number of roundings a word."""
    design = _design(question)
    if design is None:
        return CoefficientBitsAnswer(None)
    return CoefficientBitsAnswer(
        required_bits(design, question.mask, question.structure, question.number_format)
    )


def stability(question: RoundedStability) -> RoundedStabilityAnswer:
    """The answer; of a mask that no design of the family meets, that it is not stable."""
    design = _design(question)
    stable = design is not None and is_stable_when_rounded(
        design, question.mask, question.structure, question.number_format, question.bits
    )
    return RoundedStabilityAnswer(stable)


def _design(question: CoefficientBits | RoundedStability) -> Design | None:
    """The candidate's reference design; None for a mask of another shape."""
    select = selectivity(question.mask)
    if select is None:
        return None
    # A family's module has its name: chebyshev-1 is chebyshev_1.
    family: Family = import_module(f"bandwright.theory.closed_form.{question.family.replace('-', '_')}")
    return iir.reference_design(family, select, question.order, centred=True)
