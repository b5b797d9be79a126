"""Elliptic (Cauer) filters: F is the elliptic rational function, ripple in pass and stop band.

With k = 1/E, E = 1 + e, and k1 = sqrt(gp/gs), the order is N = [K(k)/K'(k)] [K'(k1)/K(k1)]: the nome of
k1 is that of k to the power N (Cauer 1931; Antoniou 1979; Orfanidis 2006, on elliptic filter design; from
memory). F is the same function seen from the stop edge: F(E)/F(E/x) = F(x).
"""

from __future__ import annotations

import math

from bandwright.theory.closed_form import elliptic_functions as functions
from bandwright.theory.closed_form.chebyshev_functions import ON_A_MINIMUM, asinh_exp
from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = True
PASS_EDGE_IS_FREE = True


def real_order(e: float, discrimination: float) -> float:
    """N = [AGM(1, k)/AGM(1, k')] [AGM(1, k1')/AGM(1, k1)] with k' from e, never from k."""
    if discrimination <= 1.0:
        return 0.0
    if discrimination == math.inf:
        return math.inf
    k, k_prime = _moduli(e)
    k1 = 1.0 / math.sqrt(discrimination)
    k1_prime = math.sqrt((discrimination - 1.0) / discrimination)
    agm = functions.agm
    return agm(1.0, k) / agm(1.0, k_prime) * (agm(1.0, k1_prime) / agm(1.0, k1))


def edge(order: float, log_discrimination: float) -> float:
    """1/k - 1 = k'^2 / (k (1 + k)) with the nome of k the N-th root of that of k1."""
    k1, k1_prime = math.exp(-0.5 * log_discrimination), math.sqrt(-math.expm1(-log_discrimination))
    log_q = functions.log_nome(k1, k1_prime) / order
    k = math.exp(functions.log_modulus(log_q))
    k_prime = math.exp(functions.log_modulus(math.pi**2 / log_q))
    return k_prime**2 / (k * (1.0 + k)) if k > 0.0 else math.inf


def log_discrimination(order: float, e: float) -> float:
    """ln 1/k1^2."""
    return -2.0 * functions.log_modulus(order * functions.log_nome(*_moduli(e)))


def log_rise(order: float, e: float, low: float, high: float) -> float:
    """F = cd(N u) with 1 + x = cd(u): u is imaginary up to E, and from there F ripples down to F(E)."""
    k, k_prime = _moduli(e)
    log_q = functions.log_nome(k, k_prime)
    if low < e:
        # (1 + x)^2 - 1 = k'^2 sd(v, k')^2 for u = j v, so sc(v, k') comes without cancellation.
        tangent = (1.0 + e) * math.sqrt(low * (2.0 + low) / ((e - low) * (2.0 + e + low)))
        v = functions.quarter_periods(tangent, k)
        return 2.0 * functions.log_cd_imaginary(order * log_q, -0.5 * order * log_q * v)
    top = -2.0 * functions.log_modulus(order * log_q)
    first, last = lobes(order, e, low), lobes(order, e, high)
    if math.ceil(first - ON_A_MINIMUM) <= last + ON_A_MINIMUM:
        return top
    farther = max(abs(functions.cd(order * log_q, 2.0 * place)) for place in (first, last))
    return top - 2.0 * math.log(farther)


def log_fall(order: float, e: float, x: float) -> float:
    """The same as the rise to 1 + x."""
    return log_rise(order, e, x, math.inf)


def log_lull(order: float, e: float, x: float) -> float:
    """cd(N u)^2 with x = cd(u), above the last zero of F."""
    k, k_prime = _moduli(e)
    u = 1.0 - functions.quarter_periods(x / math.sqrt((1.0 - x) * (1.0 + x)), k_prime)
    if order * u >= 1.0:
        return -math.inf
    return 2.0 * math.log(functions.cd(order * functions.log_nome(k, k_prime), order * u))


def lobes(order: float, e: float, x: float) -> float:
    """N u / 2 with E / (1 + x) = cd(u): F is at a minimum at whole numbers and infinite half-way between."""
    if math.isinf(x):
        return 0.5 * order
    # tan(am(1 - u)) of sn(1 - u) = E / (1 + x)
    tangent = (1.0 + e) / math.sqrt((x - e) * (2.0 + x + e)) if x > e else math.inf
    return 0.5 * order * (1.0 - functions.quarter_periods(tangent, _moduli(e)[1]))


def prototype(order: int, e: float, log_g: float) -> Prototype:
    """Poles j sn(a + j v) and zeros E / sn(a), a = 1 - (2i - 1)/N; sn(j v N K1, k1) = j / sqrt(g).

    By the addition theorem, with s, c, d of a (modulus k) and s1, c1, d1 of v (modulus k'):
    sn(a + j v) = (s d1 + j c d s1 c1) / (c1^2 + k^2 s^2 s1^2). Only products: the real part of a pole next
    to the axis keeps all its digits.
    """
    k, k_prime = _moduli(e)
    log_q = functions.log_nome(k, k_prime)
    v = functions.amplitude(_depth(order * log_q, log_g), functions.descent(k))
    s1, c1 = math.sin(v), math.cos(v)
    d1 = math.hypot(k, k_prime * c1)
    ratios = functions.descent(k_prime)
    poles, zeros = [], []
    for i in range(1, order // 2 + 1):
        s, c, d = _sn_cn_dn((2 * i - 1) / order, k, k_prime, ratios)
        below = c1 * c1 + (k * s * s1) ** 2
        poles.append(complex(-c * d * s1 * c1 / below, s * d1 / below))
        zeros.append((1.0 + e) / s)
    if order % 2:
        poles.append(complex(-s1 / c1))
    return Prototype(tuple(poles), tuple(zeros))


def _moduli(e: float) -> tuple[float, float]:
    """k = 1/E and its complement sqrt(e (2 + e)) / E."""
    return 1.0 / (1.0 + e), math.sqrt(e) * math.sqrt(2.0 + e) / (1.0 + e)


def _sn_cn_dn(u: float, k: float, k_prime: float, ratios: tuple[float, ...]) -> tuple[float, float, float]:
    """sn, cn, dn of 1 - u, from u itself where that is small: there cn is."""
    angle = functions.amplitude(min(u, 1.0 - u), ratios)
    s, c = math.sin(angle), math.cos(angle)
    d = math.hypot(k_prime, k * c)
    return (c / d, k_prime * s / d, k_prime / d) if u < 0.5 else (s, c, d)


def _depth(log_q1: float, log_g: float) -> float:
    """v of the poles in quarter periods of k', from sc = 1/sqrt(g): Landen's descent from k1 to sinh."""
    log_k1 = functions.log_modulus(log_q1)
    k1 = math.exp(log_k1)
    k1_prime = math.exp(functions.log_modulus(math.pi**2 / log_q1)) if k1 > 1e-9 else 1.0
    log_t = -0.5 * log_g
    product = math.exp(2.0 * (log_k1 + log_t))
    while True:
        modulus = (k1 / (1.0 + k1_prime)) ** 2
        log_t += math.log(2.0 / ((1.0 + modulus) * (1.0 + math.sqrt(1.0 + product))))
        if modulus < 1e-18:
            return -2.0 * asinh_exp(log_t) / log_q1
        k1_prime = 2.0 * math.sqrt(k1_prime) / (1.0 + k1_prime)
        k1 = modulus
        product = (k1 * math.exp(log_t)) ** 2
