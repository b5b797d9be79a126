"""Ask and answer until nothing is open: what a command does, and what a server does bit by bit."""

from __future__ import annotations

from collections.abc import Callable

from bandwright.analysis.analyse import Memo, analyse
from bandwright.analysis.types import Analysis
from bandwright.bandfile.values import Document
from bandwright.forecast.questions import Answer, Question


def settle(
    document: Document,
    answers: dict[Question, Answer],
    answer: Callable[[Question], Answer],
    memo: Memo,
) -> tuple[Analysis, ...]:
    """Analyse and answer until no finding waits. Adds to `answers`; any order of answers ends the same."""
    while True:
        analyses = tuple(analyse(document, answers, memo))
        open_questions = [question for one in analyses for question, _ in one.open]
        if not open_questions:
            return analyses
        for question in open_questions:
            if question not in answers:
                answers[question] = answer(question)
