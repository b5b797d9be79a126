"""The guide's pages of findings, taken apart."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

import bandwright

FOLDER = Path(bandwright.__file__).parent / "guide" / "findings"

HEADINGS = (
    "What is asked",
    "What goes wrong",
    "How it is computed",
    "A case",
    "Remedies and their cost",
    "References",
)

_BLOCK = re.compile(r"^```yaml(?P<how>[^\n]*)\n(?P<text>.*?)^```$", re.MULTILINE | re.DOTALL)


@dataclass(frozen=True, slots=True)
class Page:
    """One page; `written` and `cured` are the band files of its case, as bytes."""

    id: str
    text: str
    headings: tuple[str, ...]
    asked: str
    """The text under the first heading."""
    written: bytes
    cured: bytes


def page(path: Path) -> Page:
    """The page in a file."""
    text = path.read_text(encoding="utf-8")
    sections = dict(part.split("\n", 1) for part in text.split("\n## ")[1:])
    blocks = [_file(match["text"], match["how"].strip()) for match in _BLOCK.finditer(sections["A case"])]
    assert len(blocks) == 2, f"{path.name}: the case has two band files, as written and as cured"
    id = path.relative_to(FOLDER).with_suffix("").as_posix()
    return Page(id, text, tuple(sections), sections[HEADINGS[0]].strip(), *blocks)


def _file(text: str, how: str) -> bytes:
    """The bytes of a band file; `how` is an encoding, or how often its last line stands there."""
    if times := re.fullmatch(r"([0-9]+) times its last line", how):
        *lines, last = text.splitlines(keepends=True)
        return ("".join(lines) + last * int(times[1])).encode()
    return text.encode(how or "utf-8")


PAGES = {one.id: one for one in map(page, sorted(FOLDER.rglob("*.md")))}
