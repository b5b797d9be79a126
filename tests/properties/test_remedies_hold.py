"""Every remedy that is offered, over all files: applied to the text and read afresh, it holds its promise."""

from __future__ import annotations

import re
from collections import Counter

import pytest

from bandwright import limits
from bandwright.analysis.analyse import Memo
from bandwright.analysis.mend import mend
from bandwright.analysis.offer import offer
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile import edits
from bandwright.bandfile.values import Document
from bandwright.findings.rules import SEVERITIES
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answer, Question
from properties.whole_path import CASES, TODAY, answered, read
from unit.bandfile.example import lines

ANSWERS: dict[Question, Answer] = {}
MEMO = Memo()

QUOTED = {
    "order": re.compile(r"\border (?:[0-9]+ to )?([0-9]+)"),
    "taps": re.compile(r"([0-9]+) taps"),
    "multiplications": re.compile(r"([0-9]+) multiplications per sample"),
    "delay": re.compile(r"(\S+ (?:s|ms|us|samples)) delay"),
    "memory": re.compile(r"([0-9]+ bytes) instead"),
    "bits": re.compile(r"([0-9]+) (?:coefficient )?bits"),
}
"""How titles quote a figure as it is after the change: "order 9 to 8", "order 8 instead of 9", "47 taps"."""

HARM = SEVERITIES.index("warning")


def found_in(document: Document) -> tuple[Finding, ...]:
    """Every finding of a document, with nothing kept of the text before."""
    return present(document, settle(document, ANSWERS, answered, MEMO), TODAY)


def offers(document: Document, finding: Finding) -> tuple[Offer, ...]:
    return offer(document, finding, ANSWERS, answered, MEMO)


def tally(findings: tuple[Finding, ...]) -> Counter[tuple[str, str | None]]:
    return Counter((one.id, one.filter) for one in findings)


def outside(text: str, document: Document, remedy: Offer) -> list[str]:
    """The pieces of a text between the edits of a remedy."""
    rows = lines(document.text)
    starts = [0]
    for row in rows[:-1]:
        end = starts[-1] + len(row)
        starts.append(end + (2 if text[end : end + 2] == "\r\n" else 1))
    pieces, at = [], 0
    for edit in sorted(remedy.edits, key=lambda edit: edit.span):
        first = starts[edit.span.line] + edit.span.column
        pieces.append(text[at:first])
        at = starts[edit.span.end_line] + edit.span.end_column
    return [*pieces, text[at:]]


def check(document: Document, findings: tuple[Finding, ...], finding: Finding, remedy: Offer) -> None:
    """What holds of one remedy."""
    after = edits.apply(document.text, remedy.edits)
    assert after != document.text
    for piece in outside(document.text, document, remedy):
        assert piece in after
    kept = sum(map(len, outside(document.text, document, remedy)))
    assert len(after) == kept + sum(len(edit.text) for edit in remedy.edits)

    changed = read(after)
    now = found_in(changed)
    assert tally(now)[finding.id, finding.filter] < tally(findings)[finding.id, finding.filter], remedy.title
    rank = min(SEVERITIES.index(finding.severity), HARM)
    for id, filter in tally(now) - tally(findings):
        came = next(one for one in now if (one.id, one.filter) == (id, filter))
        # A slip that is put right may show what it hid, but only to the reader of a sound file.
        hidden = finding.id.startswith(("key/", "syntax/")) and not id.startswith(("key/", "syntax/"))
        assert hidden or SEVERITIES.index(came.severity) > rank or came.accepted, (remedy.title, came.message)

    after_change = [Forecast(one, ANSWERS) for _, one in changed.filters if one.name == finding.filter]
    if len(after_change) == 1 and not remedy.title.startswith("Raise"):
        assert quoted(remedy.title).items() <= shown(after_change[0]).items(), remedy.title


def quoted(title: str) -> dict[str, str]:
    """The figures in a title, by name."""
    found = {name: pattern.search(title) for name, pattern in QUOTED.items()}
    return {name: match[1] for name, match in found.items() if match is not None}


def shown(forecast: Forecast) -> dict[str, str]:
    """The figures of what a filter is built as, in words."""
    one = forecast.chosen
    if one is None:
        return {}
    bits = forecast.own_bits(one)
    figures = {name: forecast.figure(one, name) for name in QUOTED if name != "bits"}
    words = {name: forecast.in_words(name, each.value) for name, each in figures.items() if each is not None}
    return words | ({"bits": f"{bits.value:g}"} if bits is not None else {})


def test_titles_quote_figures_of_every_kind() -> None:
    found: set[str] = set()
    for name in CASES:
        document = read(CASES[name])
        for finding in found_in(document):
            for remedy in offers(document, finding):
                found |= quoted(remedy.title).keys()
    assert found == QUOTED.keys()


@pytest.mark.parametrize("name", sorted(CASES))
def test_each_remedy_holds_its_promise(name: str) -> None:
    document = read(CASES[name])
    findings = found_in(document)
    for finding in findings:
        titles = []
        for remedy in offers(document, finding):
            check(document, findings, finding, remedy)
            titles.append(remedy.title)
        assert len(titles) == len(set(titles)), (finding.message, titles)


@pytest.mark.parametrize("name", sorted(CASES))
def test_mending_ends_and_leaves_nothing_to_mend(name: str) -> None:
    document = read(CASES[name])
    rounds = list(mend(document, ANSWERS, answered, MEMO, TODAY))
    assert len(rounds) < limits.MAX_FIX_ROUNDS
    last = read(rounds[-1][0].text) if rounds else document
    for finding in found_in(last):
        assert finding.accepted or all(each.kind != "keeps-requirement" for each in offers(last, finding)), (
            finding.message
        )
