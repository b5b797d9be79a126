"""Least orders: N meets the mask and N - 1 cannot, on seeded masks of every shape, by brute force."""

from __future__ import annotations

import math
import random
import zlib
from itertools import pairwise

import pytest

from bandwright import limits
from bandwright.theory.closed_form import (
    butterworth,
    chebyshev_1,
    chebyshev_2,
    elliptic,
    iir,
    placement,
    response,
)
from bandwright.theory.closed_form.selectivity import Selectivity, selectivity
from bandwright.theory.closed_form.types import Mask, MaskBand
from unit.theory import iir_reference as reference
from unit.theory import iir_search
from unit.theory.iir_reference import FAMILIES, mpf

pi = math.pi

SHAPES = (
    "low-pass",
    "high-pass",
    "band-pass",
    "band-stop",
    "two levels",
    "three levels",
    "stop band ends",
    "narrow stop band",
    "deeper first",
    "deeper between",
    "stop bands end",
    "pass band begins",
)


def _mask(dice: random.Random, shape: str) -> Mask:
    """A mask of a shape with random edges and levels, absolute or relative."""
    absolute_pass, absolute_stop = dice.random() < 0.3, dice.random() < 0.3
    top = dice.choice([0.0, 0.5, -1.0]) if absolute_pass else 0.0
    depth = dice.uniform(20.0, 60.0)

    def edges(count: int) -> list[float]:
        while True:
            found = sorted(math.exp(dice.uniform(math.log(0.02), math.log(3.0))) for _ in range(count))
            if all(b > 1.05 * a + 0.005 for a, b in pairwise(found)):
                return found

    def passing(low: float, high: float) -> MaskBand:
        ripple = math.exp(dice.uniform(math.log(0.01), math.log(3.0)))
        return MaskBand("pass", low, high, top - ripple, top, not absolute_pass)

    def stopping(low: float, high: float, deeper: float = 0.0) -> MaskBand:
        return MaskBand("stop", low, high, None, -depth - deeper, not absolute_stop)

    def touching(p: float, *cuts: tuple[float, float, float]) -> tuple[MaskBand, ...]:
        return (passing(0.0, p), *(stopping(*cut) for cut in cuts))

    more = dice.uniform(3.0, 40.0)
    if shape == "low-pass":
        p, s = edges(2)
        return Mask((passing(0.0, p), stopping(s, pi)))
    if shape == "high-pass":
        s, p = edges(2)
        return Mask((stopping(0.0, s), passing(p, pi)))
    if shape == "band-pass":
        a, b, c, d = edges(4)
        return Mask((stopping(0.0, a), passing(b, c), stopping(d, pi, more)))
    if shape == "band-stop":
        a, b, c, d = edges(4)
        return Mask((passing(0.0, a), stopping(b, c), passing(d, pi)))
    if shape == "two levels":
        p, s, t = edges(3)
        return Mask(touching(p, (s, t, 0.0), (t, pi, more)))
    if shape == "three levels":
        t, u, s, p = edges(4)
        return Mask((stopping(0.0, t, more + 20.0), stopping(t, u, more), stopping(u, s), passing(p, pi)))
    if shape == "stop band ends":
        p, s, t = edges(3)
        return Mask((passing(0.0, p), stopping(s, t)))
    if shape == "narrow stop band":
        p, s = edges(2)
        return Mask((passing(0.0, p), stopping(s, min(3.1, s * dice.uniform(1.005, 1.2)))))
    if shape == "deeper first":
        p, s, t = edges(3)
        return Mask(touching(p, (s, t, more), (t, pi, 0.0)))
    if shape == "deeper between":
        p, s, t = edges(3)
        u = min(3.05, t * dice.uniform(1.01, 1.15))
        return Mask(touching(p, (s, t, 0.0), (t, u, more), (u, pi, 0.0)))
    if shape == "stop bands end":
        z, a, b, c, d, y = edges(6)
        return Mask((stopping(z, a), passing(b, c), stopping(d, y)))
    q, p, s = edges(3)
    return Mask((passing(q, p), stopping(s, pi)))


