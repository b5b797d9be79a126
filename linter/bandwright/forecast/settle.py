"""Put answers in the place of estimates."""

from __future__ import annotations

import math

from bandwright.forecast.questions import Answers, CoefficientBitsAnswer, FirLengthAnswer
from bandwright.forecast.types import Figure


def settled(figure: Figure, answers: Answers) -> Figure:
    """The figure as its answer has it; the figure itself where there is no answer yet."""
    if figure.question is None or figure.question not in answers:
        return figure
    answer = answers[figure.question]
    match answer:
        case FirLengthAnswer(taps=int(value)) | CoefficientBitsAnswer(bits=int(value)):
            return Figure(value, value, value, "computed", figure.unit)
        case FirLengthAnswer(low=low):
            return Figure(max(figure.value, low), max(figure.low, low), math.inf, "estimated", figure.unit)
        case _:
            return Figure(figure.value, figure.low, math.inf, "estimated", figure.unit)
