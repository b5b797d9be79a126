"""How many bits the coefficients of a filter need, predicted before any of them is rounded.

For recursive filters the figure is the least word (sign included) or mantissa at which nine of ten roundings keep
the mask and stay stable. Rounding errors e_k count as independent and uniform over one step (Knowles, Olcayto 1968;
Avenhaus 1972; Crochiere, Oppenheim 1975: from memory) and change the response to first order by

    d ln|H|(w) = sum_k Re(e_k z^-k / B) - sum_k Re(e_k z^-k / A),      z = e^jw.

A pass band asks for the change between two frequencies, so its variance is taken over the errors that both share:
in a narrow band they nearly cancel. A condition with deviation s 2^-bits and margin m needs log2(s / m) + ODDS bits.
All of it comes from poles and zeros, never from expanded polynomials, which doubles can't hold, and is evaluated
over v = sin^2(w/2), in which ln|H| is smooth at both ends of the axis.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal, NamedTuple

from bandwright.theory.closed_form.types import Design, Mask, MaskBand, Root

NumberFormat = Literal["fixed", "floating"]

LEAST_BITS = 2

ODDS = 0.63
"""Bits from a deviation as large as the margin to nine successes in ten. Fitted, as ERROR is."""

ERROR = 0.7
"""Bits by which a prediction may err on either side."""

LUCK = 1
"""Bits more where plain rounding does worse than nine random roundings in ten."""

NO_MARGIN = 1e-6
"""A margin below this share of its window is none: the last digits of the design decide."""

_NEPERS = math.log(10.0) / 20.0
_LN_4 = math.log(4.0)
_SMOOTH = 0.1
"""Share of its window by which a cubic may miss ln|H| before an interval is halved."""
_HALVINGS = 24
_NONE = 1e-13
"""A coefficient below this share of the greatest is 0, or is lost without harm."""


@dataclass(frozen=True, slots=True)
class Prediction:
    """Bits that a coefficient needs: the word with its sign if `fixed`, the significant bits if `floating`."""

    value: int
    low: int
    high: float
    """The true figure lies within `low`..`high`; infinite where the design has no margin left in the mask."""
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

    `fixed`: a1..an share the least power of two above them all; so do b0..bn, once the highest gain of the pass
    bands is scaled to 1. Zeros must lie on the unit circle. None where the design itself breaks the mask.
    """
    survey = _survey(design, mask)
    numerator, denominator = coefficients(design)
    a_steps = _steps(denominator[1:], number_format)
    b_steps = _steps([value * math.exp(-survey.peak) for value in numerator], number_format)
    lags = range(1, len(a_steps) + 1)
    arms = _arms(len(numerator))
    b_steps = [step if arm == 0.0 else 2.0 * step for step, arm in zip(b_steps, arms, strict=False)]
    wave = math.sin if _zeros_at_one(design) % 2 else math.cos

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
    return _prediction(mask, survey, changes, unstable)


def cascade_bits(design: Design, mask: Mask, number_format: NumberFormat) -> Prediction | None:
    """Bits for the coefficients of second-order sections (1 + b1/z + 1/z^2) / (1 + a1/z + a2/z^2).

    `fixed`: the step is 2^(2-W), as a1 and b1 reach 2. Coefficients 0, +-1, +-2 cost nothing, so zeros at z = +-1
    don't either. Gains between the sections are not counted. Zeros must lie on the unit circle. None where the
    design itself breaks the mask.
    """
    survey = _survey(design, mask)
    poles = [(*section, *_steps((section.a1, section.a2), number_format, 1)) for section in survey.sections]
    zeros = [
        (_v(root.angle), *_steps((-2.0 * math.cos(root.angle),), number_format, 1))
        for root in design.zeros
        if root.pair
    ]

    def changes(v: float, gain: float) -> _Changes:
        cosine, sine = 1.0 - 2.0 * v, 2.0 * math.sqrt(v * (1.0 - v))
        of_a = []
        for _, a2, at_dc, gap, _, step1, step2 in poles:
            real, imag = at_dc - 2.0 * (1.0 + a2) * v, gap * sine
            size = real * real + imag * imag
            of_a.append(step1 * real / size)
            of_a.append(step2 * (cosine * real - sine * imag) / size)
        of_b = [
            gain * step / (4.0 * (zero - v))
            if zero != v
            else step * math.exp(survey.response.without(zero) - survey.peak)
            for zero, step in zeros
        ]
        return of_a, of_b

    unstable = [
        math.hypot(step1, step2) / abs(complex(at_dc - 2.0 * (1.0 + a2) * _v(w), gap * math.sin(w)))
        for _, a2, at_dc, gap, w, step1, step2 in poles
    ]
    return _prediction(mask, survey, changes, unstable)


def coefficients(design: Design) -> tuple[list[float], list[float]]:
    """The expanded b0..bn and 1, a1..an, each as good as its own last digits: not so the response that they give.

    A cosine that is 0 up to rounding leaves coefficients of some 1e-17, as in half-band designs.
    """
    numerator = _product(_polynomial(root) for root in design.zeros)
    gain = design.sign * math.exp(design.log_gain)
    return [gain * value for value in numerator], _product(_polynomial(root) for root in design.poles)


def spread(values: Iterable[float]) -> float:
    """The greatest of these coefficients over the least that is not 0, in magnitude; 1 where none is."""
    sizes = [abs(value) for value in values if value != 0.0]
    return max(sizes) / min(sizes) if sizes else 1.0


