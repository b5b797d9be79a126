"""In which order questions are answered, and how often one looks in between, changes no byte."""

from __future__ import annotations

import random
from functools import cache
from pathlib import Path
from typing import get_args

import pytest

from bandwright.analysis.analyse import Memo, analyse
from bandwright.analysis.offer import offer
from bandwright.analysis.present import present
from bandwright.analysis.types import Analysis
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document
from bandwright.exact.answer import answer
from bandwright.faces.command.formats import check_json
from bandwright.findings.rules import SEVERITIES
from bandwright.forecast.questions import Answer, Question

CORPUS = Path(__file__).resolve().parents[2] / "corpus"
TODAY = "2026-01-01"
ORDERS = 20

answered = cache(answer)


def shuffled(
    document: Document, dice: random.Random
) -> tuple[tuple[Analysis, ...], dict[Question, Answer], Memo]:
    """Answer some of the open questions in some order, look again, until none is open."""
    answers: dict[Question, Answer] = {}
    memo = Memo()
    while True:
        analyses = tuple(analyse(document, answers, memo))
        waiting = sorted({question for one in analyses for question, _ in one.open}, key=repr)
        if not waiting:
            return analyses, answers, memo
        for question in dice.sample(waiting, dice.randint(1, len(waiting))):
            answers[question] = answered(question)


def output(document: Document, dice: random.Random) -> str:
    """What `check --as json` prints for one file."""
    analyses, answers, memo = shuffled(document, dice)
    counts = dict.fromkeys((*SEVERITIES, "accepted"), 0)
    records = [
        check_json.record("a.bands.yaml", finding, offer(document, finding, answers, answered, memo))
        for finding in present(document, analyses, TODAY)
    ]
    return check_json.document(records, counts, len(document.filters))


@pytest.fixture(scope="module")
def asking() -> dict[str, Document]:
    """The files of the corpus that ask so much that there is an order."""
    documents = {file.name: read(file.read_text(encoding="utf-8")) for file in CORPUS.glob("*.bands.yaml")}
    return {name: each for name, each in documents.items() if len(questions(each)) > 1}


def questions(document: Document) -> set[Question]:
    """All that a file asks."""
    return set(shuffled(document, random.Random(0))[1])


def test_twenty_orders_of_answers_end_in_the_same_bytes(asking: dict[str, Document]) -> None:
    for name, document in asking.items():
        assert len({output(document, random.Random(seed)) for seed in range(ORDERS)}) == 1, name


def test_the_corpus_asks_for_every_kind_of_answer(asking: dict[str, Document]) -> None:
    kinds = {type(question) for document in asking.values() for question in questions(document)}
    assert kinds == set(get_args(Question))
