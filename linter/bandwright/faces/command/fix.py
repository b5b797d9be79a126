"""`bandwright fix`: apply the remedies that change no requirement."""

from __future__ import annotations

import sys
from argparse import Namespace
from collections.abc import Iterator
from difflib import unified_diff
from pathlib import Path

from bandwright.analysis.mend import mend
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document
from bandwright.exact.answer import answer
from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import CAUTION, Parser, add_paths, add_today
from bandwright.faces.command.checking import STDIN, Checker, decoded, sought, write
from bandwright.faces.command.error import CommandError

SOME_REMEDIES, NOT_ALL_DONE = 1, 2
"""Exit statuses."""


def configure(parser: Parser) -> None:
    """Declare the options."""
    add_paths(parser)
    parser.add_argument(
        "--in-place", action="store_true", help="change the files (default: show the changes as a diff)"
    )
    add_today(parser)
    parser.epilog = (
        "Exit status: 0, nothing to change; 1, changes were shown, or with `--in-place` made: look at them; "
        "2, something could not be read or written. " + CAUTION
    )


def run(arguments: Namespace) -> int:
    """Mend the files; 0: nothing to change, 1: changes are shown or made, 2: a file can't be had."""
    if arguments.in_place and STDIN in arguments.paths:
        raise CommandError(
            "bandwright fix: standard input can't be changed in place; leave out `--in-place`."
        )
    checker = Checker(arguments.today)
    files, problems = sought(arguments.paths)
    remedies = 0
    for number, file in enumerate(files, 1):
        checker.progress.show(f"{number} of {len(files)}: {file}")
        name = arguments.stdin_name if file == STDIN else file
        try:
            text = decoded(file)
            if text.fault is not None:
                raise CommandError(f"{name}: is not UTF-8 text, so nothing is changed in it")
            mended, titles = _mended(reader.read(text.text), checker)
            mark = "\ufeff" if text.bom else ""
            if titles and arguments.in_place:
                write(Path(file), mark + mended)
        except CommandError as error:
            problems.append(str(error))
            continue
        checker.progress.clear()
        remedies += len(titles)
        for title in titles:
            terminal.say(f"{name}: {title}")
        if not arguments.in_place:
            sys.stdout.writelines(_diff(name, mark + text.text, mark + mended))
    checker.progress.clear()
    for problem in problems:
        terminal.say(problem)
    done = "applied" if arguments.in_place else "to apply with `--in-place`"
    terminal.say(f"{'1 remedy' if remedies == 1 else f'{remedies} remedies'} {done}")
    if problems:
        return NOT_ALL_DONE
    return SOME_REMEDIES if remedies else 0


def _mended(document: Document, checker: Checker) -> tuple[str, list[str]]:
    """The text with every safe remedy applied, and what was applied to which filter."""
    text, titles = document.text, []
    for mended, applied in mend(document, checker.answers, answer, checker.memo, checker.today):
        text = mended.text
        for finding, offer in applied:
            where = f"{finding.filter}: " if finding.filter is not None else ""
            titles.append(f"{where}{offer.title} [{finding.id}]")
    return text, titles


def _diff(name: str, before: str, after: str) -> Iterator[str]:
    for line in unified_diff(_lines(before), _lines(after), name, name):
        yield line if line.endswith("\n") else f"{line}\n\\ No newline at end of file\n"


def _lines(text: str) -> list[str]:
    """The lines with their ends; only a line feed ends one, as diffs count them."""
    lines = [f"{line}\n" for line in text.split("\n")]
    return [*lines[:-1], lines[-1][:-1]] if lines[-1] != "\n" else lines[:-1]
