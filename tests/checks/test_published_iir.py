"""Published IIR orders, prototypes and ladder elements, recomputed."""

from __future__ import annotations

import math

import pytest

from bandwright.theory.closed_form import butterworth, chebyshev_1, chebyshev_2, elliptic, iir
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.levels import attenuation_db, excess
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Mask
from unit.theory.iir_reference import from_edges

pi = math.pi


def _order(family: Family, mask: Mask) -> iir.IirOrder:
    select = selectivity(mask)
    assert select is not None
    least = iir.least_order(family, select)
    assert least is not None
    return least


def _db(gain: float) -> float:
    return -20.0 * math.log10(gain)


def test_butterworth_by_the_bilinear_transform() -> None:
    # Oppenheim & Schafer, "Discrete-Time Signal Processing", bilinear Butterworth example: 5.305, so 6;
    # gain 0.89125 to 0.2 pi, 0.17783 from 0.3 pi. From memory; five more digits recomputed.
    least = _order(butterworth, from_edges("low-pass", (0.2 * pi, 0.3 * pi), _db(0.89125), _db(0.17783)))
    assert least.unrounded == pytest.approx(5.30440844824, abs=1e-9)
    assert least.order == 6


@pytest.mark.parametrize(
    ("family", "between_both", "up_to_one", "order"),
    # Oppenheim & Schafer, IIR comparison: 14, 8, 8, 6 for 0.4 pi and 0.6 pi, stop band 0.001, pass band
    # 0.99 to 1.01 or, second column, 0.99 to 1. From memory; unrounded orders recomputed.
    [
        (butterworth, 13.3305251054, 13.8613135737, 14),
        (chebyshev_1, 7.34621597744, 7.61671042427, 8),
        (chebyshev_2, 7.34621597744, 7.61671042427, 8),
        (elliptic, 5.08895662605, 5.26322179788, 6),
    ],
)
def test_all_families_at_one_mask(family: Family, between_both: float, up_to_one: float, order: int) -> None:
    edges = (0.4 * pi, 0.6 * pi)
    # The stop band counts from 1 in the book, from the highest pass gain here.
    both = _order(family, from_edges("low-pass", edges, _db(0.99 / 1.01), _db(0.001 / 1.01)))
    one = _order(family, from_edges("low-pass", edges, _db(0.99), _db(0.001)))
    assert both.unrounded == pytest.approx(between_both, rel=1e-4)
    assert one.unrounded == pytest.approx(up_to_one, rel=1e-10)
    assert both.order == one.order == order


@pytest.mark.parametrize(
    ("family", "unrounded", "order"),
    # Mitra, "Digital Signal Processing": 1 kHz to 5 kHz (analogue), 1 dB, 40 dB: 3.2811, 2.6059, 2.2331.
    # From memory; more digits recomputed.
    [
        (butterworth, 3.28110066548, 4),
        (chebyshev_1, 2.60590908404, 3),
        (chebyshev_2, 2.60590908404, 3),
        (elliptic, 2.23308279542, 3),
    ],
)
def test_analogue_orders(family: Family, unrounded: float, order: int) -> None:
    real = family.real_order(4.0, excess(40.0) / excess(1.0))
    assert real == pytest.approx(unrounded, rel=1e-11)
    assert math.ceil(real) == order


def test_half_power_edge() -> None:
    # Proakis & Manolakis, "Digital Signal Processing": half power at 500 Hz, 40 dB at 1000 Hz: 6.64.
    # From memory; more digits recomputed.
    assert butterworth.real_order(1.0, excess(40.0)) == pytest.approx(6.64378405142, rel=1e-11)


def test_orders_on_either_side_of_a_whole_number() -> None:
    # Half power at f0, 40 dB and 40.0005 dB at 10 f0: an identity, log(1e4 - 1) / log(100).
    assert butterworth.real_order(9.0, excess(40.0)) == pytest.approx(1.99997828419, rel=1e-11)
    assert butterworth.real_order(9.0, excess(40.0005)) == pytest.approx(2.00000328669, rel=1e-11)
    assert attenuation_db(butterworth.log_discrimination(2, 9.0)) == pytest.approx(40.0004342728, rel=1e-11)


