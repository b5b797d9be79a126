"""`bandwright check`: report findings, for people, hooks and other programs."""

from __future__ import annotations

import sys
from argparse import Namespace
from collections.abc import Iterator
from pathlib import Path
from typing import NamedTuple

from bandwright.analysis.types import Finding
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document
from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import Parser, add_paths, add_today, one_of
from bandwright.faces.command.checking import STDIN, Checker, decoded, sought
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.formats import check_text
from bandwright.findings.rules import SEVERITIES
from bandwright.project.files import write_atomically

SOME_FINDINGS, NOT_ALL_READ = 1, 2
"""Exit statuses."""


class Checked(NamedTuple):
    """One file and what was found in it."""

    name: str
    document: Document
    findings: tuple[Finding, ...]


def configure(parser: Parser) -> None:
    """Declare the options."""
    add_paths(parser)
    parser.add_argument(
        "--as",
        dest="form",
        metavar="FORM",
        type=one_of("text", "json"),
        default="text",
        help="text (default): a line for each finding; json: with remedies, for other programs",
    )
    parser.add_argument("--to", metavar="FILE", type=Path, help="write into this file instead of printing")
    parser.add_argument(
        "--at-least",
        metavar="SEVERITY",
        type=one_of(*SEVERITIES[:-1]),
        default="warning",
        help="the mildest severity that makes the exit status 1: error, warning (default) or information",
    )
    add_today(parser)


def run(arguments: Namespace) -> int:
    """Check the files; 0: nothing as severe as asked for, 1: findings, 2: some file could not be read."""
    checker = Checker(arguments.today)
    files, problems = sought(arguments.paths)
    checked = _checked(files, arguments.stdin_name, checker, problems)
    counts = dict.fromkeys((*SEVERITIES, "accepted"), 0)
    if arguments.form == "json":
        lines = _as_json(checked, checker, counts)
    else:
        colour = arguments.to is None and terminal.wants_colour(sys.stdout)
        lines = _as_text(checked, counts, colour=colour)
    if arguments.to is None:
        for line in lines:
            checker.progress.clear()
            terminal.show(line)
    else:
        _write(arguments.to, lines)
    checker.progress.clear()
    for problem in problems:
        terminal.say(problem)
    if problems:
        return NOT_ALL_READ
    severe = SEVERITIES[: SEVERITIES.index(arguments.at_least) + 1]
    return SOME_FINDINGS if any(counts[severity] for severity in severe) else 0


def _checked(files: list[str], stdin_name: str, checker: Checker, problems: list[str]) -> Iterator[Checked]:
    """Each file that can be read; adds to `problems` what can't."""
    for number, file in enumerate(files, 1):
        checker.progress.show(f"{number} of {len(files)}: {file}")
        try:
            text = decoded(file)
        except CommandError as problem:
            problems.append(str(problem))
            continue
        document = reader.read(text.text, fault=text.fault)
        yield Checked(stdin_name if file == STDIN else file, document, checker.findings(document))


def _as_text(checked: Iterator[Checked], counts: dict[str, int], *, colour: bool) -> Iterator[str]:
    """A line for each finding that is not accepted, then the counts."""
    files = filters = 0
    for name, document, findings in checked:
        files += 1
        filters += len(document.filters)
        for finding in findings:
            _count(finding, counts)
            if not finding.accepted:
                yield check_text.line(name, finding, colour=colour)
    yield check_text.count_line(files, filters, counts)


def _as_json(checked: Iterator[Checked], checker: Checker, counts: dict[str, int]) -> Iterator[str]:
    """The one JSON document."""
    from bandwright.faces.command.formats import check_json

    records = []
    filters = 0
    for name, document, findings in checked:
        filters += len(document.filters)
        for finding in findings:
            _count(finding, counts)
            records.append(check_json.record(name, finding, checker.offers(document, finding)))
    yield check_json.document(records, counts, filters)


def _count(finding: Finding, counts: dict[str, int]) -> None:
    counts["accepted" if finding.accepted else finding.severity] += 1


def _write(file: Path, lines: Iterator[str]) -> None:
    content = "".join(f"{line}\n" for line in lines)
    try:
        write_atomically(file, content.encode("utf-8", errors="backslashreplace"))
    except OSError as error:
        raise CommandError(f"{file}: can't be written: {error.strerror}") from None
