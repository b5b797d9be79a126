"""Axes: places, and the ticks that a person would choose."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bandwright.drawings.axes import Scale, frequency_scale, label, nice_step, ticks


def labels(scale: Scale, most: int = 9) -> list[str]:
    return [text for _, text in ticks(scale, most)]


@pytest.mark.parametrize(
    ("start", "end", "log", "texts"),
    [
        (0.0, 8000.0, False, "0 1000 2000 3000 4000 5000 6000 7000 8000"),
        (0.0, 22050.0, False, "0 5000 10000 15000 20000"),
        (0.0, 0.5, False, "0 0.1 0.2 0.3 0.4 0.5"),
        (-91.0, 6.0, False, "−80 −60 −40 −20 0"),
        (-0.19, 0.06, False, "−0.15 −0.10 −0.05 0 0.05"),
        (5.0, 100.0, True, "5 7 10 20 30 50 70 100"),
        (0.2, 24.0, True, "0.2 0.5 1 2 5 10 20"),
        (1.0, 1e7, True, "1 10 100 1000 10000 100000 1000000 10000000"),
        (100.0, 104.0, True, "100.0 100.5 101.0 101.5 102.0 102.5 103.0 103.5 104.0"),
    ],
)
def test_ticks_are_those_of_a_person(start: float, end: float, log: bool, texts: str) -> None:
    """Steps of 1, 2 and 5 times a power of ten: common practice, no source."""
    assert labels(Scale(start, end, 0.0, 700.0, log)) == texts.split()


@given(st.floats(1e-6, 1e9), st.floats(1.001, 1e4), st.booleans(), st.integers(3, 12))
def test_ticks_are_few_lie_on_the_axis_and_say_where(
    start: float, ratio: float, log: bool, most: int
) -> None:
    scale = Scale(start, start * ratio, 0.0, 700.0, log)
    found = ticks(scale, most)
    assert len(found) <= most + 1 or log
    assert len({text for _, text in found}) == len(found)
    for value, text in found:
        assert -1e-6 <= scale.px(value) <= 700.0 + 1e-6
        assert float(text.replace("\N{MINUS SIGN}", "-")) == pytest.approx(value, rel=1e-9)


@given(st.floats(1e-9, 1e9), st.integers(1, 20))
def test_a_nice_step_is_the_least_that_suffices(span: float, most: int) -> None:
    step = nice_step(span, most)
    assert step * most >= span * (1.0 - 1e-9)
    assert 0.4 * step * most < span * (1.0 + 1e-9)


@given(st.floats(1.0, 1e5), st.floats(1.01, 1e4), st.floats(0.0, 1.0), st.booleans())
def test_value_and_pixel_are_inverse(start: float, ratio: float, part: float, log: bool) -> None:
    scale = Scale(start, start * ratio, 78.0, 774.0, log)
    px = 78.0 + part * 696.0
    assert scale.px(scale.value(px)) == pytest.approx(px, abs=1e-6)


def test_zero_is_infinitely_far_on_a_logarithmic_axis() -> None:
    assert Scale(1.0, 10.0, 0.0, 100.0, log=True).px(0.0) == -math.inf


@pytest.mark.parametrize(
    ("edges", "nyquist", "start", "end", "log"),
    [
        ([1500.0, 2000.0, 4000.0, 4600.0], 8000.0, 0.0, 8000.0, False),  # wide enough from 0 to Nyquist
        ([20.0, 25.6], 2000.0, 5.0, 100.0, True),  # 5.6 of 2000 Hz is nothing; a ratio of 1.28 can be seen
        ([800.0, 1600.0, 6000.0, 12000.0], 24000.0, 200.0, 24000.0, True),  # not beyond Nyquist
        ([40.0, 49.0, 51.0, 62.0], 2000.0, 10.0, 90.0, False),  # a ratio of 1.04 can't be seen
        ([20000.0, 20010.0], 24000.0, 19990.0, 20020.0, False),
        ([], 500.0, 0.0, 500.0, False),
        ([300.0], 500.0, 0.0, 500.0, False),
    ],
)
def test_the_axis_is_the_one_on_which_the_narrowest_stretch_can_be_seen(
    edges: list[float], nyquist: float, start: float, end: float, log: bool
) -> None:
    """The rule is this project's own."""
    scale = frequency_scale(edges, nyquist, 78.0, 774.0)
    assert (scale.start, scale.end, scale.log) == (pytest.approx(start), pytest.approx(end), log)


@given(st.lists(st.floats(1e-4, 0.9999), min_size=1, max_size=8, unique=True))
def test_every_edge_is_on_the_axis(edges: list[float]) -> None:
    scale = frequency_scale(sorted(edges), 1.0, 0.0, 1.0)
    assert 0.0 <= scale.start < scale.end <= 1.0
    assert all(scale.start <= edge <= scale.end for edge in edges)


@pytest.mark.parametrize(("value", "decimals", "text"), [(-0.0, 1, "0"), (-70.0, 0, "−70"), (0.5, 2, "0.50")])
def test_a_label_has_a_minus_sign_and_no_signed_zero(value: float, decimals: int, text: str) -> None:
    assert label(value, decimals) == text
