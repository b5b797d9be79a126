"""The windows of a mask during a search: floating ones move, and transitions get limits as they need them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bandwright.theory.closed_form.fir_length import (
    AmplitudeBand,
    amplitude_bands,
    pass_tops,
    ripple_ratio,
)
from bandwright.theory.closed_form.types import Mask
from bandwright.theory.design.exchange import Exchange, Floats
from bandwright.theory.design.fir_response import FirResponse

_SLACK = 1e-6
"""The error of the check of a finished response, as a share of the tolerance."""
_ZERO = 1e-200
_INSETS = (1.0, 0.25, 0.0)
"""What a limit leaves out at each end of a transition, where the bands beside it hold the gain, in units of
2 pi / taps: the width of a lobe. It is drawn closer where that does not do."""
_NUDGE = 1e-7
"""How far (relatively) a top is moved to see which bounds move with it."""
_HOPE = 1e-7
"""A place is worth a trial where the cuts leave the level this far below 1: beyond rounding."""


@dataclass(frozen=True, slots=True)
class _Cut:
    """A linear function of tops and reference; where it is above 0, the length is refused."""

    of_tops: tuple[float, ...]
    of_reference: float
    constant: float

    def row(self, highest: int) -> list[float]:
        """The factors of the tops where the one with this index is the reference."""
        row = list(self.of_tops)
        row[highest] += self.of_reference
        return row

    def least(self, ranges: Sequence[tuple[float, float]], highest: int) -> float:
        """A lower bound of the value over all tops in these ranges."""
        pairs = zip(self.row(highest), ranges, strict=True)
        return self.constant + sum(min(share * low, share * high) for share, (low, high) in pairs)


class FirWindows:
    """The mask as windows of the amplitude, for one length after the other.

    A window of a pass band may float, so each has a top of its own; stop bands count from the highest top,
    the reference. A refusal at one place of the tops says more: for every filter of the length the sum of
    m A over the references is 0 (`Exchange.moments`), where the nearer bounds b of the windows make it at
    least sum m b, a linear function of the tops. The length is refused for good where such cuts leave no
    place.
    """

    def __init__(self, mask: Mask, transition_limit: float) -> None:
        """`transition_limit`: the highest gain in transitions, as a ratio to the highest top."""
        self._mask = mask
        self._tops = pass_tops(mask)
        passes = [band for band in mask.bands if band.kind == "pass"]
        self._passes = [(band.low, band.high) for band in passes]
        self._ranges = [
            (1.0, ripple_ratio(band)) if band.relative else (top, top)
            for band, top in zip(passes, self._tops, strict=True)
        ]
        self._transition_limit = transition_limit
        self._transitions = _transitions(mask) if passes else []
        self._insets: dict[tuple[float, float], int] = {}
        self.start(1)

    @property
    def limited(self) -> bool:
        """Whether any transition has a limit."""
        return bool(self._insets)

    @property
    def reference_lowered(self) -> bool:
        """Whether stop bands count from less than the highest top: a level above 1 refuses nothing then."""
        return self._reference < max(self._tops, default=1.0)

    def start(self, taps: int) -> None:
        """Turn to filters of this length; the windows stay where they are."""
        self._taps = taps
        self._cuts: list[_Cut] = []
        self._reference = max(self._tops, default=1.0)

    def bands(self) -> tuple[AmplitudeBand, ...] | None:
        """The windows as they are now; None where they exclude each other."""
        return self._bands(self._tops, self._reference)

    def limit_wider_than(self, width: float) -> None:
        """Limit the gain in transitions wider than this (rad/sample)."""
        for low, high in self._transitions:
            if high - low > width:
                self._insets[low, high] = 0

    def limit(self, response: FirResponse) -> bool:
        """Limit the transitions where this response rises too high, or closer; False where there are none."""
        most = self._transition_limit * max(self._tops, default=1.0) * (1.0 + _SLACK)
        higher = [gap for gap in self._transitions if max(map(abs, response.range(*gap))) > most]
        closer = {gap: self._insets.get(gap, -1) + 1 for gap in higher}
        closer = {gap: inset for gap, inset in closer.items() if inset < len(_INSETS)}
        self._insets.update(closer)
        return bool(closer)

    def met_by(self, response: FirResponse) -> bool:
        """Whether the response keeps the mask, its stop bands measured against its own highest gain."""
        for window in amplitude_bands(self._mask, self._tops, self._highest(response)) or ():
            least, most = response.range(window.low, window.high)
            slack = _SLACK * window.tolerance + _ZERO
            if least < window.least - slack or most > window.most + slack:
                return False
        return True

    def lower_reference(self, response: FirResponse) -> bool:
        """Count stop bands from the highest gain of this response; False where they do already."""
        highest = self._highest(response)
        lower = highest < self._reference * (1.0 - _SLACK)
        self._reference = min(highest, self._reference)
        return lower

    def refused_by(self, filter: Exchange) -> bool:
        """Whether this level above 1 refuses the length at every place left; else move to the best one."""
        self._cuts.append(self._cut(filter))
        tops = self._best_tops()
        if tops is not None:
            self._tops = tops
            self._reference = max(tops)
        return tops is None

    def _highest(self, response: FirResponse) -> float:
        return max((response.range(*band)[1] for band in self._passes), default=1.0)

    def _bands(self, tops: Sequence[float], reference: float) -> tuple[AmplitudeBand, ...] | None:
        limit = self._transition_limit * reference
        limits = []
        for (low, high), inset in self._insets.items():
            left_out = min(_INSETS[inset] * math.tau / self._taps, 0.25 * (high - low))
            first = low + left_out if low > 0.0 else low
            last = high - left_out if high < math.pi else high
            limits.append(AmplitudeBand(first, last, -limit, limit))
        return amplitude_bands(self._mask, tops, reference, limits)

    def _cut(self, filter: Exchange) -> _Cut:
        tops, reference = self._tops, self._reference
        least, most = self._at_references(filter, tops, reference)
        # At this place, the value is the level - 1.
        moments = filter.moments / np.sum(np.abs(filter.moments) * 0.5 * (most - least))

        def nearer(least: Floats, most: Floats) -> Floats:
            return np.where(moments > 0.0, least, most)

        bounds = nearer(least, most)

        def moving_with(moved_tops: Sequence[float], moved_reference: float) -> float:
            moves = nearer(*self._at_references(filter, moved_tops, moved_reference)) != bounds
            return float(moments[moves] @ bounds[moves])

        moving = []
        for index, top in enumerate(tops):
            moving.append(moving_with([*tops[:index], top * (1.0 + _NUDGE), *tops[index + 1 :]], reference))
        with_reference = moving_with(tops, reference * (1.0 + _NUDGE))
        constant = float(moments @ bounds) - sum(moving) - with_reference
        of_tops = tuple(share / top for share, top in zip(moving, tops, strict=True))
        return _Cut(of_tops, with_reference / reference, constant)

    def _at_references(
        self, filter: Exchange, tops: Sequence[float], reference: float
    ) -> tuple[Floats, Floats]:
        """The least and the most amplitude that the windows allow at the references of a filter."""
        windows = self._bands(tops, reference) or ()
        low, high, least, most = np.array([(w.low, w.high, w.least, w.most) for w in windows]).T
        above = np.searchsorted(low, filter.references, side="right") - 1
        # At the edge where two windows touch, both hold.
        below = np.where(high[above - 1] == filter.references, above - 1, above)
        return np.maximum(least[above], least[below]), np.minimum(most[above], most[below])

    def _best_tops(self) -> tuple[float, ...] | None:
        """The tops where the cuts are lowest, by a linear program for each that may be the highest."""
        indices, ranges = range(len(self._ranges)), self._ranges
        if all(self._cuts[-1].least(ranges, highest) > 0.0 for highest in indices):
            return None
        from scipy.optimize import linprog  # takes longer to import than most searches take

        best: tuple[float, tuple[float, ...]] = (-_HOPE, ())
        for highest in indices:
            rows = [[*cut.row(highest), -1.0] for cut in self._cuts]
            limits = [-cut.constant for cut in self._cuts]
            for other in indices:
                if other != highest:
                    rows.append([float(i == other) - float(i == highest) for i in indices] + [0.0])
                    limits.append(0.0)
            objective = [0.0 for _ in indices] + [1.0]
            solved = linprog(objective, A_ub=rows, b_ub=limits, bounds=[*ranges, (None, None)])
            if solved.x is not None and solved.x[-1] < best[0]:
                best = float(solved.x[-1]), tuple(float(top) for top in solved.x[:-1])
        return best[1] or None


def _transitions(mask: Mask) -> list[tuple[float, float]]:
    """Every stretch from 0 to Nyquist that no pass or stop band covers."""
    edges = [0.0]
    for band in mask.bands:
        if band.kind != "bounds":
            edges += [band.low, band.high]
    edges.append(math.pi)
    return [(low, high) for low, high in zip(edges[::2], edges[1::2], strict=True) if low < high]
