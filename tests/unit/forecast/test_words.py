"""Figures as short texts."""

from __future__ import annotations

import math

import pytest

from bandwright.forecast.types import Figure, computed
from bandwright.forecast.words import number, shown, time_unit


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (9.0, "9"),
        (0.0, "0"),
        (242.4, "242"),
        (24.24, "24.2"),
        (2.424, "2.42"),
        (0.02424, "0.0242"),
        (99.96, "100"),
    ],
)
def test_three_digits_or_all_before_the_point(value: float, text: str) -> None:
    assert number(value) == text


def test_an_estimate_carries_its_sign() -> None:
    assert shown(Figure(22.0, 21.0, 24.0, "estimated")) == "~22"
    assert shown(computed(22.0)) == "22"
    assert shown(computed(0.0061), 1e3) == "6.10"


def test_what_is_not_there_is_empty_and_what_has_no_end_says_so() -> None:
    assert shown(None) == ""
    assert shown(Figure(math.inf, 1.0, math.inf, "estimated")) == "none"


@pytest.mark.parametrize(
    ("shortest", "unit"), [(2.0, "s"), (0.152, "ms"), (0.0061, "ms"), (3e-5, "us"), (1e-9, "us")]
)
def test_the_unit_in_which_the_shortest_time_is_one_or_more(shortest: float, unit: str) -> None:
    assert time_unit([None, computed(5.0), computed(shortest)])[0] == unit
