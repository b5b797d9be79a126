"""The gaps between pass and stop bands, in numbers and in the words of the band file."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass

from bandwright.bandfile.values import Filter, Path, Place
from bandwright.forecast.bands import Band
from bandwright.forecast.types import Binding


@dataclass(frozen=True, slots=True)
class Gap:
    """A transition between a pass and a stop band whose edges are both written."""

    low: float
    """Its lower edge, rad/sample."""
    high: float
    low_written: str
    high_written: str
    below: Path
    """Where the lower edge stands."""
    above: Path
    stop: Path
    """Which of the two is the stop band's edge."""

    @property
    def width(self) -> float:
        """rad/sample"""
        return self.high - self.low

    @property
    def facts(self) -> tuple[tuple[str, object], ...]:
        """What sentences quote, by name."""
        return (("low", self.low_written), ("high", self.high_written))

    @property
    def places(self) -> tuple[tuple[Place, str], ...]:
        """Both edges, as related places."""
        return ((Place(self.below), "the transition starts here"), (Place(self.above), "and ends here"))


def gaps(filter: Filter, bands: Sequence[Band]) -> tuple[Gap, ...]:
    """The transitions between neighbouring bands of the filter whose edges can be read."""
    found = []
    ordered = [band for band in bands if band.kind != "bounds"]
    for before, after in itertools.pairwise(ordered):
        below, above = before.edge_path("high"), after.edge_path("low")
        low, high = filter.get(*below), filter.get(*above)
        if before.kind == after.kind or before.high is None or after.low is None or not low or not high:
            continue
        if not 0.0 < before.high < after.low:
            continue
        stop = below if before.kind == "stop" else above
        found.append(Gap(before.high, after.low, low.written, high.written, below, above, stop))
    return tuple(found)


def narrowest(found: Sequence[Gap]) -> Gap | None:
    """The narrowest transition, which sets the length of an FIR filter."""
    return min(found, key=lambda gap: gap.width, default=None)


def bound_by(found: Sequence[Gap], binding: Binding | None) -> Gap | None:
    """The transition that sets the order of an IIR filter; the narrowest where that is not known."""
    if binding is not None:
        side = "from" if binding.side == "low" else "to"
        for gap in found:
            if any(path[1] == binding.band and path[-1] == side for path in (gap.below, gap.above)):
                return gap
    return narrowest(found)
