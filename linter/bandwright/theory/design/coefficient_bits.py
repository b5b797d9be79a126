"""The coefficient word that a recursive filter needs, found by rounding.

The response of a rounded filter is never computed from its coefficients: at the depth of a narrow filter of high
order doubles can't hold them. A factor F of the transfer function (a section's numerator or denominator, or the
whole of them in a direct form) is evaluated from its roots, which doubles do to full precision, and the error e_k
of each coefficient adds e_k z^-k to it. So words far beyond 53 bits need no high precision: only the errors of
plain rounding do, and those come from integers.
"""

from __future__ import annotations

import hashlib
import math
from bisect import bisect_left
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import zip_longest
from typing import Literal

import numpy as np
import numpy.typing as npt

from bandwright.limits import MAX_SEARCHED_WORD_BITS
from bandwright.theory.closed_form.types import Design, Mask, MaskBand, Root

Floats = npt.NDArray[np.float64]
Complexes = npt.NDArray[np.complex128]
Verdicts = npt.NDArray[np.bool_]

DIRECT_FORMS = ("direct-form-1", "direct-form-2", "direct-form-1-transposed", "direct-form-2-transposed")
STRUCTURES = (*DIRECT_FORMS, "cascade")

LEAST_BITS = 2
TRIALS = 100
TRIALS_TO_PASS = 90

_POINT = 512
"""Bits after the point of the integers that stand for exact coefficients."""
_PER_DB = math.log(10.0) / 10.0


def required_bits(
    design: Design, mask: Mask, structure: str, number_format: Literal["floating", "fixed"]
) -> int | None:
    """The least word (`fixed`, sign included) or mantissa (`floating`) that does, as every longer one does.

    A word does if 90 of 100 sets of independent errors, uniform over one step of each coefficient, keep the mask
    and stay stable, and if rounding to nearest does so too. The sets follow from the mask, the order, the number
    format and from whether the structure is a direct form; from word to word only their scale changes. The gain is
    free where all levels of the mask are relative.

    Steps: in `fixed`, a1..an of a direct form share the least power of two above them all; so do b0..bn, once the
    highest gain of the pass bands is scaled to 1; coefficients of sections lie within -2..2. In `floating` each
    coefficient has its own step. 0, +-1 and +-2 are exact. Rounding keeps the symmetry of a numerator whose zeros
    lie on the unit circle.

    None where the design itself breaks the mask, or where the longest word that `limits` allows doesn't do. Raises
    ValueError for a structure that is not in STRUCTURES.
    """
    if structure not in STRUCTURES:
        raise ValueError(f"the coefficient bits of the structure {structure} can't be found by rounding")
    direct = structure in DIRECT_FORMS
    w = _frequencies(design, mask)
    gains = np.exp(_log_gain(design, w))
    peak = max(
        (float(gains[_inside(band, w)].max()) for band in mask.bands if band.kind == "pass"),
        default=float(gains.max()),
    )
    factors, gain = _factors(design, peak, direct, number_format == "fixed")
    grid = _sampled(factors, gain, w)
    errors = _draws(factors, f"{mask!r} {design.order} {direct} {number_format}")

    def certain(bits: int) -> bool:
        """No error of one step can do harm: even a value that saturates is off by no more."""
        return _certain(grid, mask, 2.0**-bits)

    if not _certain(grid, mask, 0.0):
        return None
    words = range(LEAST_BITS, MAX_SEARCHED_WORD_BITS + 1)
    found = None
    for bits in reversed(words[: bisect_left(words, True, key=certain) + 1]):
        scaled = [2.0**-bits * error for error in errors]
        if _passes(grid, mask, scaled).sum() < TRIALS_TO_PASS or not _rounds_well(grid, mask, bits):
            break
        found = bits
    return found


