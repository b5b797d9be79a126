"""Levels: decibels to the power ratios that the order formulas use, without cancellation."""

from __future__ import annotations

import math

LN10_OVER_10 = math.log(10.0) / 10.0

DEEPEST_DB = 3000.0
"""Power ratios of more decibels leave the range of a double."""


def excess(decibels: float) -> float:
    """10^(A/10) - 1, exact for small A too: the squared ripple factor of an attenuation of A dB."""
    return math.expm1(decibels * LN10_OVER_10) if decibels < DEEPEST_DB else math.inf


def attenuation_db(log_excess: float) -> float:
    """The attenuation in dB whose excess is exp(log_excess)."""
    # Above 40 the 1 in ln(1 + exp(x)) is below the last digit of x.
    return (math.log1p(math.exp(log_excess)) if log_excess < 40.0 else log_excess) / LN10_OVER_10
