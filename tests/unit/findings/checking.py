"""Check a band file as the command does, with every question answered."""

from __future__ import annotations

from bandwright.analysis.analyse import Memo
from bandwright.analysis.offer import offer
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile import edits, reader
from bandwright.bandfile.values import Document, Place
from bandwright.exact.answer import answer
from bandwright.forecast.questions import Answer, Question

TODAY = "2026-12-01"
"""The day on which the tests check; entries of `accepted` may end before or after it."""

NOWHERE = Place(())

ANSWERS: dict[Question, Answer] = {}
MEMO = Memo()


def read(text: str | bytes) -> Document:
    """The document of a text, or of a file's bytes."""
    if isinstance(text, str):
        return reader.read(text)
    decoded = reader.decode(text)
    return reader.read(decoded.text, fault=decoded.fault)


def findings(text: str | bytes) -> tuple[Finding, ...]:
    """Every finding, accepted ones too."""
    return found_in(read(text))


def found_in(document: Document) -> tuple[Finding, ...]:
    """Every finding of a document."""
    return present(document, settle(document, ANSWERS, answer, MEMO), TODAY)


def ids(text: str | bytes) -> list[str]:
    """The ids of all findings, sorted by place."""
    return [finding.id for finding in findings(text)]


def offers(document: Document, finding: Finding) -> tuple[Offer, ...]:
    """The remedies of a finding."""
    return offer(document, finding, ANSWERS, answer, MEMO)


def applied(document: Document, remedy: Offer) -> str:
    """The text with a remedy applied."""
    return edits.apply(document.text, remedy.edits)


def marked(text: str, finding: Finding) -> str:
    """The text that a finding points at, as far as its first line goes."""
    line = text.splitlines()[finding.span.line]
    end = finding.span.end_column if finding.span.end_line == finding.span.line else None
    return line[finding.span.column : end]
