"""Masks as the low-pass prototype sees them, against the band transformations in 50 digits."""

from __future__ import annotations

import math
import random

import pytest

from bandwright.theory.closed_form.selectivity import Selectivity, selectivity
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.closed_form.warping import frequency
from unit.theory.iir_reference import excess, from_edges, mp, mpf, prewarped

pi = math.pi


def _selective(mask: Mask) -> Selectivity:
    found = selectivity(mask)
    assert found is not None
    return found


def _close_pairs(count: int) -> list[tuple[float, float]]:
    """Edges whose distance is 1e-6 to 1 of the lower one, all over the axis."""
    dice = random.Random(7)
    found = []
    while len(found) < count:
        low = math.exp(dice.uniform(math.log(1e-6), math.log(3.1)))
        high = low * (1.0 + math.exp(dice.uniform(math.log(1e-6), 0.0)))
        if high < 3.14:
            found.append((low, high))
    return found


def test_the_stretch_of_close_edges_keeps_all_digits() -> None:
    for low, high in _close_pairs(100):
        exact = prewarped(high) / prewarped(low) - 1
        for kind in ("low-pass", "high-pass"):
            (one,) = _selective(from_edges(kind, (low, high), 0.1, 60.0)).transitions
            assert abs(one.e / exact - 1) < 2e-15
            assert one.until == math.inf


def test_a_band_pass_has_its_pass_edges_at_one() -> None:
    dice = random.Random(8)
    for _ in range(50):
        s1, p1, p2, s2 = sorted(dice.uniform(0.01, 3.1) for _ in range(4))
        select = _selective(from_edges("band-pass", (s1, p1, p2, s2), 0.1, (50.0, 60.0)))
        low, high = prewarped(p1), prewarped(p2)
        assert abs(select.centre / mp.sqrt(low * high) - 1) < 1e-15
        assert abs(select.width / (high - low) - 1) < 1e-15
        exact = {}
        for side, w in (("high", s1), ("low", s2)):
            edge = prewarped(w)
            exact[side] = abs(edge**2 - low * high) / (edge * (high - low)) - 1
        assert {one.stop_edge.side for one in select.transitions} == {"low", "high"}
        for one in select.transitions:
            assert abs(one.e / exact[one.stop_edge.side] - 1) < 3e-15
            assert one.stop_edge.w == (s1 if one.stop_edge.side == "high" else s2)
            assert one.pass_edge.w == (p1 if one.stop_edge.side == "high" else p2)
        assert select.transitions[0].e <= select.transitions[1].e


def test_a_band_stop_has_its_stop_edges_at_one() -> None:
    dice = random.Random(9)
    for _ in range(50):
        p1, s1, s2, p2 = sorted(dice.uniform(0.01, 3.1) for _ in range(4))
        select = _selective(from_edges("band-stop", (p1, s1, s2, p2), 0.1, 50.0))
        low, high = prewarped(s1), prewarped(s2)
        assert abs(select.centre / mp.sqrt(low * high) - 1) < 1e-15
        for one in select.transitions:
            edge = prewarped(p1 if one.stop_edge.side == "low" else p2)
            exact = abs(low * high - edge**2) / (edge * (high - low)) - 1
            assert abs(one.e / exact - 1) < 3e-15
            assert one.pass_edge.item == (0 if one.stop_edge.side == "low" else 2)


@pytest.mark.parametrize("kind", ["band-pass", "band-stop"])
def test_no_other_centre_widens_a_transition(kind: str) -> None:
    # A centre moved either way, with the given edges kept inside, brings both transitions nearer.
    cuts = (0.5, 0.6, 0.9, 1.1)
    best = {one.stop_edge.side: one.e for one in _selective(from_edges(kind, cuts, 0.1, 50.0)).transitions}
    for low, high in ((0.59, 0.9), (0.6, 0.91), (0.58, 0.92)):
        other = _selective(from_edges(kind, (0.5, low, high, 1.1), 0.1, 50.0))
        for one in other.transitions:
            assert one.e < best[one.stop_edge.side]


def test_levels_count_from_the_highest_pass_gain() -> None:
    passing = MaskBand("pass", 0.0, 0.5, -1.0, 0.5, False, 3)
    relative = _selective(Mask((passing, MaskBand("stop", 0.7, pi, None, -60.0, True, 5))))
    absolute = _selective(Mask((passing, MaskBand("stop", 0.7, pi, None, -60.0, False, 5))))
    assert relative.peak_db == absolute.peak_db == 0.5
    for select, depth in ((relative, 60.0), (absolute, 60.5)):
        (one,) = select.transitions
        assert (one.pass_edge.db, one.stop_edge.db) == (1.5, depth)
        assert (one.pass_edge.item, one.stop_edge.item) == (3, 5)
        assert abs(one.discrimination / (excess(depth) / excess(1.5)) - 1) < 1e-14


def test_pass_bands_of_a_band_stop_share_the_lower_top() -> None:
    bands = (
        MaskBand("pass", 0.0, 0.5, -1.0, 0.5, False, 0),
        MaskBand("stop", 0.7, 0.9, None, -60.0, True, 1),
        MaskBand("pass", 1.2, pi, -2.0, 0.0, False, 2),
    )
    select = _selective(Mask(bands))
    assert select.peak_db == 0.0
    assert {one.pass_edge.item: one.pass_edge.db for one in select.transitions} == {0: 1.0, 2: 2.0}


