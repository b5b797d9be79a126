"""`bandwright guide`: print a page of the guide, or the list of its pages."""

from __future__ import annotations

from argparse import Namespace
from collections.abc import Iterator
from pathlib import Path

import bandwright
from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import Parser
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.suggestion import suggestion

GUIDE = Path(bandwright.__file__).parent / "guide"
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
    """The page of this name; of a family or a finding, its last part is enough where no other page has it."""
    if name in pages:
        return pages[name]
    ending = [page for known, page in pages.items() if known.endswith(f"/{name}")]
    if len(ending) == 1:
        return ending[0]
    raise CommandError(f"bandwright guide: there is no page `{name}`; {suggestion(name, pages)}")


def _list(pages: dict[str, Path]) -> Iterator[str]:
    width = max(map(len, pages), default=0)
    for name, file in pages.items():
        yield f"{name:<{width}}  {_title(file)}".rstrip()


def _title(file: Path) -> str:
    """The page's heading."""
    first = file.read_text(encoding="utf-8").split("\n", 1)[0]
    return first.lstrip("# ")
