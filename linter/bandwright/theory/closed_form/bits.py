"""How many bits the coefficients of a filter need, predicted before any of them is rounded.

For recursive filters the figure is the least word (sign included) or mantissa at which nine of ten
roundings keep the mask and the filter stable. Rounding errors e_k count as independent and uniform over
one step (Knowles, Olcayto 1968; Avenhaus 1972; Crochiere, Oppenheim 1975: from memory) and change the
response to first order by

    d ln|H|(w) = sum_k Re(e_k z^-k / B) - sum_k Re(e_k z^-k / A),      z = e^jw.

A pass band asks for the change between two frequencies, so its variance is taken over the errors that both
share: in a narrow band they nearly cancel. A condition with deviation s 2^-bits and margin m needs
log2(s / m) + ODDS bits. All of it comes from poles and zeros, never from expanded polynomials, which doubles
can't hold, and is evaluated over v = sin^2(w/2), in which ln|H| is smooth at both ends of the axis.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from itertools import pairwise
from typing import Literal, NamedTuple

from bandwright import limits
from bandwright.theory.closed_form import fir_length, polynomials
from bandwright.theory.closed_form.types import Design, Mask, MaskBand, Root

NumberFormat = Literal["fixed", "floating"]

LEAST_BITS = 2

ODDS = 0.63
"""Bits from a deviation as large as the margin to nine successes in ten; fitted, as the two below are."""

BELOW = 1.0
"""Bits by which the true figure may lie below the prediction before it is rounded up."""

ABOVE = 2.7
"""And above it: plain rounding may do worse than nine random roundings in ten."""

NO_MARGIN = 1e-5
"""A margin below this share of its window is none: the last digits of the design decide."""

FIR_ODDS = {"fixed": 1.0, "floating": 0.3}
"""ODDS, BELOW and ABOVE for taps: the least word of a single filter is luck, as few taps decide."""
FIR_BELOW = {"fixed": 3.5, "floating": 4.5}
FIR_ABOVE = {"fixed": 2.6, "floating": 3.0}

_NEPERS = math.log(10.0) / 20.0
_LN_4 = math.log(4.0)
_SMOOTH = 0.1
"""Share of its window by which a cubic may miss ln|H| before an interval is halved."""
_HALVINGS = 24
_LOST = 1e-13
"""A coefficient below this share of the greatest is 0, or is lost without harm."""


@dataclass(frozen=True, slots=True)
class Prediction:
    """Bits that a coefficient needs: a word with its sign if `fixed`, significant bits if `floating`."""

    value: int
    low: int
    high: float
    """The true figure lies within `low`..`high`; infinite where the design may have no margin in the mask."""
    real: float
    """The figure before it is rounded up."""


@dataclass(frozen=True, slots=True)
class Scatter:
    """How far the members of a multiple zero come to lie from it when the expanded numerator is rounded."""

    angle: float
    """rad/sample"""
    multiplicity: int
    distance: float
    """In the z plane."""


def direct_form_bits(design: Design, mask: Mask, number_format: NumberFormat) -> Prediction | None:
    """Bits for the coefficients of a direct form: I or II, transposed or not, they are the same.

    `fixed`: a1..an share the least power of two above them all; so do b0..bn, once the highest gain of
    the pass bands is scaled to 1. None where the design itself breaks the mask. Raises ValueError where a
    zero lies off the unit circle, and ArithmeticError where figures leave the range of double precision.
    """
    survey = _survey(design, mask)
    gain = math.exp(design.log_gain - survey.peak)
    numerator = [gain * value for value in polynomials.expanded(survey.design.zeros)]
    a_steps = _steps(polynomials.expanded(survey.design.poles)[1:], number_format)
    lags = range(1, len(a_steps) + 1)
    arms, wave = _symmetry(survey.design)
    b_steps = [
        step if arm == 0.0 else 2.0 * step
        for step, arm in zip(_steps(numerator, number_format), arms, strict=False)
    ]

    def changes(v: float, _: float) -> _Changes:
        w = 2.0 * math.asin(math.sqrt(v))
        inverse = _inverse(survey.sections, v, w)
        size, angle = abs(inverse), math.atan2(inverse.imag, inverse.real)
        return (
            [step * size * math.cos(angle - lag * w) for lag, step in zip(lags, a_steps, strict=True)],
            [step * size * wave(arm * w) for arm, step in zip(arms, b_steps, strict=True)],
        )

    total = math.hypot(*a_steps)
    unstable = [total * abs(_inverse(survey.sections, _v(w), w)) for w in survey.unguarded]
    return _prediction(survey, changes, unstable)


def cascade_bits(design: Design, mask: Mask, number_format: NumberFormat) -> Prediction | None:
    """Bits for the coefficients of second-order sections (1 + b1/z + 1/z^2) / (1 + a1/z + a2/z^2).

    `fixed`: the step is 2^(2-W), as a1 and b1 reach 2. Coefficients 0, +-1 and +-2 cost nothing, so zeros at
    z = +-1 don't either. Gains between the sections are not counted. None where the design itself breaks the
    mask. Raises ValueError where a zero lies off the unit circle, and ArithmeticError where figures leave the
    range of double precision.
    """
    survey = _survey(design, mask)
    poles = [(*section, *_steps((section.a1, section.a2), number_format, 1)) for section in survey.sections]
    zeros = [
        (_v(root.angle), *_steps((-2.0 * math.cos(root.angle),), number_format, 1))
        for root in survey.design.zeros
        if root.pair
    ]

    def changes(v: float, gain: float) -> _Changes:
        cosine, sine = 1.0 - 2.0 * v, 2.0 * math.sqrt(v * (1.0 - v))
        of_a = []
        for _, a2, at_dc, gap, _, step1, step2 in poles:
            real, imag = at_dc - 2.0 * (1.0 + a2) * v, gap * sine
            squared = real * real + imag * imag
            of_a.append(step1 * real / squared)
            of_a.append(step2 * (cosine * real - sine * imag) / squared)
        of_b = [
            step * gain / (4.0 * (zero - v))
            if zero != v
            else step * math.exp(survey.response.without(zero) - survey.peak)
            for zero, step in zeros
        ]
        return of_a, of_b

    unstable = [
        math.hypot(step1, step2) / abs(complex(at_dc - 2.0 * (1.0 + a2) * _v(w), gap * math.sin(w)))
        for _, a2, at_dc, gap, w, step1, step2 in poles
    ]
    return _prediction(survey, changes, unstable)


def fir_bits(taps: int, mask: Mask, number_format: NumberFormat, level: float | None = None) -> Prediction:
    """Bits for the taps of a linear-phase FIR filter, `transversal` or `symmetric`: both store the same ones.

    `level`: the greatest error of the unrounded filter over the tolerance, below 1. None takes the filter
    for the shortest that does, with half a tap to spare; how much it really has is not known then, and
    `high` infinite.

    Steps of 2^-B in N taps change the amplitude by sqrt(N/12) 2^-B, one standard deviation (Chan, Rabiner
    1973: from memory), which must stay a small part of what the filter leaves of the least tolerance. In
    `fixed`, the taps share the least power of two above them all; the greatest is taken for the mean of
    the amplitude. Raises ValueError where the mask contradicts itself.
    """
    bands = fir_length.amplitude_bands(mask)
    if bands is None:
        raise ValueError("no filter keeps a mask that contradicts itself")
    widths = [step.width for step in fir_length.steps(bands)]
    if taps == 1 or not widths:
        return Prediction(LEAST_BITS, LEAST_BITS, LEAST_BITS, 0.0)
    # A filter d times as good takes 1.37 log10(1/d) / width more taps (Kaiser 1974: from memory).
    spare = 1.0 - (10.0 ** (-0.5 * min(widths) / 1.37) if level is None else level)
    margin = spare * min(band.tolerance for band in bands)
    if margin <= 0.0:
        return Prediction(LEAST_BITS, LEAST_BITS, math.inf, 0.0)
    if number_format == "fixed":
        error = math.ldexp(math.sqrt(taps / 12.0), 1 + math.frexp(_mean_power(bands, 1))[1])
    else:
        # The mean square of 2^e / h over mantissas spread evenly in log: 3 / (2 ln 2).
        error = math.sqrt(1.5 / math.log(2.0) * _mean_power(bands, 2) / 12.0)
    real = math.log2(error / margin) + FIR_ODDS[number_format]
    least = real if level is not None else real + math.log2(spare)
    return Prediction(
        max(LEAST_BITS, math.ceil(real)),
        max(LEAST_BITS, math.ceil(least - FIR_BELOW[number_format])),
        math.inf if level is None else max(LEAST_BITS, math.floor(real + FIR_ABOVE[number_format])),
        real,
    )


def _mean_power(bands: Sequence[fir_length.AmplitudeBand], exponent: int) -> float:
    """The mean over 0..pi of a power of the amplitude, straight between the middles of the bands."""
    corners = [(edge, band.desired**exponent) for band in bands for edge in (band.low, band.high)]
    corners = [(0.0, corners[0][1]), *corners, (math.pi, corners[-1][1])]
    return sum((w - left) * (value + y) / 2.0 for (left, value), (w, y) in pairwise(corners)) / math.pi


def zero_scatter(design: Design, bits: int, number_format: NumberFormat = "floating") -> Scatter | None:
    """The multiple zero that rounding the expanded numerator scatters farthest; None where all are simple.

    With B = C (1 - z_i/z)^m, an error d of B moves the zeros by (|d| / |C|)^(1/m) (Wilkinson 1963: from
    memory); d is taken for its standard deviation. The numerator stays symmetric, so that one of an odd
    number of zeros at z = +-1 stays where it is.
    """
    steps = _steps(polynomials.expanded(design.zeros), number_format)
    arms, wave = _symmetry(design)
    worst = None
    for root in dict.fromkeys(design.zeros):
        multiplicity = design.zeros.count(root)
        stays = not root.pair and multiplicity % 2 == 1
        if multiplicity - stays < 2:
            continue
        errors = [
            step * (arm if stays else wave(arm * root.angle)) * (1.0 if arm == 0.0 else 2.0)
            for arm, step in zip(arms, steps, strict=False)
        ]
        size = (2.0 * math.sin(root.angle) if root.pair else 1.0) ** multiplicity
        for other in design.zeros:
            if other != root:
                size *= abs(sum(c * root.z**-k for k, c in enumerate(polynomials.factor(other))))
        error = math.ldexp(math.hypot(*errors) / math.sqrt(12.0), -bits)
        distance = (error / size) ** (1.0 / (multiplicity - stays))
        if worst is None or distance > worst.distance:
            worst = Scatter(root.angle, multiplicity, distance)
    return worst


class _Section(NamedTuple):
    """A denominator 1 + a1/z + a2/z^2; of first order where a2 is 0."""

    a1: float
    a2: float
    at_dc: float
    """1 + a1 + a2, without cancellation."""
    gap: float
    """1 - a2"""
    w: float
    """Where it resonates, rad/sample."""


class _Node(NamedTuple):
    """ln|H| at a place, and its first two derivatives by v."""

    v: float
    level: float
    slope: float
    bend: float


_Changes = tuple[list[float], list[float]]
"""For a step of 1: deviation of ln|H| by each coefficient of A; of |H| over the highest gain by each of B."""


class _Response:
    """ln|H| over v = sin^2(w/2), a sum of ln|v - v_i|: |1 - z_i/z| |1 - z_i*/z| = 4 |z_i| |v - v_i|."""

    __slots__ = ("offset", "poles", "zeros")

    def __init__(self, design: Design) -> None:
        self.offset = design.log_gain
        self.poles: list[tuple[complex, float]] = []
        self.zeros: dict[float, float] = {}
        for root in design.poles:
            radius = math.sqrt(1.0 - root.gap)
            if radius == 0.0:
                continue
            weight = 1.0 if root.pair else 0.5
            self.offset -= weight * (_LN_4 + math.log(radius))
            towards_one = complex(
                _shortfall(root) + 2.0 * radius * _v(root.angle), -radius * math.sin(root.angle)
            )
            self.poles.append((-towards_one * towards_one / (4.0 * root.z), weight))
        for root in design.zeros:
            weight = 1.0 if root.pair else 0.5
            self.offset += weight * _LN_4
            self.zeros[_v(root.angle)] = self.zeros.get(_v(root.angle), 0.0) + weight

    def at(self, v: float) -> _Node:
        """ln|H| at v: -inf at a zero."""
        level, slope, bend = self.offset, 0.0, 0.0
        for zero, weight in self.zeros.items():
            off = v - zero
            if off == 0.0:
                return _Node(v, -math.inf, 0.0, 0.0)
            level += weight * math.log(abs(off))
            slope += weight / off
            bend -= weight / (off * off)
        for pole, weight in self.poles:
            away = 1.0 / (v - pole)
            level += weight * math.log(abs(away))
            slope -= weight * away.real
            bend += weight * (away * away).real
        return _Node(v, level, slope, bend)

    def without(self, zero: float) -> float:
        """ln|H| at a zero of the circle when one pair of those that lie there is left out."""
        level = self.offset - _LN_4
        for other, weight in self.zeros.items():
            if other != zero:
                level += weight * math.log(abs(zero - other))
            elif weight > 1.0:
                return -math.inf
        return level - sum(weight * math.log(abs(zero - pole)) for pole, weight in self.poles)


@dataclass(frozen=True, slots=True)
class _Survey:
    """What the predictions for all structures and number formats of a design share.

    Where most poles lie beyond pi/2, design and mask are those at pi - w: the coefficients differ only in
    sign, and v keeps its digits only near w = 0.
    """

    design: Design
    mask: Mask
    response: _Response
    sections: tuple[_Section, ...]
    nodes: tuple[list[_Node], ...]
    """For each band of the mask, where it may bind: edges, extremes, and some places between."""
    peak: float
    """The greatest ln|H| of the pass bands; of all bands where none passes."""
    unguarded: tuple[float, ...]
    """Resonances outside the pass bands, where the mask may not notice an unstable pole; rad/sample."""


@lru_cache(maxsize=4)
def _survey(design: Design, mask: Mask) -> _Survey:
    if any(root.gap != 0.0 for root in design.zeros):
        raise ValueError("the zeros must lie on the unit circle")
    if sum(root.angle - math.pi / 2.0 for root in design.poles) > 0.0:
        design, mask = _mirrored(design, mask)
    response = _Response(design)
    resonances = [_v(root.angle) for root in design.poles]
    nodes = tuple(
        _lobes(response, band) if band.kind == "stop" else _ripples(response, band, resonances)
        for band in mask.bands
    )
    passes = [band for band in mask.bands if band.kind == "pass"]
    peak = max(
        node.level
        for band, found in zip(mask.bands, nodes, strict=True)
        if band.kind == "pass" or not passes
        for node in found
    )
    unguarded = (
        root.angle for root in design.poles if not any(b.low <= root.angle <= b.high for b in passes)
    )
    return _Survey(design, mask, response, _sections(design.poles), nodes, peak, tuple(unguarded))


def _mirrored(design: Design, mask: Mask) -> tuple[Design, Mask]:
    """The design and the mask with every frequency w at pi - w."""

    def turned(roots: Iterable[Root]) -> tuple[Root, ...]:
        return tuple(Root(math.pi - root.angle, root.gap, root.pair) for root in roots)

    bands = (replace(band, low=math.pi - band.high, high=math.pi - band.low) for band in mask.bands)
    return replace(design, poles=turned(design.poles), zeros=turned(design.zeros)), replace(
        mask, bands=tuple(bands)
    )


def _lobes(response: _Response, band: MaskBand) -> list[_Node]:
    """Edges, zeros and the maxima between them, by Newton's method: ln|H| is nearly concave there."""
    low, high = _v(band.low), _v(band.high)
    ends = [low, *sorted(zero for zero in response.zeros if low < zero < high), high]
    nodes = [response.at(v) for v in ends]
    for left, right in pairwise(ends):
        nodes.append(_extreme(response, (left + right) / 2.0, left, right))
    return nodes


