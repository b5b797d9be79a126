"""How long a linear-phase FIR filter must be: estimates from the mask alone."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from bandwright.theory.closed_form.types import Mask, MaskBand

Method = Literal["constant", "ichige", "multiband", "kaiser-window"]

OPEN_PASS = 2.0
"""A pass band with a lower bound only is taken to be 6 dB high."""
OPEN_BOUNDS = 100.0
"""Bounds with a lower bound only let the gain rise 40 dB above it."""


@dataclass(frozen=True, slots=True)
class AmplitudeBand:
    """Where the signed amplitude A stays within `least`..`most` (linear) for `low`..`high` (rad/sample).

    A is the real factor of H(e^jw) = A(w) exp(-jw(N-1)/2), so a stop band is -t..t and a pass band is
    positive: pass bands of opposite signs would not be of linear phase.
    """

    low: float
    high: float
    least: float
    most: float

    @property
    def desired(self) -> float:
        """The middle of the window."""
        return 0.5 * (self.least + self.most)

    @property
    def tolerance(self) -> float:
        """Half the height of the window."""
        return 0.5 * (self.most - self.least)


@dataclass(frozen=True, slots=True)
class Step:
    """A step between two bands whose windows exclude each other, as that of a low-pass filter of gain 1.

    Frequencies in cycles/sample.
    """

    width: float
    """Between the band edges."""
    pass_width: float
    """Of the band with the higher gain."""
    stop_width: float
    """Of the other one."""
    pass_ripple: float
    """Deviation from 1 in the pass band."""
    stop_ripple: float
    """Deviation from 0 in the stop band."""


@dataclass(frozen=True, slots=True)
class LengthEstimate:
    """A length in taps; the least length that meets the mask lies within `low`..`high`."""

    taps: int
    low: int
    high: int
    method: Method


@dataclass(frozen=True, slots=True)
class KaiserWindow:
    """The Kaiser window for a mask, and the length that it needs."""

    beta: float
    attenuation_db: float
    """Of the smallest deviation that the mask allows, against the step it bounds."""
    exact_order: float
    """The formula's order before rounding; taps are one more."""
    length: LengthEstimate


def pass_tops(mask: Mask) -> tuple[float, ...]:
    """The upper bound (linear) of each pass band, in order, with floating windows centred on gain 1.

    A window of r dB spans the ratio R = 10^(r/20): from 1 - T to 1 + T with T = (R-1)/(R+1). Bounds that
    overlap it move it, as far as it contains gain 1.
    """
    tops = []
    for band in mask.bands:
        if band.kind != "pass":
            continue
        if not band.relative:
            tops.append(_gain(band.most) if band.most is not None else OPEN_PASS * _gain(band.least or 0.0))
            continue
        ratio = ripple_ratio(band)
        top = 2.0 * ratio / (ratio + 1.0)
        for bound in mask.bands:
            if bound.kind != "bounds" or bound.high < band.low or band.high < bound.low:
                continue
            if bound.most is not None:
                top = min(top, max(1.0, _gain(bound.most)))
            if bound.least is not None:
                top = max(top, min(ratio, ratio * _gain(bound.least)))
        tops.append(top)
    return tuple(tops)


def ripple_ratio(band: MaskBand) -> float:
    """Highest over lowest gain that a pass band allows."""
    return _gain((band.most or 0.0) - (band.least or 0.0))


def amplitude_bands(
    mask: Mask,
    tops: Sequence[float] | None = None,
    reference: float | None = None,
    besides: Sequence[AmplitudeBand] = (),
) -> tuple[AmplitudeBand, ...] | None:
    """The mask as windows of the signed amplitude, disjoint and in order of frequency.

    `tops` places the pass bands' windows (default `pass_tops`); relative stop bands count from `reference`
    (default the highest top); all other levels count from gain 1. The windows `besides` hold as well. Where
    windows overlap they are intersected: neighbours then touch, and at the common edge both hold. A lower
    bound is a bound of A itself (positive). None where two overlapping windows exclude each other.
    """
    tops = pass_tops(mask) if tops is None else tops
    reference = max(tops, default=1.0) if reference is None else reference
    windows: list[AmplitudeBand] = list(besides)
    remaining = iter(tops)
    for band in mask.bands:
        if band.kind == "pass" and band.relative:
            most = next(remaining)
            windows.append(AmplitudeBand(band.low, band.high, most / ripple_ratio(band), most))
            continue
        top = next(remaining) if band.kind == "pass" else None
        if band.most is None and band.least is None:
            continue
        least = None if band.least is None else _gain(band.least)
        if top is not None:
            most = top
        elif band.most is not None:
            most = _gain(band.most) * (reference if band.kind == "stop" and band.relative else 1.0)
        else:
            most = OPEN_BOUNDS * (least or 1.0)
        windows.append(AmplitudeBand(band.low, band.high, -most if least is None else least, most))
    return _disjoint(windows)


