"""Gain and group delay of a design from its poles and zeros, exact next to the unit circle."""

from __future__ import annotations

import math
from typing import NamedTuple

from bandwright.theory.closed_form.types import Design, Root

DB_PER_NEPER = 20.0 / math.log(10.0)

TALL = 0.5
"""Places with less than this share of the largest delay seen are not climbed from."""

STEPS = 60
"""Steps to bracket a maximum, and to find it."""

FLAT = 1e-12
"""A slope below this share of the delay, over the width of the resonance, is none."""


def log_gain(design: Design, w: float) -> float:
    """ln |H| at w (rad/sample); -inf on a zero."""
    total = design.log_gain
    for zero in design.zeros:
        total += _log_distance(zero, w)
    for pole in design.poles:
        total -= _log_distance(pole, w)
    return total


def gain_db(design: Design, w: float) -> float:
    """The gain in dB at w (rad/sample); -inf on a zero."""
    return DB_PER_NEPER * log_gain(design, w)


def group_delay(design: Design, w: float) -> float:
    """The group delay in samples at w (rad/sample)."""
    on_circle, resonances = _resonances(design)
    return on_circle + _delay_and_slope(resonances, w)[0]


def worst_group_delay(design: Design, low: float, high: float) -> float:
    """The largest group delay in samples between two frequencies in rad/sample.

    It is climbed to from both ends and from the angle of every pole between them, unless the next of these
    places uphill is higher and leads on.
    """
    on_circle, resonances = _resonances(design)
    starts = [(low, high - low), (high, high - low)]
    starts += [(one.angle, abs(one.shortfall)) for one in resonances if low < one.angle < high]
    found = [(w, width, *_delay_and_slope(resonances, w)) for w, width in sorted(starts)]
    highest = max(delay for *_, delay, _ in found)
    for place, (w, width, delay, slope) in enumerate(found):
        uphill = place + (1 if slope > 0.0 else -1)
        if delay < TALL * highest or not 0 <= uphill < len(found) or abs(slope) * width <= FLAT * delay:
            continue
        end, _, next_delay, next_slope = found[uphill]
        if next_slope * slope <= 0.0 or next_delay < delay:
            width = min(width, abs(end - w))
            highest = max(highest, _climbed(resonances, w, width, slope, end))
    return on_circle + highest


class _Resonance(NamedTuple):
    """One root of the upper or the lower half plane: what its delay takes."""

    angle: float
    radius: float
    shortfall: float
    """1 - radius"""
    gap: float
    sign: float
    """+1 for a pole, -1 for a zero."""


def _resonances(design: Design) -> tuple[float, list[_Resonance]]:
    """The delay of the zeros on the circle, half a sample each, and all other roots one by one."""
    on_circle = 0.0
    found = []
    for roots, sign in ((design.poles, 1.0), (design.zeros, -1.0)):
        for root in roots:
            if root.gap == 0.0:
                on_circle -= sign * (1.0 if root.pair else 0.5)
                continue
            radius = math.sqrt(1.0 - root.gap)
            shortfall = root.gap / (1.0 + radius)
            angles = (root.angle, -root.angle) if root.pair else (root.angle,)
            found += [_Resonance(angle, radius, shortfall, root.gap, sign) for angle in angles]
    return on_circle, found


def _delay_and_slope(resonances: list[_Resonance], w: float) -> tuple[float, float]:
    """Group delay and its derivative.

    -d arg(1 - r e^-jx) / dx, x = w - angle, is (r cos x - r^2) / |1 - r e^jx|^2 up to its sign, with
    |1 - r e^jx|^2 = (1 - r)^2 + 4 r s, s = sin(x/2)^2; its derivative is -r (1 - r^2) sin x over the square.
    """
    delay = slope = 0.0
    for angle, radius, shortfall, gap, sign in resonances:
        half = 0.5 * (w - angle)
        sine = math.sin(half)
        square = sine * sine
        distance = shortfall * shortfall + 4.0 * radius * square
        share = sign * radius / distance
        delay += share * (shortfall - 2.0 * square)
        slope -= share * gap * 2.0 * sine * math.cos(half) / distance
    return delay, slope


def _climbed(resonances: list[_Resonance], w: float, width: float, slope: float, end: float) -> float:
    """The delay at the next maximum uphill from w, or at the end of the way."""
    behind, behind_slope = w, slope
    step = math.copysign(0.25 * width, slope)
    for _ in range(STEPS):
        ahead = behind + step
        if (end - ahead) * step <= 0.0:
            ahead = end
        delay, ahead_slope = _delay_and_slope(resonances, ahead)
        if ahead_slope * slope <= 0.0:
            break
        if ahead == end:
            return delay
        behind, behind_slope = ahead, ahead_slope
        step *= 2.0
    kept = 0
    for _ in range(STEPS):
        middle = (behind * ahead_slope - ahead * behind_slope) / (ahead_slope - behind_slope)
        delay, middle_slope = _delay_and_slope(resonances, middle)
        if abs(middle_slope * (ahead - behind)) <= FLAT * delay:
            break
        if middle_slope * slope > 0.0:
            behind, behind_slope = middle, middle_slope
            ahead_slope *= 0.5 if kept == 1 else 1.0
            kept = 1
        else:
            ahead, ahead_slope = middle, middle_slope
            behind_slope *= 0.5 if kept == -1 else 1.0
            kept = -1
    return delay


def _log_distance(root: Root, w: float) -> float:
    """ln |1 - z e^-jw|, for a pair of both: |.|^2 = (1 - r)^2 + 4 r sin^2((w - angle)/2)."""
    radius = math.sqrt(1.0 - root.gap)
    square = (root.gap / (1.0 + radius)) ** 2
    near = square + 4.0 * radius * math.sin(0.5 * (w - root.angle)) ** 2
    if root.pair:
        near *= square + 4.0 * radius * math.sin(0.5 * (w + root.angle)) ** 2
    return 0.5 * math.log(near) if near > 0.0 else -math.inf