def _ripples(response: _Response, band: MaskBand, resonances: Sequence[float]) -> list[_Node]:
    """Edges and extremes; where ln|H| is flat, resonances and places between them: its errors aren't flat."""
    low, high = _v(band.low), _v(band.high)
    inner = {*resonances, *response.zeros} if band.kind == "bounds" else set(resonances)
    ends = [response.at(v) for v in sorted({low, high, *(v for v in inner if low < v < high)})]
    most, least = band.most, band.least
    heights = [1.0 if most is None or least is None else most - least, *([most] if most else [])]
    tolerance = _SMOOTH * min(map(abs, heights)) * _NEPERS
    floor = ((least if least is not None else most if most is not None else 0.0) - 6.0) * _NEPERS
    fine = [ends[0]]
    for left, right in pairwise(ends):
        fine += [*_halved(response, left, right, tolerance, floor, _HALVINGS), right]
    nodes = [fine[0], *fine[1:][-1:]]
    turned = True
    for left, right in pairwise(fine):
        turns = left.slope * right.slope < 0.0
        if turns:
            guess = left.v + (right.v - left.v) * left.slope / (left.slope - right.slope)
            nodes.append(_extreme(response, guess, left.v, right.v))
        elif not turned:
            nodes.append(left)
        turned = turns
    return nodes


