"""Butterworth filters: F = x^N (Butterworth 1930, "On the theory of filter amplifiers")."""

from __future__ import annotations

import math

from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = False
PASS_EDGE_IS_FREE = False


def real_order(e: float, discrimination: float) -> float:
    """N = ln(gs/gp) / (2 ln(1 + e))."""
    return 0.5 * math.log(discrimination) / math.log1p(e) if discrimination > 1.0 else 0.0


def edge(order: float, log_discrimination: float) -> float:
    """(gs/gp)^(1/2N) - 1."""
    exponent = 0.5 * log_discrimination / order
    return math.expm1(exponent) if exponent < 700.0 else math.inf


def log_discrimination(order: float, e: float) -> float:
    """F^2 = (1 + e)^2N."""
    return 2.0 * order * math.log1p(e)


def log_rise(order: float, e: float, low: float, high: float) -> float:
    """F rises all the way, so it is least at the low end; the stop edge plays no part."""
    return 2.0 * order * math.log1p(low)


def log_fall(order: float, e: float, x: float) -> float:
    """(1 + x)^2N as well."""
    return 2.0 * order * math.log1p(x)


def log_lull(order: float, e: float, x: float) -> float:
    """x^2N."""
    return 2.0 * order * math.log(x)


def lobes(order: float, e: float, x: float) -> float:
    """None: there is no ripple."""
    return 0.0


def prototype(order: int, e: float, log_g: float) -> Prototype:
    """Poles on a circle of radius g^(-1/2N), at odd multiples of 90/N degrees from the imaginary axis."""
    radius, step = math.exp(-0.5 * log_g / order), 0.5 * math.pi / order
    poles = [
        complex(-radius * math.sin((2 * k - 1) * step), radius * math.sin((order + 1 - 2 * k) * step))
        for k in range(1, order // 2 + 1)
    ]
    return Prototype((*poles, complex(-radius)) if order % 2 else tuple(poles), ())
