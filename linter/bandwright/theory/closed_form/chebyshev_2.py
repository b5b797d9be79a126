"""Chebyshev filters of the second kind: F = T_N(E) / T_N(E/x), ripple in the stop band from E = 1 + e on."""

from __future__ import annotations

from bandwright.theory.closed_form import chebyshev_functions as functions
from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = True
PASS_EDGE_IS_FREE = False

real_order = functions.real_order
edge = functions.edge
log_discrimination = functions.log_polynomial
log_rise = functions.log_inverse
lobes = functions.lobes


def log_fall(order: float, e: float, x: float) -> float:
    """T_N(1 + x)^2: F at the stop edge is T_N(E), and at E/(1 + x) it is T_N(E) / T_N(1 + x)."""
    return functions.log_polynomial(order, x)


def log_lull(order: float, e: float, x: float) -> float:
    """F rises through the pass band: (T_N(E) / T_N(E/x))^2."""
    return functions.log_polynomial(order, e) - functions.log_polynomial(order, (e + (1.0 - x)) / x)


def prototype(order: int, e: float, log_g: float) -> Prototype:
    """Poles E / p with p those of the first kind for a = asinh(sqrt(gs)) / N; zeros at E / cos(t)."""
    stop_edge = 1.0 + e
    log_gs = log_g + log_discrimination(order, e)
    of_first_kind = functions.prototype_poles(order, functions.asinh_exp(0.5 * log_gs) / order)
    return Prototype(
        tuple((stop_edge / pole).conjugate() for pole in of_first_kind),
        tuple(stop_edge / functions.cosine(order, k) for k in range(1, order // 2 + 1)),
    )
