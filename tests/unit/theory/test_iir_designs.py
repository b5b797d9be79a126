"""Reference designs: shared margins, poles and zeros against scipy, and digits kept next to the circle."""

from __future__ import annotations

import cmath
import math

import numpy as np
import pytest
from scipy import signal

from bandwright.theory.closed_form import iir, response
from bandwright.theory.closed_form.levels import attenuation_db
from bandwright.theory.closed_form.selectivity import Selectivity, selectivity
from bandwright.theory.closed_form.types import Design, Mask, MaskBand, Root
from unit.theory.iir_reference import FAMILIES, from_edges, gain_db, mp, mpf, prewarped

pi = math.pi

KINDS = {
    "low-pass": (0.6, 0.75),
    "high-pass": (0.6, 0.75),
    "band-pass": (0.5, 0.6, 0.9, 1.1),
    "band-stop": (0.5, 0.6, 0.9, 1.1),
}


def _selective(mask: Mask) -> Selectivity:
    found = selectivity(mask)
    assert found is not None
    return found


def _design(name: str, select: Selectivity, more: int = 0) -> Design:
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    return iir.reference_design(FAMILIES[name], select, least.order + more)


def _all(roots: tuple[Root, ...]) -> list[complex]:
    found = [root.z for root in roots] + [root.z.conjugate() for root in roots if root.pair]
    return sorted(found, key=lambda z: (round(z.real, 6), round(z.imag, 6)))


def _scipy_roots(
    name: str, kind: str, select: Selectivity, order: int
) -> tuple[list[complex], list[complex]]:
    """scipy's zeros and poles for the same pass edges and the ripples that the shared margin leaves."""
    found = iir.margin(FAMILIES[name], select, order)
    log_g = found.log_g - 0.5 * found.log_ratio
    ripple = attenuation_db(log_g)
    depth = attenuation_db(log_g + FAMILIES[name].log_discrimination(order, found.e))
    btype = {"low-pass": "low", "high-pass": "high", "band-pass": "bandpass", "band-stop": "bandstop"}[kind]
    # The prototype's band edges that each of scipy's designs takes, mapped back to the digital axis.
    at = {
        "butterworth": math.exp(-0.5 * log_g / order),
        "chebyshev_1": 1.0,
        "chebyshev_2": 1.0 + found.e,
        "elliptic": 1.0,
    }[name]
    if kind == "low-pass":
        edges = 2.0 * math.atan(select.width * at)
    elif kind == "high-pass":
        edges = 2.0 * math.atan(select.width / at)
    else:
        span = select.width * at if kind == "band-pass" else select.width * (1.0 + found.e) / at
        upper = 0.5 * span + math.hypot(0.5 * span, select.centre)
        edges = [2.0 * math.atan(w) for w in (select.centre**2 / upper, upper)]
    wn = np.asarray(edges) / pi
    if name == "butterworth":
        z, p, _ = signal.butter(order, wn, btype, output="zpk")
    elif name == "chebyshev_1":
        z, p, _ = signal.cheby1(order, ripple, wn, btype, output="zpk")
    elif name == "chebyshev_2":
        z, p, _ = signal.cheby2(order, depth, wn, btype, output="zpk")
    else:
        z, p, _ = signal.ellip(order, ripple, depth, wn, btype, output="zpk")
    key = [
        sorted((complex(x) for x in found), key=lambda v: (round(v.real, 6), round(v.imag, 6)))
        for found in (z, p)
    ]
    return key[0], key[1]


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", KINDS)
def test_poles_and_zeros_are_those_of_scipy(kind: str, name: str) -> None:
    select = _selective(from_edges(kind, KINDS[kind], 0.5, 45.0))
    for more in (0, 1):
        least = iir.least_order(FAMILIES[name], select)
        assert least is not None
        order = least.prototype_order + more
        digital = 2 * order if select.doubles else order
        design = iir.reference_design(FAMILIES[name], select, digital)
        zeros, poles = _scipy_roots(name, kind, select, order)
        assert design.order == digital == len(poles)
        assert _all(design.poles) == pytest.approx(poles, abs=1e-8)
        assert len(_all(design.zeros)) == len(zeros)
        assert _all(design.zeros) == pytest.approx(zeros, abs=1e-7)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", KINDS)
def test_the_spare_margin_is_shared_equally_in_log(kind: str, name: str) -> None:
    mask = from_edges(kind, KINDS[kind], 0.5, 45.0)
    select = _selective(mask)
    design = _design(name, select)
    binding = select.transitions[0]
    used = 10.0 ** (-response.gain_db(design, binding.pass_edge.w) / 10.0) - 1.0
    reached = 10.0 ** (-response.gain_db(design, binding.stop_edge.w) / 10.0) - 1.0
    in_pass = math.log(binding.pass_edge.excess / used)
    in_stop = math.log(reached / binding.stop_edge.excess)
    assert in_pass == pytest.approx(in_stop, abs=1e-7)
    assert in_pass > 0.0


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("top", [0.0, 0.5, -20.0])
def test_the_peak_is_the_top_of_the_pass_window(name: str, top: float) -> None:
    for ripple in (0.05, 1.0):
        bands = (
            MaskBand("pass", 0.0, 0.6, top - ripple, top, False, 0),
            MaskBand("stop", 0.75, pi, None, top - 45.0, False, 1),
        )
        for more in (0, 1):
            design = _design(name, _selective(Mask(bands)), more)
            gains = [response.gain_db(design, 0.6 * i / 3000) for i in range(3001)]
            assert max(gains) == pytest.approx(top, abs=1e-5)
            assert max(gains) <= top + 1e-10
            assert min(gains) >= top - ripple
            assert response.gain_db(design, 0.75) <= top - 45.0


