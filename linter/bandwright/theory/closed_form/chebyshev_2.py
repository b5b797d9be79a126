"""Chebyshev filters of the second kind: F = T_N(xs) / T_N(xs/x), ripple in the stop band.

Formulas: Zverev 1967, "Handbook of filter synthesis"; from memory.
"""

from __future__ import annotations

import math

from bandwright.theory.closed_form import chebyshev_1
from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = True
MONOTONE_PASS = True

real_order = chebyshev_1.real_order
discrimination = chebyshev_1.discrimination


def characteristic(order: int, e: float, x: float) -> float:
    """F^2 = (T_N(1 + e) / T_N((1 + e)/(1 + x)))^2."""
    whole = chebyshev_1.discrimination(order, e)
    return whole / chebyshev_1.discrimination(order, max(0.0, (e - x) / (1.0 + x)))


def prototype(order: int, e: float, g: float) -> Prototype:
    """Poles xs / p_k with p_k those of the first kind for the ripple 1/gs; zeros at xs / cos(t_k)."""
    stop_edge = 1.0 + e
    of_first_kind = chebyshev_1.prototype(order, e, 1.0 / (g * discrimination(order, e)))
    poles = tuple((stop_edge / pole).conjugate() for pole in of_first_kind.poles)
    zeros = tuple(
        stop_edge / math.cos((2 * k - 1) * math.pi / (2 * order)) for k in range(1, order // 2 + 1)
    )
    return Prototype(poles, zeros)
