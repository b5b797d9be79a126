"""Butterworth filters: F = x^N (Butterworth 1930, "On the theory of filter amplifiers")."""

from __future__ import annotations

import cmath
import math

from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = False
MONOTONE_PASS = True


def real_order(e: float, discrimination: float) -> float:
    """N = ln(gs/gp) / (2 ln(1 + e))."""
    return 0.5 * math.log(discrimination) / math.log1p(e)


def discrimination(order: float, e: float) -> float:
    """(1 + e)^(2N)."""
    exponent = 2.0 * order * math.log1p(e)
    return math.exp(exponent) if exponent < 700.0 else math.inf


def characteristic(order: int, e: float, x: float) -> float:
    """F^2 = (1 + x)^(2N); the stop edge plays no part."""
    return discrimination(order, x)


def prototype(order: int, e: float, g: float) -> Prototype:
    """Poles on a circle of radius g^(-1/2N), at odd multiples of 90/N degrees from the imaginary axis."""
    radius = g ** (-0.5 / order)
    poles = [
        cmath.rect(radius, 0.5 * math.pi * (1.0 + (2 * k - 1) / order)) for k in range(1, order // 2 + 1)
    ]
    return Prototype((*poles, complex(-radius)) if order % 2 else tuple(poles), ())
