"""Chebyshev polynomials T_N for filters, N real, at 1 + e; and F = T_N(E) / T_N(E/x) with E = 1 + e.

Formulas: Zverev 1967, "Handbook of filter synthesis"; from memory.
"""

from __future__ import annotations

import math

LN_2 = math.log(2.0)

ON_A_MINIMUM = 1e-12
"""Lobes that a frequency may miss a minimum of the ripple by and still count as on it."""


def acosh_1p(e: float) -> float:
    """acosh(1 + e) = 2 asinh(sqrt(e/2)), without cancellation near 1."""
    return 2.0 * math.asinh(math.sqrt(0.5 * e))


def asinh_exp(exponent: float) -> float:
    """asinh(exp(x)), for large x too."""
    return math.asinh(math.exp(exponent)) if exponent < 40.0 else exponent + LN_2


def real_order(e: float, discrimination: float) -> float:
    """N = acosh(sqrt(gs/gp)) / acosh(1 + e), with acosh(sqrt(d)) = asinh(sqrt(d - 1))."""
    return math.asinh(math.sqrt(discrimination - 1.0)) / acosh_1p(e) if discrimination > 1.0 else 0.0


def edge(order: float, log_discrimination: float) -> float:
    """e = cosh(acosh(sqrt(gs/gp)) / N) - 1 = 2 sinh(acosh(sqrt(gs/gp)) / 2N)^2."""
    argument = 0.5 * asinh_exp(0.5 * _log_expm1(log_discrimination)) / order
    return 2.0 * math.sinh(argument) ** 2 if argument < 350.0 else math.inf


def log_polynomial(order: float, x: float) -> float:
    """ln T_N(1 + x)^2 = 2 ln cosh(N acosh(1 + x))."""
    argument = order * acosh_1p(x)
    return 2.0 * (argument + math.log1p(math.exp(-2.0 * argument)) - LN_2)


def log_inverse(order: float, e: float, low: float, high: float) -> float:
    """ln of the least F^2 between 1 + low and 1 + high; from E on, F ripples down to T_N(E)."""
    top = log_polynomial(order, e)
    if low <= e:
        return top - log_polynomial(order, (e - low) / (1.0 + low))
    first, last = lobes(order, e, low), lobes(order, e, high)
    if math.ceil(first - ON_A_MINIMUM) <= last + ON_A_MINIMUM:
        return top
    return top - 2.0 * math.log(max(abs(math.cos(math.pi * first)), abs(math.cos(math.pi * last))))


def lobes(order: float, e: float, x: float) -> float:
    """N acos(E / (1 + x)) / pi: F is at a minimum at whole numbers and infinite half-way between."""
    turned = 0.5 if math.isinf(x) else 0.5 * (x - e) / (1.0 + x)
    return order * 2.0 * math.asin(math.sqrt(turned)) / math.pi


def prototype_poles(order: int, a: float) -> list[complex]:
    """Poles -sinh(a) sin(t) + j cosh(a) cos(t), t = (2k - 1) pi / 2N, on an ellipse."""
    sinh, cosh = math.sinh(a), math.cosh(a)
    poles = []
    for k in range(1, order // 2 + 1):
        t = (2 * k - 1) * math.pi / (2 * order)
        poles.append(complex(-sinh * math.sin(t), cosh * cosine(order, k)))
    if order % 2:
        poles.append(complex(-sinh))
    return poles


def cosine(order: int, k: int) -> float:
    """cos((2k - 1) pi / 2N) as the sine of the complement: exact where it is small."""
    return math.sin((order + 1 - 2 * k) * math.pi / (2 * order))


def _log_expm1(x: float) -> float:
    """ln(exp(x) - 1), x > 0."""
    return x + math.log(-math.expm1(-x))