def steps(bands: Sequence[AmplitudeBand]) -> tuple[Step, ...]:
    """From each band to the next one above it whose window excludes its own."""
    found = []
    for index, below in enumerate(bands):
        above = next(
            (b for b in bands[index + 1 :] if b.least > below.most or b.most < below.least),
            None,
        )
        if above is None:
            continue
        upper, lower = (below, above) if below.desired > above.desired else (above, below)
        jump = upper.desired - lower.desired
        found.append(
            Step(
                (above.low - below.high) / math.tau,
                (upper.high - upper.low) / math.tau,
                (lower.high - lower.low) / math.tau,
                upper.tolerance / jump,
                lower.tolerance / jump,
            )
        )
    return tuple(found)


def kaiser(step: Step) -> float:
    """Length in taps for an equiripple low-pass filter, unrounded.

    Kaiser, "Nonrecursive digital filter design using the I0-sinh window function", 1974, from memory:
    order = (-10 log10(dp ds) - 13) / (14.6 df).
    """
    decibels = -10.0 * math.log10(step.pass_ripple * step.stop_ripple)
    return (decibels - 13.0) / (14.6 * step.width) + 1.0


def herrmann_rabiner_chan(step: Step) -> float:
    """Length in taps for an equiripple low-pass filter, unrounded.

    Herrmann, Rabiner & Chan, "Practical design rules for optimum finite impulse response low-pass digital
    filters", 1973, from memory; for stop ripples above the pass ripple the two change places.
    """
    p = math.log10(max(step.pass_ripple, step.stop_ripple))
    s = math.log10(min(step.pass_ripple, step.stop_ripple))
    d = (0.005309 * p * p + 0.07114 * p - 0.4761) * s - (0.00266 * p * p + 0.5941 * p + 0.4278)
    return d / step.width - (11.01217 + 0.51244 * (p - s)) * step.width + 1.0


def bellanger(step: Step) -> float:
    """Length in taps for an equiripple low-pass filter, unrounded.

    Bellanger, "Digital Processing of Signals", 1984, from memory: N = (2/3) log10(1/(10 dp ds)) / df.
    """
    return -2.0 / 3.0 * math.log10(10.0 * step.pass_ripple * step.stop_ripple) / step.width


def ichige(step: Step) -> float:
    """Length in taps for an equiripple low-pass filter, unrounded.

    Ichige, Iwaki & Ishii, "Accurate estimation of minimum filter length for optimum FIR digital filters",
    2000, from memory and without the roundings inside: a length for equal ripples, corrected for the place
    of the transition and for unequal ripples. Where the stop ripple is the greater one, the complement
    1 - A is estimated, whose bands have changed places.
    """
    width, room = step.width, 0.5 - step.width
    if step.pass_ripple >= step.stop_ripple:
        broad, fine = step.pass_ripple, step.stop_ripple
        broad_width, fine_width = step.pass_width, step.stop_width
    else:
        broad, fine = step.stop_ripple, step.pass_ripple
        broad_width, fine_width = step.stop_width, step.pass_width
    broad = min(broad, 0.499)  # the formula ends at 0.5
    if room <= 0.0 or fine >= broad:
        return 1.0

    def place(band_width: float, slope: float) -> float:
        return 2.0 / math.pi * math.atan(slope * (1.0 / max(band_width, 1e-9) - 1.0 / room))

    log_broad = -math.log10(broad)
    slope = 2.325 * math.pow(log_broad, -0.445) * math.pow(width, -1.39)
    equal = 1.0 + 1.101 / width * math.pow(log_broad - math.log10(2.0), 1.1)
    equal *= (place(broad_width, slope) + place(fine_width, slope) + 1.0) / 3.0
    unequal = 0.52 / width * math.log10(broad / fine) * math.pow(log_broad, 0.17)
    unequal *= place(broad_width, 1.1 / width) - (place(fine_width, 0.29 / width) - 1.0) / 2.0
    return equal + unequal


