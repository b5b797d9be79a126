"""Polylines: true points, cut at the panel's edges, dense where the curve bends."""

from __future__ import annotations

import math

import pytest

from bandwright.drawings.axes import Scale
from bandwright.drawings.curves import polylines

FREQUENCY, LEVEL = Scale(0.0, 10.0, 0.0, 500.0), Scale(-50.0, 10.0, 300.0, 0.0)


def test_a_straight_line_takes_two_points() -> None:
    [run] = polylines(lambda w: -w, (), FREQUENCY, LEVEL)
    assert [(point.frequency, point.gain_db) for point in run] == [(0.0, 0.0), (10.0, -10.0)]


def test_a_curve_that_leaves_the_panel_is_cut_at_its_edge() -> None:
    """-25 (w - 5)^2 dB leaves at 5 -+ sqrt 2 below -50 dB."""
    [run] = polylines(lambda w: -25.0 * (w - 5.0) ** 2, (5.0,), FREQUENCY, LEVEL)
    assert run[0].frequency == pytest.approx(5.0 - math.sqrt(2.0), abs=1e-9)
    assert run[-1].frequency == pytest.approx(5.0 + math.sqrt(2.0), abs=1e-9)
    assert all(-50.0 <= point.gain_db <= 10.0 for point in run)


def test_a_zero_splits_the_curve() -> None:
    def gain_db(w: float) -> float:
        return 20.0 * math.log10(abs(w - 3.0)) if w != 3.0 else -math.inf

    first, second = polylines(gain_db, (3.0,), FREQUENCY, LEVEL)
    deepest = 10.0 ** (-50.0 / 20.0)
    assert first[-1].frequency == pytest.approx(3.0 - deepest, abs=1e-9)
    assert second[0].frequency == pytest.approx(3.0 + deepest, abs=1e-9)


def test_a_narrow_peak_is_met_where_a_knot_tells_of_it() -> None:
    def gain_db(w: float) -> float:
        return -40.0 + 40.0 / (1.0 + ((w - 4.321) / 1e-3) ** 2)

    [run] = polylines(gain_db, (4.321,), FREQUENCY, LEVEL)
    assert max(point.gain_db for point in run) == pytest.approx(0.0, abs=1e-9)


def test_a_coarser_step_takes_fewer_points() -> None:
    def gain_db(w: float) -> float:
        return -20.0 + 15.0 * math.sin(12.0 * w)

    counts = [sum(map(len, polylines(gain_db, (), FREQUENCY, LEVEL, step))) for step in (1.0, 4.0)]
    assert counts[1] < 0.7 * counts[0]


def test_a_curve_outside_of_the_panel_is_not_drawn() -> None:
    assert polylines(lambda _: -60.0, (), FREQUENCY, LEVEL) == []
