"""What a finding needs: while one key can't be read, every finding that does not rest on it stays."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest

import bandwright
from bandwright.bandfile.values import UNKNOWN, Filter, Setting
from bandwright.bandfile.values import Path as Key
from bandwright.findings.case import Case, Waiting
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import Hit, Rule
from bandwright.forecast.forecast import Forecast
from unit.findings import checking

DEMO = Path(bandwright.__file__).parent / "demo"
CORPUS = Path(__file__).resolve().parents[2] / "corpus"
FILES = (*sorted(DEMO.glob("*.bands.yaml")), *sorted(CORPUS.glob("*.bands.yaml")))


def filters() -> Iterator[Filter]:
    for file in FILES:
        for _, filter in checking.read(file.read_bytes()).filters:
            yield filter


FILTERS = {filter.name: filter for filter in filters()}


def hits(rule: Rule, filter: Filter) -> list[Hit]:
    """What a rule finds in a filter, with every question answered."""
    if rule.find is None or any(filter.is_unknown(*key.split(".")) for key in rule.needs):
        return []
    while True:
        try:
            return list(rule.find(Case(filter, Forecast(filter, checking.ANSWERS))))
        except Waiting as wait:
            checking.ANSWERS[wait.question] = checking.answer(wait.question)


def without(filter: Filter, key: Key) -> Filter:
    """The filter with a key that is written, but can't be read."""
    settings = tuple((path, Setting(UNKNOWN, "?") if path == key else old) for path, old in filter.settings)
    return Filter(filter.name, settings)


def rests_on(rule: Rule, hit: Hit, key: Key) -> bool:
    """Whether a finding may fall silent with this key: it needs it, or looks at the band that has it."""
    if any(key[: len(parts)] == parts for need in rule.needs for parts in (tuple(need.split(".")),)):
        return True
    return any(place.path[:2] == key[:2] for place in (hit.place, *(place for place, _ in hit.related)))


@pytest.mark.parametrize("filter", FILTERS.values(), ids=FILTERS.keys())
def test_an_unreadable_key_silences_only_what_rests_on_it(filter: Filter) -> None:
    for rule in RULES.values():
        for hit in hits(rule, filter):
            for key, setting in filter.settings:
                if setting.known and not rests_on(rule, hit, key):
                    left = [(other.id, other.place) for other in hits(rule, without(filter, key))]
                    assert (hit.id, hit.place) in left, f"{hit.id} is gone without {key}"


@pytest.mark.parametrize("filter", FILTERS.values(), ids=FILTERS.keys())
def test_no_finding_fails_where_a_key_is_unreadable(filter: Filter) -> None:
    for key, _ in filter.settings:
        broken = without(filter, key)
        for rule in RULES.values():
            hits(rule, broken)
