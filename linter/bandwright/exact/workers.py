"""The worker at work and its warm spare, kept by an event loop that never waits for them.

One question is worked on at a time. Whoever keeps the workers says after every change what is wanted,
most urgent first. A question that nobody wants any more is ended with its process, and the spare takes
over; so is a process that dies, and its question is asked again.
"""

from __future__ import annotations

import asyncio
import contextlib
import os
import pickle
import sys
from collections.abc import Callable, Sequence

from bandwright import limits
from bandwright.exact.worker import LENGTH, packed
from bandwright.forecast.questions import Answer, Question

ONE_THREAD = {"OPENBLAS_NUM_THREADS": "1", "OMP_NUM_THREADS": "1"}
"""The matrices are small, and threads for them would only wait for one another."""


class Worker:
    """One process, starting from the moment it is made."""

    def __init__(self) -> None:
        self._process: asyncio.subprocess.Process | None = None
        self._ended = False
        self._pipes = asyncio.get_running_loop().create_task(self._start())

    @property
    def pid(self) -> int | None:
        """The process id, once there is a process."""
        return self._process.pid if self._process is not None else None

    async def _start(self) -> tuple[asyncio.StreamWriter, asyncio.StreamReader]:
        process = self._process = await asyncio.create_subprocess_exec(
            sys.executable,
            "-m",
            "bandwright.exact.worker",
            stdin=asyncio.subprocess.PIPE,
            stdout=asyncio.subprocess.PIPE,
            stderr=asyncio.subprocess.DEVNULL,
            env=os.environ | ONE_THREAD,
        )
        if process.stdin is None or process.stdout is None:
            raise OSError("a worker has no pipes")
        if self._ended:
            self.end()
        await process.stdout.readline()
        return process.stdin, process.stdout

    async def started(self) -> tuple[asyncio.StreamWriter, asyncio.StreamReader]:
        """Wait until the process can answer, and give its pipes. Giving up the wait does not stop it."""
        return await asyncio.shield(self._pipes)

    async def answer(self, question: Question) -> Answer:
        """The answer to one question.

        Raises:
            EOFError, OSError: the process died, or could not be started.
        """
        writer, reader = await self.started()
        writer.write(packed(question))
        await writer.drain()
        (size,) = LENGTH.unpack(await reader.readexactly(LENGTH.size))
        answer: Answer = pickle.loads(await reader.readexactly(size))
        return answer

    def end(self) -> None:
        """End the process, whatever it is doing."""
        self._ended = True
        if self._process is not None:
            with contextlib.suppress(ProcessLookupError):
                self._process.kill()

    async def gone(self) -> None:
        """Wait until an ended process is gone; one that could not even start is."""
        with contextlib.suppress(EOFError, OSError):
            await self.started()
        if self._process is not None:
            await self._process.wait()


class Workers:
    """Answers what is wanted, one question at a time."""

    def __init__(
        self,
        answered: Callable[[Question, Answer], None],
        given_up: Callable[[Question], None] = lambda question: None,
    ) -> None:
        """`answered` is called in the event loop with each answer, `given_up` with a deadly question."""
        self._answered = answered
        self._given_up = given_up
        self._wanted: Sequence[Question] = ()
        self._question: Question | None = None
        self._job: asyncio.Task[None] | None = None
        self._worker: Worker | None = None
        self._spare: Worker | None = None
        self._deaths: dict[Question, int] = {}
        self._ending: set[asyncio.Task[None]] = set()

    @property
    def pids(self) -> tuple[int | None, ...]:
        """The process ids of the worker and its spare, as far as they have been started."""
        return tuple(one.pid for one in (self._worker, self._spare) if one is not None)

    def want(self, questions: Sequence[Question]) -> None:
        """Work on these, the first one first; end what is worked on where it is not among them."""
        self._wanted = questions
        if self._question is not None and self._question not in questions:
            self._replace()
        self._take_up()

    def close(self) -> None:
        """End both processes."""
        self._wanted = ()
        self._replace()
        self._replace()

    async def gone(self) -> None:
        """Wait until the processes that were ended are gone: a loop that closes before leaves them behind."""
        await asyncio.gather(*self._ending)

    def _take_up(self) -> None:
        """Start on the next question, where none is worked on."""
        fresh = (one for one in self._wanted if self._deaths.get(one, 0) < limits.MAX_WORKER_DEATHS)
        question = next(fresh, None)
        if question is None or self._question is not None:
            return
        self._worker = self._worker or Worker()
        self._question = question
        self._job = asyncio.get_running_loop().create_task(self._work(self._worker, question))

    async def _work(self, worker: Worker, question: Question) -> None:
        try:
            await worker.started()
            # Only now, so that its start does not slow down that of the worker itself.
            self._spare = self._spare or Worker()
            answer = await worker.answer(question)
        except (EOFError, OSError):
            self._deaths[question] = self._deaths.get(question, 0) + 1
            self._job = None
            self._replace()
            if self._deaths[question] >= limits.MAX_WORKER_DEATHS:
                self._given_up(question)
        else:
            self._question = self._job = None
            self._wanted = [one for one in self._wanted if one != question]
            self._answered(question, answer)
        self._take_up()

    def _replace(self) -> None:
        """End the worker and what it does; the spare takes its place, and a new spare is started."""
        if self._job is not None:
            self._job.cancel()
        if self._worker is not None:
            self._worker.end()
            ending = asyncio.get_running_loop().create_task(self._worker.gone())
            self._ending.add(ending)
            ending.add_done_callback(self._ending.discard)
        self._question = self._job = None
        self._worker, self._spare = self._spare, None
        if self._wanted:
            self._spare = Worker()