def _selective(mask: Mask) -> Selectivity:
    found = selectivity(mask)
    assert found is not None
    return found


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("shape", SHAPES)
def test_the_least_order_meets_the_mask_and_one_less_cannot(shape: str, name: str) -> None:
    dice = random.Random(zlib.crc32(shape.encode()))
    checked = 0
    while checked < 3:
        mask = _mask(dice, shape)
        select = selectivity(mask)
        least = iir.least_order(FAMILIES[name], select) if select is not None else None
        if select is None or least is None or least.prototype_order > 30:
            continue
        checked += 1
        order = least.prototype_order
        # The samples of the brute force may miss a minimum of the ripple by 1e-4 at most.
        assert iir_search.margin(name, order, mask) > -1e-4
        assert iir.order_meets(FAMILIES[name], select, least.order)
        if order > 1:
            assert iir_search.margin(name, order - 1, mask) < 1e-4
            assert not iir.order_meets(FAMILIES[name], select, least.order // order * (order - 1))
        assert order - 1 <= least.unrounded / (least.order // order) <= order * (1.0 + 1e-9) or order == 1


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("shape", SHAPES[:6])
def test_margins_agree_with_brute_force(shape: str, name: str) -> None:
    dice = random.Random(zlib.crc32(shape.encode()) + 1)
    checked = 0
    while checked < 2:
        mask = _mask(dice, shape)
        select = selectivity(mask)
        least = iir.least_order(FAMILIES[name], select) if select is not None else None
        if select is None or least is None or not 2 <= least.prototype_order <= 25:
            continue
        checked += 1
        for order in (least.prototype_order - 1, least.prototype_order):
            found = iir.margin(FAMILIES[name], select, order).log_ratio
            assert found == pytest.approx(iir_search.margin(name, order, mask), abs=1e-3)


@pytest.mark.parametrize("name", FAMILIES)
@pytest.mark.parametrize("kind", ["low-pass", "high-pass", "band-pass", "band-stop"])
def test_the_reference_design_meets_the_mask_in_50_digits(kind: str, name: str) -> None:
    edges = {"low-pass": (0.6, 0.75), "high-pass": (0.6, 0.75), "band-pass": (0.5, 0.6, 0.9, 1.1)}
    cuts = edges.get(kind, (0.5, 0.7, 0.9, 1.4))
    select = _selective(reference.from_edges(kind, cuts, 0.2, (50.0, 60.0)))
    mask = reference.from_edges(kind, cuts, 0.2, (50.0, 60.0))
    least = iir.least_order(FAMILIES[name], select)
    assert least is not None
    design = iir.reference_design(FAMILIES[name], select, least.order)
    for band in mask.bands:
        for i in range(41):
            gain = reference.gain_db(design, band.low + (band.high - band.low) * i / 40)
            assert band.most is None or gain <= mpf(band.most) + mpf("1e-9")
            assert band.least is None or gain >= mpf(band.least)


def test_near_whole_numbers_are_ties_and_decided_by_the_last_digits() -> None:
    # Butterworth, N = ln(gs/gp) / (2 ln(Ws/Wp)): with gs/gp = (Ws/Wp)^8 it is 4 exactly.
    ratio = math.tan(0.3) / math.tan(0.2)
    depth = 10.0 * math.log10(1.0 + (10.0**0.1 - 1.0) * ratio**8)
    at = iir.least_order(butterworth, _selective(reference.from_edges("low-pass", (0.4, 0.6), 1.0, depth)))
    beyond = _selective(reference.from_edges("low-pass", (0.4, 0.6), 1.0, depth * (1.0 + 1e-9)))
    above = iir.least_order(butterworth, beyond)
    assert at is not None
    assert above is not None
    assert (at.order, at.tie) == (4, True)
    assert at.unrounded == pytest.approx(4.0, rel=1e-14)
    assert at.spare_db == pytest.approx(0.0, abs=1e-9)
    assert (above.order, above.tie) == (5, False)


@pytest.mark.parametrize(
    ("stop_edge", "orders"),
    # 40 dB from 0.25, 80 dB from 0.4 of Nyquist, ripple 0.1 dB: computed here by brute force (iir_search).
    [((0.25, 0.4), {"butterworth": 27, "chebyshev_1": 10, "chebyshev_2": 15, "elliptic": 8})],
)
def test_two_levels_take_far_less_than_their_hardest_corner(
    stop_edge: tuple[float, float], orders: dict[str, int]
) -> None:
    first, second = (edge * pi for edge in stop_edge)
    passing = MaskBand("pass", 0.0, 0.2 * pi, -0.1, 0.0, True, 0)
    both = Mask(
        (
            passing,
            MaskBand("stop", first, second, None, -40.0, True, 1),
            MaskBand("stop", second, pi, None, -80.0, True, 2),
        )
    )
    corner = Mask((passing, MaskBand("stop", first, pi, None, -80.0, True, 1)))
    for name, order in orders.items():
        least = iir.least_order(FAMILIES[name], _selective(both))
        hardest = iir.least_order(FAMILIES[name], _selective(corner))
        assert least is not None
        assert hardest is not None
        assert least.order == order < hardest.order


def test_a_narrow_stop_band_takes_a_single_zero() -> None:
    # Pass to 10 Hz, 40 dB around 50 Hz at 400 Hz: one pair of zeros at 50 Hz does it.
    bands = (
        MaskBand("pass", 0.0, 0.05 * pi, -1.0, 0.0, True, 0),
        MaskBand("stop", 0.2475 * pi, 0.2525 * pi, None, -40.0, True, 1),
    )
    select = _selective(Mask(bands))
    least = iir.least_order(elliptic, select)
    assert least is not None
    assert least.order == 2
    design = iir.reference_design(elliptic, select, 2)
    assert 0.2475 * pi < design.zeros[0].angle < 0.2525 * pi
    assert max(response.gain_db(design, 0.2475 * pi), response.gain_db(design, 0.2525 * pi)) < -40.0
    whole = _selective(Mask((bands[0], MaskBand("stop", 0.2475 * pi, pi, None, -40.0, True, 1))))
    assert (beyond := iir.least_order(elliptic, whole)) is not None
    assert beyond.order == 3


@pytest.mark.parametrize(
    ("name", "edges", "depths", "order"),
    # Found by brute force (iir_search): the farther band lies where an odd order has left its ripple.
    [
        ("elliptic", (0.2019, 0.3087, 2.0556), (16.67, 34.42), 3),
        ("chebyshev_2", (0.3747, 0.4883, 2.7317), (37.42, 51.79), 9),
    ],
)
def test_an_odd_order_serves_a_far_stop_band_beyond_its_ripple(
    name: str, edges: tuple[float, float, float], depths: tuple[float, float], order: int
) -> None:
    p, s, t = edges
    mask = Mask(
        (
            MaskBand("pass", 0.0, p, -0.5, 0.0, True, 0),
            MaskBand("stop", s, t, None, -depths[0], True, 1),
            MaskBand("stop", t, pi, None, -depths[1], True, 2),
        )
    )
    least = iir.least_order(FAMILIES[name], _selective(mask))
    assert least is not None
    assert least.order == order
    assert order - 1 < least.unrounded <= order
    assert placement.level_order(FAMILIES[name], _selective(mask)) > order
    assert iir_search.margin(name, order, mask) > 0.0
    assert iir_search.margin(name, order - 1, mask) < 0.0


def test_two_ripples_of_a_band_stop_take_the_edge_that_serves_both() -> None:
    # The nearer pass band may ripple 3 dB, the farther one 0.01 dB only.
    mask = Mask(
        (
            MaskBand("pass", 0.0, 0.3 * pi, -3.0, 0.0, True, 0),
            MaskBand("stop", 0.32 * pi, 0.5 * pi, None, -60.0, True, 1),
            MaskBand("pass", 0.7 * pi, pi, -0.01, 0.0, True, 2),
        )
    )
    hardest = Mask(tuple(_with_ripple(band, -0.01) for band in mask.bands))
    for name in ("butterworth", "chebyshev_1", "chebyshev_2", "elliptic"):
        select = _selective(mask)
        least = iir.least_order(FAMILIES[name], select)
        corner = iir.least_order(FAMILIES[name], _selective(hardest))
        assert least is not None
        assert corner is not None
        assert least.order < corner.order
        assert iir_search.margin(name, least.prototype_order, mask) > -1e-4
        assert iir_search.margin(name, least.prototype_order - 1, mask) < 0.0
        design = iir.reference_design(FAMILIES[name], select, least.order)
        for band in mask.bands:
            gains = [
                response.gain_db(design, band.low + (band.high - band.low) * i / 500) for i in range(501)
            ]
            assert max(gains) <= (band.most or 0.0) + 1e-9
            assert band.least is None or min(gains) >= band.least


def _with_ripple(band: MaskBand, least: float) -> MaskBand:
    if band.kind == "stop":
        return band
    return MaskBand("pass", band.low, band.high, least, band.most, band.relative, band.item)


def test_the_wider_transition_of_a_band_filter_is_free_up_to_a_place() -> None:
    for kind, cuts in (("band-pass", (0.5, 0.6, 0.9, 1.4)), ("band-stop", (0.5, 0.6, 0.9, 1.4))):
        for name, family in FAMILIES.items():
            least = iir.least_order(family, _selective(reference.from_edges(kind, cuts, 0.2, 50.0)))
            assert least is not None
            assert least.free_edge is not None
            # The lower transition is the narrower one; the edge across the other is the fourth.
            assert 0.9 < least.free_edge < 1.4
            moved = (*cuts[:3], least.free_edge)
            same = iir.least_order(family, _selective(reference.from_edges(kind, moved, 0.2, 50.0)))
            beyond = (*cuts[:3], 0.99 * least.free_edge)
            more = iir.least_order(family, _selective(reference.from_edges(kind, beyond, 0.2, 50.0)))
            assert same is not None
            assert more is not None
            assert same.unrounded == pytest.approx(least.unrounded, rel=1e-12), name
            assert more.unrounded > least.unrounded * 1.001


def test_the_free_edge_of_a_deeper_stop_band_is_farther_out() -> None:
    cuts = (0.5, 0.6, 0.9, 1.4)
    for family in (butterworth, chebyshev_1):
        least = iir.least_order(
            family, _selective(reference.from_edges("band-pass", cuts, 0.2, (50.0, 60.0)))
        )
        assert least is not None
        assert least.free_edge is not None
        moved = (*cuts[:3], least.free_edge)
        same = iir.least_order(
            family, _selective(reference.from_edges("band-pass", moved, 0.2, (50.0, 60.0)))
        )
        assert same is not None
        assert same.unrounded == pytest.approx(least.unrounded, rel=1e-12)
        assert abs(same.unrounded - least.unrounded) < 1e-9
    for family in (chebyshev_2, elliptic):
        least = iir.least_order(
            family, _selective(reference.from_edges("band-pass", cuts, 0.2, (50.0, 60.0)))
        )
        assert least is not None
        assert least.free_edge is None


def test_the_binding_edge_is_the_stop_edge_of_the_worse_transition() -> None:
    band_pass = _selective(reference.from_edges("band-pass", (0.5, 0.6, 0.9, 0.92), 0.2, 50.0))
    band_stop = _selective(reference.from_edges("band-stop", (0.5, 0.52, 0.9, 1.4), 0.2, 50.0))
    for family in FAMILIES.values():
        above, below = iir.least_order(family, band_pass), iir.least_order(family, band_stop)
        assert above is not None
        assert below is not None
        assert (above.binding_item, above.binding_side) == (2, "low")
        assert (below.binding_item, below.binding_side) == (1, "low")


def test_the_spare_is_what_the_stop_band_gets_below_the_depth_asked() -> None:
    mask = reference.from_edges("low-pass", (0.5, 0.6), 0.2, 50.0)
    select = _selective(mask)
    for family in FAMILIES.values():
        least = iir.least_order(family, select)
        assert least is not None
        deeper = reference.from_edges("low-pass", (0.5, 0.6), 0.2, 50.0 + least.spare_db)
        exact = iir.least_order(family, _selective(deeper))
        assert exact is not None
        assert exact.unrounded == pytest.approx(least.order, rel=1e-12)


def test_an_order_over_the_maximum_is_none() -> None:
    mask = reference.from_edges("low-pass", (1.0, 1.001), 0.01, 120.0)
    assert iir.least_order(butterworth, _selective(mask)) is None
    # scipy.signal.ellipord for the same edges: 33
    assert (least := iir.least_order(elliptic, _selective(mask))) is not None
    assert least.order == 33
    endless = Mask((mask.bands[0], MaskBand("stop", 1.5, pi, None, -1e4, True, 1)))
    for family in FAMILIES.values():
        assert iir.least_order(family, _selective(endless)) is None
    # Band filters have twice the prototype's order.
    wide = iir.least_order(
        butterworth, _selective(reference.from_edges("band-pass", (0.5, 0.505, 0.8, 0.81), 0.1, 60.0))
    )
    assert wide is None or wide.order <= limits.MAX_IIR_ORDER


def test_a_stop_band_shallower_than_the_ripple_takes_order_one() -> None:
    for family in FAMILIES.values():
        least = iir.least_order(family, _selective(reference.from_edges("low-pass", (0.5, 0.6), 3.0, 2.0)))
        assert least is not None
        assert (least.order, least.unrounded, least.tie) == (1, 0.0, False)


def test_a_stop_band_counts_from_the_highest_gain_of_a_pass_band_that_begins_late() -> None:
    # Butterworth has fallen by 2 dB where the pass band begins, so the stop band has to lie 2 dB lower.
    mask = Mask(
        (
            MaskBand("pass", 0.95, 1.0, -3.0, 0.0, True, 0),
            MaskBand("stop", 1.5, pi, None, -40.0, True, 1),
        )
    )
    for family in FAMILIES.values():
        select = _selective(mask)
        least = iir.least_order(family, select)
        assert least is not None
        design = iir.reference_design(family, select, least.order)
        gains = [response.gain_db(design, 0.95 + 0.05 * i / 200) for i in range(201)]
        assert response.gain_db(design, 1.5) <= max(gains) - 40.0 + 1e-9
        assert max(gains) - min(gains) <= 3.0


def test_a_stop_band_between_short_pass_bands_counts_from_the_highest_gain_in_them() -> None:
    mask = Mask(
        (
            MaskBand("pass", 0.64, 0.65, -3.0, 0.0, True, 0),
            MaskBand("stop", 0.7, 0.9, None, -40.0, True, 1),
            MaskBand("pass", 0.96, 0.97, -3.0, 0.0, True, 2),
        )
    )
    for family in FAMILIES.values():
        select = _selective(mask)
        least = iir.least_order(family, select)
        assert least is not None
        design = iir.reference_design(family, select, least.order)
        places = [low + 0.01 * i / 100 for low in (0.64, 0.96) for i in range(101)]
        gains = [response.gain_db(design, w) for w in places]
        edge = max(response.gain_db(design, 0.7), response.gain_db(design, 0.9))
        assert edge <= max(gains) - 40.0 + 1e-9
        assert max(gains) - min(gains) <= 3.0
        # g F^2 from the gains, at the stop edge and at the highest place of the pass bands.
        in_stop, in_pass = (10.0 ** (-gain / 10.0) - 1.0 for gain in (edge, max(gains)))
        spare = (in_stop - 1e4 * in_pass) / (1e4 - 1.0)
        margin = iir.margin(family, select, least.prototype_order).log_ratio
        assert spare == pytest.approx(math.exp(0.5 * margin), rel=1e-3)


def test_orders_of_plain_masks_are_those_in_50_digits() -> None:
    dice = random.Random(11)
    checked = 0
    while checked < 2000:
        kind = dice.choice(["low-pass", "high-pass", "band-pass", "band-stop"])
        count = 2 if kind in ("low-pass", "high-pass") else 4
        edges = tuple(sorted(pi * 10.0 ** dice.uniform(-4.0, -0.005) for _ in range(count)))
        ripple, depth = 10.0 ** dice.uniform(-3.0, 0.5), dice.uniform(10.0, 200.0)
        select = selectivity(reference.from_edges(kind, edges, ripple, depth))
        if select is None:
            continue
        checked += 1
        stretch = _exact_stretch(kind, edges)
        ratio = reference.excess(depth) / reference.excess(ripple)
        for name, family in FAMILIES.items():
            exact = reference.real_order(name, 1 + stretch, ratio)
            least = iir.least_order(family, select)
            if exact * (2 if count == 4 else 1) > limits.MAX_IIR_ORDER:
                assert least is None
                continue
            assert least is not None
            assert least.prototype_order == math.ceil(exact)
            assert abs(least.unrounded / (exact * (least.order // least.prototype_order)) - 1) < 1e-13


def _exact_stretch(kind: str, edges: tuple[float, ...]) -> mpf:
    """The ratio of stop edge to pass edge in the prototype, less 1, of the worse transition."""
    w = [reference.prewarped(edge) for edge in edges]
    if len(w) == 2:
        return w[1] / w[0] - 1
    return min(abs(edge**2 - w[1] * w[2]) / (edge * (w[2] - w[1])) for edge in (w[0], w[3])) - 1