def _halved(
    response: _Response, left: _Node, right: _Node, tolerance: float, floor: float, depth: int
) -> list[_Node]:
    """Nodes in an interval, so that the cubic between neighbours follows ln|H|, except far below the floor.

    The cubic is held against the middle's level and slope: one alone agrees by chance over a few ripples.
    """
    width = right.v - left.v
    middle = response.at(left.v + width / 2.0)
    level = (left.level + right.level) / 2.0 + (left.slope - right.slope) * width / 8.0
    slope = 1.5 * (right.level - left.level) - 0.25 * (left.slope + right.slope) * width
    error = max(abs(level - middle.level), 0.25 * abs(slope - middle.slope * width))
    if error <= tolerance or depth == 0 or max(left.level, middle.level, right.level) < floor:
        return [middle]
    return [
        *_halved(response, left, middle, tolerance, floor, depth - 1),
        middle,
        *_halved(response, middle, right, tolerance, floor, depth - 1),
    ]


def _extreme(response: _Response, guess: float, low: float, high: float) -> _Node:
    """The extreme of ln|H| near `guess`, by Newton's method inside `low`..`high`."""
    node = response.at(guess)
    for _ in range(2):
        v = node.v - node.slope / node.bend if node.bend else node.v
        if not low < v < high:
            break
        node = response.at(v)
    return node


