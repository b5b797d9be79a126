"""Remedies that store the same filter in another structure."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.values import Place
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.structures import DEFAULT_STRUCTURE
from bandwright.remedies.change import Change


def second_order_sections(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store as a cascade of second-order sections."""
    chosen = forecast.chosen
    if chosen is None or chosen.kind != "iir" or chosen.structure == "cascade":
        return
    # The bits of the old structure may be beyond what can be told.
    for instead in (" instead of {before[bits]}", ""):
        yield Change(
            "keeps-requirement",
            f"Store as second-order sections: {{after[bits]}} coefficient bits{instead}",
            ((("structure",), "cascade"),),
        )


def suitable_structure(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the usual structure of the kind of filter that the keys leave."""
    names = forecast.filter.names("family") or tuple(FAMILIES)
    linear = forecast.filter.text("phase") == "linear"
    kinds = {FAMILIES[name].kind for name in names if name in FAMILIES} - ({"iir"} if linear else set())
    if len(kinds) == 1:
        name = DEFAULT_STRUCTURE[kinds.pop()]
        yield Change("keeps-requirement", f"Use the structure `{name}`", ((("structure",), name),))
