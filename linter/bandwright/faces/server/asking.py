"""Who waits for which exact answer. The workers are told what is wanted, the most urgent first."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Iterable

from bandwright.exact.workers import Workers
from bandwright.forecast.questions import Answer, Question

GRACE_S = 0.5
"""How long work goes on that nobody waits for: longer than the pause in typing after which files ask."""

Waiting = asyncio.Future[None]


class Asking:
    """Questions on their way. An answer is kept by whoever made this; who waits is only told that it came.

    A question that nobody waits for any more is no longer wanted, and its work is ended.
    """

    def __init__(self, answered: Callable[[Question, Answer], None]) -> None:
        self.given_up: set[Question] = set()
        """Questions that ended every worker; there will be no answer to them."""
        self._keep = answered
        self._workers: Workers | None = None
        self._waiting: dict[Waiting, tuple[Question, ...]] = {}
        self._urgent: set[Waiting] = set()
        self._later: asyncio.TimerHandle | None = None

    async def any_of(self, questions: Iterable[Question], *, urgent: bool = False) -> None:
        """Wait until one of the questions is answered or given up; `urgent` ones are worked on first."""
        questions = [question for question in questions if question not in self.given_up]
        if not questions:
            return
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
            self._tell_later()

    async def close(self) -> None:
        """End the workers, and wait until they are gone."""
        if self._later is not None:
            self._later.cancel()
        if self._workers is not None:
            self._workers.close()
            await self._workers.gone()

    def _tell_later(self) -> None:
        """Let the workers know soon, as whoever got an answer, or was edited, mostly asks again at once."""
        if self._later is None:
            self._later = asyncio.get_running_loop().call_later(GRACE_S, self._tell)

    def _tell(self) -> None:
        """Let the workers know what is wanted now."""
        if self._later is not None:
            self._later.cancel()
            self._later = None
        in_order = sorted(self._waiting, key=lambda waiting: waiting not in self._urgent)
        wanted = [
            question for waiting in in_order if not waiting.done() for question in self._waiting[waiting]
        ]
        if self._workers is None:
            self._workers = Workers(self._answered, self._give_up)
        self._workers.want(list(dict.fromkeys(wanted)))

    def _answered(self, question: Question, answer: Answer) -> None:
        self._keep(question, answer)
        self._settled(question)

    def _give_up(self, question: Question) -> None:
        self.given_up.add(question)
        self._settled(question)

    def _settled(self, question: Question) -> None:
        for waiting, questions in self._waiting.items():
            if question in questions and not waiting.done():
                waiting.set_result(None)
