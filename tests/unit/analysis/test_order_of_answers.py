"""In which order questions are answered, and how often one looks in between, changes no byte."""

from __future__ import annotations

import random
from functools import cache
from pathlib import Path

from bandwright import exact
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

DEMO = Path(exact.__file__).parents[1] / "demo"
TODAY = "2026-01-01"
ORDERS = 20

QUESTIONING = """\
format: bandwright/1
devices:
  node:
    sample_rate: 8 kHz
    arithmetic: q15
    at_most: {taps: 64, multiplications: 32, delay: 5 ms}
filters:
  near-its-taps:
    device: node
    phase: linear
    bands:
      - pass: {to: 1 kHz, ripple: 0.5 dB}
      - stop: {from: 1.3 kHz, attenuation: 40 dB}
  near-its-bits:
    device: node
    structure: cascade
    bands:
      - pass: {to: 200 Hz, ripple: 0.5 dB}
      - stop: {from: 300 Hz, attenuation: 50 dB}
  both-ways:
    device: node
    bands:
      - stop: {to: 300 Hz, attenuation: 45 dB}
      - pass: {from: 500 Hz, to: 1.5 kHz, ripple: 0.5 dB}
      - stop: {from: 1.8 kHz, attenuation: 45 dB}
    phase: linear
"""

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


def test_twenty_orders_of_answers_end_in_the_same_bytes() -> None:
    texts = [QUESTIONING, *(file.read_text(encoding="utf-8") for file in sorted(DEMO.glob("*.bands.yaml")))]
    asked = 0
    for text in texts:
        document = read(text)
        outputs = {output(document, random.Random(seed)) for seed in range(ORDERS)}
        assert len(outputs) == 1
        asked += len(shuffled(document, random.Random(0))[1])
    assert asked >= 3, "the corpus asks too little for an order to matter"
