"""All state of the server: the open files, what was found in them, and the answers so far.

Everything happens in the one event loop. Each open file has one task, which starts afresh with every
edit: it reads the text, analyses in slices what has changed, publishes, and once the user has paused
has the open questions answered. An edit cancels it, so nothing is published for an old version.
"""

from __future__ import annotations

import asyncio
import time
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field

from bandwright import limits
from bandwright.analysis.analyse import Memo, analyse_filter
from bandwright.analysis.present import in_order, of_block
from bandwright.analysis.types import Analysis, Finding
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document, Filter
from bandwright.faces.server.answers import Answers, Lookups
from bandwright.faces.server.asking import Asking
from bandwright.faces.server.positions import Encoding, LineIndex
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answer, Question

SLICE_S = 0.005
"""How long the loop is kept before it looks at messages again. What is found does not depend on it."""

QUIET_S = 0.15
"""How long nobody has typed before questions are asked."""


class UnansweredError(Exception):
    """Work can't go on without this answer; it is done again when the answer is there."""

    def __init__(self, question: Question) -> None:
        self.question = question


def unanswered(question: Question) -> Answer:
    """In the place of an answer, where nothing may hold up the loop.

    Raises:
        UnansweredError: always.
    """
    raise UnansweredError(question)


@dataclass(eq=False)
class OpenFile:
    """One file as the client has it open."""

    uri: str
    version: int | None
    text: str
    document: Document | None = None
    """The text as read; None until somebody needs it."""
    before: Document | None = None
    """The document of an earlier version, whose unchanged blocks are used again."""
    lines: LineIndex | None = None
    analyses: dict[int, Analysis] = field(default_factory=dict)
    """By index of the block, for the document and, until they are carried over, for the one before."""
    presented: dict[int, tuple[object, tuple[Finding, ...]]] = field(default_factory=dict)
    """By index of the block: its findings, and before them all that they depend on."""
    findings: tuple[Finding, ...] | None = None
    """All that is settled for this version; None until everything was analysed once."""
    last_good: dict[str, Analysis] = field(default_factory=dict)
    """By filter: its last analysis while it could be read as written. Only for display."""
    wanted: list[Question] = field(default_factory=list)
    """What a hover would like to know, besides what findings wait for."""
    task: asyncio.Task[None] | None = None
    analysed: asyncio.Event = field(default_factory=asyncio.Event)
    """Set while `findings` is there."""
    shown: tuple[Finding, ...] | None = None
    """What was published for this version, None while nothing was."""


