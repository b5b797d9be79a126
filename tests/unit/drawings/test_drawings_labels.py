"""Places of labels."""

from __future__ import annotations

from itertools import combinations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bandwright.drawings import labels
from bandwright.drawings.labels import Box, Flag, along, label_lines, raise_flags, text_width

GAP = 5.0


@given(
    st.lists(
        st.tuples(st.floats(80.0, 770.0), st.floats(30.0, 200.0), st.sampled_from(["left", "right"])),
        min_size=1,
        max_size=6,
    )
)
def test_no_flag_covers_another_one_or_the_line_of_a_higher_one(
    drawn: list[tuple[float, float, labels.Side]],
) -> None:
    flags = [Flag(*one) for one in sorted(drawn)]
    placed = raise_flags(flags, 12.0, 848.0, GAP)
    if placed is None:
        assert len({flag.x for flag in flags}) < len(flags)
        return
    spans = [labels.flag_span(flag, side, GAP) for flag, (_, side) in zip(flags, placed, strict=True)]
    assert all(start >= 12.0 and end <= 848.0 for start, end in spans)
    for one, other in combinations(range(len(flags)), 2):
        if placed[one][0] == placed[other][0]:
            assert spans[one][1] <= spans[other][0] or spans[other][1] <= spans[one][0]
        lower, higher = sorted((one, other), key=lambda at: placed[at][0])
        start, end = spans[lower]
        if placed[lower][0] < placed[higher][0]:
            assert not start < flags[higher].x < end


def test_flags_stand_over_their_bands_where_there_is_room() -> None:
    flags = [Flag(300.0, 100.0, "left"), Flag(400.0, 100.0, "right")]
    assert raise_flags(flags, 0.0, 860.0, GAP) == [(0, "left"), (0, "right")]


def test_flags_of_a_narrow_band_turn_away_from_each_other() -> None:
    """The edges of a narrow stop band between two pass bands, in two rows."""
    flags = [
        Flag(300.0, 90.0, "left"),
        Flag(370.0, 90.0, "right"),
        Flag(380.0, 90.0, "left"),
        Flag(450.0, 90.0, "right"),
    ]
    placed = raise_flags(flags, 0.0, 860.0, GAP)
    assert placed == [(0, "left"), (1, "left"), (1, "right"), (0, "right")]


def test_a_curves_label_avoids_the_other_curve_and_what_is_taken() -> None:
    panel = Box(0.0, 0.0, 400.0, 200.0)
    upper, lower = [[(10.0, 40.0), (390.0, 40.0)]], [[(10.0, 160.0), (390.0, 160.0)]]
    taken = [Box(0.0, 0.0, 400.0, 36.0)]
    found = label_lines([upper, lower], [(80.0, 18.0), (80.0, 18.0)], panel, taken, [])
    for place, y in zip(found, (40.0, 160.0), strict=True):
        assert place is not None
        assert place.anchor[1] == y
        assert not place.box.overlaps(taken[0])
        assert not place.box.top < 40.0 < place.box.bottom
        assert not place.box.top < 160.0 < place.box.bottom


def test_a_label_without_room_is_left_out() -> None:
    curve = [[(10.0, 40.0), (90.0, 40.0)]]
    assert label_lines([curve], [(200.0, 18.0)], Box(0.0, 0.0, 100.0, 100.0), [], []) == [None]


def test_points_along_a_line_are_as_far_apart_as_asked() -> None:
    points = list(along([(0.0, 0.0), (3.0, 4.0), (3.0, 14.0)], 4.0, 1.0))
    expected = [(0.6, 0.8), (3.0, 4.0), (3.0, 8.0), (3.0, 12.0)]
    assert [*map(pytest.approx, expected)] == points


@given(
    st.text(st.characters(codec="ascii", categories=["L", "N", "P", "Zs"]), max_size=80),
    st.floats(20.0, 400.0),
)
def test_a_shortened_text_fits(text: str, width: float) -> None:
    short = labels.shortened(text, 12.0, width)
    assert text_width(short, 12.0) <= width
    assert short == text or short.endswith("…")


@given(st.lists(st.text("abcmw ", min_size=1, max_size=12), max_size=30), st.floats(60.0, 400.0))
def test_wrapped_lines_fit_and_hold_every_word_that_fits(words: list[str], width: float) -> None:
    text = " ".join(words)
    lines = labels.wrapped(text, 12.0, width)
    assert all(text_width(line, 12.0) <= width for line in lines)
    if all(text_width(word, 12.0) <= width for word in text.split()):
        assert " ".join(lines).split() == text.split()
