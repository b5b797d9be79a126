"""Answers the question for the least length of an equiripple filter."""

from __future__ import annotations

from bandwright.forecast.questions import FirLength, FirLengthAnswer
from bandwright.theory.design.fir_length import least_length


def answer(question: FirLength) -> FirLengthAnswer:
    """The answer; bounded by `limits.MAX_EXACT_TAPS` and the steps of each exchange."""
    found = least_length(question.mask, question.bounded_transitions)
    return FirLengthAnswer(found.taps, found.low, found.probes)
