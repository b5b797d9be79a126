"""Answers the question for the least length of an equiripple filter."""

from __future__ import annotations

from bandwright.forecast.questions import FirLength, FirLengthAnswer
from bandwright.theory.design.fir_length import least_length


def answer(question: FirLength) -> FirLengthAnswer:
    """The answer; bounded by `limits.MAX_EXACT_TAPS` and the counts for one length and one exchange.

    A length that meets the mask while a shorter one may meet it too is no answer: then taps is None.
    """
    found = least_length(question.mask, question.bounded_transitions)
    taps = found.taps if found.taps == found.low else None
    return FirLengthAnswer(taps, found.low, found.probes)
