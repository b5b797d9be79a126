"""Who waits for which exact answer. The workers are told what is wanted, the most urgent first."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Iterable

from bandwright.exact.workers import Workers
from bandwright.forecast.questions import Answer, Question

Waiting = asyncio.Future[None]


class Asking:
    """Questions on their way. An answer is kept by whoever made this; who waits is only told that it came.

    A question that nobody waits for any more is no longer wanted, and its work is ended.
    """

    def __init__(self, answered: Callable[[Question, Answer], None]) -> None:
        self._keep = answered
        self._workers: Workers | None = None
        self._waiting: dict[Waiting, tuple[Question, ...]] = {}
        self._urgent: set[Waiting] = set()

    async def any_of(self, questions: Iterable[Question], *, urgent: bool = False) -> None:
        """Wait until one of the questions is answered, or given up because it ends every worker.

        `urgent` questions are worked on before all others.
        """
        waiting: Waiting = asyncio.get_running_loop().create_future()
        self._waiting[waiting] = tuple(questions)
        if urgent:
            self._urgent.add(waiting)
        self._tell()
        try:
            await waiting
        finally:
            del self._waiting[waiting]
            self._urgent.discard(waiting)
            self._tell()

    def close(self) -> None:
        """End the workers."""
        if self._workers is not None:
            self._workers.close()

    def _tell(self) -> None:
        """Let the workers know what is wanted now."""
        in_order = sorted(self._waiting, key=lambda waiting: waiting not in self._urgent)
        wanted = [
            question for waiting in in_order if not waiting.done() for question in self._waiting[waiting]
        ]
        if self._workers is None:
            self._workers = Workers(self._answered, self._settled)
        self._workers.want(list(dict.fromkeys(wanted)))

    def _answered(self, question: Question, answer: Answer) -> None:
        self._keep(question, answer)
        self._settled(question)

    def _settled(self, question: Question) -> None:
        for waiting, questions in self._waiting.items():
            if question in questions and not waiting.done():
                waiting.set_result(None)
