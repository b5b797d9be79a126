"""The whole path of a band file, from its bytes to what the command prints, and what holds of every text."""

from __future__ import annotations

import json
import os
from functools import cache
from pathlib import Path

import bandwright
from bandwright.analysis.analyse import Memo, analyse
from bandwright.analysis.offer import offer
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document
from bandwright.exact.answer import answer
from bandwright.faces.command.formats import check_json, forecast_json, forecast_text
from bandwright.findings.rules import LONGEST_SENTENCE, SEVERITIES
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answer, Question
from unit.bandfile.example import lines
from unit.bandfile.test_bandfile_fuzz import inside
from unit.findings.pages import PAGES

SCALE = float(os.environ.get("BANDWRIGHT_TEST_SCALE", "1"))
"""How many times as many cases to try as in a quick run."""

TODAY = "2026-12-01"
LONGEST_TITLE = 160

TESTS = Path(__file__).resolve().parents[1]
DEMO = Path(bandwright.__file__).parent / "demo"
FILES = sorted([*DEMO.glob("*.bands.yaml"), *TESTS.glob("c*/**/*.bands.yaml")])
CASES = {
    **{path.name: path.read_bytes() for path in FILES},
    **{f"{id}, as written": page.written for id, page in PAGES.items() if len(page.written) < 10_000},
    **{f"{id}, as cured": page.cured for id, page in PAGES.items() if len(page.cured) < 10_000},
}
"""Every band file of the repository and of the guide, but for the one that is too large on purpose."""

answered = cache(answer)


def times(count: int) -> range:
    """Numbers of so many cases in a quick run."""
    return range(max(1, round(count * SCALE)))


def read(text: str | bytes) -> Document:
    """The document of a text or of a file's bytes."""
    if isinstance(text, str):
        return reader.read(text)
    decoded = reader.decode(text)
    return reader.read(decoded.text, fault=decoded.fault)


def examine(text: str | bytes, *, settled: bool = False) -> tuple[Finding, ...]:
    """The findings of a text, after checking all that must hold of what a user sees of it."""
    document, memo = read(text), Memo()
    answers: dict[Question, Answer] = {}
    analyses = (
        settle(document, answers, answered, memo) if settled else tuple(analyse(document, answers, memo))
    )
    rows = lines(document.text)
    records = []
    findings = present(document, analyses, TODAY)
    for finding in findings:
        assert all(inside(one.span, rows) for one in (finding, *finding.related)), finding
        assert 0 < len(finding.message) <= LONGEST_SENTENCE, finding.message
        offers = offer(document, finding, answers, answered if settled else None, memo)
        for words in (finding.message, *(one.title for one in offers)):
            check_words(words, finding)
        assert all(len(one.title) <= LONGEST_TITLE for one in offers), offers
        assert all(inside(edit.span, rows) for one in offers for edit in one.edits), offers
        records.append(check_json.record("a.bands.yaml", finding, offers))
    counts = dict.fromkeys((*SEVERITIES, "accepted"), 0)
    strictly(check_json.document(records, counts, len(document.filters)))
    forecasts = [Forecast(filter, answers) for _, filter in document.filters]
    strictly(forecast_json.document(forecast_json.record("a.bands.yaml", 1, one) for one in forecasts))
    for one in forecasts:
        table = forecast_text.text(one).removeprefix(one.filter.name)
        assert not {"nan", "inf", "-inf", "~inf"} & set(table.split()), table
    return findings


def check_words(words: str, finding: Finding) -> None:
    """No placeholder is left in a sentence, and no number that is none."""
    quoted = "".join(str(value) for _, value in finding.hit.facts)
    assert "{" not in words or "{" in quoted, words
    ours = words.replace("`", " ").replace(",", " ").replace(";", " ").split()
    for nothing in ("nan", "inf", "-inf", "None", "()"):
        assert nothing not in ours or nothing in quoted, words


def strictly(text: str) -> object:
    """The value of a JSON text; infinities and NaN are none of JSON's numbers."""

    def refuse(constant: str) -> object:
        raise ValueError(f"{constant} is no number of JSON")

    return json.loads(text, parse_constant=refuse)
