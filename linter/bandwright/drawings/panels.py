"""A panel of the plot: the mask and the responses over one stretch of gain, with the axis of gains."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from bandwright.drawings import axes, colours, labels
from bandwright.drawings.areas import Area
from bandwright.drawings.axes import Scale
from bandwright.drawings.curves import Point
from bandwright.drawings.labels import Box
from bandwright.drawings.marks import mark
from bandwright.drawings.responses import Response
from bandwright.drawings.svg import element, escaped, line, number, rectangle

SIZE = 12.0
TICK = 5.0
MOST_TICKS = 10
TITLE_X, LABEL_GAP = 18.0, 8.0
TICK_ROW = 22.0
"""Pixels between two ticks of the gain, about at least."""
MARK_EVERY = 110.0
"""Pixels along a curve between its markers."""
MARK_ROOM = 8.0
"""Pixels that a marker takes around it."""
NOTE_ROW = 15.0
"""Pixels between two notes beside a panel."""

Lines = list[list[Point]]
"""The polylines of one response in one panel."""


@dataclass(frozen=True, slots=True)
class Panel:
    """The frequencies (rad/sample) and gains (dB) that it shows, and where."""

    frequency: Scale
    level: Scale

    @property
    def box(self) -> Box:
        """Its frame, in pixels."""
        return Box(self.frequency.first, self.level.last, self.frequency.last, self.level.first)


def ground(panel: Panel, forbidden: Sequence[Area]) -> Iterator[str]:
    """Grid, forbidden areas and frame."""
    left, top, right, bottom = panel.box
    for gain, _ in gain_ticks(panel.level):
        y = panel.level.px(gain)
        yield line("grid", left, y, right, y)
    for area in forbidden:
        box = area_box(panel, area)
        if box is not None:
            yield rectangle("limit", *box)
    yield rectangle("frame", left, top, right, bottom)


def area_box(panel: Panel, area: Area) -> Box | None:
    """The part of a forbidden area that the panel shows, in pixels; None where it shows nothing of it."""
    frequency, level = panel.frequency, panel.level
    left, right = (frequency.px(frequency.within(w)) for w in (area.low, area.high))
    edge = level.px(level.within(area.level))
    top, bottom = (level.last, edge) if area.over else (edge, level.first)
    return Box(left, top, right, bottom) if right > left and bottom > top else None


def gain_axis(panel: Panel, title: str) -> Iterator[str]:
    """Ticks with their labels on the left, and the title beside them."""
    left, top, _, bottom = panel.box
    for gain, text in gain_ticks(panel.level):
        y = panel.level.px(gain)
        yield line("frame", left - TICK, y, left, y)
        yield element(
            "text", text, class_="quiet", x=left - LABEL_GAP, y=y + 4.0, font_size=SIZE, text_anchor="end"
        )
    x, y = TITLE_X, 0.5 * (top + bottom)
    yield element(
        "text",
        escaped(title),
        class_="ink",
        x=x,
        y=y,
        font_size=SIZE,
        text_anchor="middle",
        transform=f"rotate(-90 {number(x)} {number(y)})",
    )


def notes(panel: Panel, levels: Sequence[float]) -> Iterator[str]:
    """The levels of the mask, on the right of the panel; none hides another one."""
    _, top, right, bottom = panel.box
    places = {round(panel.level.px(level), 1): level for level in levels}
    inside = [(y, level) for y, level in sorted(places.items()) if top < y < bottom]
    above = top - NOTE_ROW
    for at, (y, level) in enumerate(inside):
        room = bottom - NOTE_ROW * (len(inside) - 1 - at)
        place = max(min(y, room), above + NOTE_ROW)
        above = place
        yield element(
            "polyline",
            class_="frame",
            points=f"{number(right)},{number(y)} {number(right + TICK)},{number(place)}",
        )
        text = f"{axes.three_digits(level)} dB"
        yield element("text", text, class_="ink", x=right + LABEL_GAP, y=place + 4.0, font_size=SIZE)


def curve_lines(response: Response, lines: Lines) -> Iterator[str]:
    """A response as polylines."""
    kind = f"curve {colours.role(response.family)}" + (" chosen" if response.chosen else "")
    for run in lines:
        points = " ".join(f"{number(point.x)},{number(point.y)}" for point in run)
        yield element("polyline", class_=kind, points=points)


def curve_marks(
    response: Response, panel: Panel, lines: Lines, phase: float, taken: Sequence[tuple[float, float]]
) -> Iterator[str]:
    """Its markers, away from the frame and from the points in `taken`.

    `phase` (0 to 1) shifts them against those of other responses.
    """
    inside = panel.box.grown(-MARK_ROOM)
    kept: list[tuple[float, float]] = []
    for run in pairs(lines):
        for x, y in labels.along(run, MARK_EVERY, phase * MARK_EVERY):
            alone = all(math.dist((x, y), one) > 2.0 * MARK_ROOM for one in taken)
            alone = alone and all(math.dist((x, y), one) > 0.5 * MARK_EVERY for one in kept)
            if alone and inside.left < x < inside.right and inside.top < y < inside.bottom:
                kept.append((x, y))
                yield mark(response.family, x, y)


def pairs(lines: Lines) -> list[list[tuple[float, float]]]:
    """The polylines as pixels only."""
    return [[(point.x, point.y) for point in run] for run in lines]


def gain_ticks(level: Scale) -> list[tuple[float, str]]:
    """The gains to mark on a scale, with their labels."""
    return axes.ticks(level, min(MOST_TICKS, round((level.first - level.last) / TICK_ROW)))


def gain_axis_width(level: Scale) -> float:
    """How many pixels the labels of a scale and its title take."""
    widest = max(labels.text_width(text, SIZE) for _, text in gain_ticks(level))
    return TITLE_X + 0.5 * SIZE + widest + 2.0 * LABEL_GAP
