"""The coefficient word that a recursive filter needs, found by rounding.

The response of a rounded filter is never computed from its coefficients: at the depth of a narrow filter
of high order doubles can't hold them. A factor F of the transfer function (numerator or denominator of a
section, or the whole of them in a direct form) is evaluated from its roots, which doubles do to full
precision, and the error e_k of each coefficient adds e_k z^-k to it. So words far beyond 53 bits need no
high precision: only the errors of plain rounding do, and those come from integers.
"""

from __future__ import annotations

import hashlib
import math
from bisect import bisect_left
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise, zip_longest
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

    A word does if 90 of 100 sets of independent errors, uniform over one step of each coefficient, keep
    the mask and the filter stable, and if rounding to nearest does so too. The sets follow from the mask,
    the order, the number format and from whether the structure is a direct form; from word to word only
    their scale changes. The gain is free where all levels of the mask are relative.

    Steps: in `fixed`, a1..an of a direct form share the least power of two above them all; so do b0..bn,
    once the highest gain of the pass bands is scaled to 1; coefficients of sections lie within -2..2. In
    `floating` each coefficient has its own step. 0, +-1 and +-2 are exact. Rounding keeps the symmetry of
    a numerator whose zeros lie on the unit circle.

    None where the design itself breaks the mask, or where the longest word that the limits allow doesn't do.
    Raises ValueError for a structure that is not in STRUCTURES.
    """
    if structure not in STRUCTURES:
        raise ValueError(f"the coefficient bits of the structure {structure} can't be found by rounding")
    direct = structure in DIRECT_FORMS
    w = _frequencies(design, mask)
    factors, log_gain = _factors(design, _highest_level(design, mask, w), direct, number_format == "fixed")
    grid = _sampled(factors, log_gain, w)
    errors = _draws(factors, f"{mask!r} {design.order} {direct} {number_format}")

    def certain(bits: int) -> bool:
        """No error of a whole step does harm, so that not even a value that saturates can."""
        return _certain(grid, mask, 2.0**-bits)

    if not _certain(grid, mask, 0.0):
        return None
    words = range(LEAST_BITS, MAX_SEARCHED_WORD_BITS + 1)
    found = None
    for bits in reversed(words[: bisect_left(words, True, key=certain) + 1]):
        passed = _passes(grid, mask, [2.0**-bits * error for error in errors])
        if passed.sum() < TRIALS_TO_PASS or not _rounds_well(grid, mask, bits):
            break
        found = bits
    return found


def is_stable_when_rounded(
    design: Design, mask: Mask, structure: str, number_format: Literal["floating", "fixed"], bits: int
) -> bool:
    """Whether the filter is stable with its coefficients rounded to nearest, in the word of `required_bits`.

    Raises ValueError for a structure that is not in STRUCTURES.
    """
    if structure not in STRUCTURES:
        raise ValueError(f"the stability of the structure {structure} can't be found by rounding")
    w = _frequencies(design, mask)
    peak = _highest_level(design, mask, w)
    factors, _ = _factors(design, peak, structure in DIRECT_FORMS, number_format == "fixed")
    return all(
        _stays_stable(factor, w, _rounding_errors(factor, bits)) for factor in factors if factor.feedback
    )


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
    """The factors of a transfer function at frequencies w, and the gain that stands beside them."""

    w: Floats
    factors: tuple[_Factor, ...]
    log_gain: float
    values: tuple[Floats, ...]
    """Real and imaginary part of each factor, 2 x frequencies."""
    phasors: Floats
    """Real and imaginary part of z^-k, 2 x frequencies x powers."""


def _sampled(factors: Sequence[_Factor], log_gain: float, w: Floats) -> _Sampled:
    angles = np.outer(w, np.arange(max(len(factor.exact) for factor in factors)))
    values = (factor.gain * _from_roots(factor.roots, w) for factor in factors)
    return _Sampled(
        w,
        tuple(factors),
        log_gain,
        tuple(np.stack((value.real, value.imag)) for value in values),
        np.stack((np.cos(angles), -np.sin(angles))),
    )


def _passes(grid: _Sampled, mask: Mask, errors: Sequence[Floats]) -> Verdicts:
    """Which columns of errors keep the mask and the filter stable."""
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
    """Whether rounding to nearest keeps the mask, the extremes of the rounded response included."""
    errors = [_rounding_errors(factor, bits)[:, None] for factor in grid.factors]

    def level(w: Floats) -> Floats:
        power, _ = _power(_sampled(grid.factors, grid.log_gain, w), errors)
        return _log(power[:, 0])

    if not _passes(grid, mask, errors)[0]:
        return False
    fine = _sampled(grid.factors, grid.log_gain, _with_extremes(grid.w, level))
    return bool(_passes(fine, mask, errors)[0])


def _power(grid: _Sampled, errors: Sequence[Floats]) -> tuple[Floats, Verdicts]:
    """|H|^2 at each frequency for each column of errors, and the columns that can't have made a pole cross.

    By Rouche's theorem those are where the error of each denominator stays below its value around the circle.
    """
    columns = errors[0].shape[1]
    power = np.ones((len(grid.w), columns))
    steady = np.ones(columns, dtype=bool)
    share = math.exp(2.0 * grid.log_gain / len(grid.factors))  # bit by bit, so that nothing underflows
    with np.errstate(all="ignore"):  # what still does fails the mask
        for factor, value, error in zip(grid.factors, grid.values, errors, strict=True):
            # einsum: a matrix product would spend longer on waking its threads than on the sums
            change = np.einsum("pwk,kt->pwt", grid.phasors[:, :, : len(error)], error)
            size = _squared(change + value[:, :, None])
            if factor.feedback:
                power *= share / size
                steady &= (_squared(change) < _squared(value)[:, None]).all(axis=0)
            else:
                power *= share * size
    return power, steady


def _certain(grid: _Sampled, mask: Mask, scale: float) -> bool:
    """Whether no errors within `scale` steps of a word of 0 bits can break the mask or make a pole cross."""
    low, high = np.ones(len(grid.w)), np.ones(len(grid.w))
    share = math.exp(grid.log_gain / len(grid.factors))
    for factor, value in zip(grid.factors, grid.values, strict=True):
        reach = scale * sum(2.0**exponent for exponent in factor.exponents if exponent is not None)
        size = np.sqrt(_squared(value))
        if not factor.feedback:
            low *= share * np.maximum(size - reach, 0.0)
            high *= share * (size + reach)
        elif (size <= reach).any():
            return False
        else:
            low *= share / (size + reach)
            high *= share / (size - reach)
    return bool(_keeps(mask, grid.w, low[:, None] ** 2, high[:, None] ** 2)[0])


def _keeps(mask: Mask, w: Floats, low: Floats, high: Floats) -> Verdicts:
    """Whether |H|^2 in low..high keeps the mask: a row for each frequency, a column for each case.

    A relative pass band asks for a window that holds its levels, and 0 dB once the gain is set.
    """
    inside = [_inside(band, w) for band in mask.bands]
    tops = [high[rows].max(axis=0) for rows in inside]
    bottoms = [low[rows].min(axis=0) for rows in inside]
    passing = [rows for band, rows in zip(mask.bands, inside, strict=True) if band.kind == "pass"]
    highest = np.max([low[rows].max(axis=0) for rows in passing], axis=0) if passing else None
    gain_is_free = highest is not None and all(band.relative for band in mask.bands)
    kept: Verdicts = np.logical_and.reduce(np.isfinite(low) & np.isfinite(high), axis=0)
    least_gain = np.full(kept.shape, 0.0 if gain_is_free else 1.0)
    most_gain = np.full(kept.shape, np.inf if gain_is_free else 1.0)
    with np.errstate(all="ignore"):
        for band, top, bottom in zip(mask.bands, tops, bottoms, strict=True):
            if band.kind == "pass" and band.relative and band.most is not None and band.least is not None:
                window = math.exp((band.most - band.least) * _PER_DB)
                kept = kept & (top <= window * bottom)
                least_gain = np.maximum(least_gain, 1.0 / (window * bottom))
                most_gain = np.minimum(most_gain, window / top)
                continue
            reference = highest if band.relative and highest is not None else 1.0
            if band.most is not None:
                kept = kept & (top <= math.exp(band.most * _PER_DB) * reference)
            if band.least is not None:
                kept = kept & (bottom >= math.exp(band.least * _PER_DB))
        return kept & (least_gain <= most_gain)


def _stays_stable(factor: _Factor, w: Floats, error: Floats) -> bool:
    """Whether 1 + error / F winds around 0 no time, so that as many roots as before lie inside the circle.

    Steps of its angle over 1 rad are halved; a pole so near the circle that 30 halvings don't do is unstable.
    """
    lags = np.arange(len(error))

    def ratio(w: Floats) -> Complexes:
        moved: Complexes = (np.exp(-1j * np.outer(w, lags)) * error).sum(axis=1)
        moved /= factor.gain * _from_roots(factor.roots, w)
        return 1.0 + moved

    values = ratio(w)
    for _ in range(30):
        turns = np.angle(values[1:] / values[:-1])
        wide = np.flatnonzero(np.abs(turns) > 1.0)
        if not len(wide):
            return abs(float(turns.sum())) < 1.0
        middles = (w[wide] + w[wide + 1]) / 2.0
        w, values = np.insert(w, wide + 1, middles), np.insert(values, wide + 1, ratio(middles))
    return False


def _factors(design: Design, peak: float, direct: bool, fixed: bool) -> tuple[list[_Factor], float]:
    """What is rounded, by turns poles and zeros, and ln of the gain beside it. `peak`: greatest ln|H|."""
    if direct:
        numerator = _factor(design.zeros, False, math.exp(design.log_gain - peak), fixed, None)
        return [_factor(design.poles, True, 1.0, fixed, None), numerator], peak
    poles = [_factor(roots, True, 1.0, fixed, 1) for roots in _pairs(design.poles)]
    zeros = [_factor(roots, False, 1.0, fixed, 1) for roots in _pairs(design.zeros)]
    by_turns = [factor for both in zip_longest(poles, zeros) for factor in both if factor is not None]
    return by_turns, design.log_gain


def _pairs(roots: Sequence[Root]) -> list[tuple[Root, ...]]:
    """Roots for sections of second order; real ones two by two, those nearest the circle together."""
    real = sorted((root for root in roots if not root.pair), key=lambda root: root.gap)
    return [(root,) for root in roots if root.pair] + [tuple(real[k : k + 2]) for k in range(0, len(real), 2)]


def _factor(roots: Sequence[Root], feedback: bool, gain: float, fixed: bool, exponent: int | None) -> _Factor:
    """`exponent`: of the power of two that bounds fixed-point coefficients; None: the least that does."""
    mantissa, power = math.frexp(gain)
    exact = [int(math.ldexp(mantissa, 53)) * value for value in _expanded(roots)]
    point = _POINT + 53 - power
    one = 1 << point
    rounded = [
        abs(value) not in (0, one, 2 * one) and not (feedback and k == 0) for k, value in enumerate(exact)
    ]
    own = [math.frexp(value / one)[1] for value in exact]
    if fixed and exponent is None:
        exponent = max((e for e, is_rounded in zip(own, rounded, strict=True) if is_rounded), default=0)
    mirror = 0
    if not feedback and all(root.gap == 0.0 for root in roots):
        mirror = -1 if sum(not root.pair and root.angle == 0.0 for root in roots) % 2 else 1
    return _Factor(
        roots=tuple(roots),
        feedback=feedback,
        gain=gain,
        exact=tuple(exact),
        point=point,
        exponents=tuple(
            None if not is_rounded else exponent + 1 if fixed and exponent is not None else e
            for e, is_rounded in zip(own, rounded, strict=True)
        ),
        saturates=fixed,
        mirror=mirror,
    )


def _expanded(roots: Sequence[Root]) -> list[int]:
    """The product of (1 - root/z) in units of 2^-_POINT; what only the roots' last digits keep from 0 is
    0."""
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
    """1 - root/z, times its conjugate for a pair, in units of 2^-_POINT.

    As true to the distances of the root from the circle and from the real axis as the root itself.
    """
    one = 1 << _POINT
    squared = one - _integer(root.gap)
    radius = math.isqrt(squared << _POINT)
    if not root.pair:
        return [one, -radius if root.angle == 0.0 else radius]
    right = root.angle <= math.pi / 2.0
    half = _integer(math.sin(root.angle / 2.0) if right else math.cos(root.angle / 2.0))
    from_axis = half * half >> (_POINT - 1)
    cosine = one - from_axis if right else from_axis - one
    return [one, -2 * radius * cosine >> _POINT, squared]


def _integer(value: float) -> int:
    numerator, denominator = value.as_integer_ratio()
    return (numerator << _POINT) // denominator


def _rounding_errors(factor: _Factor, bits: int) -> Floats:
    """Rounded less exact coefficients, for a word of this length."""
    errors = np.zeros(len(factor.exact))
    tied = (len(factor.exact) + 1) // 2 if factor.mirror else len(factor.exact)
    for k, (value, exponent) in enumerate(zip(factor.exact[:tied], factor.exponents, strict=False)):
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
    """A column of errors for each trial, uniform over a step of a word of 0 bits, seeded by the question."""
    seed = int.from_bytes(hashlib.sha256(question.encode()).digest()[:8], "big")
    source = np.random.PCG64(
        seed
    )  # whose raw numbers are the same in every version; a Generator's need not be
    draws = []
    for factor in factors:
        length = len(factor.exact)
        steps = np.array([0.0 if exponent is None else 2.0**exponent for exponent in factor.exponents])
        raw = source.random_raw(length * TRIALS).reshape(length, TRIALS)
        errors = ((raw >> np.uint64(11)) * 2.0**-53 - 0.5) * steps[:, None]
        if factor.mirror:
            errors[(length + 1) // 2 :] = factor.mirror * errors[: length // 2][::-1]
        if factor.mirror == -1 and length % 2:
            errors[length // 2] = 0.0
        draws.append(errors)
    return draws


def _frequencies(design: Design, mask: Mask) -> Floats:
    """0..pi, dense where |H| bends: by the distance from poles, between zeros and edges, at its extremes."""
    edges = {0.0, math.pi, *(edge for band in mask.bands for edge in (band.low, band.high))}
    nodes = sorted(edges | {root.angle for root in design.zeros})
    pieces = [np.linspace(left, right, 9) for left, right in pairwise(nodes)]
    if design.poles:
        angles = np.array([root.angle for root in design.poles])
        depths = np.array([root.gap / 2.0 for root in design.poles])
        reach = np.sinh(np.arange(-80, 81) / 4.0)  # to 2e8 depths: 0..pi for any pole that doubles can place
        around = np.unique(angles[:, None] + depths[:, None] * reach)
        around = around[(around > 0.0) & (around < math.pi)]
        scale = np.hypot(around[:, None] - angles, depths).min(axis=1)
        steps = np.floor(np.cumsum(np.diff(around, prepend=0.0) / (0.18 * scale)))
        pieces.append(around[np.diff(steps, prepend=-1.0) > 0.0])
    return _with_extremes(np.unique(np.concatenate(pieces)), lambda w: _log_gain(design, w))


def _with_extremes(w: Floats, level: Callable[[Floats], Floats]) -> Floats:
    """The frequencies and the extremes of a level between them, by two rounds of parabolas."""
    for _ in range(2):
        y = level(w)
        with np.errstate(all="ignore"):  # a level of -inf is a zero, whose vertex is no number
            width = np.diff(w)
            slope = np.diff(y) / width
            bend = np.diff(slope) / (w[2:] - w[:-2])
            vertex = (w[:-2] + w[1:-1] - slope[:-1] / bend) / 2.0
            turning = (slope[:-1] * slope[1:] <= 0.0) & (w[:-2] < vertex) & (vertex < w[2:])
        w = np.unique(np.concatenate([w, vertex[turning]]))
    return w


def _highest_level(design: Design, mask: Mask, w: Floats) -> float:
    """The greatest ln|H| of the pass bands; of the whole axis where none passes."""
    level = _log_gain(design, w)
    passing = [level[_inside(band, w)].max() for band in mask.bands if band.kind == "pass"]
    return float(max(passing, default=level.max()))


def _log_gain(design: Design, w: Floats) -> Floats:
    """ln|H|"""
    total = np.full(w.shape, design.log_gain)
    for root in design.zeros:
        total += _log(np.abs(_from_roots([root], w)))
    for root in design.poles:
        total -= _log(np.abs(_from_roots([root], w)))
    return total


def _from_roots(roots: Sequence[Root], w: Floats) -> Complexes:
    """The product of (1 - root/z) at z = e^jw. No factor loses digits, however near its root."""
    value = np.ones(w.shape, dtype=np.complex128)
    for root in roots:
        radius = math.sqrt(1.0 - root.gap)
        from_circle = root.gap / (1.0 + radius)
        for angle in (root.angle, -root.angle) if root.pair else (root.angle,):
            real = from_circle + 2.0 * radius * np.sin((angle - w) / 2.0) ** 2
            value *= real - 1j * radius * np.sin(angle - w)
    return value


def _inside(band: MaskBand, w: Floats) -> slice:
    return slice(int(np.searchsorted(w, band.low)), int(np.searchsorted(w, band.high, side="right")))


def _squared(parts: Floats) -> Floats:
    squared: Floats = parts[0] ** 2 + parts[1] ** 2
    return squared


def _log(values: Floats) -> Floats:
    with np.errstate(divide="ignore"):
        return np.log(values)