def _sections(poles: Iterable[Root]) -> tuple[_Section, ...]:
    """One section for each pair, and one for every two real poles, those nearest the circle together."""
    sections = []
    real: list[tuple[float, float, float]] = []
    for root in sorted(poles, key=lambda root: root.gap):
        radius = math.sqrt(1.0 - root.gap)
        if root.pair:
            at_dc = _shortfall(root) ** 2 + 4.0 * radius * _v(root.angle)
            sections.append(
                _Section(-2.0 * radius * math.cos(root.angle), 1.0 - root.gap, at_dc, root.gap, root.angle)
            )
        elif root.angle == 0.0:
            real.append((radius, _shortfall(root), root.angle))
        else:
            real.append((-radius, 1.0 + radius, root.angle))
    for (pole, at_dc, w), (other, other_at_dc, _) in zip(
        real[::2], [*real[1::2], (0.0, 1.0, 0.0)], strict=False
    ):
        sections.append(_Section(-pole - other, pole * other, at_dc * other_at_dc, 1.0 - pole * other, w))
    return tuple(sections)


def _inverse(sections: Iterable[_Section], v: float, w: float) -> complex:
    """1 / A at a frequency."""
    value, sine, count = 1.0 + 0.0j, math.sin(w), 0
    for _, a2, at_dc, gap, _ in sections:
        value *= complex(at_dc - 2.0 * (1.0 + a2) * v, gap * sine)
        count += 1
    return complex(math.cos(count * w), math.sin(count * w)) / value


