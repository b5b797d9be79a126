"""Remedies for entries of `accepted`."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from bandwright.bandfile.values import Path, Place
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change


def remove_entry(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Remove the entry that the finding points into, and `accepted` itself with its last one."""
    entries = {path[:2] for path, _ in forecast.filter.settings if path[:1] == ("accepted",)}
    path: Path = place.path[:2] if len(entries) > 1 else ("accepted",)
    yield Change("keeps-requirement", "Remove this entry", ((path, None),))


def drop_entry(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Remove an entry that somebody may want to look at again; never in bulk."""
    for change in remove_entry(forecast, place):
        yield replace(change, kind="changes-requirement")
