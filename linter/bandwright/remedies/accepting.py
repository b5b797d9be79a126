"""Remedies for entries of `accepted`."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.values import Place
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change


def remove_entry(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Remove the entry that the finding points into."""
    yield Change("keeps-requirement", "Remove this entry", ((place.path[:2], None),))