def _prediction(
    survey: _Survey, changes: Callable[[float, float], _Changes], unstable: Sequence[float]
) -> Prediction | None:
    """The bits at which every condition of the mask holds, and each ratio in `unstable` is small against 1.

    `changes` takes v and |H| over the highest gain.
    """
    mask = survey.mask
    if max(map(len, survey.nodes)) > limits.MAX_COMPARED_GAINS:
        raise OverflowError("too many places where the gain may leave its window")
    passes = any(band.kind == "pass" for band in mask.bands)
    gain_is_free = passes and all(band.relative for band in mask.bands)
    worst, slack = max(unstable, default=0.0), 1.0
    rippling: list[tuple[int, float, float, list[float], float]] = []
    for number, (band, nodes) in enumerate(zip(mask.bands, survey.nodes, strict=True)):
        window, lower, upper = _limits(band, passes, gain_is_free, survey.peak)
        for node in nodes:
            level = node.level - survey.peak
            gain = math.exp(level)
            of_a, of_b = changes(node.v, gain)
            if window is not None:
                if gain == 0.0:
                    return None
                change = [*of_a, *(-value / gain for value in of_b)]
                rippling.append((number, window, level, change, math.hypot(*change)))
            if upper is not None:
                limit = math.exp(upper)
                slack = min(slack, 1.0 - gain / limit)
                deviation = math.hypot(gain * math.hypot(*of_a), *of_b)
                worst = max(worst, deviation / max(limit - gain, NO_MARGIN * limit))
            if lower is not None:
                slack = min(slack, level - lower)
                deviation = math.hypot(*of_a, math.hypot(*of_b) / gain) if gain else math.inf
                worst = max(worst, deviation / max(level - lower, NO_MARGIN))
    for first, (number, window, level, change, deviation) in enumerate(rippling):
        for other, other_window, other_level, other_change, other_deviation in rippling[:first]:
            if other != number and not gain_is_free:
                continue
            both = window if other == number else window + other_window
            margin = both - abs(level - other_level)
            slack = min(slack, margin / both)
            margin = max(margin, NO_MARGIN * both)
            if deviation + other_deviation > worst * margin:
                worst = max(worst, math.dist(change, other_change) / margin)
    if slack < -NO_MARGIN:
        return None
    if not worst < math.inf:
        raise OverflowError("more bits than can be told")
    real = math.log2(worst / math.sqrt(12.0)) + ODDS if worst else 0.0
    tight = slack <= NO_MARGIN
    return Prediction(
        max(LEAST_BITS, math.ceil(real)),
        max(LEAST_BITS, math.ceil(real - BELOW - tight)),
        math.inf if tight else max(LEAST_BITS, math.floor(real + ABOVE)),
        real,
    )


