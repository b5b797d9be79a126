"""Where texts go so that none lies on another one, and which curve they name is plain."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from itertools import pairwise, product
from typing import Literal, NamedTuple

Side = Literal["left", "right"]
Line = Sequence[tuple[float, float]]
"""A polyline, in pixels."""

ASCENT, DESCENT = 0.95, 0.25
"""How far a text goes above and below its baseline, in its size."""

_WIDTHS = {
    **dict.fromkeys("ijl'|", 0.29),
    **dict.fromkeys("ft.,:;-() /", 0.4),
    **dict.fromkeys("rszckvxy", 0.6),
    **dict.fromkeys("mwMW%@+<>=~\N{MINUS SIGN}\N{PLUS-MINUS SIGN}", 1.0),
}
"""Widths of signs in the size of the text, of wide fonts; of a bold one 1.1 times that."""
_USUAL_WIDTH, _BOLD = 0.68, 1.1
_WIDEST = 1.05
"""Of a sign outside of Latin script."""

CELL = 6.0
"""Pixels: how exactly it is known where curves run."""

MOST_SIDES_TRIED = 8
"""Edges of which both sides are tried."""


class Box(NamedTuple):
    """A rectangle, in pixels from the top left corner."""

    left: float
    top: float
    right: float
    bottom: float

    def overlaps(self, other: Box, gap: float = 0.0) -> bool:
        """Whether the two come closer than `gap`."""
        return (
            self.left < other.right + gap
            and other.left < self.right + gap
            and self.top < other.bottom + gap
            and other.top < self.bottom + gap
        )

    def grown(self, by: float) -> Box:
        """The box with a margin."""
        return Box(self.left - by, self.top - by, self.right + by, self.bottom + by)


def text_width(text: str, size: float, *, strong: bool = False) -> float:
    """About how wide a text is in pixels, rather too wide than too narrow."""
    widths = (_WIDTHS.get(sign, _USUAL_WIDTH if ord(sign) < 0x250 else _WIDEST) for sign in text)
    return sum(widths) * size * (_BOLD if strong else 1.0)


def text_box(
    x: float, y: float, text: str, size: float, anchor: str = "start", *, strong: bool = False
) -> Box:
    """The box of a text on the baseline `y`; `anchor` says what of it lies at `x`."""
    width = text_width(text, size, strong=strong)
    left = x - {"start": 0.0, "middle": 0.5, "end": 1.0}[anchor] * width
    return Box(left, y - ASCENT * size, left + width, y + DESCENT * size)


def shortened(text: str, size: float, width: float, *, strong: bool = False) -> str:
    """The text, or as much of its start as fits, with an ellipsis."""
    if text_width(text, size, strong=strong) <= width:
        return text
    while text and text_width(f"{text}…", size, strong=strong) > width:
        text = text[:-1]
    return f"{text.rstrip()}…"


def wrapped(text: str, size: float, width: float) -> list[str]:
    """The text in lines that are no wider than `width`."""
    lines: list[str] = []
    for word in text.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and text_width(longer, size) <= width:
            lines[-1] = longer
        else:
            lines.append(word)
    return [shortened(line, size, width) for line in lines]


class Flag(NamedTuple):
    """The name of an edge, which stands beside the edge's line above the panels."""

    x: float
    width: float
    side: Side
    """Where it stands best: over its own band."""


def flag_span(flag: Flag, side: Side, gap: float) -> tuple[float, float]:
    """From where to where it reaches on that side of its line."""
    if side == "left":
        return flag.x - gap - flag.width, flag.x - gap
    return flag.x + gap, flag.x + gap + flag.width


def raise_flags(
    flags: Sequence[Flag], left: float, right: float, gap: float
) -> list[tuple[int, Side]] | None:
    """A row, counted from the panels upward, and a side for every flag; None where there is no way.

    No flag covers another one or the line of one above it. Flags on their best sides are worth
    a second row, and hardly a third.
    """
    own = tuple(flag.side for flag in flags)
    free: Sequence[tuple[Side, ...]] = [("left", "right") for _ in flags]
    ways = product(*free) if len(flags) <= MOST_SIDES_TRIED else iter([own])
    best: tuple[int, list[tuple[int, Side]]] | None = None
    for sides in ways:
        spans = [flag_span(flag, side, gap) for flag, side in zip(flags, sides, strict=True)]
        if any(start < left or end > right for start, end in spans):
            continue
        rows = _rows([flag.x for flag in flags], spans, gap)
        if rows is None:
            continue
        cost = max(rows) ** 2 + 2 * sum(side != best_side for side, best_side in zip(sides, own, strict=True))
        if best is None or cost < best[0]:
            best = cost, list(zip(rows, sides, strict=True))
    return best[1] if best is not None else None