class Session:
    """The open files and everything that they share."""

    def __init__(
        self,
        encoding: Encoding,
        publish: Callable[[OpenFile, tuple[Finding, ...]], None],
        failed: Callable[[str, Exception], None],
        today: Callable[[], str],
        answered: Callable[[], None] = lambda: None,
    ) -> None:
        """`publish` gets the problems of a file whenever they change, `failed` every defect.

        `answered` is told of every new answer, as figures that are on show may have been estimates.
        """
        self.files: dict[str, OpenFile] = {}
        self.answers = Answers()
        self.memo = Memo(limits.MAX_RECENT_ANALYSES)
        self._encoding = encoding
        self._asking = Asking(self._keep)
        self._publish = publish
        self._new_answer = answered
        self._failed = failed
        self.today = today
        self._last_edit_s = 0.0

    def open(self, uri: str, version: int | None, text: str) -> None:
        """Take up a file, in the place of an open one with the same name."""
        self._forget(uri)
        self.files[uri] = file = OpenFile(uri, version, text)
        self._last_edit_s = time.monotonic()
        self._start(file)

    def change(self, uri: str, version: int | None, text: str) -> None:
        """Take the new text of an open file."""
        file = self.files.get(uri)
        if file is None:
            return
        if file.document is not None:
            file.before = file.document
        file.version, file.text = version, text
        file.document = file.lines = file.findings = None
        file.shown = None
        file.wanted.clear()
        file.analysed.clear()
        self._last_edit_s = time.monotonic()
        self._start(file)

    def close(self, uri: str) -> None:
        """Let go of a file and clear its findings."""
        file = self._forget(uri)
        if file is not None:
            file.version = None
            self._publish(file, ())

    def _forget(self, uri: str) -> OpenFile | None:
        file = self.files.pop(uri, None)
        if file is not None:
            self._stop(file)
            file.findings = ()
            file.analysed.set()
        return file

    def _start(self, file: OpenFile) -> None:
        self._stop(file)
        file.task = asyncio.get_running_loop().create_task(self._refresh(file))

    def _stop(self, file: OpenFile) -> None:
        if file.task is not None:
            file.task.cancel()

    def read(self, file: OpenFile) -> Document:
        """The file's document, read from its present text."""
        if file.document is None:
            file.document = read(file.text, file.before)
            self._carry_over(file, file.document)
        return file.document

    def lines(self, file: OpenFile) -> LineIndex:
        """The lines of the file's present text."""
        if file.lines is None:
            file.lines = LineIndex(file.text, self._encoding)
        return file.lines

    def analysis(self, file: OpenFile, block: int, filter: Filter) -> Analysis:
        """The analysis of one filter of the file's document, with the answers that there are now."""
        if self._is_open(file, block):
            file.analyses[block] = analyse_filter(filter, Lookups(self.answers.kept), self.memo)
        return file.analyses[block]

    def newest_forecast(self, file: OpenFile, block: int, filter: Filter) -> Forecast:
        """The forecast of one filter of the file's document, with the lengths that were computed since."""
        known = self.analysis(file, block, filter).forecast
        questions = {one.taps.question for one in known.candidates if one.taps is not None}
        return known if questions.isdisjoint(self.answers.kept) else Forecast(filter, self.answers.kept)

    def _is_open(self, file: OpenFile, block: int) -> bool:
        """Whether a filter is not analysed yet, or a question that its analysis left open is answered now."""
        known = file.analyses.get(block)
        return known is None or any(question in self.answers.kept for question, _ in known.open)

    async def findings(self, file: OpenFile) -> tuple[Finding, ...]:
        """The findings of the file's newest version, as soon as they are there; none once it is closed."""
        while file.findings is None:
            await file.analysed.wait()
        return file.findings

    def want(self, file: OpenFile, questions: Iterable[Question]) -> None:
        """Have questions answered that no finding waits for, once the others are."""
        new = [question for question in questions if question not in self.answers.kept]
        if new and file.findings is not None:
            file.wanted = new
            self._start(file)

    async def answer(self, question: Question) -> bool:
        """Wait for the answer to a question that a user waits for; False where there will be none."""
        if question not in self.answers.kept:
            await self._asking.any_of([question], urgent=True)
        return question in self.answers.kept

    async def leave(self) -> None:
        """End the workers, and wait until they are gone."""
        await self._asking.close()

    def _keep(self, question: Question, answer: Answer) -> None:
        self.answers.add(question, answer, self._in_use)
        self._new_answer()

    def _in_use(self) -> set[Question]:
        return {
            question
            for file in self.files.values()
            for one in file.analyses.values()
            if isinstance(one.forecast.answers, Lookups)
            for question in one.forecast.answers.used
        }

    def _carry_over(self, file: OpenFile, document: Document) -> None:
        """Keep the analyses of filters that are the same as before, wherever their blocks are now."""
        old = file.before.filters if file.before is not None else ()
        known = {id(filter): file.analyses[block] for block, filter in old if block in file.analyses}
        file.analyses = {
            block: known[id(filter)] for block, filter in document.filters if id(filter) in known
        }

    async def _refresh(self, file: OpenFile) -> None:
        """Everything that follows an edit of the file."""
        try:
            document = self.read(file)
            await self._analyse(file, document)
            while await self._answers_came(file):
                await self._analyse(file, document)
        except Exception as error:
            self._failed(f"analysis of {file.uri}", error)
            file.findings = ()
            file.analysed.set()
            self._show(file, ())

    async def _analyse(self, file: OpenFile, document: Document) -> None:
        """Analyse what is not analysed yet, and publish if that changed anything.

        Filters that were edited come first. Where that takes more than a slice, what is known after the
        first one is published before the rest.
        """
        to_do = [(block, filter) for block, filter in document.filters if self._is_open(file, block)]
        to_do.sort(key=lambda each: each[0] in file.analyses)
        started = time.monotonic()
        for done, (block, filter) in enumerate(to_do, 1):
            try:
                self.analysis(file, block, filter)
            except Exception as error:  # a defect with one filter must not hide the findings of the others
                self._failed(f"analysis of {filter.name}", error)
            if time.monotonic() - started > SLICE_S and done < len(to_do):
                if file.shown is None:
                    self._show(file, self._present(file, document))
                await asyncio.sleep(0)
                started = time.monotonic()
        findings = self._present(file, document)
        file.last_good = self._last_good(file, document)
        file.findings = findings
        file.analysed.set()
        self._show(file, findings)

    def _last_good(self, file: OpenFile, document: Document) -> dict[str, Analysis]:
        """Of each filter the newest analysis while it could be read as written."""
        found: dict[str, Analysis] = {}
        for block, filter in document.filters:
            is_whole = document.blocks[block].whole
            newest = file.analyses.get(block) if is_whole else file.last_good.get(filter.name)
            if newest is not None:
                found[filter.name] = newest
        return found

    def _present(self, file: OpenFile, document: Document) -> tuple[Finding, ...]:
        """The findings of what is analysed by now; the very same ones where nothing has changed."""
        filters, today = dict(document.filters), self.today()
        devices = tuple((one.first_line, one.text) for one in document.blocks if one.kind == "device")
        presented: dict[int, tuple[object, tuple[Finding, ...]]] = {}
        for index, block in enumerate(document.blocks):
            analysis = file.analyses.get(index)
            depends_on = (block.first_line, block.text, block.faults, analysis, devices, today)
            known = file.presented.get(index)
            if known is None or known[0] != depends_on:
                findings = of_block(document, index, filters.get(index), analysis, today)
                known = depends_on, tuple(findings)
            presented[index] = known
        file.presented = presented
        return in_order(finding for _, findings in presented.values() for finding in findings)

    def _show(self, file: OpenFile, findings: tuple[Finding, ...]) -> None:
        """Publish what is not accepted, unless that is on show already."""
        problems = tuple(finding for finding in findings if not finding.accepted)
        if problems != file.shown:
            file.shown = problems
            self._publish(file, problems)

    async def _answers_came(self, file: OpenFile) -> bool:
        """Wait for a pause, then for an answer that the file can use; False where nothing is open."""
        if not self._open_questions(file):
            return False
        while (rest_s := self._last_edit_s + QUIET_S - time.monotonic()) > 0.0:
            await asyncio.sleep(rest_s)
        if questions := self._open_questions(file):
            await self._asking.any_of(questions)
        return True

    def _open_questions(self, file: OpenFile) -> list[Question]:
        """What findings wait for, in the order of the file, then what hovers would like to know."""
        of_findings = (question for one in file.analyses.values() for question, _ in one.open)
        every = dict.fromkeys((*of_findings, *file.wanted))
        kept, given_up = self.answers.kept, self._asking.given_up
        return [question for question in every if question not in kept and question not in given_up]
