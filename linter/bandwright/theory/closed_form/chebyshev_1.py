"""Chebyshev filters of the first kind: F = T_N(x), ripple in the pass band.

Formulas: Zverev 1967, "Handbook of filter synthesis"; from memory.
"""

from __future__ import annotations

import math

from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = False
MONOTONE_PASS = False


def real_order(e: float, discrimination: float) -> float:
    """N = acosh(sqrt(gs/gp)) / acosh(1 + e)."""
    return _acosh_of_square(discrimination) / acosh_1p(e)


def discrimination(order: float, e: float) -> float:
    """T_N(1 + e)^2 = cosh(N acosh(1 + e))^2."""
    argument = order * acosh_1p(e)
    return math.cosh(argument) ** 2 if argument < 350.0 else math.inf


def characteristic(order: int, e: float, x: float) -> float:
    """F^2 = T_N(1 + x)^2; the stop edge plays no part."""
    return discrimination(order, x)


def prototype(order: int, e: float, g: float) -> Prototype:
    """Poles -sinh(a) sin(t_k) + j cosh(a) cos(t_k), a = asinh(1/sqrt(g)) / N, t_k = (2k - 1) pi / 2N."""
    a = math.asinh(1.0 / math.sqrt(g)) / order
    poles = []
    for k in range(1, order // 2 + 1):
        t = (2 * k - 1) * math.pi / (2 * order)
        poles.append(complex(-math.sinh(a) * math.sin(t), math.cosh(a) * math.cos(t)))
    if order % 2:
        poles.append(complex(-math.sinh(a)))
    return Prototype(tuple(poles), ())


def acosh_1p(e: float) -> float:
    """acosh(1 + e) = 2 asinh(sqrt(e/2)), without cancellation near 1."""
    return 2.0 * math.asinh(math.sqrt(0.5 * e))


def _acosh_of_square(square: float) -> float:
    """acosh(sqrt(d)) = asinh(sqrt(d - 1)), d >= 1."""
    return math.asinh(math.sqrt(square - 1.0))
