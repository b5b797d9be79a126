"""Expanded polynomials, sections and their costs."""

from __future__ import annotations

import math

import numpy as np
import pytest

from bandwright.theory.closed_form import iir, polynomials, response, transforms
from bandwright.theory.closed_form.selectivity import Selectivity, selectivity
from bandwright.theory.closed_form.types import Design, Mask, Root
from unit.theory.iir_reference import FAMILIES, from_edges, mp, mpf

pi = math.pi

MASKS = {
    "low-pass": from_edges("low-pass", (0.6, 0.75), 0.1, 60.0),
    "half-band": from_edges("low-pass", (0.48 * pi, 0.52 * pi), 0.1, 60.0),
    "high-pass": from_edges("high-pass", (0.6, 0.75), 0.1, 60.0),
    "band-pass": from_edges("band-pass", (0.5, 0.6, 0.9, 1.1), 0.1, 50.0),
    "band-stop": from_edges("band-stop", (0.5, 0.6, 0.9, 1.1), 0.1, 50.0),
    "narrow": from_edges("band-pass", (0.999, 0.9995, 1.0005, 1.001), 0.1, 50.0),
}


def _selective(mask: Mask) -> Selectivity:
    found = selectivity(mask)
    assert found is not None
    return found


def _design(name: str, mask: Mask) -> Design:
    least = iir.least_order(FAMILIES[name], _selective(mask))
    assert least is not None
    return iir.reference_design(FAMILIES[name], _selective(mask), least.order)


def _exact(roots: tuple[Root, ...]) -> list[mpf]:
    product = [mpf(1)]
    for root in roots:
        radius, angle = mp.sqrt(1 - mpf(root.gap)), mp.pi if root.angle == pi else mpf(root.angle)
        factor = [mpf(1), -radius * mp.cos(angle)]
        if root.pair:
            factor = [mpf(1), 2 * factor[1], 1 - mpf(root.gap)]
        longer = [mpf(0)] * (len(product) + len(factor) - 1)
        for i, a in enumerate(product):
            for j, b in enumerate(factor):
                longer[i + j] += a * b
        product = longer
    return product


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("case", MASKS)
def test_coefficients_are_good_to_their_last_digits(case: str, name: str) -> None:
    design = _design(name, MASKS[case])
    for roots in (design.zeros, design.poles):
        found, exact = polynomials.expanded(roots), _exact(roots)
        assert len(found) == len(exact) == design.order + 1
        for c, e in zip(found, exact, strict=True):
            if c == 0.0:
                assert abs(e) < 1e-13 * max(abs(other) for other in exact)
            else:
                assert abs(c / e - 1) < 2e-14


def test_coefficients_that_cancel_are_zero() -> None:
    # Zeros at +-j and poles mirrored about pi/2: no odd powers.
    centred = from_edges("band-pass", (pi / 2 - 0.4, pi / 2 - 0.3, pi / 2 + 0.3, pi / 2 + 0.4), 0.1, 50.0)
    for name in FAMILIES:
        design = _design(name, centred)
        for roots in (design.zeros, design.poles):
            assert all(c == 0.0 for c in polynomials.expanded(roots)[1::2])
    assert polynomials.factor(Root(pi / 2, 0.0, pair=True)) == (1.0, 0.0, 1.0)
    assert polynomials.factor(Root(pi, 0.0, pair=False)) == (1.0, 1.0)
    assert polynomials.factor(Root(0.0, 0.19, pair=False)) == pytest.approx((1.0, -0.9), rel=1e-15)


def test_binomial_numerators_are_exact() -> None:
    nyquist = Root(pi, 0.0, pair=False)
    assert polynomials.expanded((nyquist,) * 45) == [math.comb(45, k) for k in range(46)]


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("case", MASKS)
def test_sections_multiply_to_the_design(case: str, name: str) -> None:
    design = _design(name, MASKS[case])
    sections = polynomials.sections(design)
    assert len(sections) == (design.order + 1) // 2
    w = np.array([0.4, 0.55, 0.7, 1.0, 2.0])
    z = np.exp(-1j * w)
    h = math.exp(design.log_gain) * np.prod(
        [(s.b0 + s.b1 * z + s.b2 * z**2) / (1.0 + s.a1 * z + s.a2 * z**2) for s in sections], axis=0
    )
    for place, value in zip(w, h, strict=True):
        assert 20.0 * math.log10(abs(value)) == pytest.approx(response.gain_db(design, place), abs=1e-5)
    assert all(s.a2 < 1.0 and abs(s.a1) < 1.0 + s.a2 for s in sections)
    # The most resonant section is the last.
    assert sections[-1].a2 == max(s.a2 for s in sections)


