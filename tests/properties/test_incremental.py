"""Work that is kept from the text before changes nothing: an edited document is as one read afresh."""

from __future__ import annotations

import random

import pytest

from bandwright.analysis.analyse import Memo, analyse
from bandwright.analysis.present import present
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document
from bandwright.findings.rules import Hit
from bandwright.forecast.questions import Answer, Question
from properties.whole_path import CASES, DEMO, TODAY, answered, times
from unit.bandfile.test_bandfile_fuzz import mutated

STEPS = 60
CHEAP = 2
"""Questions that are answered of those that a script meets, to see answers come between edits."""


def seen(document: Document, answers: dict[Question, Answer], memo: Memo) -> tuple[object, ...]:
    """All that faces show of a document: findings with their places, and what is still asked."""
    analyses = tuple(analyse(document, answers, memo))
    hits: tuple[tuple[Hit, ...], ...] = tuple(one.hits for one in analyses)
    return present(document, analyses, TODAY), hits, tuple(one.open for one in analyses)


def edited(text: str, history: list[str], dice: random.Random) -> str:
    """The next text: a mutation, a step back, or a paste from another file."""
    kind = dice.random()
    if kind < 0.25:
        return dice.choice(history)
    if kind < 0.35:
        other = CASES[dice.choice(sorted(CASES))].decode("utf-8", errors="replace").split("\n")
        rows = text.split("\n")
        at, start = dice.randrange(len(rows) + 1), dice.randrange(len(other))
        return "\n".join([*rows[:at], *other[start : start + dice.choice([1, 3, 9])], *rows[at:]])
    return mutated(text, dice)


@pytest.mark.parametrize("seed", times(12))
def test_an_edited_document_is_as_one_read_afresh(seed: int) -> None:
    dice = random.Random(seed)
    name = dice.choice(["hoist.bands.yaml", "hoist-troubled.bands.yaml", *sorted(CASES)])
    text = CASES[name].decode("utf-8", errors="replace")
    document, memo = read(text), Memo()
    answers: dict[Question, Answer] = {}
    history = [text]
    for step in range(STEPS):
        text = edited(text, history, dice)[:20_000]
        history.append(text)
        document = read(text, document)
        fresh = read(text)
        assert document == fresh, (seed, step)
        now = seen(document, answers, memo)
        assert now == seen(fresh, dict(answers), Memo()), (seed, step)
        if step % 20 == 19:
            asked = [question for one in analyse(document, answers, memo) for question, _ in one.open]
            answers.update((question, answered(question)) for question in asked[:CHEAP])


def test_answers_that_come_later_change_the_findings_as_if_they_had_been_there() -> None:
    document, memo = read((DEMO / "hoist-troubled.bands.yaml").read_text(encoding="utf-8")), Memo()
    answers: dict[Question, Answer] = {}
    while asked := [question for one in analyse(document, answers, memo) for question, _ in one.open]:
        answers[asked[0]] = answered(asked[0])
        assert seen(document, answers, memo) == seen(document, answers, Memo())
    assert answers
