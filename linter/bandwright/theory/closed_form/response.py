"""Gain and group delay of a design from its poles and zeros, exact next to the unit circle."""

from __future__ import annotations

import math

from bandwright.theory.closed_form.types import Design, Root

DB_PER_NEPER = 20.0 / math.log(10.0)

REFINEMENTS = 40
"""Golden-section steps on the largest group delay: enough for double precision."""


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
    return sum(_delay(pole, w) for pole in design.poles) - sum(_delay(zero, w) for zero in design.zeros)


def worst_group_delay(design: Design, low: float, high: float) -> float:
    """The largest group delay in samples between two frequencies in rad/sample.

    It peaks next to pole angles, so these and the points between them are where the search starts.
    """
    angles = sorted({low, high, *(pole.angle for pole in design.poles if low < pole.angle < high)})
    starts = list(angles)
    for left, right in zip(angles, angles[1:], strict=False):
        starts += [left + (right - left) * part / 4.0 for part in (1, 2, 3)]
    starts.sort()
    delays = [group_delay(design, w) for w in starts]
    best = max(range(len(starts)), key=delays.__getitem__)
    left, right = starts[max(0, best - 1)], starts[min(len(starts) - 1, best + 1)]
    return max(delays[best], _golden_maximum(design, left, right))


def _golden_maximum(design: Design, left: float, right: float) -> float:
    ratio = (math.sqrt(5.0) - 1.0) / 2.0
    a, b = right - ratio * (right - left), left + ratio * (right - left)
    at_a, at_b = group_delay(design, a), group_delay(design, b)
    for _ in range(REFINEMENTS):
        if at_a > at_b:
            right, b, at_b = b, a, at_a
            a = right - ratio * (right - left)
            at_a = group_delay(design, a)
        else:
            left, a, at_a = a, b, at_b
            b = left + ratio * (right - left)
            at_b = group_delay(design, b)
    return max(at_a, at_b)


def _log_distance(root: Root, w: float) -> float:
    """ln |1 - z e^-jw|, for a pair of both: |.|^2 = (1 - r)^2 + 4 r sin^2((w - angle)/2)."""
    r = math.sqrt(1.0 - root.gap)
    square = (root.gap / (1.0 + r)) ** 2
    near = square + 4.0 * r * math.sin(0.5 * (w - root.angle)) ** 2
    if root.pair:
        near *= square + 4.0 * r * math.sin(0.5 * (w + root.angle)) ** 2
    return 0.5 * math.log(near) if near > 0.0 else -math.inf


def _delay(root: Root, w: float) -> float:
    """-d arg(1 / (1 - z e^-jw)) / dw = (r cos x - r^2) / |1 - r e^jx|^2 with x = w - angle, in samples."""
    r = math.sqrt(1.0 - root.gap)
    below_one = root.gap / (1.0 + r)
    total = 0.0
    for angle in (root.angle, -root.angle) if root.pair else (root.angle,):
        s = math.sin(0.5 * (w - angle)) ** 2
        distance = below_one**2 + 4.0 * r * s
        # On the circle itself the limit is -1/2 at every frequency.
        total += r * (below_one - 2.0 * s) / distance if root.gap != 0.0 else -0.5
    return total