@dataclass(frozen=True, slots=True)
class _Factor:
    """A polynomial in 1/z whose coefficients are rounded: gain times the product of (1 - root/z)."""

    roots: tuple[Root, ...]
    feedback: bool
    """It stands in the denominator."""
    gain: float
    exact: tuple[int, ...]
    """The coefficients, in units of 2^-point."""
    point: int
    exponents: tuple[int | None, ...]
    """The step of a word of 0 bits is 2 to this; None for a coefficient that is exact."""
    saturates: bool
    mirror: int
    """c[n-k] = mirror * c[k] before and after rounding; 0 where nothing ties them."""


@dataclass(frozen=True, slots=True)
class _Sampled:
    """The factors of a transfer function at frequencies w, and what a constant gain adds."""

    w: Floats
    factors: tuple[_Factor, ...]
    gain: float
    values: tuple[Complexes, ...]
    phasors: Complexes
    """z^-k, a column for each k."""


def _sampled(factors: Sequence[_Factor], gain: float, w: Floats) -> _Sampled:
    longest = max(len(factor.exact) for factor in factors)
    phasors = np.exp(-1j * np.outer(w, np.arange(longest)))
    values = tuple(factor.gain * _from_roots(factor.roots, w) for factor in factors)
    return _Sampled(w, tuple(factors), gain, values, phasors)


def _passes(grid: _Sampled, mask: Mask, errors: Sequence[Floats]) -> Verdicts:
    """Which columns of errors keep the mask and a stable filter."""
    power, steady = _power(grid, errors)
    passed = _keeps(mask, grid.w, power, power)
    for trial in np.flatnonzero(passed & ~steady):
        passed[trial] = all(
            _stays_stable(factor, grid.w, error[:, trial])
            for factor, error in zip(grid.factors, errors, strict=True)
            if factor.feedback
        )
    return passed


def _rounds_well(grid: _Sampled, mask: Mask, bits: int) -> bool:
    """Whether rounding to nearest keeps the mask, looked at where the rounded response has its own extremes too."""
    errors = [_rounding_errors(factor, bits)[:, None] for factor in grid.factors]

    def level(w: Floats) -> Floats:
        return np.log(_power(_sampled(grid.factors, grid.gain, w), errors)[0][:, 0])

    if not _passes(grid, mask, errors)[0]:
        return False
    fine = _sampled(grid.factors, grid.gain, _with_extremes(grid.w, level))
    return bool(_passes(fine, mask, errors)[0])


def _power(grid: _Sampled, errors: Sequence[Floats]) -> tuple[Floats, Verdicts]:
    """|H|^2 at each frequency and trial; and the trials where no denominator can have gained a zero outside.

    By Rouche's theorem that is so where the error of a denominator stays below its value all around the circle.
    """
    trials = errors[0].shape[1]
    power = np.full((len(grid.w), trials), grid.gain**2)
    steady = np.ones(trials, dtype=bool)
    with np.errstate(all="ignore"):  # what over- or underflows fails the mask
        for factor, value, error in zip(grid.factors, grid.values, errors, strict=True):
            change = grid.phasors[:, : len(error)] @ error
            size = _squared(change + value[:, None])
            if factor.feedback:
                power /= size
                steady &= (_squared(change) < _squared(value)[:, None]).all(axis=0)
            else:
                power *= size
    return power, steady


def _certain(grid: _Sampled, mask: Mask, scale: float) -> bool:
    """Whether no errors within `scale` steps (of a word of 0 bits) can break the mask or make a pole cross."""
    low = np.full(len(grid.w), grid.gain)
    high = low.copy()
    for factor, value in zip(grid.factors, grid.values, strict=True):
        reach = scale * sum(2.0**exponent for exponent in factor.exponents if exponent is not None)
        size = np.abs(value)
        if not factor.feedback:
            low *= np.maximum(size - reach, 0.0)
            high *= size + reach
        elif (size <= reach).any():
            return False
        else:
            low /= size + reach
            high /= size - reach
    return bool(_keeps(mask, grid.w, low[:, None] ** 2, high[:, None] ** 2)[0])


