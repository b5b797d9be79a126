"""A session of random edits ends in the same findings as a fresh look at each text."""

from __future__ import annotations

import asyncio
import random
import re
from collections.abc import Iterator, Mapping
from typing import NoReturn

import pytest

from bandwright import limits
from bandwright.analysis.analyse import Memo, analyse, analyse_filter
from bandwright.analysis.present import present
from bandwright.analysis.types import Analysis, Finding
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Filter
from bandwright.faces.server import session as session_module
from bandwright.faces.server.answers import Answers
from bandwright.faces.server.session import OpenFile, Session
from bandwright.forecast.questions import Answer, CoefficientBits, CoefficientBitsAnswer, Question
from bandwright.theory.closed_form.types import Mask, MaskBand

URI = "file:///crane/hoist.bands.yaml"
TODAY = "2027-01-01"
EDITS = 500

TEXT = """\
format: bandwright/1

devices:
  hoist-node:
    sample_rate: 4 kHz
    arithmetic: float64
    at_most: {order: 16, multiplications: 60, delay: 250 ms}
  spare:
    sample_rate: 8 kHz

filters:
  strain-slow:
    purpose: Static load, Überlast 🏗️
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
    structure: cascade

  strain-fast:
    device: hoist-node
    bands:
      - pass: {to: 200 Hz, ripple: ±0.1 dB}
      - stop: {from: 0.2 pi, attenuation: 50 dB}
    family: [elliptic, chebyshev-2]
    structure: direct-form-2
    accepted:
      - finding: order/one-less-is-near
        reason: It is as it is.

  torsion-notch:
    device: hoist-node
    bands:
      - pass: {to: 150 Hz, ripple: 0.3 dB}
      - stop: {from: 370 Hz, to: 390 Hz, attenuation: 25 dB}
      - pass: {from: 700 Hz, ripple: 0.3 dB}
    family: chebyshev-1
"""

HEAD, DEVICES, FILTERS = re.split(r"(?=^devices|^filters)", TEXT, flags=re.M)
DEVICES_LAST = HEAD + FILTERS + DEVICES

SNIPPETS = (
    "\n",
    " ",
    "\t",
    "# a remark 🏗️\n",
    "    family: bessel\n",
    "    at_most: {order: 3}\n",
    "    device: spare\n",
    "  another:\n    device: hoist-node\n",
    "{",
    "'",
    ": ",
    "- ",
    "&a ",
    "\r\n",
    "\u2028",
    "9",
    ".",
    "k",
)


def edited(text: str, dice: random.Random) -> str:
    """The text after one edit such as people, and tools, make."""
    start = dice.randrange(len(text) + 1)
    lines = text.splitlines(keepends=True)
    match dice.randrange(8):
        case 0:
            return text[:start] + dice.choice(SNIPPETS) + text[start:]
        case 1:
            return text[:start] + text[start + dice.randrange(1, 4) :]
        case 2:
            at = dice.randrange(len(lines))
            return "".join(lines[:at] + lines[at + 1 :])
        case 3:
            at = dice.randrange(len(lines))
            return "".join([*lines[:at], lines[at], *lines[at:]])
        case 4:
            first, second = sorted(dice.sample(range(len(lines) + 1), 2))
            return "".join(
                lines[:first] + lines[second : second + 5] + lines[first:second] + lines[second + 5 :]
            )
        case 5:
            return dice.choice((TEXT, DEVICES_LAST))
        case _:
            numbers = list(re.finditer(r"[0-9.]+(?= (?:Hz|kHz|dB|pi|ms))", text))
            if not numbers:
                return TEXT
            number = dice.choice(numbers)
            return f"{text[: number.start()]}{dice.choice((1, 3, 22, 60, 180, 0.4))}{text[number.end() :]}"


def fresh(text: str, answers: Answers) -> tuple[Finding, ...]:
    """The findings of a text that nobody has seen before."""
    document = read(text)
    return present(document, tuple(analyse(document, dict(answers.kept), Memo())), TODAY)


class Watcher:
    """A session with what it published, and the defects that it met."""

    def __init__(self) -> None:
        self.published: list[tuple[int | None, tuple[Finding, ...]]] = []
        self.defects: list[Exception] = []
        self.session = Session(
            "utf-16", self._publish, lambda where, error: self.defects.append(error), lambda: TODAY
        )

    def _publish(self, file: OpenFile, findings: tuple[Finding, ...]) -> None:
        self.published.append((file.version, findings))


def test_a_session_of_edits_finds_what_a_fresh_look_finds() -> None:
    async def type_it() -> None:
        dice, watcher, text = random.Random(20), Watcher(), TEXT
        session = watcher.session
        session.open(URI, 1, text)
        for version in range(2, EDITS + 2):
            text = edited(text, dice)
            session.change(URI, version, text)
            if dice.random() < 0.3:
                continue  # the next edit comes before anything is done about this one
            found = await session.findings(session.files[URI])
            assert found == fresh(text, session.answers), f"edit {version}"
            assert watcher.published[-1][0] == version
        versions = [version for version, _ in watcher.published if version is not None]
        assert versions == sorted(versions)
        assert watcher.defects == []

    asyncio.run(type_it())


