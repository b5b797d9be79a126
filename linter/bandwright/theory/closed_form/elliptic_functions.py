"""Jacobi elliptic functions for filters: Landen's transformation and the arithmetic-geometric mean.

The modulus k and its complement k' are carried side by side, because each is lost in the other where
it is small. Arguments are in quarter periods: cd(u) here is cd(u K, k).

Formulas: Landen's descending transformation and the AGM as in Abramowitz & Stegun 1964, 16.12 and 17.6;
their use for filters after Orfanidis 2006.
"""

from __future__ import annotations

import cmath
import math


def agm(a: float, b: float) -> float:
    """The arithmetic-geometric mean of two positive numbers."""
    while abs(a - b) > 4e-16 * a:
        a, b = 0.5 * (a + b), math.sqrt(a * b)
    return a


def landen(k: float, k_prime: float) -> tuple[float, ...]:
    """The descending moduli k_1 > k_2 > ... of Landen's transformation, down to where they vanish."""
    moduli = []
    while k > 1e-17:
        k, k_prime = (k / (1.0 + k_prime)) ** 2, 2.0 * math.sqrt(k_prime) / (1.0 + k_prime)
        moduli.append(k)
    return tuple(moduli)


def cd(u: complex, moduli: tuple[float, ...]) -> complex:
    """cd(u K) for a modulus given by its Landen sequence (ascending transformation from the cosine)."""
    return _ascended(cmath.cos(0.5 * math.pi * u), moduli)


def sn(u: complex, moduli: tuple[float, ...]) -> complex:
    """sn(u K) for a modulus given by its Landen sequence."""
    return _ascended(cmath.sin(0.5 * math.pi * u), moduli)


def inverse_sn(w: complex, k: float, moduli: tuple[float, ...]) -> complex:
    """u with sn(u K) = w, in quarter periods."""
    before = k
    for modulus in moduli:
        w = 2.0 * w / ((1.0 + modulus) * (1.0 + cmath.sqrt(1.0 - (before * w) ** 2)))
        before = modulus
    return cmath.asin(w) * (2.0 / math.pi)


def _ascended(w: complex, moduli: tuple[float, ...]) -> complex:
    for modulus in reversed(moduli):
        w = (1.0 + modulus) * w / (1.0 + modulus * w * w)
    return w


def modulus_from_nome(nome: float) -> tuple[float, float]:
    """(k, k') of a nome q, by theta functions: k = 4 sqrt(q) prod ((1 + q^2n) / (1 + q^(2n-1)))^4.

    For a nome over exp(-pi) the complementary one, ln q ln q' = pi^2, is the small one and is used.
    """
    if nome > 0.0432:
        k_prime, k = modulus_from_nome(math.exp(math.pi**2 / math.log(nome)))
        return k, k_prime
    k = 4.0 * math.sqrt(nome)
    k_prime = 1.0
    even, odd = nome * nome, nome
    while odd > 1e-18:
        k *= ((1.0 + even) / (1.0 + odd)) ** 4
        k_prime *= ((1.0 - odd) / (1.0 + odd)) ** 4
        odd *= nome * nome
        even *= nome * nome
    return k, k_prime
