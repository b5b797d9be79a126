"""Ask and answer until the figures of a forecast are exact."""

from __future__ import annotations

from collections.abc import Callable, Iterable

from bandwright.forecast import rows
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answer, Question


def every_question(forecast: Forecast) -> Iterable[Question]:
    """What all figures of a forecast's table leave open."""
    return rows.questions(rows.rows(forecast))


def settle_forecast(
    forecast: Forecast,
    answers: dict[Question, Answer],
    answer: Callable[[Question], Answer],
    questions: Callable[[Forecast], Iterable[Question]] = every_question,
) -> Forecast:
    """The forecast after what its figures leave open has been answered. Adds to `answers`."""
    while asked := [question for question in questions(forecast) if question not in answers]:
        answers.update((question, answer(question)) for question in asked)
        forecast = Forecast(forecast.filter, answers)
    return forecast