def _keeps(mask: Mask, w: Floats, low: Floats, high: Floats) -> Verdicts:
    """Whether |H|^2 (a row for each frequency, a column for each trial) keeps the mask wherever it lies in low..high.

    A relative pass band needs a window that holds its levels and 0 dB once the gain is set.
    """
    good: Verdicts = (np.isfinite(low) & np.isfinite(high)).all(axis=0)
    inside = [_inside(band, w) for band in mask.bands]
    tops = [high[rows].max(axis=0) for rows in inside]
    bottoms = [low[rows].min(axis=0) for rows in inside]
    passes = [
        low[rows].max(axis=0) for band, rows in zip(mask.bands, inside, strict=True) if band.kind == "pass"
    ]
    gain_is_free = bool(passes) and all(band.relative for band in mask.bands)
    least_gain = np.zeros(good.shape) if gain_is_free else np.ones(good.shape)
    most_gain = np.full(good.shape, np.inf) if gain_is_free else np.ones(good.shape)
    with np.errstate(all="ignore"):
        for band, top, bottom in zip(mask.bands, tops, bottoms, strict=True):
            if band.kind == "pass" and band.relative and band.most is not None and band.least is not None:
                window = math.exp((band.most - band.least) * _PER_DB)
                good &= top <= window * bottom
                least_gain = np.maximum(least_gain, 1.0 / (window * bottom))
                most_gain = np.minimum(most_gain, window / top)
                continue
            highest = np.max(passes, axis=0) if band.relative and passes else 1.0
            if band.most is not None:
                good &= top <= math.exp(band.most * _PER_DB) * highest
            if band.least is not None:
                good &= bottom >= math.exp(band.least * _PER_DB)
        good &= least_gain <= most_gain
    return good


def _stays_stable(factor: _Factor, w: Floats, error: Floats) -> bool:
    """Whether 1 + error / F winds around 0 no time, so that as many roots as before lie inside the circle.

    Steps of its angle over 1 rad are halved; a pole so near the circle that 30 halvings don't suffice is unstable.
    """
    lags = np.arange(len(error))

    def ratio(w: Floats) -> Complexes:
        value = factor.gain * _from_roots(factor.roots, w)
        moved: Complexes = 1.0 + np.exp(-1j * np.outer(w, lags)) @ error / value
        return moved

    at = ratio(w)
    for _ in range(30):
        turns = np.angle(at[1:] / at[:-1])
        wide = np.flatnonzero(np.abs(turns) > 1.0)
        if not len(wide):
            return abs(float(turns.sum())) < 1.0
        middles = (w[wide] + w[wide + 1]) / 2.0
        w, at = np.insert(w, wide + 1, middles), np.insert(at, wide + 1, ratio(middles))
    return False


def _factors(design: Design, peak: float, direct: bool, fixed: bool) -> tuple[list[_Factor], float]:
    """What is rounded, poles and zeros by turns, and the gain that is left beside it."""
    gain = math.exp(design.log_gain)
    if direct:
        return [
            _factor(design.poles, True, 1.0, fixed, None),
            _factor(design.zeros, False, gain / peak, fixed, None),
        ], peak
    poles = [_factor(roots, True, 1.0, fixed, 1) for roots in _pairs(design.poles)]
    zeros = [_factor(roots, False, 1.0, fixed, 1) for roots in _pairs(design.zeros)]
    return [factor for both in zip_longest(poles, zeros) for factor in both if factor is not None], gain


def _pairs(roots: Sequence[Root]) -> list[tuple[Root, ...]]:
    """Roots for sections of second order; real ones two by two, those nearest the circle together."""
    real = sorted((root for root in roots if not root.pair), key=lambda root: root.gap)
    return [(root,) for root in roots if root.pair] + [tuple(real[k : k + 2]) for k in range(0, len(real), 2)]


