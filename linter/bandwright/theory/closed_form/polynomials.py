"""A design written out as coefficients: one numerator and one denominator, or second-order sections."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from typing import NamedTuple

from bandwright.theory.closed_form.types import Design, Root

FREE = (0.0, 1.0, 2.0)
"""Magnitudes that take no multiplication: nothing, a sum, a shift."""

ROUNDING = 1e-15
"""What the sum of terms leaves of them, as a share, where it should be 0."""


class Section(NamedTuple):
    """(b0 + b1/z + b2/z^2) / (1 + a1/z + a2/z^2)"""

    b0: float
    b1: float
    b2: float
    a1: float
    a2: float


def expand(design: Design) -> tuple[list[float], list[float]]:
    """Numerator and denominator in rising powers of 1/z; the denominator starts with 1.

    A numerator below the range of a double comes out as zeros.
    """
    gain = design.sign * math.exp(design.log_gain)
    return [gain * c for c in expanded(design.zeros)], expanded(design.poles)


def expanded(roots: Sequence[Root]) -> list[float]:
    """The coefficients of prod(1 - z_i / z), each good to a few last digits for zeros and poles of filters.

    Factors are taken from both ends of the range of angles in turn, which keeps partial products small. A
    coefficient that is nothing but the rounding of terms that cancel is 0.
    """
    product, magnitudes = [1.0], [1.0]
    for root in _from_both_ends(roots):
        own = factor(root)
        product = _times(product, own)
        magnitudes = _times(magnitudes, [abs(c) for c in own])
    return [c if abs(c) > ROUNDING * size else 0.0 for c, size in zip(product, magnitudes, strict=True)]


def factor(root: Root) -> tuple[float, ...]:
    """1 - z0/z of a real root, or 1 + a1/z + a2/z^2 of a pair; exact where the root lies at 0, pi/2 or pi."""
    radius = math.sqrt(1.0 - root.gap)
    if not root.pair:
        return (1.0, -radius if root.angle == 0.0 else radius)
    cosine = math.cos(root.angle)
    return (1.0, -2.0 * radius * cosine if abs(cosine) > ROUNDING else 0.0, 1.0 - root.gap)


def coefficient_ratio(*polynomials: Sequence[float]) -> float:
    """The largest over the smallest magnitude of all coefficients that are not 0.

    Infinite where one of the polynomials is below the range of a double.
    """
    magnitudes = [abs(c) for polynomial in polynomials for c in polynomial if c != 0.0]
    if not all(any(polynomial) for polynomial in polynomials):
        return math.inf
    return max(magnitudes) / min(magnitudes)


def multiplications(numerator: Sequence[float], denominator: Sequence[float]) -> int:
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


def sections(design: Design) -> tuple[Section, ...]:
    """The cascade of a design without its gain exp(log_gain): every b0 is 1.

    The poles nearest the circle choose first, the zeros nearest to them; the most resonant comes last.
    """
    poles = sorted(_in_twos(design.poles), key=lambda group: group[0].gap)
    zeros = _in_twos(design.zeros)
    found = []
    for group in poles:
        z = group[0].z
        # A single real pole leaves no room for two zeros in one section of its own order.
        fitting = [other for other in zeros if _degree(other) == _degree(group)] or zeros
        nearest = min(fitting, key=lambda other: abs(other[0].z - z), default=None)
        if nearest is not None:
            zeros.remove(nearest)
        numerator = [*_of_group(nearest or ()), 0.0, 0.0]
        denominator = [*_of_group(group), 0.0, 0.0]
        found.append(Section(*numerator[:3], *denominator[1:3]))
    return tuple(reversed(found))


def _in_twos(roots: Iterable[Root]) -> list[tuple[Root, ...]]:
    """Pairs, and real roots two by two, the widest angle with the narrowest: z = 1 with z = -1."""
    groups: list[tuple[Root, ...]] = [(root,) for root in roots if root.pair]
    real = _from_both_ends([root for root in roots if not root.pair])
    groups += [tuple(real[place : place + 2]) for place in range(0, len(real), 2)]
    return groups


def _degree(group: tuple[Root, ...]) -> int:
    return sum(2 if root.pair else 1 for root in group)


def _of_group(group: Iterable[Root]) -> list[float]:
    product = [1.0]
    for root in group:
        product = _times(product, factor(root))
    return product


def _from_both_ends(roots: Iterable[Root]) -> list[Root]:
    """The widest angle, the narrowest, the next widest, and so on."""
    ordered = sorted(roots, key=lambda root: -root.angle)
    return [ordered[-1 - place // 2] if place % 2 else ordered[place // 2] for place in range(len(ordered))]


def _times(left: Sequence[float], right: Sequence[float]) -> list[float]:
    product = [0.0] * (len(left) + len(right) - 1)
    for shift, weight in enumerate(right):
        for place, value in enumerate(left, shift):
            product[place] += weight * value
    return product
