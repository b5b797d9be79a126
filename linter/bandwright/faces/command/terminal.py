"""Standard output and standard error: text that every terminal can show, colour where it is welcome."""

from __future__ import annotations

import io
import os
import sys
from typing import TextIO

COLOURS = {"error": "31", "warning": "33", "information": "36", "hint": "90"}
"""The terminal's own colours for the severities, by number of the ECMA-48 attribute."""


def prepare() -> None:
    """Have a terminal with few characters (cp1252, ASCII) show `\\u2126` where it has no sign for one."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")


def wants_colour(stream: TextIO) -> bool:
    """Whether a person looks at the stream and did not turn colours off."""
    return stream.isatty() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def printable(text: str) -> str:
    """The text with control characters written out, so that a file cannot steer the terminal."""
    if text.isprintable():
        return text
    return "".join(
        sign if sign.isprintable() else sign.encode("unicode_escape").decode("ascii") for sign in text
    )


def show(text: str) -> None:
    """A command's output: one line or several, on standard output."""
    sys.stdout.write(f"{text}\n")


def say(words: str) -> None:
    """A message to the person, on standard error."""
    sys.stderr.write(f"{printable(words)}\n")


class Progress:
    """One line on standard error that tells how far long work has come; nothing where nobody looks."""

    def __init__(self) -> None:
        self._watched = sys.stderr is not None and sys.stderr.isatty()
        self._shown = False

    def show(self, words: str) -> None:
        """Put these words in the place of the last ones."""
        if self._watched:
            sys.stderr.write(f"\r\x1b[K{printable(words)}")
            sys.stderr.flush()
            self._shown = True

    def clear(self) -> None:
        """Make way for other output."""
        if self._shown:
            sys.stderr.write("\r\x1b[K")
            sys.stderr.flush()
            self._shown = False