def _factor(roots: Sequence[Root], feedback: bool, gain: float, fixed: bool, exponent: int | None) -> _Factor:
    """`exponent`: of the power of two that bounds the coefficients in fixed point; None: the least that does."""
    mantissa, power = math.frexp(gain)
    point = _POINT + 53 - power
    exact = [int(math.ldexp(mantissa, 53)) * value for value in _expanded(roots)]
    one = 1 << point
    free = [abs(value) not in (0, one, 2 * one) for value in exact]
    free[0] = free[0] and not feedback
    exponents = [math.frexp(value / one)[1] for value in exact]
    if fixed:
        if exponent is None:
            exponent = max((e for e, rounded in zip(exponents, free, strict=True) if rounded), default=0)
        exponents = [exponent + 1] * len(exact)
    mirror = 0
    if not feedback and all(root.gap == 0.0 for root in roots):
        mirror = -1 if sum(not root.pair and root.angle == 0.0 for root in roots) % 2 else 1
    return _Factor(
        tuple(roots),
        feedback,
        gain,
        tuple(exact),
        point,
        tuple(e if rounded else None for e, rounded in zip(exponents, free, strict=True)),
        fixed,
        mirror,
    )


def _expanded(roots: Sequence[Root]) -> list[int]:
    """The product of (1 - root/z), in units of 2^-_POINT; what only rounding keeps from 0 is 0."""
    product, sizes = [1 << _POINT], [1 << _POINT]
    for root in roots:
        factor = _polynomial(root)
        product = _times(product, factor)
        sizes = _times(sizes, [abs(value) for value in factor])
    return [0 if abs(value) < size >> 50 else value for value, size in zip(product, sizes, strict=True)]


def _times(left: Sequence[int], right: Sequence[int]) -> list[int]:
    product = [0] * (len(left) + len(right) - 1)
    for shift, weight in enumerate(right):
        for k, value in enumerate(left, shift):
            product[k] += weight * value
    return [value >> _POINT for value in product]


def _polynomial(root: Root) -> list[int]:
    """1 - z/z' or (1 - z/z')(1 - z*/z') in units of 2^-_POINT, true to the root's angle from 0 or pi and to its gap."""
    one = 1 << _POINT
    shrunk = one - _integer(root.gap)
    radius = math.isqrt(shrunk << _POINT)
    if not root.pair:
        return [one, radius if root.angle > 1.0 else -radius]
    right = root.angle <= math.pi / 2.0
    half = _integer(math.sin(root.angle / 2.0) if right else math.cos(root.angle / 2.0))
    from_axis = half * half >> (_POINT - 1)
    cosine = one - from_axis if right else from_axis - one
    return [one, -2 * radius * cosine >> _POINT, shrunk]


def _integer(value: float) -> int:
    top, bottom = value.as_integer_ratio()
    return (top << _POINT) // bottom


def _rounding_errors(factor: _Factor, bits: int) -> Floats:
    """Rounded less exact coefficients, for a word of this length."""
    errors = np.zeros(len(factor.exact))
    half = (len(factor.exact) + 1) // 2 if factor.mirror else len(factor.exact)
    for k, (value, exponent) in enumerate(zip(factor.exact[:half], factor.exponents, strict=False)):
        shift = 0 if exponent is None else factor.point + exponent - bits
        if shift <= 0:
            continue
        steps = (value + (1 << (shift - 1))) >> shift
        if factor.saturates:
            steps = min(steps, (1 << (bits - 1)) - 1)
        errors[k] = ((steps << shift) - value) / (1 << factor.point)
        if factor.mirror:
            errors[-1 - k] = factor.mirror * errors[k]
    return errors


