"""Text for people: paragraphs and tables, as Markdown or, for a client without it, as plain text.

A table is aligned in Markdown too, because many terminals show it as it is written.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

Align = Literal["left", "right"]


@dataclass(frozen=True, slots=True)
class Table:
    """Rows of cells under a head, of which one may be set off as what the file says now."""

    head: tuple[str, ...]
    align: tuple[Align, ...]
    rows: tuple[tuple[str, ...], ...]
    marked: int | None = None
    """Index of the row that is set off."""


@dataclass(frozen=True, slots=True)
class Link:
    """A paragraph that leads to a page."""

    text: str
    uri: str


Column = tuple[str, Align, Sequence[str]]
"""Head, alignment and cells."""


def table(columns: Sequence[Column], marked: int | None = None) -> Table:
    """A table of the columns that hold anything."""
    filled = [column for column in columns if any(column[2])]
    return Table(
        tuple(head for head, _, _ in filled),
        tuple(side for _, side, _ in filled),
        tuple(zip(*(cells for _, _, cells in filled), strict=True)),
        marked,
    )


Part = str | Table | Link
"""A paragraph, in which `**` sets off and backquotes mark code; a table; a link."""


def render(parts: Sequence[Part], *, markdown: bool) -> str:
    """The parts as one text, an empty line between them."""
    return "\n\n".join(_markdown(part) if markdown else _plain(part) for part in parts)


def _markdown(part: Part) -> str:
    match part:
        case Table(head, align, rows, marked):
            shown = [
                [f"**{cell}**" if number == marked and at == 0 else cell for at, cell in enumerate(row)]
                for number, row in enumerate(rows)
            ]
            lines = _aligned([list(head), *shown], align)
            rule = ["-" * (width - 1) + (":" if side == "right" else "-") for width, side in lines.columns]
            return "\n".join("| " + " | ".join(row) + " |" for row in [lines.rows[0], rule, *lines.rows[1:]])
        case Link(text, uri):
            return f"[{text}]({uri})"
        case _:
            return _escaped(part)


def _plain(part: Part) -> str:
    match part:
        case Table(head, align, rows, marked):
            lead = ["  " if marked is not None else ""] * (len(rows) + 1)
            if marked is not None:
                lead[marked + 1] = "> "
            lines = _aligned([list(head), *map(list, rows)], align)
            texts = [before + "  ".join(row).rstrip() for before, row in zip(lead, lines.rows, strict=True)]
            return "\n".join(
                [texts[0], lead[0] + "  ".join("-" * width for width, _ in lines.columns), *texts[1:]]
            )
        case Link(text, uri):
            return f"{text}: {uri}"
        case _:
            return part.replace("**", "").replace("`", "")


@dataclass(frozen=True, slots=True)
class _Lines:
    columns: list[tuple[int, Align]]
    rows: list[list[str]]


def _aligned(rows: list[list[str]], align: tuple[Align, ...]) -> _Lines:
    """Every cell padded to the width of its column, which is 3 at least.

    Counted without `**`, which editors conceal.
    """
    widths = [max(3, *(_width(row[at]) for row in rows)) for at in range(len(align))]
    columns = list(zip(widths, align, strict=True))
    return _Lines(
        columns,
        [
            [
                " " * (width - _width(cell)) + cell
                if side == "right"
                else cell + " " * (width - _width(cell))
                for cell, (width, side) in zip(row, columns, strict=True)
            ]
            for row in rows
        ],
    )


def _width(cell: str) -> int:
    return len(cell.replace("**", ""))


def _escaped(text: str) -> str:
    """The text with what a user wrote kept from becoming a link or a tag; code spans stay as they are."""
    pieces = text.split("`")
    pieces[::2] = [re.sub(r"([\\\[<])", r"\\\1", piece) for piece in pieces[::2]]
    return "`".join(pieces)
