"""A response as polylines: sampled where it bends, and cut where it leaves the panel."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import NamedTuple

from bandwright.drawings.axes import Scale

EVERY = 8.0
"""Pixels between the first samples."""

BEND = 0.3
"""How far a polyline may be from the curve, in pixels, at the finest step."""

FAR = 400.0
"""Pixels outside the panel at which a curve is taken to be, wherever it is."""

HALVINGS = 40
"""Steps to find where a curve crosses the panel's edge."""


class Point(NamedTuple):
    """A point of a polyline in pixels, with what it stands for."""

    x: float
    y: float
    frequency: float
    gain_db: float


def polylines(
    gain_db: Callable[[float], float],
    knots: Iterable[float],
    frequency: Scale,
    level: Scale,
    step: float = 1.0,
) -> list[list[Point]]:
    """The parts of a curve that lie on both scales, each as points from left to right.

    `knots` are frequencies where it may bend sharply: edges, the angles of poles and zeros. A stretch is
    halved while its middle is more than `BEND * step` pixels off the straight line and it is wider than
    `step` / 2 pixels; points that a straight line passes within half of that are left out. Every point is a
    true one.
    """
    top, bottom = sorted((level.first, level.last))

    def at(x: float) -> Point:
        place = frequency.value(x)
        gain = gain_db(place)
        return Point(x, min(max(level.px(gain), top - FAR), bottom + FAR), place, gain)

    def inside(point: Point) -> bool:
        return top <= point.y <= bottom

    def refined(one: Point, other: Point) -> Iterable[Point]:
        if other.x - one.x <= 0.5 * step:
            return
        if max(one.y, other.y) < top - 0.5 * FAR or min(one.y, other.y) > bottom + 0.5 * FAR:
            return
        middle = at(0.5 * (one.x + other.x))
        if abs(middle.y - 0.5 * (one.y + other.y)) > BEND * step:
            yield from refined(one, middle)
            yield middle
            yield from refined(middle, other)

    def crossing(within: Point, beyond: Point) -> Point:
        for _ in range(HALVINGS):
            middle = at(0.5 * (within.x + beyond.x))
            within, beyond = (middle, beyond) if inside(middle) else (within, middle)
        return within

    starts = [at(x) for x in _starts(knots, frequency, step)]
    points = [starts[0]]
    for start in starts[1:]:
        points += [*refined(points[-1], start), start]
    runs: list[list[Point]] = [[]]
    for before, point in zip([points[0], *points], points, strict=False):
        if inside(point) and not inside(before):
            runs[-1].append(crossing(point, before))
        elif inside(before) and not inside(point):
            runs[-1].append(crossing(before, point))
            runs.append([])
        if inside(point):
            runs[-1].append(point)
    return [_thinned(run, 0.5 * BEND * step) for run in runs if len(run) > 1]


def _thinned(run: list[Point], tolerance: float) -> list[Point]:
    """The run without points that the line between its neighbours passes within the tolerance.

    Douglas and Peucker 1973, from memory.
    """
    kept, open_stretches = {0, len(run) - 1}, [(0, len(run) - 1)]
    while open_stretches:
        first, last = open_stretches.pop()
        start, end = run[first], run[last]
        length = math.hypot(end.x - start.x, end.y - start.y) or 1.0
        farthest, place = tolerance, 0
        for at in range(first + 1, last):
            across = (run[at].x - start.x) * (end.y - start.y) - (run[at].y - start.y) * (end.x - start.x)
            if abs(across) > farthest * length:
                farthest, place = abs(across) / length, at
        if place:
            kept.add(place)
            open_stretches += [(first, place), (place, last)]
    return [run[at] for at in sorted(kept)]


def _starts(knots: Iterable[float], frequency: Scale, step: float) -> list[float]:
    """Where to sample first: evenly, and at the knots unless they crowd."""
    count = max(1, round((frequency.last - frequency.first) / EVERY))
    even = [frequency.first + (frequency.last - frequency.first) * at / count for at in range(count + 1)]
    inner = [frequency.px(knot) for knot in knots if frequency.start < knot < frequency.end]
    kept: list[float] = []
    for x in sorted((*even, *inner)):
        if not kept or x - kept[-1] >= 0.25 * step:
            kept.append(x)
    return kept
