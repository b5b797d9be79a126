"""Levels: decibels to the power ratios that the order formulas use, without cancellation."""

from __future__ import annotations

import math

LN10_OVER_10 = math.log(10.0) / 10.0


def excess(decibels: float) -> float:
    """10^(A/10) - 1, exact for small A too: the squared ripple factor of an attenuation of A dB."""
    return math.expm1(decibels * LN10_OVER_10)


def attenuation_db(ratio: float) -> float:
    """10 log10(1 + ratio), the attenuation in dB whose excess is `ratio`."""
    return math.log1p(ratio) / LN10_OVER_10