def _draws(factors: Sequence[_Factor], question: str) -> list[Floats]:
    """A column of errors for each trial, uniform over one step of a word of 0 bits, seeded by the question."""
    seed = int.from_bytes(hashlib.sha256(question.encode()).digest()[:8], "big")
    source = np.random.PCG64(seed)  # the raw stream is fixed for good, other than a Generator's
    draws = []
    for factor in factors:
        length = len(factor.exact)
        steps = np.array([0.0 if exponent is None else 2.0**exponent for exponent in factor.exponents])
        raw = source.random_raw(length * TRIALS).reshape(length, TRIALS)
        errors = ((raw >> np.uint64(11)) * 2.0**-53 - 0.5) * steps[:, None]
        if factor.mirror:
            errors[-(length // 2) :] = factor.mirror * errors[: length // 2][::-1]
        if factor.mirror == -1 and length % 2:
            errors[length // 2] = 0.0
        draws.append(errors)
    return draws


def _frequencies(design: Design, mask: Mask) -> Floats:
    """0..pi, dense where the response bends: around poles by their distance, between zeros and edges, at extremes."""
    edges = {0.0, math.pi, *(edge for band in mask.bands for edge in (band.low, band.high))}
    nodes = sorted(edges | {root.angle for root in design.zeros})
    pieces = [np.linspace(a, b, 9) for a, b in zip(nodes, nodes[1:], strict=False)]
    if design.poles:
        angles = np.array([root.angle for root in design.poles])
        depths = np.array([root.gap / 2.0 for root in design.poles])
        reach = np.arange(-80, 81) / 4.0  # asinh of the distance in depths: no pole is that near the circle
        around = np.unique(angles[:, None] + depths[:, None] * np.sinh(reach))
        around = around[(around > 0.0) & (around < math.pi)]
        scale = np.hypot(around[:, None] - angles, depths).min(axis=1)
        steps = np.cumsum(np.diff(around, prepend=0.0) / (0.18 * scale))
        pieces.append(around[np.diff(np.floor(steps), prepend=-1.0) > 0.0])
    w: Floats = np.unique(np.concatenate(pieces))
    return _with_extremes(w, lambda w: _log_gain(design, w))


def _with_extremes(w: Floats, level: Callable[[Floats], Floats]) -> Floats:
    """Frequencies and the extremes of a level between them, by two rounds of parabolas through three neighbours."""
    for _ in range(2):
        y = level(w)
        with np.errstate(all="ignore"):  # a level of -inf is a zero, not an extreme that matters
            left, right = np.diff(y)[:-1], np.diff(y)[1:]
            before, after = np.diff(w)[:-1], np.diff(w)[1:]
            bend = right / after - left / before
            vertex = w[1:-1] - (left / before * after + right / after * before) / (2.0 * bend)
            turning = (left * right <= 0.0) & (bend != 0.0) & (w[:-2] < vertex) & (vertex < w[2:])
        w = np.unique(np.concatenate([w, vertex[turning]]))
    return w


def _log_gain(design: Design, w: Floats) -> Floats:
    with np.errstate(divide="ignore"):
        total = np.full(w.shape, design.log_gain)
        for root in design.zeros:
            total += np.log(np.abs(_from_roots([root], w)))
        for root in design.poles:
            total -= np.log(np.abs(_from_roots([root], w)))
    return total


def _from_roots(roots: Sequence[Root], w: Floats) -> Complexes:
    """The product of (1 - root/z) at z = e^jw; no factor loses digits, however near its root."""
    value = np.ones(w.shape, dtype=np.complex128)
    for root in roots:
        radius = math.sqrt(1.0 - root.gap)
        from_circle = root.gap / (1.0 + radius)
        for angle in (root.angle, -root.angle) if root.pair else (root.angle,):
            half = np.sin((angle - w) / 2.0)
            value *= from_circle + 2.0 * radius * half**2 - 1j * radius * np.sin(angle - w)
    return value


def _inside(band: MaskBand, w: Floats) -> slice:
    return slice(int(np.searchsorted(w, band.low)), int(np.searchsorted(w, band.high, side="right")))


def _squared(value: Complexes) -> Floats:
    squared: Floats = value.real**2 + value.imag**2
    return squared
