"""Remedies that store the same filter in another structure."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.values import Place
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.structures import DEFAULT_STRUCTURE
from bandwright.remedies.change import Change


def second_order_sections(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Store as a cascade of second-order sections."""
    chosen = forecast.chosen
    if chosen is None or chosen.kind != "iir" or chosen.structure == "cascade":
        return
    yield Change(
        "keeps-requirement",
        "Store as second-order sections: {after[bits]} coefficient bits instead of {before[bits]}",
        ((("structure",), "cascade"),),
    )


def suitable_structure(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the usual structure of the kind of filter that the keys leave."""
    kinds = {one.kind for one in forecast.candidates if one.allowed}
    for kind in ("iir", "fir"):
        if kind in kinds:
            name = DEFAULT_STRUCTURE[kind]
            yield Change("keeps-requirement", f"Use the structure `{name}`", ((("structure",), name),))