def equiripple_length(mask: Mask, bounded_transitions: bool = True) -> LengthEstimate | None:
    """The least length of a symmetric FIR filter that meets the mask, estimated.

    Low-pass and high-pass by Ichige et al. (2000). Others by the step that needs most, times a factor
    fitted to the exact lengths of 1,300 random masks of 3 to 5 bands: wide transitions elsewhere spare
    taps. `low` and `high` are the spread over the same masks, widened; ripples of more than 4 dB, where
    the formulas end, make them far apart. None where no length will do, because the mask contradicts itself.
    """
    bands = amplitude_bands(mask)
    if bands is None:
        return None
    wanted = steps(bands)
    if not wanted:
        return LengthEstimate(1, 1, 1, "constant")
    if any(step.width <= 0.0 for step in wanted):
        return None
    length, hardest = max(((ichige(step), step) for step in wanted), key=lambda pair: pair[0])
    broad = max(max(step.pass_ripple, step.stop_ripple) for step in wanted) > 0.25
    elsewhere = 1.0 - 2.0 * hardest.width - sum(band.high - band.low for band in bands) / math.pi
    if len(wanted) == 1 and elsewhere < 1e-6:
        narrow = min(hardest.pass_width, hardest.stop_width) * length < 5.0
        low, high = (0.15, 2.0) if broad else (0.85, 1.2) if narrow else (0.95, 1.07)
        return _estimate(length, low, high, bands, "ichige")
    length = max(1.0, length * math.exp(0.032 - 0.285 * elsewhere))
    low = 0.15 if broad else 0.65 if bounded_transitions else 0.25
    return _estimate(length, low, 2.0 if broad else 1.45, bands, "multiband")


def kaiser_window_length(mask: Mask) -> KaiserWindow | None:
    """The Kaiser window that meets the mask, estimated.

    Kaiser (1974), from memory: with A = -20 log10 of the least deviation and dw the narrowest transition,
    order = (A - 7.95) / (2.285 dw), or 5.794 / dw below 21 dB; beta as in `kaiser_beta`. `low` and `high`
    hold the least length found with cutoffs amid the transitions and a beta up to 0.3 higher, over 300
    random masks, widened. None where no length will do, because the mask contradicts itself.
    """
    bands = amplitude_bands(mask)
    if bands is None:
        return None
    wanted = steps(bands)
    if any(step.width <= 0.0 for step in wanted):
        return None
    if not wanted:
        return KaiserWindow(0.0, 0.0, 0.0, LengthEstimate(1, 1, 1, "constant"))
    ripple = min(min(step.pass_ripple, step.stop_ripple) for step in wanted)
    attenuation_db = -20.0 * math.log10(ripple)
    width = math.tau * min(step.width for step in wanted)
    order = (attenuation_db - 7.95) / 2.285 / width if attenuation_db > 21.0 else 5.794 / width
    low, high = (0.95, 1.12) if len(wanted) == 1 else (0.45, 1.2)
    length = _estimate(order + 1.0, low, high, bands, "kaiser-window")
    return KaiserWindow(kaiser_beta(attenuation_db), attenuation_db, order, length)


def kaiser_beta(attenuation_db: float) -> float:
    """The shape of the Kaiser window whose ripple lies this far down (Kaiser 1974, from memory)."""
    if attenuation_db > 50.0:
        return 0.1102 * (attenuation_db - 8.7)
    if attenuation_db <= 21.0:
        return 0.0
    return 0.5842 * math.pow(attenuation_db - 21.0, 0.4) + 0.07886 * (attenuation_db - 21.0)


def only_odd(bands: Sequence[AmplitudeBand]) -> bool:
    """True where an even length can't do: its amplitude is zero at Nyquist, and the mask forbids that."""
    return any(band.high >= math.pi and not band.least <= 0.0 <= band.most for band in bands)


def _estimate(
    length: float, low: float, high: float, bands: Sequence[AmplitudeBand], method: Method
) -> LengthEstimate:
    taps = math.ceil(length - 1e-9)
    if only_odd(bands):
        taps += 1 - taps % 2
    return LengthEstimate(
        taps, max(1, math.floor(low * length) - 3), max(taps, math.ceil(high * length) + 3), method
    )


def _gain(decibels: float) -> float:
    return math.pow(10.0, decibels / 20.0)


def _disjoint(windows: Sequence[AmplitudeBand]) -> tuple[AmplitudeBand, ...] | None:
    ordered = sorted(windows, key=lambda window: (window.low, window.high))
    if all(above.low > below.high for below, above in itertools.pairwise(ordered)):
        return tuple(ordered)
    edges = sorted({edge for window in windows for edge in (window.low, window.high)})
    pieces = [(edge, edge) for edge in edges] + list(itertools.pairwise(edges))
    result: list[AmplitudeBand] = []
    for low, high in sorted(pieces):
        covering = [w for w in ordered if w.low <= low and high <= w.high]
        if not covering:
            continue
        least = max(window.least for window in covering)
        most = min(window.most for window in covering)
        if least > most:
            return None
        if low == high and all(window.low < window.high for window in covering):
            continue
        if result and result[-1] == AmplitudeBand(result[-1].low, low, least, most):
            low = result.pop().low
        result.append(AmplitudeBand(low, high, least, most))
    return tuple(result)
