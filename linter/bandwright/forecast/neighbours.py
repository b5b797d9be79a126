"""What a somewhat stricter or looser number of the mask would take: the filter with neighbouring values."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Quantity
from bandwright.forecast import bands
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answers
from bandwright.forecast.vary import varied

WIDER_TRANSITIONS = (1.2, 1.5, 2.0)
"""Widths to try, as multiples of the transition's own."""

ATTENUATION_STEP_DB = 10.0


@dataclass(frozen=True, slots=True)
class Neighbour:
    """The forecast of the filter with another quantity in the place of its own."""

    quantity: Quantity
    forecast: Forecast
    own: bool
    """Whether this is the value that the filter has."""


@dataclass(frozen=True, slots=True)
class Transition:
    """The gap between a pass and a stop band, seen from one of its edges; rad/sample."""

    own: float
    other: float

    @property
    def width(self) -> float:
        return abs(self.own - self.other)

    @property
    def ratio(self) -> float:
        """The upper edge over the lower one; infinite above 0 Hz."""
        low, high = sorted((self.own, self.other))
        return high / low if low > 0.0 else float("inf")


def transition(filter: Filter, path: Path) -> Transition | None:
    """The transition that the edge at `path` bounds; None where it bounds none, or an edge can't be read."""
    ordered = [band for band in bands.bands(filter) if band.kind != "bounds"]
    for at, band in enumerate(ordered):
        for side, step in (("low", -1), ("high", 1)):
            if band.edge_path(side) != path or not 0 <= at + step < len(ordered):
                continue
            other = ordered[at + step]
            own, far = (band.low, other.high) if side == "low" else (band.high, other.low)
            if own is not None and far is not None and other.kind != band.kind:
                return Transition(own, far)
    return None


def neighbours(filter: Filter, path: Path, answers: Answers) -> tuple[Neighbour, ...]:
    """The quantity at `path` and its neighbours, from the strictest to the loosest.

    An edge moves away from its transition; a level is halved and doubled, or moved by 10 dB. Those that
    make no mask are left out. Nothing is returned where the quantity is no number of a mask.
    """
    own = filter.quantity(*path) if path[:1] == ("bands",) else None
    if own is None or bands.mask(filter) is None:
        return ()
    found = []
    for quantity in _values(filter, path, own):
        other = filter if quantity == own else varied(filter, path, quantity)
        forecast = Forecast(other, answers)
        if forecast.mask is not None:
            found.append(Neighbour(quantity, forecast, quantity == own))
    return tuple(found) if len(found) > 1 else ()


def _values(filter: Filter, path: Path, own: Quantity) -> Iterator[Quantity]:
    kind, key = path[2], path[-1]
    if key in ("from", "to"):
        gap = transition(filter, path)
        if gap is not None:
            yield own
            yield from _wider(own, gap)
    elif own.unit != "dB" or own.number == 0.0:
        return
    elif key == "attenuation" or (kind != "pass" and key == "max"):
        # A larger attenuation is stricter, a larger gain is looser.
        step = -ATTENUATION_STEP_DB if key == "attenuation" else ATTENUATION_STEP_DB
        for number in (own.number - step, own.number, own.number + step):
            yield replace(own, number=number)
    else:
        for factor in (0.5, 1.0, 2.0):
            yield replace(own, number=own.number * factor)


def _wider(own: Quantity, gap: Transition) -> Iterator[Quantity]:
    if gap.own == 0.0:
        return
    for factor in WIDER_TRANSITIONS:
        moved = own.number * (gap.other + factor * (gap.own - gap.other)) / gap.own
        rounded = quantities.round_outward(moved, "up" if moved > own.number else "down", own.number)
        yield replace(own, number=rounded)
