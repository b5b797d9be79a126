"""Answers the question for the coefficient bits of a recursive candidate."""

from __future__ import annotations

from importlib import import_module

from bandwright.forecast.questions import CoefficientBits, CoefficientBitsAnswer
from bandwright.theory.closed_form import iir
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.design.coefficient_bits import required_bits


def answer(question: CoefficientBits) -> CoefficientBitsAnswer:
    """The answer; bounded by `limits.MAX_SEARCHED_WORD_BITS` and a fixed number of roundings a word."""
    select = selectivity(question.mask)
    if select is None:
        return CoefficientBitsAnswer(None)
    # A family's module has its name: chebyshev-1 is chebyshev_1.
    family: Family = import_module(f"bandwright.theory.closed_form.{question.family.replace('-', '_')}")
    design = iir.reference_design(family, select, question.order)
    return CoefficientBitsAnswer(
        required_bits(design, question.mask, question.structure, question.number_format)
    )
