"""Predicted coefficient bits: what must hold of them by themselves, and values for the record."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace

import mpmath
import numpy as np
import pytest
from scipy import signal

from bandwright.theory.closed_form import bits, butterworth, chebyshev_2, elliptic, iir, polynomials
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Design, Mask, MaskBand, Root
from unit.theory.random_masks import low_pass, random_masks, reference_designs

FORMATS: tuple[bits.NumberFormat, ...] = ("fixed", "floating")
PEAK_1 = -20.0 * math.log10(0.99)
"""A pass band between gains 0.99 and 1, dB."""


def reference(family: Family, mask: Mask) -> Design:
    select = selectivity(mask)
    assert select is not None
    least = iir.least_order(family, select)
    assert least is not None
    return iir.reference_design(family, select, least.order)


@pytest.mark.parametrize(
    ("family", "mask", "order", "direct", "cascade"),
    [
        # Found by rounding (test_bits_by_rounding); no source.
        (butterworth, low_pass(0.2 * math.pi, 0.4 * math.pi, PEAK_1, 60.0), 12, 23, 10),
        (butterworth, low_pass(0.2 * math.pi, 0.24 * math.pi, PEAK_1, 60.0), 45, 83, 16),
        (chebyshev_2, low_pass(0.2 * math.pi, 0.24 * math.pi, PEAK_1, 60.0), 15, 29, 13),
        (elliptic, low_pass(math.tau * 20.0 / 4000.0, math.tau * 25.0 / 4000.0, 0.1, 70.0), 9, 65, 21),
    ],
)
def test_mantissas_for_the_record(family: Family, mask: Mask, order: int, direct: int, cascade: int) -> None:
    design = reference(family, mask)
    assert design.order == order
    for predicted, found in (
        (bits.direct_form_bits(design, mask, "floating"), direct),
        (bits.cascade_bits(design, mask, "floating"), cascade),
    ):
        assert predicted is not None
        assert predicted.low <= found <= predicted.high
        assert abs(predicted.value - found) <= 1


def test_frequencies_turned_about_a_quarter_of_the_rate_need_the_same_bits() -> None:
    mask = low_pass(0.1, 0.15, 0.5, 50.0)
    turned_mask = Mask(
        tuple(
            replace(band, low=math.pi - band.high, high=math.pi - band.low) for band in reversed(mask.bands)
        )
    )
    design = reference(elliptic, mask)

    def turned(roots: tuple[Root, ...]) -> tuple[Root, ...]:
        return tuple(replace(root, angle=math.pi - root.angle) for root in roots)

    turned_design = replace(design, poles=turned(design.poles), zeros=turned(design.zeros))
    for predict in (bits.direct_form_bits, bits.cascade_bits):
        for number_format in FORMATS:
            one = predict(design, mask, number_format)
            other = predict(turned_design, turned_mask, number_format)
            assert one is not None and other is not None
            assert one.real == pytest.approx(other.real, abs=1e-9)


def test_relative_levels_leave_the_gain_free() -> None:
    mask = low_pass(0.3, 0.5, 0.5, 50.0)
    design = reference(elliptic, mask)
    louder = replace(design, log_gain=design.log_gain + math.log(8.0))
    for predict in (bits.direct_form_bits, bits.cascade_bits):
        for number_format in FORMATS:
            one, other = predict(design, mask, number_format), predict(louder, mask, number_format)
            assert one is not None and other is not None
            assert one.real == pytest.approx(other.real, abs=1e-9)


def test_a_wider_window_or_a_shallower_stop_band_needs_no_more_bits() -> None:
    for mask in itertools.islice(random_masks(5), 8):
        for _, design in reference_designs(mask, 12):
            wider = Mask(
                tuple(
                    replace(band, least=2.0 * band.least)
                    if band.least is not None
                    else replace(band, most=0.9 * (band.most or 0.0))
                    for band in mask.bands
                )
            )
            for predict in (bits.direct_form_bits, bits.cascade_bits):
                narrow, wide = predict(design, mask, "fixed"), predict(design, wider, "fixed")
                assert narrow is not None and wide is not None
                assert wide.real <= narrow.real + 1e-9


def test_no_word_is_long_enough_where_the_design_breaks_the_mask() -> None:
    design = reference(elliptic, low_pass(0.3, 0.5, 0.5, 50.0))
    for broken in (
        low_pass(0.3, 0.5, 0.5, 80.0),
        low_pass(0.3, 0.5, 0.001, 50.0),
        low_pass(0.5, 0.6, 0.5, 50.0),
        Mask((MaskBand("pass", 0.0, math.pi, -0.5, 0.0, True),)),
    ):
        assert bits.direct_form_bits(design, broken, "fixed") is None
        assert bits.cascade_bits(design, broken, "floating") is None


def test_a_design_without_margin_has_no_upper_bound() -> None:
    mask = low_pass(0.3, 0.5, 0.5, 50.0)
    design = reference(butterworth, mask)
    edge_level = 20.0 / math.log(10.0) * _level(design, 0.3)
    tight = Mask((replace(mask.bands[0], least=edge_level), mask.bands[1]))
    predicted = bits.cascade_bits(design, tight, "floating")
    assert predicted is not None
    assert math.isinf(predicted.high)


def _level(design: Design, w: float) -> float:
    z = complex(math.cos(w), math.sin(w))
    value = math.exp(design.log_gain)
    for roots, power in ((design.zeros, 1), (design.poles, -1)):
        for root in roots:
            value *= abs(sum(c * z**-k for k, c in enumerate(polynomials.factor(root)))) ** power
    return math.log(value)


def test_zeros_off_the_circle_are_refused() -> None:
    mask = low_pass(0.3, 0.5, 0.5, 50.0)
    design = reference(elliptic, mask)
    off = replace(design, zeros=(Root(1.0, 0.1, True), *design.zeros[1:]))
    with pytest.raises(ValueError, match="circle"):
        bits.cascade_bits(off, mask, "fixed")


def test_single_frequencies_and_bounds_count() -> None:
    mask = low_pass(0.3, 0.5, 0.5, 50.0)
    design = reference(butterworth, mask)
    free = bits.cascade_bits(design, mask, "floating")
    narrow = Mask((*mask.bands, MaskBand("bounds", 0.1, 0.1, -0.001, 0.001, False)))
    bound = bits.cascade_bits(design, narrow, "floating")
    assert free is not None and bound is not None
    assert bound.real > free.real + 1.0


@pytest.mark.parametrize("mantissa", [24, 53])
@pytest.mark.parametrize(("family", "order"), [(butterworth, 12), (butterworth, 7)])
def test_multiple_zeros_scatter_as_far_as_said(family: Family, order: int, mantissa: int) -> None:
    select = selectivity(low_pass(0.2 * math.pi, 0.4 * math.pi, PEAK_1, 40.0))
    assert select is not None
    design = iir.reference_design(family, select, order)
    numerator = [value / 3.0 for value in polynomials.expanded(design.zeros)]  # so that no value is whole
    half = [math.ldexp(round(math.ldexp(m, mantissa)), e - mantissa) for m, e in map(math.frexp, numerator)]
    exact = [math.comb(order, k) for k in range(order + 1)]
    with mpmath.workdps(400):
        step = [mpmath.mpf(2) ** (math.frexp(value)[1] - mantissa) for value in numerator]
        rounded = [mpmath.nint(mpmath.mpf(c) / 3 / s) * s for c, s in zip(exact, step, strict=True)]
        roots = mpmath.polyroots(rounded, asc=True, maxsteps=2000, extraprec=2000)
        found = max(float(abs(root + 1)) for root in roots)
    assert half == [float(value) for value in rounded]
    scatter = bits.zero_scatter(design, mantissa)
    assert scatter is not None
    assert (scatter.angle, scatter.multiplicity) == (math.pi, order)
    assert found / 2.0 <= scatter.distance <= found * 2.0


def test_simple_zeros_do_not_scatter() -> None:
    assert bits.zero_scatter(reference(elliptic, low_pass(0.3, 0.5, 0.5, 50.0)), 53) is None


def test_multiple_pairs_of_a_band_stop_scatter() -> None:
    mask = Mask(
        (
            MaskBand("pass", 0.0, 0.8, -1.0, 0.0, True),
            MaskBand("stop", 1.0, 1.1, None, -40.0, True),
            MaskBand("pass", 1.3, math.pi, -1.0, 0.0, True),
        )
    )
    scatter = bits.zero_scatter(reference(butterworth, mask), 24)
    assert scatter is not None
    assert 1.0 < scatter.angle < 1.1


def fir_cases(seed: int, count: int) -> list[tuple[int, Mask, np.ndarray, float]]:
    """Taps, mask, the taps of an equiripple low-pass filter, and its level."""
    source = np.random.default_rng(seed)
    cases: list[tuple[int, Mask, np.ndarray, float]] = []
    while len(cases) < count:
        width = math.pi * math.exp(source.uniform(math.log(0.03), math.log(0.3)))
        edge = math.pi * source.uniform(0.05, 0.6)
        ripple, attenuation = math.exp(source.uniform(math.log(0.02), 0.5)), source.uniform(20.0, 80.0)
        pass_tolerance = (10.0 ** (ripple / 20.0) - 1.0) / (10.0 ** (ripple / 20.0) + 1.0)
        stop_tolerance = 10.0 ** (-attenuation / 20.0)
        estimate = (-10.0 * math.log10(pass_tolerance * stop_tolerance) - 13.0) / (2.324 * width)
        taps = int(estimate) + int(source.integers(2, 9))
        edges = [0.0, edge / math.tau, (edge + width) / math.tau, 0.5]
        if not 7 <= taps <= 200 or edges[2] > 0.48:
            continue
        weight = [min(1.0, stop_tolerance / pass_tolerance), min(1.0, pass_tolerance / stop_tolerance)]
        h = signal.remez(taps, edges, [1.0, 0.0], weight=weight, fs=1.0, grid_density=32)
        mask = Mask(
            (
                MaskBand(
                    "pass",
                    0.0,
                    edge,
                    20.0 * math.log10(1.0 - pass_tolerance),
                    20.0 * math.log10(1.0 + pass_tolerance),
                    False,
                ),
                MaskBand("stop", edge + width, math.pi, None, -attenuation, False),
            )
        )
        level = fir_level(mask, h)
        if level < 0.999:
            cases.append((taps, mask, h, level))
    return cases


def fir_level(mask: Mask, h: np.ndarray) -> float:
    """The greatest error over the tolerance."""
    worst = 0.0
    for band, wanted in zip(mask.bands, (1.0, 0.0), strict=True):
        w = np.linspace(band.low, band.high, 16 * len(h))
        amplitude = np.cos(np.outer(w, np.arange(len(h)) - (len(h) - 1) / 2.0)) @ h
        assert band.most is not None
        tolerance = 10.0 ** (band.most / 20.0) - wanted
        worst = max(worst, float(np.max(np.abs(amplitude - wanted))) / tolerance)
    return worst


@pytest.mark.parametrize("number_format", FORMATS)
def test_taps_need_the_bits_predicted(number_format: bits.NumberFormat) -> None:
    errors = []
    for taps, mask, h, level in fir_cases(12, 60):
        found = 40
        for word in range(40, 1, -1):
            exponents = np.frexp(np.max(np.abs(h)) if number_format == "fixed" else h)[1]
            step = np.ldexp(1.0, exponents - (word - (number_format == "fixed")))
            if fir_level(mask, np.round(h / step) * step) > 1.0:
                break
            found = word
        predicted = bits.fir_bits(taps, mask, number_format, level)
        assert predicted.low <= found <= predicted.high
        unknown = bits.fir_bits(taps, mask, number_format)
        assert unknown.low <= found <= unknown.high
        errors.append(abs(predicted.value - found))
    assert np.median(errors) <= 1.0
    assert np.percentile(errors, 90) <= 2.0


def test_a_published_length_in_steps_of_15_bits() -> None:
    # Oppenheim, Schafer (recalled, recomputed): 0.01 to 0.4 pi, 0.001 from 0.6 pi, 28 taps at 0.919 of the
    # tolerance do in steps of 2^-15 and less. The greatest tap lies below 1/2, so that is a word of 15 bits.
    mask = Mask(
        (
            MaskBand("pass", 0.0, 0.4 * math.pi, 20.0 * math.log10(0.99), 20.0 * math.log10(1.01), False),
            MaskBand("stop", 0.6 * math.pi, math.pi, None, -60.0, False),
        )
    )
    predicted = bits.fir_bits(28, mask, "fixed", 0.919)
    assert predicted.low <= 15 <= predicted.high


def test_one_tap_and_masks_without_a_step_need_the_least_word() -> None:
    flat = Mask((MaskBand("pass", 0.0, math.pi, -1.0, 0.0, True),))
    assert bits.fir_bits(1, flat, "fixed").value == bits.LEAST_BITS
    assert bits.fir_bits(9, flat, "floating").value == bits.LEAST_BITS


def test_taps_of_a_mask_that_contradicts_itself_are_refused() -> None:
    contradiction = Mask(
        (
            MaskBand("pass", 0.0, 1.0, -1.0, 0.0, False),
            MaskBand("bounds", 0.5, 0.6, None, -20.0, False),
        )
    )
    with pytest.raises(ValueError, match="contradicts"):
        bits.fir_bits(21, contradiction, "fixed")