@pytest.mark.parametrize(
    ("order", "factors"),
    # c of the factors s^2 + c s + 1 of Butterworth polynomials: standard tables, from memory.
    [(3, [1.0]), (4, [0.7654, 1.8478]), (5, [0.6180, 1.6180]), (6, [0.5176, 1.4142, 1.9319])],
)
def test_butterworth_factors(order: int, factors: list[float]) -> None:
    poles = butterworth.prototype(order, 1.0, 0.0).poles
    assert sorted(-2.0 * pole.real for pole in poles if pole.imag) == pytest.approx(factors, abs=1e-4)
    assert all(abs(pole) == pytest.approx(1.0, rel=1e-15) for pole in poles)


@pytest.mark.parametrize(
    ("order", "ripple", "elements", "load"),
    # Matthaei, Young & Jones 1964, "Microwave filters", table 4.05-2 (pass edge 1 rad/s); from memory.
    [
        (3, 0.5, [1.5963, 1.0967, 1.5963], 1.0),
        (3, 1.0, [2.0236, 0.9941, 2.0236], 1.0),
        (4, 0.5, [1.6703, 1.1926, 2.3661, 0.8419], 1.9841),
        (4, 1.0, [2.0991, 1.0644, 2.8311, 0.7892], 2.6597),
    ],
)
def test_chebyshev_ladders(order: int, ripple: float, elements: list[float], load: float) -> None:
    poles = chebyshev_1.prototype(order, 1.0, math.log(excess(ripple))).poles
    reflecting = [complex(0.0, math.cos((2 * k - 1) * pi / (2 * order))) for k in range(1, order // 2 + 1)]
    through, reflected = _monic(list(poles)), _monic(reflecting + [0j] * (order % 2))
    # Input impedance (D + R) / (D - R), whose continued fraction gives the ladder.
    above = [d + r for d, r in zip(through, reflected, strict=True)]
    below = [d - r for d, r in zip(through, reflected, strict=True)][1:]
    found = []
    for _ in range(order):
        found.append(above[0] / below[0])
        end = above[1] / below[0]
        # The remainder falls by two degrees.
        above, below = below, [a - found[-1] * b for a, b in zip(above, [*below, 0.0], strict=True)][2:]
    assert found == pytest.approx(elements, abs=1e-4)
    assert max(end, 1.0 / end) == pytest.approx(load, abs=1e-4)


def _monic(roots: list[complex]) -> list[float]:
    """The polynomial with these roots and the conjugates of complex ones, highest power first."""
    product = [1.0]
    for root in roots:
        factor = [1.0, -2.0 * root.real, abs(root) ** 2] if root.imag else [1.0, -root.real]
        longer = [0.0] * (len(product) + len(factor) - 1)
        for i, a in enumerate(product):
            for j, b in enumerate(factor):
                longer[i + j] += a * b
        product = longer
    return product


@pytest.mark.parametrize(
    ("pass_edge", "stop_edge", "ripple", "depth", "orders"),
    [
        # Gain 0.99 to 1 up to 0.2 pi, 60 dB from 0.4 and from 0.24 pi: often quoted, no source.
        (0.2, 0.4, _db(0.99), 60.0, {butterworth: 12}),
        (0.2, 0.24, _db(0.99), 60.0, {butterworth: 45, chebyshev_2: 15}),
        # 20 Hz, 0.1 dB, 70 dB from 25 Hz at 4 kHz: scipy.signal.buttord, cheb1ord, cheb2ord, ellipord.
        (0.01, 0.0125, 0.1, 70.0, {butterworth: 45, chebyshev_1: 16, chebyshev_2: 16, elliptic: 9}),
    ],
)
def test_orders_of_narrow_transitions(
    pass_edge: float, stop_edge: float, ripple: float, depth: float, orders: dict[Family, int]
) -> None:
    for family, order in orders.items():
        mask = from_edges("low-pass", (pass_edge * pi, stop_edge * pi), ripple, depth)
        assert _order(family, mask).order == order


def test_the_unrounded_elliptic_order_of_a_narrow_low_pass() -> None:
    # 20 Hz, 0.1 dB, 70 dB from 25 Hz at 4 kHz: 8.22 (mpmath.ellipk, see unit/theory/iir_reference.py).
    mask = from_edges("low-pass", (0.01 * pi, 0.0125 * pi), 0.1, 70.0)
    assert _order(elliptic, mask).unrounded == pytest.approx(8.22, abs=0.005)
