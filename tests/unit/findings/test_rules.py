"""What a rule says of a hit, and when a finding waits for an answer."""

from __future__ import annotations

import math

import pytest

from bandwright.findings.case import Case, Waiting
from bandwright.findings.rules import LONGEST_SENTENCE, Hit, Says, reported
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import FirLength, FirLengthAnswer
from bandwright.forecast.types import Figure, computed
from unit.findings import checking

TEXT = """\
format: bandwright/1
filters:
  channel:
    sample_rate: 4 kHz
    phase: linear
    bands:
      - pass: {to: 400 Hz, ripple: 0.1 dB}
      - stop: {from: 600 Hz, attenuation: 60 dB}
"""


def said(says: Says, form: str = "", **facts: object) -> str:
    rule = reported("key/example", "error", says)
    return rule.message(Hit("key/example", checking.NOWHERE, tuple(facts.items()), form))


def test_the_first_sentence_is_said_that_has_all_its_facts() -> None:
    says = {"": ("`{key}` is like `{nearest}`.", "`{key}` is like nothing.")}
    assert said(says, key="famly", nearest="family") == "`famly` is like `family`."
    assert said(says, key="famly") == "`famly` is like nothing."
    assert said(says, key="famly", nearest="") == "`famly` is like nothing."


def test_a_sentence_that_gets_too_long_gives_way_to_the_next() -> None:
    says = {"": ("The names are {names}.", "There are many names.")}
    assert said(says, names="a, b") == "The names are a, b."
    assert said(says, names="name, " * 40) == "There are many names."


def test_long_words_of_the_user_are_cut_until_the_sentence_fits() -> None:
    sentence = said("`{key}: {written}` " + "and so on " * 10, key="k" * 100, written="w" * 100)
    assert len(sentence) <= LONGEST_SENTENCE
    assert "…" in sentence


def test_places_of_the_band_file_are_called_by_words() -> None:
    assert said("In {where}.", where="top") == "In the top level."
    assert said("In {where}.", where="pass") == "In `pass`."


def case(answers: dict[object, object] | None = None) -> tuple[Case, Figure]:
    """A filter whose length is estimated, and that length."""
    ((_, filter),) = checking.read(TEXT).filters
    forecast = Forecast(filter, answers or {})  # type: ignore[arg-type] # the tests put FirLength answers in
    candidate = forecast.candidate("equiripple")
    assert candidate is not None
    assert candidate.taps is not None
    return Case(filter, forecast), candidate.taps


def test_a_comparison_waits_only_while_the_error_band_leaves_doubt() -> None:
    looked_at, taps = case()
    assert looked_at.exceeds(taps, taps.low - 1)
    assert not looked_at.exceeds(taps, taps.high)
    with pytest.raises(Waiting) as wait:
        looked_at.exceeds(taps, taps.value)
    assert wait.value.question == taps.question


def test_a_quoted_figure_waits_until_it_is_exact() -> None:
    looked_at, taps = case()
    with pytest.raises(Waiting):
        looked_at.exact(taps)
    assert isinstance(taps.question, FirLength)
    looked_at, settled = case({taps.question: FirLengthAnswer(51, 51, 3)})
    assert looked_at.exact(settled) == 51


def test_a_figure_that_nobody_can_settle_is_not_quoted_and_breaks_no_limit_that_it_straddles() -> None:
    looked_at, _ = case()
    figure = Figure(50, 40, math.inf, "estimated")
    assert looked_at.exact(figure) is None
    assert not looked_at.exceeds(figure, 45)
    assert looked_at.exceeds(figure, 39)
    assert looked_at.exceeds(computed(46), 45)
