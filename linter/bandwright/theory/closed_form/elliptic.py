"""Elliptic (Cauer) filters: F is the elliptic rational function, ripple in pass and stop band.

With k = 1/xs and k1 = sqrt(gp/gs), the order is N = [K(k)/K'(k)] [K'(k1)/K(k1)] (Cauer 1931; formulas
as in Antoniou 1979 and Orfanidis 2006).
"""

from __future__ import annotations

import math

from bandwright.theory.closed_form.elliptic_functions import (
    agm,
    cd,
    inverse_sn,
    landen,
    modulus_from_nome,
)
from bandwright.theory.closed_form.family import Prototype

STOP_EDGE_IS_FREE = True
MONOTONE_PASS = False


def real_order(e: float, discrimination: float) -> float:
    """N = [AGM(1, k)/AGM(1, k')] [AGM(1, k1')/AGM(1, k1)] with k' from e, never from k."""
    k, k_prime = _moduli(e)
    k1 = 1.0 / math.sqrt(discrimination)
    k1_prime = math.sqrt((discrimination - 1.0) / discrimination)
    return agm(1.0, k) / agm(1.0, k_prime) * (agm(1.0, k1_prime) / agm(1.0, k1))


def discrimination(order: float, e: float) -> float:
    """1/k1^2 by the degree equation: the nome of k1 is that of k to the power N."""
    k1, _ = modulus_from_nome(math.exp(order * _log_nome(e)))
    return 1.0 / (k1 * k1) if k1 > 1e-150 else math.inf


def characteristic(order: int, e: float, x: float) -> float:
    """F^2 at 1 + x from the zeros xi_i = cd((2i-1)/N): F ~ prod (x^2 - xi^2) / (1 - (x xi/xs)^2)."""
    k, k_prime = _moduli(e)
    frequency, log_f = 1.0 + x, 0.0
    for xi in _zeros(order, landen(k, k_prime)):
        log_f += math.log(abs((frequency - xi) * (frequency + xi)))
        log_f -= math.log(abs(1.0 - (k * frequency * xi) ** 2))
        log_f -= math.log((1.0 - xi) * (1.0 + xi)) - math.log(1.0 - (k * xi) ** 2)
    if order % 2:
        log_f += math.log(frequency)
    return math.exp(2.0 * log_f) if log_f < 350.0 else math.inf


def prototype(order: int, e: float, g: float) -> Prototype:
    """Poles j cd(u_i - j v0) and zeros xs / cd(u_i), u_i = (2i-1)/N, v0 from sn(j v0 N K1) = j / sqrt(g)."""
    k, k_prime = _moduli(e)
    moduli = landen(k, k_prime)
    k1, k1_prime = modulus_from_nome(math.exp(order * _log_nome(e)))
    v0 = (-1j * inverse_sn(1j / math.sqrt(g), k1, landen(k1, k1_prime)) / order).real
    poles: list[complex] = []
    for i in range(1, order // 2 + 1):
        pole = 1j * cd((2 * i - 1) / order - 1j * v0, moduli)
        poles.append(complex(-abs(pole.real), abs(pole.imag)))
    if order % 2:
        poles.append(complex(-abs((1j * cd(1.0 - 1j * v0, moduli)).real)))
    return Prototype(tuple(poles), tuple((1.0 + e) / xi for xi in _zeros(order, moduli)))


def _zeros(order: int, moduli: tuple[float, ...]) -> list[float]:
    return [cd((2 * i - 1) / order, moduli).real for i in range(1, order // 2 + 1)]


def _moduli(e: float) -> tuple[float, float]:
    """k = 1/(1 + e) and its complement sqrt(e (2 + e)) / (1 + e)."""
    return 1.0 / (1.0 + e), math.sqrt(e * (2.0 + e)) / (1.0 + e)


def _log_nome(e: float) -> float:
    """ln q = -pi K'/K = -pi AGM(1, k') / AGM(1, k)."""
    k, k_prime = _moduli(e)
    return -math.pi * agm(1.0, k_prime) / agm(1.0, k)