def _limits(
    band: MaskBand, passes: bool, gain_is_free: bool, peak: float
) -> tuple[float | None, float | None, float | None]:
    """What a band asks for, in nepers: a window that floats, the least and the most ln|H| over the peak."""
    least = None if band.least is None else band.least * _NEPERS
    most = None if band.most is None else band.most * _NEPERS
    if band.relative and band.kind == "pass" and least is not None and most is not None:
        window = most - least
        return (window, None, None) if gain_is_free else (window, -window - peak, window - peak)
    if band.relative and passes:
        return None, None, most
    return None, None if least is None else least - peak, None if most is None else most - peak


def _steps(values: Sequence[float], number_format: NumberFormat, exponent: int | None = None) -> list[float]:
    """The step of each coefficient in words of 0 bits; 0 for those that are exact in every word.

    `exponent`: of the power of two that bounds them in fixed point; None takes the least one above them all.
    """
    top = max(map(abs, values), default=0.0)
    shared = math.ldexp(2.0, math.frexp(top)[1] if exponent is None else exponent)
    return [
        0.0
        if abs(value) <= _LOST * top or abs(value) in (1.0, 2.0)
        else shared
        if number_format == "fixed"
        else math.ldexp(1.0, math.frexp(value)[1])
        for value in values
    ]


def _shortfall(root: Root) -> float:
    """1 - |z|, without cancellation."""
    return root.gap / (1.0 + math.sqrt(1.0 - root.gap))


def _v(w: float) -> float:
    """(1 - cos w) / 2, without cancellation."""
    return math.sin(w / 2.0) ** 2


def _symmetry(design: Design) -> tuple[list[float], Callable[[float], float]]:
    """How far the numerator's coefficients lie from its middle, up to there, and the wave of each pair.

    Zeros on the circle make b_k = b_(n-k), or its negative where an odd number of them lies at z = 1.
    """
    degree = sum(2 if root.pair else 1 for root in design.zeros)
    at_one = sum(1 for root in design.zeros if not root.pair and root.angle == 0.0)
    return [degree / 2.0 - k for k in range(degree // 2 + 1)], math.sin if at_one % 2 else math.cos
