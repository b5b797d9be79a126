"""Answer a question by exact work: pure, and bounded by `limits`. numpy is loaded on the first one."""

from __future__ import annotations

from bandwright.forecast.questions import Answer, CoefficientBits, FirLength, Question, RoundedStability


def answer(question: Question) -> Answer:
    """The answer to one question; equal questions have equal answers, on every machine."""
    match question:
        case FirLength():
            from bandwright.exact import fir_length

            return fir_length.answer(question)
        case CoefficientBits():
            from bandwright.exact import coefficient_bits

            return coefficient_bits.answer(question)
        case RoundedStability():
            from bandwright.exact import coefficient_bits

            return coefficient_bits.stability(question)
