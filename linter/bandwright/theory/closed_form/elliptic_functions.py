"""Jacobi's elliptic functions for filters, by the arithmetic-geometric mean and by theta series.

A modulus k and its complement k' are carried side by side, because each is lost in the other where it
is small. Arguments are in quarter periods: sn(u) here is sn(u K, k). A nome q is given by its logarithm.

Formulas: Abramowitz & Stegun 1964, 16.4 (descent), 17.6 (mean), 16.27 (theta series); from memory.
"""

from __future__ import annotations

import math

SMALL_LOG_NOME = -math.pi
"""ln q where a modulus equals its complement; above it the complement has the faster series."""

CLOSE = 4e-16
"""Two means this close, relatively, are one."""

LOG_EPSILON = -40.0
"""ln of what is lost beside 1."""


def agm(a: float, b: float) -> float:
    """The arithmetic-geometric mean of two positive numbers, a >= b."""
    while a - b > 1e-8 * a:
        a, b = 0.5 * (a + b), math.sqrt(a * b)
    return 0.5 * (a + b)


def log_nome(k: float, k_prime: float) -> float:
    """ln q = -pi K'/K = -pi AGM(1, k') / AGM(1, k)."""
    return -math.pi * agm(1.0, k_prime) / agm(1.0, k)


def log_modulus(log_q: float) -> float:
    """ln k of a nome: k = 4 sqrt(q) prod ((1 + q^2n) / (1 + q^(2n-1)))^4."""
    if log_q > SMALL_LOG_NOME:
        return 0.5 * math.log1p(-math.exp(2.0 * log_modulus(math.pi**2 / log_q)))
    q = math.exp(log_q)
    total, power = 0.0, q
    while power > 1e-17:
        total += math.log1p(power * q) - math.log1p(power)
        power *= q * q
    return math.log(4.0) + 0.5 * log_q + 4.0 * total


def descent(k_prime: float) -> tuple[float, ...]:
    """The ratios (a - b) / (a + b) of the mean of 1 and k', which `amplitude` climbs."""
    a, b, ratios = 1.0, k_prime, []
    while a - b > CLOSE * a:
        ratios.append((a - b) / (a + b))
        a, b = 0.5 * (a + b), math.sqrt(a * b)
    return tuple(ratios)


def amplitude(u: float, ratios: tuple[float, ...]) -> float:
    """am(u K), for the modulus whose `descent` is given: sn is its sine, cn its cosine."""
    angle = math.ldexp(0.5 * math.pi * u, len(ratios))
    for ratio in reversed(ratios):
        angle = 0.5 * (angle + math.asin(ratio * math.sin(angle)))
    return angle


def quarter_periods(tangent: float, k_prime: float) -> float:
    """u with sc(u K) = `tangent` >= 0, for the modulus whose complement is given."""
    a, b, doublings, angle = 1.0, k_prime, 0, math.atan(tangent)
    while a - b > CLOSE * a:
        sine, cosine = math.sin(angle), math.cos(angle)
        lag = math.atan2((a - b) * sine * cosine, a * cosine * cosine + b * sine * sine)
        angle = 2.0 * angle - lag
        a, b = 0.5 * (a + b), math.sqrt(a * b)
        doublings += 1
    return math.ldexp(2.0 * angle / math.pi, -doublings)


def log_cd_imaginary(log_q: float, a: float) -> float:
    """ln cd(j v), v > 0, by theta functions of the argument j a, a = pi v / 2 <= -ln q / 2.

    The series run in q^(n^2) times powers of q exp(2a) <= 1 and of exp(-2a), so that nothing overflows.
    """
    rising, falling = log_q + 2.0 * a, -2.0 * a
    theta_2 = theta_2_at_0 = 0.0
    theta_3 = theta_3_at_0 = 1.0
    n = 0
    while (n * n - n) * log_q > LOG_EPSILON:
        square = n * n * log_q
        theta_2 += math.exp(square + n * rising) + math.exp(square + n * log_q + (n + 1) * falling)
        theta_2_at_0 += 2.0 * math.exp(square + n * log_q)
        n += 1
        square = n * n * log_q
        theta_3 += math.exp(square - n * log_q + n * rising) + math.exp(square + n * falling)
        theta_3_at_0 += 2.0 * math.exp(square)
    return a + math.log(theta_2 / theta_2_at_0 * theta_3_at_0 / theta_3)


def cd(log_q: float, u: float) -> float:
    """cd(u) of real u by theta functions."""
    angle = 0.5 * math.pi * u
    theta_2 = theta_2_at_0 = 0.0
    theta_3 = theta_3_at_0 = 1.0
    n = 0
    while n * n * log_q > LOG_EPSILON:
        power = math.exp((n * n + n) * log_q)
        theta_2 += power * math.cos((2 * n + 1) * angle)
        theta_2_at_0 += power
        n += 1
        power = 2.0 * math.exp(n * n * log_q)
        theta_3 += power * math.cos(2 * n * angle)
        theta_3_at_0 += power
    return theta_2 / theta_2_at_0 * theta_3_at_0 / theta_3
