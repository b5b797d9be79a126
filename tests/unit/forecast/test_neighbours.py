"""Neighbouring values of the numbers of a mask, held against filters that say so in their text."""

from __future__ import annotations

import pytest

from bandwright.bandfile.quantities import show_quantity
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Filter, Path
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.neighbours import neighbours, transition

TEXT = """\
format: bandwright/1
filters:
  one:
    sample_rate: 4 kHz
    bands:
      - stop: {to: 80 Hz, attenuation: 40 dB}
      - pass: {from: 100 Hz, to: 0.1 pi, ripple: ±0.1 dB}
      - stop: {from: 250 Hz, to: 400 Hz, attenuation: 60 dB}
      - stop: {from: 400 Hz, gain: {max: -70 dB}}
"""

STOP_BELOW: Path = ("bands", 0, "stop", "to")
PASS_LOW: Path = ("bands", 1, "pass", "from")
PASS_HIGH: Path = ("bands", 1, "pass", "to")
STOP_ABOVE: Path = ("bands", 2, "stop", "from")
RIPPLE: Path = ("bands", 1, "pass", "ripple")
ATTENUATION: Path = ("bands", 0, "stop", "attenuation")
GAIN: Path = ("bands", 3, "stop", "gain", "max")


def filter_of(text: str) -> Filter:
    return read(text).filters[0][1]


@pytest.mark.parametrize(
    ("path", "written"),
    [
        # Transitions of 20 Hz and 50 Hz, made 1.2, 1.5 and 2 times as wide, rounded away from the edge.
        (STOP_BELOW, ["80 Hz", "76 Hz", "70 Hz", "60 Hz"]),
        (PASS_LOW, ["100 Hz", "104 Hz", "110 Hz", "120 Hz"]),
        (PASS_HIGH, ["0.1 pi", "0.095 pi", "0.087 pi", "0.075 pi"]),
        (STOP_ABOVE, ["250 Hz", "260 Hz", "280 Hz", "300 Hz"]),
        (RIPPLE, ["±0.05 dB", "±0.1 dB", "±0.2 dB"]),
        (ATTENUATION, ["50 dB", "40 dB", "30 dB"]),
        (GAIN, ["-80 dB", "-70 dB", "-60 dB"]),
    ],
)
def test_values_go_from_the_strictest_to_the_loosest(path: Path, written: list[str]) -> None:
    tried = neighbours(filter_of(TEXT), path, {})
    assert [show_quantity(one.quantity) for one in tried] == written
    assert [one.own for one in tried].count(True) == 1
    assert next(show_quantity(one.quantity) for one in tried if one.own) in TEXT


@pytest.mark.parametrize("path", [STOP_BELOW, PASS_HIGH, STOP_ABOVE, RIPPLE, ATTENUATION])
def test_each_forecast_is_that_of_a_filter_which_says_so(path: Path) -> None:
    filter = filter_of(TEXT)
    old = filter.quantity(*path)
    assert old is not None
    for one in neighbours(filter, path, {}):
        lines = TEXT.splitlines()
        at = 5 + int(path[1])
        key = f"{path[-1]}: "
        lines[at] = lines[at].replace(key + show_quantity(old), key + show_quantity(one.quantity))
        written = Forecast(filter_of("\n".join(lines)), {})
        assert [candidate.least_order for candidate in one.forecast.candidates] == [
            candidate.least_order for candidate in written.candidates
        ]


def test_looser_values_never_take_more() -> None:
    for path in (STOP_BELOW, PASS_LOW, PASS_HIGH, STOP_ABOVE, RIPPLE, ATTENUATION, GAIN):
        candidates = [one.forecast.candidate("elliptic") for one in neighbours(filter_of(TEXT), path, {})]
        orders = [candidate.least_order for candidate in candidates if candidate and candidate.least_order]
        assert len(orders) == len(candidates)
        assert orders == sorted(orders, reverse=True), path


@pytest.mark.parametrize(
    "path",
    [
        ("sample_rate",),
        ("bands", 2, "stop", "to"),  # two stop bands touch here, so there is no transition
        ("bands", 3, "stop", "from"),
        ("bands", 9, "stop", "from"),
        (),
    ],
)
def test_what_is_no_number_of_a_transition_has_no_neighbours(path: Path) -> None:
    assert neighbours(filter_of(TEXT), path, {}) == ()


def test_values_that_make_no_mask_are_left_out() -> None:
    text = TEXT.replace("attenuation: 40 dB", "attenuation: 8 dB")
    tried = neighbours(filter_of(text), ATTENUATION, {})
    assert [show_quantity(one.quantity) for one in tried] == ["18 dB", "8 dB"]


def test_a_filter_without_a_mask_has_no_neighbours() -> None:
    assert neighbours(filter_of(TEXT.replace("100 Hz", "hundred")), STOP_ABOVE, {}) == ()


def test_a_transition_is_the_same_from_both_sides() -> None:
    filter = filter_of(TEXT)
    low, high = transition(filter, STOP_BELOW), transition(filter, PASS_LOW)
    assert low is not None
    assert high is not None
    assert (low.own, low.other) == (high.other, high.own)
    assert low.ratio == high.ratio == pytest.approx(1.25)
    # 20 Hz at 4 kHz: 2 pi 20 / 4000 rad/sample.
    assert low.width == pytest.approx(0.0314159, rel=1e-5)
