"""Findings as lines, `file:line:column: severity: message [area/id]` (the GNU form), and the counts."""

from __future__ import annotations

from collections.abc import Mapping

from bandwright.analysis.types import Finding
from bandwright.faces.command.terminal import COLOURS, printable


def line(file: str, finding: Finding, *, colour: bool) -> str:
    """One finding; lines and columns count from 1, columns in code points."""
    severity = f"\x1b[{COLOURS[finding.severity]}m{finding.severity}\x1b[0m" if colour else finding.severity
    place = f"{file}:{finding.span.line + 1}:{finding.span.column + 1}"
    return f"{printable(place)}: {severity}: {printable(finding.message)} [{finding.id}]"


def count_line(files: int, filters: int, counts: Mapping[str, int]) -> str:
    """What was looked at and what was found: "2 files, 3 filters: 1 error, 2 warnings, 1 accepted"."""
    found = [_counted(number, name) for name, number in counts.items() if number and name != "accepted"]
    if counts["accepted"]:
        found = [*(found or ["no findings"]), f"{counts['accepted']} accepted"]
    return f"{_counted(files, 'file')}, {_counted(filters, 'filter')}: {', '.join(found) or 'no findings'}"


def _counted(number: int, name: str) -> str:
    """ "1 error", "2 errors"; information has no plural."""
    return f"{number} {name}" if number == 1 or name == "information" else f"{number} {name}s"
