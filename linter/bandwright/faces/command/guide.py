"""`bandwright guide`: print a page of the guide, or the list of its pages."""

from __future__ import annotations

from argparse import Namespace
from collections.abc import Iterator
from pathlib import Path

from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import Parser
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.suggestion import suggestion
from bandwright.faces.guide_pages import GUIDE
from bandwright.findings.catalogue import RULES

FINDINGS = "findings/"


def configure(parser: Parser) -> None:
    """Declare the options."""
    parser.add_argument(
        "names",
        metavar="NAME",
        nargs="*",
        help="a finding, such as order/over-maximum, or another page (default: list all pages)",
    )


def run(arguments: Namespace) -> int:
    """Print the pages asked for, or the list of all."""
    pages = _pages()
    if not arguments.names:
        terminal.show("\n".join(_list(pages)))
        return 0
    chosen = [_page(name, pages) for name in arguments.names]
    terminal.show("\n\n".join(page.read_text(encoding="utf-8").rstrip("\n") for page in chosen))
    return 0


def _pages() -> dict[str, Path]:
    """Every page by its name: a finding's id, or the page's path without its ending."""
    files = sorted(GUIDE.rglob("*.md"))
    return {file.relative_to(GUIDE).with_suffix("").as_posix().removeprefix(FINDINGS): file for file in files}


def _page(name: str, pages: dict[str, Path]) -> Path:
    """The page of this name; its last part is enough where no other page has it."""
    called = [known for known in pages if name in (known, known.rpartition("/")[2])]
    if len(called) == 1:
        return pages[called[0]]
    if called:
        raise CommandError(f"bandwright guide: `{name}` may be {' or '.join(called)}.")
    names = [*pages, *(known.rpartition("/")[2] for known in pages)]
    near = suggestion(name, names, "`bandwright guide` lists all pages.")
    raise CommandError(f"bandwright guide: there is no page `{name}`; {near}")


def _list(pages: dict[str, Path]) -> Iterator[str]:
    """A line for each page: a finding with its severity, any other with its title."""
    width = max(map(len, pages), default=0)
    for name, file in pages.items():
        yield f"{name:<{width}}  {RULES[name].severity if name in RULES else _title(file)}"


def _title(file: Path) -> str:
    return file.read_text(encoding="utf-8").partition("\n")[0].removeprefix("# ")