def zero_scatter(design: Design, mantissa_bits: int) -> Scatter | None:
    """The multiple zero that scatters farthest when the expanded numerator is rounded; None where all are simple.

    With B = C (1 - zero/z)^m, an error d moves the zeros by (|d| / |C|)^(1/m) (Wilkinson 1963: from memory). The
    numerator stays symmetric, so one of an odd number of zeros at z = +-1 stays where it is.
    """
    numerator, _ = coefficients(design)
    steps = [2.0 ** (math.frexp(value)[1] - mantissa_bits) for value in numerator]
    arms = _arms(len(numerator))
    wave = math.sin if _zeros_at_one(design) % 2 else math.cos
    counts: dict[Root, int] = {}
    for root in design.zeros:
        counts[root] = counts.get(root, 0) + 1
    worst = None
    for root, count in counts.items():
        fixed = not root.pair and count % 2 == 1
        if count - fixed < 2:
            continue
        errors = [
            step * (arm if fixed else wave(arm * root.angle)) * (1.0 if arm == 0.0 else 2.0)
            for arm, step in zip(arms, steps, strict=False)
        ]
        size = math.exp(design.log_gain) * (2.0 * math.sin(root.angle) if root.pair else 1.0) ** count
        for other in design.zeros:
            if other != root:
                size *= abs(sum(c * root.z**-k for k, c in enumerate(_polynomial(other))))
        distance = (math.hypot(*errors) / math.sqrt(12.0) / size) ** (1.0 / (count - fixed))
        if worst is None or distance > worst.distance:
            worst = Scatter(root.angle, count, distance)
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
            away = v - pole
            level -= weight * math.log(abs(away))
            away = 1.0 / away
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
    """What the predictions for all structures and number formats of a design share."""

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
    return _Survey(response, _sections(design.poles), nodes, peak, tuple(unguarded))


def _lobes(response: _Response, band: MaskBand) -> list[_Node]:
    """Edges, zeros and the maxima between them, by Newton's method: ln|H| is nearly concave there."""
    low, high = _v(band.low), _v(band.high)
    ends = [low, *sorted(zero for zero in response.zeros if low < zero < high), high]
    nodes = [response.at(v) for v in ends]
    for left, right in zip(ends, ends[1:], strict=False):
        nodes.append(_extreme(response, (left + right) / 2.0, left, right))
    return nodes


def _ripples(response: _Response, band: MaskBand, resonances: Sequence[float]) -> list[_Node]:
    """Edges and extremes; where ln|H| is flat, resonances and places between them, as its errors are not flat."""
    low, high = _v(band.low), _v(band.high)
    inner = {*resonances, *response.zeros} if band.kind == "bounds" else set(resonances)
    ends = [response.at(v) for v in sorted({low, high, *(v for v in inner if low < v < high)})]
    most, least = band.most, band.least
    height = 1.0 if most is None or least is None else most - least
    floor = (least if least is not None else most if most is not None else 0.0) - 6.0
    nodes = [ends[0], *ends[1:][-1:]]
    flat = False
    for left, right in zip(ends, ends[1:], strict=False):
        fine = [
            left,
            *_halved(response, left, right, _SMOOTH * height * _NEPERS, floor * _NEPERS, _HALVINGS),
            right,
        ]
        turns = [(a, b) for a, b in zip(fine, fine[1:], strict=False) if a.slope * b.slope < 0.0]
        for a, b in turns:
            guess = a.v + (b.v - a.v) * a.slope / (a.slope - b.slope)
            nodes.append(_extreme(response, guess, a.v, b.v))
        if not turns:
            nodes.append(fine[len(fine) // 2])
        if flat and not turns:
            nodes.append(left)
        flat = not turns
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
    mask: Mask, survey: _Survey, changes: Callable[[float, float], _Changes], unstable: Sequence[float]
) -> Prediction | None:
    """The bits at which every condition of the mask holds, and each ratio in `unstable` is small against 1.

    `changes` takes v and |H| over the highest gain.
    """
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
    real = math.log2(worst / math.sqrt(12.0)) + ODDS if worst else 0.0
    high = max(LEAST_BITS, math.ceil(real + ERROR) + LUCK) if slack > NO_MARGIN else math.inf
    return Prediction(max(LEAST_BITS, math.ceil(real)), max(LEAST_BITS, math.ceil(real - ERROR)), high, real)


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
    if number_format == "fixed" and exponent is None:
        exponent = math.frexp(top)[1]
    return [
        0.0
        if abs(value) <= _NONE * top or abs(value) in (1.0, 2.0)
        else math.ldexp(2.0, exponent)
        if number_format == "fixed"
        else math.ldexp(1.0, math.frexp(value)[1])
        for value in values
    ]


def _zeros_at_one(design: Design) -> int:
    return sum(1 for root in design.zeros if not root.pair and root.angle == 0.0)


def _arms(count: int) -> list[float]:
    """Distances from the middle of `count` coefficients, for the first half of them and the middle one."""
    return [(count - 1) / 2.0 - k for k in range((count + 1) // 2)]


def _polynomial(root: Root) -> tuple[float, ...]:
    radius = math.sqrt(1.0 - root.gap)
    if root.pair:
        return 1.0, -2.0 * radius * math.cos(root.angle), 1.0 - root.gap
    return 1.0, -radius if root.angle == 0.0 else radius


def _product(factors: Iterable[Sequence[float]]) -> list[float]:
    product = [1.0]
    for factor in factors:
        longer = [0.0] * (len(product) + len(factor) - 1)
        for shift, weight in enumerate(factor):
            for k, value in enumerate(product, shift):
                longer[k] += weight * value
        product = longer
    return product


def _shortfall(root: Root) -> float:
    """1 - |z|, without cancellation."""
    return root.gap / (1.0 + math.sqrt(1.0 - root.gap))


def _v(w: float) -> float:
    return math.sin(w / 2.0) ** 2
