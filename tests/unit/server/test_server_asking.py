"""Who waits for an answer, held against workers that only note what is wanted of them."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Sequence

import pytest

from bandwright.faces.server import asking as asking_module
from bandwright.faces.server.asking import Asking
from bandwright.forecast.questions import Answer, CoefficientBits, CoefficientBitsAnswer, Question
from bandwright.theory.closed_form.types import Mask, MaskBand

MASK = Mask((MaskBand("pass", 0.0, 0.1, -0.1, 0.0, True), MaskBand("stop", 0.2, 3.0, None, -60.0, True, 1)))
FIRST, SECOND, THIRD = (CoefficientBits(MASK, "elliptic", order, "cascade", "fixed") for order in (3, 4, 5))


class Noting:
    """Stands in for the workers."""

    def __init__(
        self, answered: Callable[[Question, Answer], None], given_up: Callable[[Question], None]
    ) -> None:
        self.answered, self.given_up = answered, given_up
        self.wants: list[list[Question]] = []
        self.closed = self.is_gone = False
        Noting.last = self

    last: Noting

    def want(self, questions: Sequence[Question]) -> None:
        self.wants.append(list(questions))

    def close(self) -> None:
        self.closed = True

    async def gone(self) -> None:
        self.is_gone = self.closed


@pytest.fixture(autouse=True)
def noting(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(asking_module, "Workers", Noting)
    monkeypatch.setattr(asking_module, "GRACE_S", 0.01)


def asking(kept: dict[Question, Answer]) -> Asking:
    return Asking(kept.__setitem__)


async def soon() -> None:
    await asyncio.sleep(0.05)


def test_whoever_waits_is_told_of_any_of_its_answers() -> None:
    async def run() -> None:
        kept: dict[Question, Answer] = {}
        waiting = asyncio.create_task(asking(kept).any_of([FIRST, SECOND]))
        await asyncio.sleep(0)
        assert Noting.last.wants == [[FIRST, SECOND]]
        Noting.last.answered(SECOND, CoefficientBitsAnswer(20))
        await waiting
        assert kept == {SECOND: CoefficientBitsAnswer(20)}
        await soon()
        assert Noting.last.wants[-1] == []

    asyncio.run(run())


def test_work_goes_on_for_whoever_asks_again_at_once() -> None:
    async def run() -> None:
        ask = asking({})
        for answered in (FIRST, SECOND):
            waiting = asyncio.create_task(ask.any_of([FIRST, SECOND, THIRD]))
            await asyncio.sleep(0)
            Noting.last.answered(answered, CoefficientBitsAnswer(20))
            await waiting
        assert [] not in Noting.last.wants

    asyncio.run(run())


def test_what_a_user_waits_for_comes_first() -> None:
    async def run() -> None:
        ask = asking({})
        tasks = [
            asyncio.create_task(ask.any_of([FIRST])),
            asyncio.create_task(ask.any_of([SECOND], urgent=True)),
        ]
        await asyncio.sleep(0)
        assert Noting.last.wants[-1] == [SECOND, FIRST]
        for task in tasks:
            task.cancel()

    asyncio.run(run())


def test_a_question_that_nobody_waits_for_any_more_is_not_wanted() -> None:
    async def run() -> None:
        ask = asking({})
        given_up, still = (asyncio.create_task(ask.any_of([one])) for one in (FIRST, SECOND))
        await asyncio.sleep(0)
        given_up.cancel()
        await soon()
        assert Noting.last.wants[-1] == [SECOND]
        still.cancel()

    asyncio.run(run())


def test_a_question_that_no_worker_survives_is_no_longer_waited_for() -> None:
    async def run() -> None:
        kept: dict[Question, Answer] = {}
        ask = asking(kept)
        waiting = asyncio.create_task(ask.any_of([FIRST]))
        await asyncio.sleep(0)
        Noting.last.given_up(FIRST)
        await asyncio.wait_for(waiting, 10.0)
        await asyncio.wait_for(ask.any_of([FIRST]), 10.0)
        assert kept == {}

    asyncio.run(run())


def test_closing_ends_the_workers() -> None:
    async def run() -> None:
        ask = asking({})
        await ask.close()
        waiting = asyncio.create_task(ask.any_of([FIRST]))
        await asyncio.sleep(0)
        await ask.close()
        assert Noting.last.is_gone
        waiting.cancel()

    asyncio.run(run())