def test_a_pole_takes_the_zero_nearest_to_it() -> None:
    design = _design("elliptic", MASKS["low-pass"])
    sharpest = min((root for root in design.poles if root.pair), key=lambda root: root.gap)
    nearest = min((root for root in design.zeros if root.pair), key=lambda root: abs(root.z - sharpest.z))
    assert polynomials.sections(design)[-1].b1 == -2.0 * math.cos(nearest.angle)


def test_a_single_real_pole_takes_a_single_real_zero() -> None:
    select = _selective(MASKS["low-pass"])
    for name, family in FAMILIES.items():
        sections = polynomials.sections(iir.reference_design(family, select, 7))
        single = [s for s in sections if s.a2 == 0.0]
        assert len(single) == 1, name
        assert single[0].b1 == 1.0
        assert single[0].b2 == 0.0


def test_a_pair_of_poles_leaves_a_single_zero_to_a_single_pole() -> None:
    # The pair at 3.0 is nearest to the single zero at Nyquist.
    poles = (Root(3.0, 0.1, pair=True), Root(0.0, 0.5, pair=False))
    zeros = (Root(pi, 0.0, pair=False), Root(0.5, 0.0, pair=True))
    first, last = polynomials.sections(Design(poles, zeros, 0.0))
    assert (first.b1, first.b2, first.a2) == (1.0, 0.0, 0.0)
    assert last.b1 == -2.0 * math.cos(0.5)


def test_costs_leave_out_what_is_free() -> None:
    # (1 + 1/z)^2 / (1 - 0.5/z + 0.25/z^2) times a gain: 2 for the poles, 1 for the gain of a cascade.
    nyquist = Root(pi, 0.0, pair=False)
    design = Design((Root(pi / 3, 0.75, pair=True),), (nyquist, nyquist), math.log(0.3))
    assert polynomials.section_multiplications(design) == 3
    b, a = polynomials.expand(design)
    assert b == pytest.approx([0.3, 0.6, 0.3])
    assert a == pytest.approx([1.0, -0.5, 0.25])
    # Folded: 0.3 and 0.6; and both a.
    assert polynomials.multiplications(b, a) == 4
    assert polynomials.multiplications([1.0, 2.0, 1.0], a) == 2
    assert polynomials.multiplications([0.5, 0.0, 0.7], a) == 4


def test_the_ratio_is_that_of_all_coefficients_but_zeros() -> None:
    assert polynomials.coefficient_ratio([0.0, 2.0, -8.0], [1.0, 0.5]) == 16.0
    assert polynomials.coefficient_ratio([0.25, 0.5]) == 2.0
    # exp(-800) is below the range of a double.
    below = Design((Root(0.1, 0.1, pair=True),), (Root(pi, 0.0, pair=False),) * 2, -800.0)
    assert polynomials.coefficient_ratio(*polynomials.expand(below)) == math.inf


def test_the_sign_of_a_design_is_that_of_its_numerator() -> None:
    design = Design((Root(0.0, 0.75, pair=False),), (), 0.0, -1)
    assert polynomials.expand(design) == ([-1.0], [1.0, -0.5])


@pytest.mark.parametrize(
    ("name", "stop_edge", "order", "largest", "smallest"),
    # Gain 0.99 to 1 up to 0.2 pi, 60 dB from the stop edge (in pi), the stop band met exactly:
    # figures often quoted, no source.
    [
        ("butterworth", 0.4, 12, 42.0, 0.0021),
        ("chebyshev_2", 0.24, 15, 115.0, 3.0e-4),
    ],
)
def test_coefficients_of_well_known_designs(
    name: str, stop_edge: float, order: int, largest: float, smallest: float
) -> None:
    mask = from_edges("low-pass", (0.2 * pi, stop_edge * pi), -20.0 * math.log10(0.99), 60.0)
    select = _selective(mask)
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    assert least.order == order
    found = iir.margin(FAMILIES[name], select, order)
    prototype = FAMILIES[name].prototype(order, found.e, found.log_g - found.log_ratio)
    design = transforms.to_digital(prototype, select, 1.0 + found.e, 0.0)
    magnitudes = [abs(c) for c in polynomials.expand(design)[1]]
    assert max(magnitudes) == pytest.approx(largest, rel=0.01)
    assert min(magnitudes) == pytest.approx(smallest, rel=0.02)
