"""Check one band file after another, keeping what later files can use again."""

from __future__ import annotations

import sys
from dataclasses import dataclass, field
from pathlib import Path

from bandwright import limits
from bandwright.analysis.analyse import Memo
from bandwright.analysis.offer import offer
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document
from bandwright.exact.answer import answer
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.terminal import Progress
from bandwright.forecast.questions import Answer, Question
from bandwright.project.files import write_atomically
from bandwright.project.walk import band_files

STDIN = "-"


@dataclass(slots=True)
class Checker:
    """The state of a run: the day, and the work already done."""

    today: str = ""
    answers: dict[Question, Answer] = field(default_factory=dict)
    memo: Memo = field(default_factory=Memo)
    progress: Progress = field(default_factory=Progress)

    def findings(self, document: Document) -> tuple[Finding, ...]:
        """All findings of a document, with every question answered."""
        if len(self.answers) > limits.MAX_ANSWERS_KEPT:
            self.answers.clear()
        return present(document, settle(document, self.answers, answer, self.memo), self.today)

    def offers(self, document: Document, finding: Finding) -> tuple[Offer, ...]:
        """The remedies of a finding, best first."""
        return offer(document, finding, self.answers, answer, self.memo)


def sought(paths: list[str]) -> tuple[list[str], list[str]]:
    """The band files to work on, in order, and a sentence for each path that is not there.

    Raises:
        CommandError: there is nothing to work on at all.
    """
    files, missing = band_files([path for path in paths or ["."] if path != STDIN])
    if STDIN in paths:
        files.insert(0, STDIN)
    if not files and not missing:
        raise CommandError(
            f"There is no band file (*.bands.yaml, *.bands.yml) in {', '.join(paths) or 'this folder'}."
        )
    return files, [f"{path}: there is no such file or folder" for path in missing]


def write(file: Path, text: str) -> None:
    """Replace the content of a file, or make it.

    Raises:
        CommandError: it can't be written.
    """
    try:
        write_atomically(file, text.encode("utf-8", errors="backslashreplace"))
    except OSError as error:
        raise CommandError(f"{file}: can't be written: {error.strerror}") from None


def decoded(file: str) -> reader.Decoded:
    """The text of a file, or of standard input.

    Raises:
        CommandError: it can't be read.
    """
    try:
        data = sys.stdin.buffer.read() if file == STDIN else Path(file).read_bytes()
    except OSError as error:
        raise CommandError(f"{file}: can't be read: {error.strerror}") from None
    return reader.decode(data)
