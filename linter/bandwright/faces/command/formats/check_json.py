"""The output of `check --as json`: its records, and how findings fill them.

The docstrings of the fields are the descriptions in `schemas/check.schema.json`.
"""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping
from dataclasses import asdict, dataclass
from typing import Literal

from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile.values import TextEdit
from bandwright.faces.command.formats.records import DOCUMENTED
from bandwright.findings.rules import Severity
from bandwright.remedies.change import Kind


@dataclass(frozen=True, slots=True)
class EditRecord:
    """Replace a stretch of the file by a text. Lines and columns count from 1, columns in code points."""

    __pydantic_config__ = DOCUMENTED

    line: int
    column: int
    end_line: int
    end_column: int
    """The first column that is not replaced."""
    text: str


@dataclass(frozen=True, slots=True)
class RemedyRecord:
    """A change that clears the finding; it was tried, so its title is true."""

    __pydantic_config__ = DOCUMENTED

    title: str
    kind: Kind
    """What becomes of the requirement: it stays, it changes, or the finding is accepted."""
    edits: tuple[EditRecord, ...]


@dataclass(frozen=True, slots=True)
class FindingRecord:
    """One finding. Lines and columns count from 1, columns in code points."""

    __pydantic_config__ = DOCUMENTED

    id: str
    """Area and name, such as `order/over-maximum`."""
    severity: Severity
    file: str
    line: int
    column: int
    end_line: int
    end_column: int
    """The first column after the place."""
    filter: str | None
    """The filter's name; null for a device or the file itself."""
    message: str
    guide: str
    """The finding's page, relative to the folder of the package."""
    accepted: bool
    """Accepted findings count for nothing but `counts.accepted`."""
    remedies: tuple[RemedyRecord, ...]
    """Best first."""


@dataclass(frozen=True, slots=True)
class CountsRecord:
    """How many findings there are of each severity that are not accepted, and how many that are."""

    __pydantic_config__ = DOCUMENTED

    error: int
    warning: int
    information: int
    hint: int
    accepted: int


@dataclass(frozen=True, slots=True)
class CheckRecord:
    """What `bandwright check --as json` prints."""

    __pydantic_config__ = DOCUMENTED

    version: Literal[1]
    """The version of this form; it grows when a key changes its meaning or goes."""
    findings: tuple[FindingRecord, ...]
    """By file, then by place."""
    counts: CountsRecord
    filters: int
    """How many filters were checked."""


def record(file: str, finding: Finding, remedies: Iterable[Offer]) -> FindingRecord:
    """A finding and its remedies as they are printed."""
    line, column, end_line, end_column = (number + 1 for number in finding.span)
    return FindingRecord(
        id=finding.id,
        severity=finding.severity,
        file=file,
        line=line,
        column=column,
        end_line=end_line,
        end_column=end_column,
        filter=finding.filter,
        message=finding.message,
        guide=f"guide/findings/{finding.id}.md",
        accepted=finding.accepted,
        remedies=tuple(RemedyRecord(r.title, r.kind, tuple(map(_edit, r.edits))) for r in remedies),
    )


def _edit(edit: TextEdit) -> EditRecord:
    line, column, end_line, end_column = (number + 1 for number in edit.span)
    return EditRecord(line, column, end_line, end_column, edit.text)


def document(findings: Iterable[FindingRecord], counts: Mapping[str, int], filters: int) -> str:
    """The whole output. Only ASCII, so that no terminal and no pipe spoils it."""
    return json.dumps(asdict(CheckRecord(1, tuple(findings), CountsRecord(**counts), filters)), indent=2)
