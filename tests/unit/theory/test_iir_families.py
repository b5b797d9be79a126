"""Orders, discriminations and poles of the families, against the textbook formulas in 50 digits."""

from __future__ import annotations

import math
import random
from collections.abc import Iterator

import pytest

from bandwright.theory.closed_form.levels import attenuation_db, excess
from unit.theory import iir_reference as reference
from unit.theory.iir_reference import FAMILIES, mp, mpf


def _cases(count: int, seed: int) -> Iterator[tuple[float, float, float]]:
    """(e, pass-band excess, stop-band excess): e from 1e-6 to 20, ripple 0.001 to 3 dB, 10 to 200 dB."""
    dice = random.Random(seed)
    for _ in range(count):
        e = math.exp(dice.uniform(math.log(1e-6), math.log(20.0)))
        yield (
            e,
            excess(math.exp(dice.uniform(math.log(1e-3), math.log(3.0)))),
            excess(dice.uniform(10.0, 200.0)),
        )


@pytest.mark.parametrize("name", FAMILIES)
def test_the_real_order_keeps_all_digits(name: str) -> None:
    for e, gp, gs in _cases(120, 1):
        order = FAMILIES[name].real_order(e, gs / gp)
        exact = reference.real_order(name, 1 + mpf(e), mpf(gs / gp))
        assert abs(order / exact - 1) < 3e-15


@pytest.mark.parametrize("name", FAMILIES)
def test_the_edge_is_the_inverse_of_the_order(name: str) -> None:
    for e, gp, gs in _cases(120, 2):
        order = FAMILIES[name].real_order(e, gs / gp)
        assert FAMILIES[name].edge(order, math.log(gs / gp)) == pytest.approx(e, rel=2e-14)


@pytest.mark.parametrize("name", FAMILIES)
def test_discrimination_rise_and_fall_are_those_of_the_characteristic_function(name: str) -> None:
    dice = random.Random(3)
    for e, gp, gs in _cases(60, 3):
        family, order = FAMILIES[name], min(50, math.ceil(FAMILIES[name].real_order(e, gs / gp)))
        f = reference.characteristic(name, order, 1 + mpf(e))
        at_edge = 2 * mp.log(abs(f(1 + mpf(e))))
        inside = e * dice.random()
        rise = 2 * mp.log(abs(f(1 + mpf(inside))))
        fall = at_edge - 2 * mp.log(abs(f((1 + mpf(e)) / (1 + mpf(inside)))))
        for found, exact in (
            (family.log_discrimination(order, e), at_edge),
            (family.log_rise(order, e, inside, math.inf), rise),
            (family.log_fall(order, e, inside), fall),
        ):
            assert abs(found - exact) < 2e-14 * max(1, exact)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("order", range(1, 9))
def test_the_rise_over_a_part_of_the_stop_band_is_its_least(name: str, order: int) -> None:
    e = 0.3
    f = reference.characteristic(name, order, 1 + mpf(e))
    for low, high in ((0.3, 0.35), (0.31, 0.6), (0.5, 0.52), (0.9, 4.0), (3.0, 3.1), (0.1, 0.2)):
        sampled = min(abs(f(1 + low + (high - low) * mpf(i) / 200)) for i in range(201))
        rise = FAMILIES[name].log_rise(order, e, low, high)
        # The samples may miss a minimum by a little, never undercut it.
        assert rise <= 2 * mp.log(sampled) + 1e-12
        assert rise == pytest.approx(float(2 * mp.log(sampled)), abs=6e-3)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("order", range(1, 7))
def test_the_lull_is_the_least_between_a_frequency_and_the_pass_edge(name: str, order: int) -> None:
    f = reference.characteristic(name, order, mpf("1.3"))
    for x in (0.3, 0.8, 0.97, 0.999):
        lull = FAMILIES[name].log_lull(order, 0.3, x)
        values = [f(x + (1 - mpf(x)) * i / 200).real for i in range(201)]
        if min(values) <= 0 <= max(values):
            assert lull == -math.inf
        else:
            assert lull == pytest.approx(float(2 * mp.log(min(abs(v) for v in values))), abs=1e-10)


@pytest.mark.parametrize("name", FAMILIES)
def test_poles_keep_all_digits_of_their_distance_from_the_axis(name: str) -> None:
    for e, gp, gs in _cases(12, 4):
        family, order = FAMILIES[name], min(40, math.ceil(FAMILIES[name].real_order(e, gs / gp)))
        prototype = family.prototype(order, e, math.log(gp))
        assert prototype.order == order
        for pole in prototype.poles:
            real, imaginary = reference.pole_error(name, order, 1 + mpf(e), mpf(math.exp(math.log(gp))), pole)
            assert pole.real < 0.0 <= pole.imag
            assert real < 5e-14
            assert imaginary < 4e-15


@pytest.mark.parametrize("name", FAMILIES)
def test_poles_of_orders_that_hardly_discriminate(name: str) -> None:
    for order, e, g in ((1, 0.05, 0.5), (2, 0.05, 0.5), (3, 1e-4, 2.0), (5, 0.3, 0.01)):
        for pole in FAMILIES[name].prototype(order, e, math.log(g)).poles:
            real, imaginary = reference.pole_error(name, order, 1 + mpf(e), mpf(g), pole)
            assert real < 1e-14
            assert imaginary < 4e-15


@pytest.mark.parametrize("name", ["chebyshev_2", "elliptic"])
@pytest.mark.parametrize("order", [1, 2, 5, 12, 31])
def test_zeros_are_the_poles_of_the_characteristic_function(name: str, order: int) -> None:
    f = reference.characteristic(name, order, mpf("1.01"))
    zeros = FAMILIES[name].prototype(order, 0.01, -3.0).zeros
    assert len(zeros) == order // 2
    for zero in zeros:
        # Near a simple pole, F times the distance from it is level; the distance is the error of `zero`.
        step = mpf(10) ** -20
        assert abs(step * f(zero + step) / f(mpf(zero))) < 1e-14 * zero


def test_a_family_of_no_discrimination_needs_no_order() -> None:
    for family in FAMILIES.values():
        assert family.real_order(0.5, 1.0) == 0.0
        assert family.real_order(0.5, 0.3) == 0.0
        assert family.real_order(0.5, math.inf) == math.inf


def test_levels_keep_small_and_large_numbers() -> None:
    # d/dA 10^(A/10) at 0 is ln(10)/10.
    assert excess(1e-15) == pytest.approx(1e-15 * math.log(10.0) / 10.0, rel=1e-14)
    assert excess(200.0) == pytest.approx(1e20, rel=1e-13)
    assert excess(1e5) == math.inf
    for decibels in (1e-9, 0.1, 3.0, 60.0, 500.0, 2900.0):
        assert attenuation_db(math.log(excess(decibels))) == pytest.approx(decibels, rel=1e-13)
    # exp(2000) is beyond the range of a double.
    assert attenuation_db(2000.0) == pytest.approx(20000.0 / math.log(10.0), rel=1e-14)


@pytest.mark.parametrize("name", FAMILIES)
def test_orders_far_beyond_the_need_neither_overflow_nor_divide_by_zero(name: str) -> None:
    family = FAMILIES[name]
    for order, e, log_g in ((512, 1e6, -3000.0), (512, 1e-9, -1.0), (1, 1e9, -40.0), (511, 50.0, -2500.0)):
        assert math.isfinite(family.log_discrimination(order, e))
        prototype = family.prototype(order, e, log_g)
        assert prototype.order == order
        assert all(math.isfinite(abs(pole)) and pole.real < 0.0 for pole in prototype.poles)
