"""What the analysis gives to the faces."""

from __future__ import annotations

from dataclasses import dataclass

from bandwright.bandfile.values import Filter, Span, TextEdit
from bandwright.findings.rules import Hit, Severity, Tag
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Question
from bandwright.remedies.change import Kind


@dataclass(frozen=True, slots=True)
class Analysis:
    """All there is to say of one filter: it depends on the filter's value alone, not on its place."""

    filter: Filter
    forecast: Forecast
    hits: tuple[Hit, ...]
    open: tuple[tuple[Question, tuple[str, ...]], ...]
    """Questions without an answer yet, each with the ids of the findings that wait for it."""


@dataclass(frozen=True, slots=True)
class Related:
    """Another place that has a part in a finding."""

    span: Span
    message: str


@dataclass(frozen=True, slots=True)
class Finding:
    """One finding as a reader meets it: a sentence at a place of the file."""

    id: str
    severity: Severity
    message: str
    span: Span
    """In the document: code points, from 0, the end exclusive."""
    filter: str | None
    """The filter's name; None for a device or the file itself."""
    related: tuple[Related, ...]
    accepted: bool
    tag: Tag | None
    block: int
    """Index of its block in the document."""
    hit: Hit
    reason: str = ""
    """Why it is accepted, in the user's words; empty where it is not."""


@dataclass(frozen=True, slots=True)
class Offer:
    """A remedy, tried on the text: its finding goes, nothing worse comes, and its title is true."""

    title: str
    kind: Kind
    edits: tuple[TextEdit, ...]