@pytest.mark.parametrize("name", FAMILIES)
def test_all_poles_are_inside_the_circle_and_all_zeros_on_it(name: str) -> None:
    for kind, cuts in KINDS.items():
        design = _design(name, _selective(from_edges(kind, cuts, 0.01, 90.0)))
        assert all(root.gap > 0.0 for root in design.poles)
        assert all(root.gap == 0.0 for root in design.zeros)
        assert sum(2 if root.pair else 1 for root in design.zeros) == design.order
        assert all(root.pair or root.angle in (0.0, pi) for root in (*design.poles, *design.zeros))


def test_the_gap_keeps_its_digits_where_the_radius_loses_them() -> None:
    # Butterworth of order 2 with its half-power edge at 1e-6: s = W (-1 +- j) / sqrt(2), z = (1 + s)/(1 - s).
    select = _selective(from_edges("low-pass", (1e-6, 3e-6), 0.1, 20.0))
    found = iir.margin(FAMILIES["butterworth"], select, 4)
    design = iir.reference_design(FAMILIES["butterworth"], select, 4)
    g = mp.exp(mpf(found.log_g) - mpf(found.log_ratio) / 2)
    radius = prewarped(1e-6) * g ** (mpf(-1) / 8)
    for root, k in zip(sorted(design.poles, key=lambda root: root.gap), (1, 3), strict=True):
        s = radius * mp.expj(mp.pi * (mpf(1) / 2 + mpf(k) / 8))
        z = (1 + s) / (1 - s)
        assert abs(root.gap / (1 - abs(z) ** 2) - 1) < 1e-14
        assert abs(root.angle / mp.arg(z) - 1) < 1e-14


EXTREMES = {
    "low edge": from_edges("low-pass", (1e-6, 1.3e-6), 0.1, 120.0),
    "low edge, high-pass": from_edges("high-pass", (1e-6, 1.3e-6), 0.1, 100.0),
    "narrow band-pass": from_edges("band-pass", (1 - 2e-6, 1 - 1e-6, 1 + 1e-6, 1 + 2e-6), 0.1, 100.0),
    "narrow band-stop": from_edges("band-stop", (1 - 2e-6, 1 - 1e-6, 1 + 1e-6, 1 + 2e-6), 0.1, 100.0),
    "next to Nyquist": from_edges("low-pass", (pi - 2e-6, pi - 1e-6), 0.1, 60.0),
    "wide": from_edges("low-pass", (0.001, 3.0), 3.0, 20.0),
}


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("case", EXTREMES)
def test_extreme_masks_are_met(case: str, name: str) -> None:
    mask = EXTREMES[case]
    select = _selective(mask)
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    for order in (least.order, 512):
        design = iir.reference_design(FAMILIES[name], select, order)
        assert math.isfinite(design.log_gain)
        for band in mask.bands:
            for i in range(61):
                gain = response.gain_db(design, band.low + (band.high - band.low) * i / 60)
                # An edge at 1 is good to 1e-16, which is 1e-10 of a transition of 1e-6.
                assert band.most is None or gain <= band.most + 1e-6
                assert band.least is None or gain >= band.least


@pytest.mark.parametrize("name", FAMILIES)
def test_gains_in_doubles_are_those_in_50_digits(name: str) -> None:
    for case in ("low edge", "narrow band-pass", "narrow band-stop"):
        design = _design(name, _selective(EXTREMES[case]))
        for w in (EXTREMES[case].bands[0].high, EXTREMES[case].bands[1].low, 2.0):
            exact = gain_db(design, w)
            assert abs(response.gain_db(design, w) - exact) < 1e-10 * max(1, abs(exact))


def test_an_order_below_the_least_uses_all_of_the_pass_band() -> None:
    select = _selective(from_edges("low-pass", (0.6, 0.75), 0.5, 45.0))
    for family in FAMILIES.values():
        least = iir.least_order(family, select)
        assert least is not None
        design = iir.reference_design(family, select, least.order - 1)
        assert response.gain_db(design, 0.6) == pytest.approx(-0.5, abs=1e-9)
        assert response.gain_db(design, 0.75) > -45.0


def test_a_root_of_the_upper_half_plane_stands_for_itself() -> None:
    root = Root(0.3, 0.19, pair=True)
    # |z| = sqrt(1 - 0.19) = 0.9
    assert root.z == pytest.approx(cmath.rect(0.9, 0.3))


@pytest.mark.parametrize("name", FAMILIES)
def test_a_centred_design_has_as_much_room_above_as_below(name: str) -> None:
    select = _selective(from_edges("low-pass", (0.6, 0.75), 0.5, 45.0))
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    for order in (least.order, least.order + 1):
        design = iir.reference_design(FAMILIES[name], select, order, centred=True)
        gains = [response.gain_db(design, 0.6 * i / 3000) for i in range(3001)]
        assert max(gains) < 0.0
        assert min(gains) + 0.5 == pytest.approx(-max(gains), abs=1e-5)
