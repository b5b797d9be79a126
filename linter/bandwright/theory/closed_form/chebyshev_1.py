"""Chebyshev filters of the first kind: F = T_N(x), ripple in the pass band."""

from __future__ import annotations

import math

from bandwright.theory.closed_form import chebyshev_functions as functions
from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = False
PASS_EDGE_IS_FREE = True

real_order = functions.real_order
edge = functions.edge
log_discrimination = functions.log_polynomial
lobes = functions.lobes


def log_rise(order: float, e: float, low: float, high: float) -> float:
    """F rises all the way from 1, so it is least at the low end; the stop edge plays no part."""
    return functions.log_polynomial(order, low)


def log_fall(order: float, e: float, x: float) -> float:
    """T_N(E) over the greatest T_N from 0 to E/(1 + x), which is 1 where the ripple has begun."""
    return functions.log_inverse(order, e, x, math.inf)


def log_lull(order: float, e: float, x: float) -> float:
    """cos(N acos x)^2 above the last zero of T_N."""
    angle = order * 2.0 * math.asin(math.sqrt(0.5 * (1.0 - x)))
    return 2.0 * math.log(math.cos(angle)) if angle < 0.5 * math.pi else -math.inf


def prototype(order: int, e: float, log_g: float) -> Prototype:
    """Poles on the ellipse with a = asinh(1/sqrt(g)) / N."""
    return Prototype(tuple(functions.prototype_poles(order, functions.asinh_exp(-0.5 * log_g) / order)), ())
