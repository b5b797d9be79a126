"""Options as the commands share them, and complaints about them in plain words."""

from __future__ import annotations

import argparse
import time
from collections.abc import Callable
from typing import NoReturn

from bandwright.faces.command.error import CommandError

CAUTION = (
    "A verdict covers the stated mask and arithmetic only. It is no safety case: local codes and licensed "
    "practice rule."
)


class _Formatter(argparse.HelpFormatter):
    """Help of 80 columns. To ask how wide the terminal is costs a check 5 ms, help or not."""

    def __init__(self, prog: str) -> None:
        super().__init__(prog, width=80)


class Parser(argparse.ArgumentParser):
    """A parser that takes whole option names only and raises its complaints."""

    def __init__(self, program: str, description: str) -> None:
        super().__init__(
            prog=program,
            description=description,
            epilog=CAUTION,
            allow_abbrev=False,
            formatter_class=_Formatter,
        )

    def error(self, message: str) -> NoReturn:
        raise CommandError(f"{self.prog}: {message}. `{self.prog} --help` tells what it takes.")


def one_of(*names: str) -> Callable[[str], str]:
    """The type of an option that takes one of a few words."""

    def word(text: str) -> str:
        if text not in names:
            raise argparse.ArgumentTypeError(f"`{text}` is not one of {', '.join(names)}")
        return text

    return word


def date(text: str) -> str:
    """The type of an option that takes a day, such as 2027-06-30."""
    try:
        return time.strftime("%Y-%m-%d", time.strptime(text, "%Y-%m-%d"))
    except ValueError:
        raise argparse.ArgumentTypeError(f"`{text}` is not a date such as 2027-06-30") from None


def add_today(parser: Parser) -> None:
    """`--today`, the only way in which the date enters a command."""
    parser.add_argument(
        "--today",
        metavar="DATE",
        type=date,
        default=time.strftime("%Y-%m-%d", time.gmtime()),
        help="the day on which accepted findings are judged, such as 2027-06-30 (default: today, UTC)",
    )


def add_paths(parser: Parser) -> None:
    """`PATH ...` and `--stdin-name`."""
    parser.add_argument(
        "paths",
        metavar="PATH",
        nargs="*",
        help="a band file, a folder to search for *.bands.yaml and *.bands.yml, or - for standard input "
        "(default: this folder)",
    )
    parser.add_argument(
        "--stdin-name",
        metavar="NAME",
        default="standard-input",
        help="what to call standard input in the findings",
    )