def test_stop_bands_that_touch_are_asked_as_far_as_a_deeper_one_goes() -> None:
    passing = MaskBand("pass", 0.0, 0.5, -1.0, 0.0, True, 0)
    rising = Mask(
        (
            passing,
            MaskBand("stop", 0.7, 1.0, None, -40.0, True, 1),
            MaskBand("stop", 1.0, 2.0, None, -80.0, True, 2),
        )
    )
    ends = [one.until for one in _selective(rising).transitions]
    far = float(prewarped(2.0) / prewarped(0.5) - 1)
    assert ends == pytest.approx([far, far])
    falling = Mask(
        (
            passing,
            MaskBand("stop", 0.7, 1.0, None, -80.0, True, 1),
            MaskBand("stop", 1.0, pi, None, -40.0, True, 2),
        )
    )
    first, second = _selective(falling).transitions
    assert first.until == pytest.approx(float(prewarped(1.0) / prewarped(0.5) - 1))
    assert second.until == math.inf


def test_a_pass_band_that_begins_late_has_an_inner_end_where_levels_are_relative() -> None:
    passing = MaskBand("pass", 0.2, 0.5, -1.0, 0.0, True, 0)
    inner = float(prewarped(0.2) / prewarped(0.5))
    for relative, expected in ((True, inner), (False, 0.0)):
        stop = MaskBand("stop", 0.7, pi, None, -40.0, relative, 1)
        assert _selective(Mask((passing, stop))).transitions[0].inner == pytest.approx(expected)
    # A band-stop touches 0 or Nyquist with one of its pass bands, or has its inner end at the farther one.
    below, above = (
        MaskBand("pass", 0.1, 0.5, -1.0, 0.0, True, 0),
        MaskBand("pass", 1.2, pi, -1.0, 0.0, True, 2),
    )
    stop = MaskBand("stop", 0.7, 0.9, None, -40.0, True, 1)
    assert _selective(Mask((below, stop, above))).transitions[0].inner == 0.0
    cut = MaskBand("pass", 1.2, 3.0, -1.0, 0.0, True, 2)
    low, high = prewarped(0.7), prewarped(0.9)
    places = [prewarped(w) * (high - low) / abs(low * high - prewarped(w) ** 2) for w in (0.1, 3.0)]
    assert _selective(Mask((below, stop, cut))).transitions[0].inner == pytest.approx(float(min(places)))


_PASS = MaskBand("pass", 0.0, 0.5, -1.0, 0.0, True, 0)
_STOP = MaskBand("stop", 0.7, 1.0, None, -40.0, True, 1)


@pytest.mark.parametrize(
    "bands",
    [
        (_PASS,),
        (_STOP,),
        (_PASS, _STOP, MaskBand("bounds", 0.0, pi, None, 1.0, False, 2)),
        (_PASS, MaskBand("pass", 0.5, 0.6, -1.0, 0.0, True, 2), _STOP),
        (
            _PASS,
            _STOP,
            MaskBand("pass", 1.2, 2.0, -1.0, 0.0, True, 2),
            MaskBand("stop", 2.2, pi, None, -40.0, True),
        ),
        (
            _PASS,
            _STOP,
            MaskBand("stop", 1.0, 1.1, None, -50.0, True, 2),
            MaskBand("pass", 1.2, pi, -1.0, 0.0, True),
        ),
        (_PASS, MaskBand("stop", 0.7, pi, None, None, False, 1)),
        (_PASS, MaskBand("stop", 0.7, pi, -80.0, -40.0, False, 1)),
        (MaskBand("pass", 0.0, 0.5, None, 0.0, False, 0), _STOP),
        (MaskBand("pass", 0.0, 0.5, -1.0, None, False, 0), _STOP),
        (_PASS, MaskBand("stop", 0.7, pi, None, 0.0, False, 1)),
        (_PASS, MaskBand("stop", 0.5, pi, None, -40.0, True, 1)),
        (_PASS, MaskBand("stop", 0.4, pi, None, -40.0, True, 1)),
        (_PASS, MaskBand("stop", pi, pi, None, -40.0, True, 1)),
        (MaskBand("stop", 0.0, 0.0, None, -40.0, True, 1), MaskBand("pass", 0.5, pi, -1.0, 0.0, True, 0)),
        # No one gain lies in both pass windows.
        (
            MaskBand("pass", 0.0, 0.5, -1.0, 0.0, False, 0),
            _STOP,
            MaskBand("pass", 1.2, pi, 1.0, 2.0, False, 2),
        ),
        # A window that floats beside one that does not has no one top.
        (_PASS, _STOP, MaskBand("pass", 1.2, pi, -1.0, 1.0, False, 2)),
    ],
)
def test_other_shapes_of_masks_are_not_taken(bands: tuple[MaskBand, ...]) -> None:
    assert selectivity(Mask(bands)) is None


def test_frequency_is_the_inverse_of_prewarping() -> None:
    for w in (1e-9, 0.1, 1.5, 3.0, pi):
        assert frequency(float(prewarped(w))) == pytest.approx(w, rel=1e-15)
    assert abs(mpf(frequency(1.0)) - mp.pi / 2) < 1e-15
