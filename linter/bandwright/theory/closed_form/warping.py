"""Prewarping of the bilinear transform: W = tan(w/2), and differences of such without cancellation."""

from __future__ import annotations

import math


def prewarped(w: float) -> float:
    """tan(w/2) of a frequency in rad/sample; infinite at Nyquist."""
    return math.inf if w >= math.pi else math.tan(0.5 * w)


def prewarped_difference(low: float, high: float) -> float:
    """tan(high/2) - tan(low/2) = sin((high - low)/2) / (cos(high/2) cos(low/2)), exact for close edges."""
    if high >= math.pi:
        return math.inf
    return math.sin(0.5 * (high - low)) / (math.cos(0.5 * high) * math.cos(0.5 * low))


def prewarped_stretch(low: float, high: float) -> float:
    """tan(high/2) / tan(low/2) - 1, exact for close edges; infinite from 0 and to Nyquist."""
    if high >= math.pi or low <= 0.0:
        return math.inf
    return math.sin(0.5 * (high - low)) / (math.cos(0.5 * high) * math.sin(0.5 * low))


def frequency(warped: float) -> float:
    """The frequency in rad/sample of a prewarped one."""
    return 2.0 * math.atan(warped)
