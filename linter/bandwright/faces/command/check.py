"""`bandwright check`: report findings, for people, hooks and other programs."""

from __future__ import annotations

import sys
from argparse import Namespace
from collections.abc import Iterable, Iterator
from pathlib import Path
from typing import Any, NamedTuple

from bandwright.analysis.types import Finding
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document
from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import CAUTION, Parser, add_paths, add_today, one_of
from bandwright.faces.command.checking import STDIN, Checker, decoded, sought, write
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.formats import check_text
from bandwright.findings.rules import SEVERITIES, Severity

SOME_FINDINGS, NOT_ALL_READ = 1, 2
"""Exit statuses."""

MANY = 64
"""From so many files on, all cores share them; for fewer it takes longer to start the processes."""

CHUNK = 8
"""How many files a process is given at a time."""


class Settings(NamedTuple):
    """What decides how a file is checked and shown."""

    form: str
    colour: bool
    stdin_name: str
    today: str
    failing: tuple[Severity, ...]
    """The severities that make the exit status 1."""


class Outcome(NamedTuple):
    """What came of one file, in a form that crosses processes."""

    file: str
    """Its name, as findings tell it."""
    problem: str = ""
    """Why it could not be read."""
    filters: int = 0
    kinds: tuple[str, ...] = ()
    """The severity of each finding, or `accepted`."""
    found: tuple[Any, ...] = ()
    """What is shown of it: lines, records, results or a suite, as the form has it."""


def configure(parser: Parser) -> None:
    """Declare the options."""
    add_paths(parser)
    parser.add_argument(
        "--as",
        dest="form",
        metavar="FORM",
        type=one_of("text", "json", "sarif", "junit"),
        default="text",
        help="text (default): a line for each finding; json: with remedies, for other programs; sarif: SARIF "
        "2.1.0, for programs that gather findings; junit: a test report, a case for each filter",
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
    parser.epilog = (
        "Exit status: 0, nothing as severe as asked for; 1, findings; 2, something could not be read. "
        + CAUTION
    )


def run(arguments: Namespace) -> int:
    """Check the files; 0: nothing as severe as asked for, 1: findings, 2: some file could not be read."""
    files, problems = sought(arguments.paths)
    colour = arguments.to is None and terminal.wants_colour(sys.stdout)
    failing = SEVERITIES[: SEVERITIES.index(arguments.at_least) + 1]
    settings = Settings(arguments.form, colour, arguments.stdin_name, arguments.today, failing)
    outcomes: list[Outcome] = []
    progress = terminal.Progress()
    progress.show(f"checking {len(files)} files")
    for outcome in _outcomes(files, settings):
        outcomes.append(outcome)
        progress.show(f"{len(outcomes)} of {len(files)} files checked")
    progress.clear()
    problems += [outcome.problem for outcome in outcomes if outcome.problem]
    counts = {name: sum(one.kinds.count(name) for one in outcomes) for name in (*SEVERITIES, "accepted")}
    output = _output(arguments.form, outcomes, counts, problems)
    if arguments.to is not None:
        write(arguments.to, f"{output}\n")
    elif output:
        terminal.show(output)
    for problem in problems:
        terminal.say(problem)
    if problems:
        return NOT_ALL_READ
    return SOME_FINDINGS if any(counts[severity] for severity in failing) else 0


def _outcomes(files: list[str], settings: Settings) -> Iterable[Outcome]:
    """What came of each file, in order; many files are shared among all cores."""
    if len(files) < MANY or STDIN in files:
        return _check(files, settings)
    from bandwright.faces.command.parallel import spread

    return spread(_check, files, settings, CHUNK)


def _check(files: list[str], settings: Settings) -> Iterator[Outcome]:
    checker = Checker(settings.today)
    for file in files:
        name = settings.stdin_name if file == STDIN else file
        try:
            text = decoded(file)
        except CommandError as error:
            yield Outcome(name, str(error))
            continue
        document = reader.read(text.text, fault=text.fault)
        findings = checker.findings(document)
        found = tuple(_found(name, document, findings, checker, settings))
        kinds = tuple("accepted" if one.accepted else one.severity for one in findings)
        yield Outcome(name, "", len(document.filters), kinds, found)


def _found(
    file: str, document: Document, findings: tuple[Finding, ...], checker: Checker, settings: Settings
) -> Iterable[Any]:
    """What the form shows of one file."""
    if settings.form == "json":
        from bandwright.faces.command.formats import check_json

        return (check_json.record(file, one, checker.offers(document, one)) for one in findings)
    if settings.form == "sarif":
        from bandwright.faces.command.formats import check_sarif

        return check_sarif.results(file, document, findings, checker.offers)
    if settings.form == "junit":
        from bandwright.faces.command.formats import check_junit

        return [check_junit.suite(file, document, findings, settings.failing)]
    return (check_text.line(file, one, colour=settings.colour) for one in findings if not one.accepted)


def _output(form: str, outcomes: list[Outcome], counts: dict[str, int], problems: list[str]) -> str:
    """The whole output: what is shown of all files, with what the form puts around it."""
    found = [each for outcome in outcomes for each in outcome.found]
    filters = sum(outcome.filters for outcome in outcomes)
    files = [outcome.file for outcome in outcomes if not outcome.problem]
    if form == "json":
        from bandwright.faces.command.formats import check_json

        return check_json.document(found, counts, filters)
    if form == "sarif":
        from bandwright.faces.command.formats import check_sarif

        return check_sarif.log(files, found, problems)
    if form == "junit":
        from bandwright.faces.command.formats import check_junit

        return check_junit.report(found, problems)
    return "\n".join([*found, check_text.count_line(len(files), filters, counts)]) if files else ""
