"""Remedies for edges that can't be meant as they are written, and what they most likely mean."""

from __future__ import annotations

import math
from collections.abc import Iterator

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Place, Quantity
from bandwright.forecast import bands
from bandwright.forecast.forecast import Forecast
from bandwright.remedies.change import Change

ROUND_WITHIN = 5e-4
"""How near a frequency must come to one of two digits to count as round, relatively."""


def angular(filter: Filter, path: Path) -> Quantity | None:
    """The edge divided by 2 pi, where that makes a round frequency below Nyquist out of one above.

    So 6283 Hz at 4 kHz is taken for 6283 rad/s, which is 1 kHz.
    """
    edge, rate_hz = filter.quantity(*path), bands.sample_rate_hz(filter)
    if edge is None or rate_hz is None or quantities.UNITS[edge.unit].per_nyquist is not None:
        return None
    number = edge.number / math.tau
    rounded = float(f"{number:.1e}")
    in_hertz = quantities.hertz(Quantity(rounded, edge.unit), rate_hz)
    if in_hertz is None or in_hertz > rate_hz / 2 or abs(number - rounded) > ROUND_WITHIN * number:
        return None
    return Quantity(rounded, edge.unit)


def other_convention(filter: Filter, path: Path) -> Quantity | None:
    """A normalised edge above Nyquist, read in the convention that puts it below.

    `0.6 fs` may be meant as 0.6 of Nyquist, and `1.2 pi` as 1.2 rad/sample.
    """
    edge = filter.quantity(*path)
    if edge is None:
        return None
    if edge.unit == "fs" and edge.number <= 1.0:
        return Quantity(edge.number, "nyquist")
    if edge.unit == "pi" and edge.number <= math.pi:
        return Quantity(float(quantities.show_number(edge.number / math.pi)), "pi")
    return None


def plausible_edge(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Write the edge as it was most likely meant."""
    for reading, why in (
        (angular(forecast.filter, place.path), "the edge divided by 2 pi"),
        (other_convention(forecast.filter, place.path), "the same number in another convention"),
    ):
        if reading is not None:
            text = quantities.show_quantity(reading)
            yield Change("changes-requirement", f"Write `{text}`, {why}", ((place.path, text),))


def megahertz(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Write MHz for mHz."""
    quantity = forecast.filter.quantity(*place.path)
    if quantity is not None:
        text = quantities.show_quantity(Quantity(quantity.number, "MHz"))
        yield Change("changes-requirement", f"Write `{text}`, in megahertz", ((place.path, text),))


def swap_edges(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Let `from` and `to` of a band change places."""
    band = place.path[:-1]
    low, high = forecast.filter.get(*band, "from"), forecast.filter.get(*band, "to")
    if low is not None and high is not None and low.written != high.written:
        yield Change(
            "keeps-requirement",
            f"Swap the edges: from {high.written} to {low.written}",
            (((*band, "from"), high.written), ((*band, "to"), low.written)),
        )