def _rows(lines: Sequence[float], spans: Sequence[tuple[float, float]], gap: float) -> list[int] | None:
    """The lowest row of each flag: above those whose lines it spans, and beside those in its row."""
    count = len(lines)
    rows = [0] * count
    for _ in range(count * count + 1):
        settled = True
        for one, other in product(range(count), repeat=2):
            if one == other:
                continue
            start, end = spans[one]
            spanned = start - 0.5 * gap < lines[other] < end + 0.5 * gap
            clash = start - gap < spans[other][1] and spans[other][0] < end + gap
            if (spanned and rows[one] <= rows[other]) or (one > other and clash and rows[one] == rows[other]):
                rows[one] = rows[other] + 1
                settled = False
        if settled:
            return rows
        if max(rows) >= count:
            return None
    return None


class LineLabel(NamedTuple):
    """The place of a curve's label, and the point of the curve that it belongs to."""

    box: Box
    anchor: tuple[float, float]


Cells = set[tuple[int, int]]


def label_lines(
    curves: Sequence[Sequence[Line]],
    sizes: Sequence[tuple[float, float]],
    panel: Box,
    taken: Sequence[Box],
    walls: Sequence[float],
) -> list[LineLabel | None]:
    """A place in the panel for the label of each curve, None where it is full.

    `curves` are polylines in pixels, `sizes` widths and heights of the labels, `walls` vertical lines that
    are better not covered. Labels cover no other text; a place is the better the fewer curves it covers
    or crosses on the way, the farther its anchor is from other curves, and the shorter the way.
    """
    cells = [_cells(curve) for curve in curves]
    placed = list(taken)
    found: list[LineLabel | None] = []
    for index, curve in enumerate(curves):
        others = set().union(*(one for at, one in enumerate(cells) if at != index))
        best: tuple[float, LineLabel] | None = None
        for anchor in _anchors(curve, panel):
            alone = 40.0 if _touched(others, Box(*anchor, *anchor).grown(CELL)) else 0.0
            for box in _around(anchor, *sizes[index]):
                end = (min(max(anchor[0], box.left), box.right), min(max(anchor[1], box.top), box.bottom))
                cost = math.dist(anchor, end) + alone
                if best is not None and cost >= best[0]:
                    continue
                if not _holds(panel, box) or any(box.overlaps(one, 3.0) for one in placed):
                    continue
                way = _cells([[anchor, end]])
                cost += 30.0 * sum(box.left < wall < box.right for wall in walls)
                cost += 20.0 * _touched(others, box) + 20.0 * _touched(cells[index], box)
                cost += 30.0 * len(way & others)
                if best is None or cost < best[0]:
                    best = (cost, LineLabel(box, anchor))
        found.append(best[1] if best is not None else None)
        if best is not None:
            placed.append(best[1].box)
            placed.append(Box(*best[1].anchor, *best[1].anchor).grown(5.0))
    return found


def _anchors(curve: Sequence[Line], panel: Box) -> Iterator[tuple[float, float]]:
    """Points of a curve, about two cells apart, not at the panel's edge."""
    for run in curve:
        for x, y in along(run, 2.0 * CELL):
            if panel.left + 6.0 < x < panel.right - 6.0 and panel.top + 6.0 < y < panel.bottom - 6.0:
                yield x, y


def along(
    run: Sequence[tuple[float, float]], every: float, start: float = 0.0
) -> Iterator[tuple[float, float]]:
    """Points on a polyline at equal distances along it, the first after `start` pixels."""
    ahead = start
    for (x1, y1), (x2, y2) in pairwise(run):
        length = math.hypot(x2 - x1, y2 - y1)
        while ahead <= length and length > 0.0:
            yield x1 + (x2 - x1) * ahead / length, y1 + (y2 - y1) * ahead / length
            ahead += every
        ahead -= length


def _around(anchor: tuple[float, float], width: float, height: float) -> Iterator[Box]:
    """Boxes beside, above and below a point."""
    x, y = anchor
    for away in (12.0, 26.0, 50.0, 90.0):
        for rise in (0.0, -0.6, 0.6, -1.2, 1.2):
            top = y + rise * away - 0.5 * height
            yield Box(x + away, top, x + away + width, top + height)
            yield Box(x - away - width, top, x - away, top + height)
        for shift in (0.5, 0.2, 0.8):
            left = x - shift * width
            yield Box(left, y - away - height, left + width, y - away)
            yield Box(left, y + away, left + width, y + away + height)


def _holds(panel: Box, box: Box) -> bool:
    inner = panel.grown(-4.0)
    return (
        inner.left <= box.left
        and box.right <= inner.right
        and inner.top <= box.top
        and box.bottom <= inner.bottom
    )


def _cells(runs: Iterable[Line]) -> Cells:
    return {(int(x // CELL), int(y // CELL)) for run in runs for x, y in (*along(run, 0.5 * CELL), run[-1])}


def _touched(cells: Cells, box: Box) -> int:
    """How many of the cells lie under a box."""
    columns = range(int(box.left // CELL), int(box.right // CELL) + 1)
    rows = range(int(box.top // CELL), int(box.bottom // CELL) + 1)
    return sum((column, row) in cells for column in columns for row in rows)