def test_answers_that_came_meanwhile_count_the_same(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(session_module, "QUIET_S", 0.0)
    text = TEXT.replace("float64", "q31").replace("structure: cascade", "structure: direct-form-2")

    async def wait_for_answers() -> None:
        watcher = Watcher()
        watcher.session.open(URI, 1, text)
        file = watcher.session.files[URI]
        assert file.task is not None
        await file.task
        assert watcher.defects == []
        assert watcher.session.answers.kept, "something was asked"
        assert await watcher.session.findings(file) == fresh(text, watcher.session.answers)
        assert not any(one.open for one in file.analyses.values()), "and everything was answered"
        watcher.session.change(URI, 2, text.replace("25 Hz", "26 Hz"))
        watcher.session.change(URI, 3, text)
        assert await watcher.session.findings(file) == fresh(text, watcher.session.answers)
        assert watcher.defects == []

    asyncio.run(wait_for_answers())


def test_what_has_not_changed_is_not_made_again() -> None:
    async def edit_one_filter() -> None:
        watcher = Watcher()
        session = watcher.session
        session.open(URI, 1, TEXT)
        file = session.files[URI]
        before = {finding.id: finding for finding in await session.findings(file)}
        session.change(URI, 2, TEXT.replace("25 Hz", "26 Hz"))
        after = {finding.id: finding for finding in await session.findings(file)}
        assert after["key/unused-device"] is before["key/unused-device"]
        assert after["order/over-maximum"] is not before["order/over-maximum"]

    asyncio.run(edit_one_filter())


def test_waiting_for_a_file_ends_when_it_is_closed() -> None:
    async def close_it() -> None:
        watcher = Watcher()
        watcher.session.open(URI, 1, TEXT)
        waiting = asyncio.create_task(watcher.session.findings(watcher.session.files[URI]))
        await asyncio.sleep(0)
        watcher.session.close(URI)
        await asyncio.wait_for(waiting, 10.0)
        assert watcher.published[-1] == (None, ())

    asyncio.run(close_it())


def broken(*_: object) -> NoReturn:
    raise ZeroDivisionError


def test_a_defect_with_one_filter_hides_its_findings_only(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken_for_one(filter: Filter, answers: Mapping[Question, Answer], memo: Memo) -> Analysis:
        return broken() if filter.name == "strain-slow" else analyse_filter(filter, answers, memo)

    monkeypatch.setattr(session_module, "analyse_filter", broken_for_one)

    async def open_it() -> None:
        watcher = Watcher()
        watcher.session.open(URI, 1, TEXT)
        found = await watcher.session.findings(watcher.session.files[URI])
        assert [type(error) for error in watcher.defects] == [ZeroDivisionError]
        everything = fresh(TEXT, watcher.session.answers)
        assert (
            found == tuple(finding for finding in everything if finding.filter != "strain-slow") != everything
        )
        assert watcher.published == [(1, tuple(finding for finding in found if not finding.accepted))]

    asyncio.run(open_it())


def test_a_defect_with_the_file_is_told_and_the_file_shown_without_findings(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setattr(session_module, "read", broken)

    async def open_it() -> None:
        watcher = Watcher()
        watcher.session.open(URI, 1, TEXT)
        assert await watcher.session.findings(watcher.session.files[URI]) == ()
        assert [type(error) for error in watcher.defects] == [ZeroDivisionError]
        assert watcher.published == [(1, ())]

    asyncio.run(open_it())


def questions(count: int) -> Iterator[Question]:
    for number in range(count):
        mask = Mask((MaskBand("pass", 0.0, 0.001 + number * 1e-4, -0.1, 0.0, True),))
        yield CoefficientBits(mask, "elliptic", 9, "cascade", "fixed")


def test_answers_are_dropped_beyond_the_limit_but_never_one_in_use(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(limits, "MAX_ANSWERS_KEPT", 40)
    answers, asked = Answers(), list(questions(400))
    used = set(asked[:3])
    for question in asked:
        answers.add(question, CoefficientBitsAnswer(16), lambda: used)
        assert used & set(answers.kept) == used & set(asked[: asked.index(question) + 1])
        assert len(answers.kept) <= 50
    assert asked[-1] in answers.kept
    assert asked[5] not in answers.kept


def test_more_answers_in_use_than_the_limit_are_all_kept(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(limits, "MAX_ANSWERS_KEPT", 10)
    answers, asked = Answers(), list(questions(60))
    for question in asked:
        answers.add(question, CoefficientBitsAnswer(16), lambda: set(asked))
    assert set(answers.kept) == set(asked)
