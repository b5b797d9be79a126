"""Every name that a filter may give is either forecast or said not to be."""

from __future__ import annotations

from bandwright.bandfile import grammar
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.structures import STRUCTURES


def test_families_and_structures_that_are_not_forecast_are_told_as_not_judged_yet() -> None:
    for path, forecast in ((("family",), FAMILIES), (("structure",), STRUCTURES)):
        row = grammar.key("filter", path)
        assert row is not None
        assert set(row.names) - set(forecast) == set(row.unjudged_names)
