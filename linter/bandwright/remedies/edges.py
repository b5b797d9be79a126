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

ROOM = 0.9
"""Edges up to this share of Nyquist leave the bilinear transform room."""


def angular(filter: Filter, path: Path) -> Quantity | None:
    """The edge divided by 2 pi, where that makes a round frequency below Nyquist out of an odd one above.

    So 6283 Hz at 4 kHz is taken for 6283 rad/s, which is 1 kHz.
    """
    edge, rate_hz = filter.quantity(*path), bands.sample_rate_hz(filter)
    if edge is None or rate_hz is None or quantities.UNITS[edge.unit].per_nyquist is not None:
        return None
    number = edge.number / math.tau
    rounded = float(f"{number:.1e}")
    in_hertz = quantities.hertz(Quantity(rounded, edge.unit), rate_hz)
    if in_hertz is None or in_hertz > rate_hz / 2 or float(f"{edge.number:.2e}") == edge.number:
        return None
    return Quantity(rounded, edge.unit) if abs(number - rounded) <= ROUND_WITHIN * number else None


def other_convention(edge: Quantity | None) -> Quantity | None:
    """A normalised edge in the convention that puts it below Nyquist; None where there is none.

    `0.6 fs` may be meant as 0.6 of Nyquist, and `1.2 pi` as 1.2 rad/sample.
    """
    if edge is None:
        return None
    if edge.unit == "fs" and edge.number <= 1.0:
        return Quantity(edge.number, "nyquist")
    if edge.unit == "pi" and edge.number <= math.pi:
        return Quantity(float(quantities.show_number(edge.number / math.pi)), "pi")
    return None


def divided_by_two_pi(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the edge for an angular frequency."""
    reading = angular(forecast.filter, place.path)
    if reading is not None:
        text = quantities.show_quantity(reading)
        yield Change(
            "changes-requirement", f"Write `{text}`, the edge divided by 2 pi", ((place.path, text),)
        )


def in_other_convention(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take all edges of the same unit in another convention, as one filter is written in one."""
    filter = forecast.filter
    edge = filter.quantity(*place.path)
    if edge is None or other_convention(edge) is None:
        return
    texts = []
    for band in forecast.bands:
        for path in (band.edge_path("low"), band.edge_path("high")):
            other = filter.quantity(*path)
            if other is not None and other.unit == edge.unit:
                reading = other_convention(other)
                if reading is None:
                    return
                texts.append((path, quantities.show_quantity(reading)))
    words = {"fs": "fractions of Nyquist", "pi": "radians per sample"}[edge.unit]
    written = ", ".join(f"`{text}`" for _, text in texts)
    yield Change("changes-requirement", f"Take the edges for {words}: {written}", tuple(texts))


def larger_rate(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Write the sample rate in the next larger unit."""
    rate = forecast.filter.quantity("sample_rate")
    larger = {"Hz": "kHz", "kHz": "MHz", "MHz": "GHz"}
    if place.path == ("sample_rate",) and rate is not None and rate.unit in larger:
        text = quantities.show_quantity(Quantity(rate.number, larger[rate.unit]))
        yield Change(
            "changes-requirement", f"Write `{text}` for the sample rate", ((("sample_rate",), text),)
        )


def own_rate(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Give the filter its own sample rate: the present one times a power of two that leaves edges room."""
    rate = forecast.filter.quantity("sample_rate")
    edges = [w for band in forecast.bands for w in (band.low, band.high) if w is not None]
    times = 1
    while rate is not None and max(edges, default=0.0) > ROOM * math.pi * times:
        times *= 2
    if rate is not None and times > 1 and place.path != ("sample_rate",):
        text = quantities.show_quantity(Quantity(rate.number * times, rate.unit))
        title = f"Give this filter a sample rate of {text}"
        yield Change("changes-requirement", title, ((("sample_rate",), text),))


def without_sign(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Write the edge without its minus sign."""
    edge = forecast.filter.quantity(*place.path)
    if edge is not None and edge.number < 0:
        text = quantities.show_quantity(Quantity(-edge.number, edge.unit))
        yield Change("changes-requirement", f"Write `{text}`", ((place.path, text),))


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
