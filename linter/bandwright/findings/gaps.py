"""The transitions of a filter, in the words of its band file."""

from __future__ import annotations

import itertools
from typing import NamedTuple

from bandwright.bandfile.values import Filter, Path, Place
from bandwright.forecast import bands
from bandwright.forecast.types import Binding


class Gap(NamedTuple):
    """A transition between a pass and a stop band."""

    width: float
    """rad/sample"""
    low: str
    """Its lower edge as written."""
    high: str
    below: Path
    """Where the lower edge stands."""
    above: Path
    stop: Path
    """Which of the two is the stop band's edge."""

    @property
    def facts(self) -> tuple[tuple[str, object], ...]:
        """What sentences quote: `low` and `high`."""
        return (("low", self.low), ("high", self.high))

    @property
    def places(self) -> tuple[tuple[Place, str], ...]:
        """Both edges, as related places."""
        return ((Place(self.below), "the transition starts here"), (Place(self.above), "and ends here"))


def gaps(filter: Filter) -> tuple[Gap, ...]:
    """The transitions between neighbouring bands whose edges are written."""
    found = []
    ordered = [band for band in bands.bands(filter) if band.kind != "bounds"]
    for before, after in itertools.pairwise(ordered):
        below, above = before.edge_path("high"), after.edge_path("low")
        low, high = filter.get(*below), filter.get(*above)
        if (
            before.kind == after.kind
            or before.high is None
            or after.low is None
            or low is None
            or high is None
        ):
            continue
        stop = below if before.kind == "stop" else above
        found.append(Gap(after.low - before.high, low.written, high.written, below, above, stop))
    return tuple(found)


def narrowest(filter: Filter) -> Gap | None:
    """The narrowest transition, which sets the length of an FIR filter."""
    return min(gaps(filter), default=None)


def bound_by(filter: Filter, binding: Binding | None) -> Gap | None:
    """The transition that sets the order of an IIR filter; the narrowest where that is not known."""
    if binding is not None:
        side = "from" if binding.side == "low" else "to"
        for gap in gaps(filter):
            if any(path[1] == binding.band and path[-1] == side for path in (gap.below, gap.above)):
                return gap
    return narrowest(filter)
