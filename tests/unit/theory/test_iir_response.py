"""Gain and group delay from poles and zeros, against scipy and 50 digits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import signal

from bandwright.theory.closed_form import iir, response
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Design, Mask, Root
from unit.theory.iir_reference import FAMILIES, from_edges, mp, mpf

pi = math.pi

MASKS = {
    "low-pass": from_edges("low-pass", (0.6, 0.75), 0.5, 45.0),
    "high-pass": from_edges("high-pass", (0.6, 0.75), 0.1, 60.0),
    "band-pass": from_edges("band-pass", (0.5, 0.6, 0.9, 1.1), 0.1, 50.0),
    "band-stop": from_edges("band-stop", (0.5, 0.6, 0.9, 1.1), 0.1, 50.0),
}


def _design(name: str, mask: Mask) -> Design:
    select = selectivity(mask)
    assert select is not None
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    return iir.reference_design(FAMILIES[name], select, least.order)


def _zpk(design: Design) -> tuple[list[complex], list[complex], float]:
    zeros, poles = (
        [z for root in roots for z in ((root.z, root.z.conjugate()) if root.pair else (root.z,))]
        for roots in (design.zeros, design.poles)
    )
    return zeros, poles, math.exp(design.log_gain)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", MASKS)
def test_gain_is_that_of_scipy(kind: str, name: str) -> None:
    design = _design(name, MASKS[kind])
    places = np.linspace(0.01, 3.13, 40)
    _, h = signal.freqz_zpk(*_zpk(design), worN=places)
    for w, value in zip(places, h, strict=True):
        assert response.gain_db(design, w) == pytest.approx(20.0 * math.log10(abs(value)), abs=1e-7)
        assert response.log_gain(design, w) == pytest.approx(math.log(abs(value)), abs=1e-8)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", MASKS)
def test_group_delay_is_that_of_scipy(kind: str, name: str) -> None:
    design = _design(name, MASKS[kind])
    places = np.linspace(0.05, 3.1, 40)
    # Root by root: scipy's group delay of an expanded polynomial is only as good as its coefficients.
    delays = np.zeros(len(places))
    for roots, sign in ((design.zeros, 1.0), (design.poles, -1.0)):
        for root in roots:
            zeros = [root.z, root.z.conjugate()] if root.pair else [root.z]
            # Half a sample for each root on the circle, where scipy has a singularity.
            delays += sign * (
                0.5 * len(zeros)
                if root.gap == 0.0
                else signal.group_delay((np.poly(zeros).real, [1.0]), w=places)[1]
            )
    for w, value in zip(places, delays, strict=True):
        assert response.group_delay(design, w) == pytest.approx(value, rel=1e-7, abs=1e-7)


@pytest.mark.parametrize("name", FAMILIES)
def test_group_delay_is_the_slope_of_the_phase_in_50_digits(name: str) -> None:
    design = _design(name, from_edges("low-pass", (1e-5, 1.3e-5), 0.1, 60.0))
    for w in (0.0, 5e-6, 1e-5):
        step = mpf(10) ** -25
        phase = [_phase(design, mpf(w) + sign * step) for sign in (1, -1)]
        exact = (phase[1] - phase[0]) / (2 * step)
        assert abs(response.group_delay(design, w) / exact - 1) < 1e-9


def _phase(design: Design, w: mpf) -> mpf:
    total = mpf(0)
    for roots, sign in ((design.zeros, 1), (design.poles, -1)):
        for root in roots:
            radius = mp.sqrt(1 - mpf(root.gap))
            for angle in (root.angle, -root.angle) if root.pair else (root.angle,):
                exact = mp.pi if angle == pi else mpf(angle)
                total += sign * mp.arg(1 - radius * mp.expj(exact - w))
    return total


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", MASKS)
def test_the_worst_group_delay_is_the_largest_of_a_dense_grid(kind: str, name: str) -> None:
    design = _design(name, MASKS[kind])
    for band in MASKS[kind].bands:
        if band.kind == "pass":
            places = np.linspace(band.low, band.high, 4001)
            largest = max(response.group_delay(design, w) for w in places[::8])
            around = [w for w in places if response.group_delay(design, w) > 0.98 * largest]
            largest = max(response.group_delay(design, w) for w in around)
            worst = response.worst_group_delay(design, band.low, band.high)
            assert largest * (1.0 - 1e-12) <= worst <= largest * 1.001


def test_the_worst_delay_of_one_pole_is_at_its_angle() -> None:
    # Of one real pole r at its angle: r / (1 - r); at Nyquist -r / (1 + r).
    near_dc = Design((Root(0.0, 1.0 - 0.9999**2, pair=False),), (), 0.0)
    assert response.worst_group_delay(near_dc, 0.0, pi) == pytest.approx(0.9999 / 0.0001, rel=1e-10)
    assert response.worst_group_delay(near_dc, pi, pi) == pytest.approx(-0.9999 / 1.9999, rel=1e-10)
    near_nyquist = Design((Root(pi, 1.0 - 0.99**2, pair=False),), (), 0.0)
    assert response.worst_group_delay(near_nyquist, 0.0, pi) == pytest.approx(99.0, rel=1e-10)


def test_a_peak_beside_the_angles_of_its_poles_is_found() -> None:
    # Two broad poles add up to a peak between their angles.
    broad = (Root(1.0, 0.02, pair=True), Root(1.025, 0.03, pair=True))
    design = Design(broad, (), 0.0)
    worst = response.worst_group_delay(design, 0.1, 3.0)
    grid = max(response.group_delay(design, 1.0 + 0.025 * i / 4000) for i in range(4001))
    at_angles = max(response.group_delay(design, root.angle) for root in broad)
    assert worst >= grid > 1.002 * at_angles
    assert worst == pytest.approx(grid, rel=1e-6)


def test_a_sharp_peak_between_the_ends_of_a_band_is_found() -> None:
    design = Design((Root(1.0, 1e-6, pair=True), Root(1.1, 0.2, pair=True)), (), 0.0)
    # One pole of gap g has about 2/g at its angle; the others add a few samples.
    assert response.worst_group_delay(design, 0.1, 3.0) == pytest.approx(2e6, rel=1e-4)


def test_a_zero_on_the_circle_has_no_gain_and_half_a_sample() -> None:
    design = Design((), (Root(0.7, 0.0, pair=True), Root(pi, 0.0, pair=False)), 0.0)
    assert response.gain_db(design, 0.7) == -math.inf
    assert response.gain_db(design, pi) == -math.inf
    # |1 - z/z0|: at 0 it is 2 (1 - cos 0.7) times 2.
    assert response.log_gain(design, 0.0) == pytest.approx(math.log(4.0 * (1.0 - math.cos(0.7))), rel=1e-14)
    assert response.group_delay(design, 1.2) == 1.5


def test_a_zero_outside_the_circle_delays_more_than_its_mirror_image() -> None:
    inside = Design((), (Root(1.0, 1.0 - 0.9**2, pair=True),), 0.0)
    outside = Design((), (Root(1.0, 1.0 - 1.0 / 0.9**2, pair=True),), 0.0)
    for w in (0.2, 1.0, 2.5):
        # A pair and its mirror image about the circle have two samples together.
        assert response.group_delay(inside, w) + response.group_delay(outside, w) == pytest.approx(
            2.0, abs=1e-12
        )
