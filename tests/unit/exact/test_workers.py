"""The worker process: it answers, is ended when nobody wants its answer, and is replaced when it dies."""

from __future__ import annotations

import asyncio
import math
import os
import signal
import time
from collections.abc import Awaitable, Callable
from pathlib import Path

import pytest

from bandwright.exact.answer import answer
from bandwright.exact.workers import Workers
from bandwright.forecast.questions import Answer, FirLength, Question
from bandwright.theory.closed_form.types import Mask, MaskBand

SLOW_TAPS_WIDTH = 0.0035
"""rad/sample: so narrow a transition takes more than a thousand taps, and seconds."""


def low_pass(width: float) -> FirLength:
    stop = MaskBand("stop", 1.0 + width, math.pi, None, -60.0, True, 1)
    return FirLength(Mask((MaskBand("pass", 0.0, 1.0, -0.1, 0.0, True), stop), "linear"))


QUICK, OTHER, SLOW = low_pass(0.5), low_pass(0.6), low_pass(SLOW_TAPS_WIDTH * 3)


async def until(condition: Callable[[], bool], what: str, most_s: float = 30.0) -> float:
    started = time.monotonic()
    while not condition():
        assert time.monotonic() - started < most_s, what
        await asyncio.sleep(0.002)
    return time.monotonic() - started


def runs(pid: int | None) -> bool:
    """Whether a process is there and has not ended."""
    if pid is None:
        return False
    stat = Path(f"/proc/{pid}/stat")
    return stat.exists() and stat.read_text().rpartition(")")[2].split()[0] != "Z"


def with_workers(test: Callable[[Workers, dict[Question, Answer]], Awaitable[None]]) -> None:
    async def run() -> None:
        answers: dict[Question, Answer] = {}
        workers = Workers(answers.__setitem__)
        try:
            await test(workers, answers)
        finally:
            pids = workers.pids
            workers.close()
            await until(lambda: not any(map(runs, pids)), "both processes end")

    asyncio.run(run())


def test_answers_are_those_of_this_process() -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        workers.want([QUICK, OTHER])
        await until(lambda: len(answers) == 2, "two answers")
        assert answers == {QUICK: answer(QUICK), OTHER: answer(OTHER)}

    with_workers(test)


def test_an_unwanted_question_is_ended_and_the_spare_answers() -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        workers.want([QUICK])
        await until(lambda: QUICK in answers and len(workers.pids) == 2 and None not in workers.pids, "warm")
        worker, spare = workers.pids
        workers.want([SLOW])
        await asyncio.sleep(0.05)
        workers.want([OTHER])
        await until(lambda: not runs(worker), "the worker ends")
        await until(lambda: OTHER in answers, "the spare answers")
        assert SLOW not in answers
        assert workers.pids[0] == spare

    with_workers(test)


def test_a_question_that_is_still_wanted_is_not_disturbed() -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        workers.want([SLOW])
        await until(lambda: len(workers.pids) == 2, "started")
        worker = workers.pids[0]
        workers.want([OTHER, SLOW])
        await asyncio.sleep(0.05)
        assert workers.pids[0] == worker
        assert runs(worker)

    with_workers(test)


def test_a_worker_killed_from_outside_is_replaced_and_asked_again() -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        workers.want([QUICK])
        await until(lambda: QUICK in answers, "warm")
        workers.want([SLOW, OTHER])
        await asyncio.sleep(0.05)
        worker = workers.pids[0]
        assert worker is not None
        os.kill(worker, signal.SIGKILL)
        await until(lambda: workers.pids[0] != worker, "replaced")
        await until(lambda: OTHER in answers, "both answered", 60.0)
        assert SLOW in answers

    with_workers(test)


def test_many_changes_of_mind_leave_two_processes() -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        seen: set[int | None] = set()
        for number in range(30):
            workers.want([low_pass(0.0101 + number * 1e-5)])
            await asyncio.sleep(0.01)
            seen.update(workers.pids)
        workers.want([QUICK])
        await until(lambda: QUICK in answers, "answered")
        seen.update(workers.pids)
        await until(lambda: sum(map(runs, seen | set(workers.pids))) <= 2, "two are left")

    with_workers(test)


def test_a_deadly_question_is_given_up(monkeypatch: pytest.MonkeyPatch) -> None:
    async def test(workers: Workers, answers: dict[Question, Answer]) -> None:
        workers.want([QUICK])
        await until(lambda: QUICK in answers, "warm")
        killed = set()
        workers.want([SLOW, OTHER])
        while OTHER not in answers:
            worker = workers.pids[0] if workers.pids else None
            if worker is not None and worker not in killed and len(killed) < 2:
                await asyncio.sleep(0.1)
                killed.add(worker)
                os.kill(worker, signal.SIGKILL)
            await asyncio.sleep(0.005)
        assert SLOW not in answers
        assert len(killed) == 2

    with_workers(test)
