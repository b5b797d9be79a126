"""A design written out as coefficients: one numerator and one denominator, and what they cost."""

from __future__ import annotations

import math

from bandwright.theory.closed_form.types import Design, Root

FREE = (0.0, 1.0, 2.0)
"""Magnitudes that take no multiplication: nothing, a sum, a shift."""


def expand(design: Design) -> tuple[list[float], list[float]]:
    """Numerator and denominator in rising powers of 1/z; the denominator starts with 1."""
    gain = design.sign * math.exp(design.log_gain)
    return [gain * c for c in expanded(design.zeros)], expanded(design.poles)


def expanded(roots: tuple[Root, ...]) -> list[float]:
    """The coefficients of prod(1 - z_i / z), the roots multiplied from the widest angle inward."""
    product = [1.0]
    for root in sorted(roots, key=lambda root: -root.angle):
        product = _times(product, factor(root))
    return product


def factor(root: Root) -> tuple[float, ...]:
    """1 - z/z0 of a real root, or 1 + a1/z + a2/z^2 of a pair; exact where the root lies at 0, pi/2 or pi."""
    r = math.sqrt(1.0 - root.gap)
    if not root.pair:
        return (1.0, -r if root.angle == 0.0 else r)
    return (1.0, -2.0 * r * math.cos(root.angle), 1.0 - root.gap)


def coefficient_ratio(numerator: list[float], denominator: list[float]) -> float:
    """The largest over the smallest magnitude of all coefficients that are not 0."""
    magnitudes = [abs(c) for c in (*numerator, *denominator) if c != 0.0]
    smallest = min(magnitudes)
    return max(magnitudes) / smallest


def multiplications(numerator: list[float], denominator: list[float]) -> int:
    """Per input sample in a direct form: a symmetric numerator folded, 0, +-1 and +-2 free."""
    half = numerator[: (len(numerator) + 1) // 2]
    mirrored = all(
        math.isclose(abs(left), abs(right), rel_tol=1e-9)
        for left, right in zip(numerator, reversed(numerator), strict=True)
    )
    return sum(abs(c) not in FREE for c in (*(half if mirrored else numerator), *denominator))


def section_multiplications(design: Design) -> int:
    """Per input sample in a cascade of second-order sections, with one gain for all of them."""
    coefficients = [c for root in (*design.zeros, *design.poles) for c in factor(root)[1:]]
    return 1 + sum(abs(c) not in FREE for c in coefficients)


def _times(left: list[float], right: tuple[float, ...]) -> list[float]:
    product = [0.0] * (len(left) + len(right) - 1)
    for i, a in enumerate(left):
        for j, b in enumerate(right):
            product[i + j] += a * b
    return product
