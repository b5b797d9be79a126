"""The least length of a symmetric FIR filter that meets a mask, by exchange."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bandwright.limits import MAX_EXACT_TAPS, MAX_LEVEL_TRIALS
from bandwright.theory.closed_form.fir_length import (
    AmplitudeBand,
    amplitude_bands,
    equiripple_length,
    only_odd,
    pass_tops,
    ripple_ratio,
    steps,
)
from bandwright.theory.closed_form.types import Mask
from bandwright.theory.design.exchange import Exchange, Floats, exchange

TRANSITION_LIMIT = 10.0 ** (1.0 / 20.0)
"""In bounded transitions the gain stays within 1 dB above the highest upper bound of any pass band."""

_TAPS_PER_DECADE = 1.37
"""Taps that lower max|E| tenfold, times the transition in cycles/sample: 20 / 14.6 of Kaiser (1974)."""
_NEAR = 1.1
"""The ratio of peak to level from which on they tell how many taps are missing."""
_SLACK = 1e-6
"""The error of the check of a finished response, as a share of the tolerance."""
_NUDGE = 1e-7
"""How far (relatively) a top is moved to see which bounds move with it."""
_LEAST_GAIN = 1e-9
"""Cuts refuse a place where their value is above minus this: the rounding of the linear program."""
_GRID_PER_TAP = 32
_INSETS = (0.15, 0.04, 0.01, 0.0025, 0.0)
"""Shares of a transition that its limit leaves out at each end, where the bands themselves hold the gain."""


@dataclass(frozen=True, slots=True)
class LeastLength:
    """`taps` meets the mask while `taps` - 1 and `taps` - 2 cannot, so nothing shorter can."""

    taps: int | None
    """None where the limits ended the search."""
    low: int
    """No shorter filter meets the mask. Below `taps` only where rounding hides the answer."""
    probes: int
    """Exchanges that were run."""
    design: Exchange | None
    """The filter of that length."""
    bands: tuple[AmplitudeBand, ...]
    """The windows that it was designed for."""
    refusals: tuple[Exchange, ...]
    """For each parity the longest length that was refused: its level is above 1."""


def least_length(
    mask: Mask, bounded_transitions: bool = True, most_taps: int = MAX_EXACT_TAPS
) -> LeastLength:
    """The least number of taps, up to `most_taps`, with which a symmetric filter meets the mask.

    Within one parity feasibility is monotone (zeros at both ends change nothing); across it is not. So both
    are probed until one length meets the mask and the two below it are refused. A length meets the mask
    where the response of the finished coefficients does; it is refused where a level above 1 proves, for
    every place of the floating pass bands, that none can.
    """
    search = _Search(mask, bounded_transitions, most_taps)
    estimate = equiripple_length(mask)
    if estimate is None or search.windows() is None:
        return LeastLength(None, most_taps + 1, 0, None, (), ())
    length: int | None = min(estimate.taps, most_taps)
    while length is not None:
        length = search.following(search.probe(length))
    return search.outcome()


class _Search:
    """What is known so far: the shortest length that meets the mask, the longest refused ones."""

    def __init__(self, mask: Mask, bounded_transitions: bool, most_taps: int) -> None:
        self._mask = mask
        self._most_taps = most_taps
        self._tops = pass_tops(mask)
        passes = [band for band in mask.bands if band.kind == "pass"]
        self._top_ranges = [
            (1.0, ripple_ratio(band)) if band.relative else (top, top)
            for band, top in zip(passes, self._tops, strict=True)
        ]
        self._transitions = _transitions(mask) if bounded_transitions and passes else []
        self._insets: dict[tuple[float, float], int] = {}
        windows = amplitude_bands(mask) or ()
        width = min((step.width for step in steps(windows)), default=math.inf)
        self._taps_per_decade = _TAPS_PER_DECADE / width
        self._refused = [most_taps if only_odd(windows) else 0, -1]
        self._refusals: dict[int, Exchange] = {}
        self._undecided: set[int] = set()
        self._best: Exchange | None = None
        self._best_bands: tuple[AmplitudeBand, ...] = ()
        self._references: Floats | None = None
        self._probes = 0

    def outcome(self) -> LeastLength:
        """The least length and what proves it."""
        taps = self._best.taps if self._best else None
        refusals = tuple(self._refusals[parity] for parity in sorted(self._refusals))
        return LeastLength(taps, self._low(), self._probes, self._best, self._best_bands, refusals)

    def probe(self, taps: int) -> float:
        """Find out about this length; the result is a guess of the least one, unrounded."""
        near = math.inf if self._best and taps >= self._best.taps - 2 else _NEAR
        cuts: list[_Cut] = []
        for _ in range(MAX_LEVEL_TRIALS):
            bands = self.windows()
            if bands is None:
                break
            self._probes += 1
            filter = exchange(taps, bands, self._references, decide=near)
            self._references = filter.references
            guess = taps + self._taps_per_decade * math.log10(max(math.sqrt(filter.level * filter.peak), 1e-3))
            if filter.level > 1.0:
                cuts.append(self._cut(filter))
                tops = _best_tops(cuts, self._top_ranges)
                if tops is None:
                    self._refused[taps % 2] = max(self._refused[taps % 2], taps)
                    self._refusals[taps % 2] = filter
                    return guess
                self._tops = tops
                continue
            response = _Response(filter.impulse_response())
            if filter.peak > 1.0 or not self._meets(response):
                break
            if self._bounds_transitions(response):
                self._best, self._best_bands = filter, bands
                return guess
        self._undecided.add(taps)
        return taps + 1.0

    def following(self, guess: float) -> int | None:
        """The open length nearest to the guess; None where all is known."""
        last = self._most_taps
        if self._best:
            last = self._best.taps - 1
            if not (self._is_open(last) or self._is_open(last - 1)):
                return None
        first = self._low()
        target = min(max(math.ceil(guess), first), last)
        for distance in range(last - first + 1):
            for taps in (target - distance, target + distance):
                if first <= taps <= last and self._is_open(taps):
                    return taps
        return None

    def windows(self) -> tuple[AmplitudeBand, ...] | None:
        """The mask at the present tops, with limits on those transitions that turned out to need one."""
        return self._windows(self._tops, max(self._tops, default=1.0))

    def _windows(self, tops: Sequence[float], reference: float) -> tuple[AmplitudeBand, ...] | None:
        limit = TRANSITION_LIMIT * reference
        besides = []
        for (low, high), tried in self._insets.items():
            inset = _INSETS[tried] * (high - low)
            besides.append(
                AmplitudeBand(
                    low + inset if low > 0.0 else low, high - inset if high < math.pi else high, -limit, limit
                )
            )
        return amplitude_bands(self._mask, tops, reference, besides)

    def _low(self) -> int:
        """The shortest length that is not refused."""
        return min(refused + 2 for refused in self._refused)

    def _is_open(self, taps: int) -> bool:
        return taps > max(0, self._refused[taps % 2]) and taps not in self._undecided

    def _meets(self, response: _Response) -> bool:
        """Whether the finished response keeps the mask, stop bands measured against its own highest gain."""
        passes = [band for band in self._mask.bands if band.kind == "pass"]
        reference = max((response.range(band.low, band.high)[1] for band in passes), default=1.0)
        for window in self._windows(self._tops, reference) or ():
            least, most = response.range(window.low, window.high)
            slack = _SLACK * window.tolerance
            if least < window.least - slack or most > window.most + slack:
                return False
        return True

    def _bounds_transitions(self, response: _Response) -> bool:
        """Whether the response keeps the limit in all transitions; else there is a closer limit from now on."""
        limit = TRANSITION_LIMIT * max(self._tops, default=1.0) * (1.0 + _SLACK)
        kept = True
        for transition in self._transitions:
            least, most = response.range(*transition)
            tried = self._insets.get(transition, -1)
            if max(-least, most) > limit and tried < len(_INSETS) - 1:
                self._insets[transition] = tried + 1
                kept = False
        if not kept:
            self._references = None  # they leave the new band empty
        return kept

    def _cut(self, filter: Exchange) -> _Cut:
        """What the refusal says about other places of the windows: their bounds move with tops and reference.

        For every filter of this length the sum of m A over the references is 0, where the windows' nearer
        bounds b make it at least sum m b. That is a linear function of the tops and of the reference.
        """
        reference = max(self._tops, default=1.0)
        moments = filter.moments / np.sum(np.abs(filter.moments) * self._at(filter, self._tops, reference)[2])

        def nearer(tops: Sequence[float], reference: float) -> Floats:
            least, most, _ = self._at(filter, tops, reference)
            return np.where(moments > 0.0, least, most)

        bounds = nearer(self._tops, reference)
        shares = []
        for index, top in enumerate(self._tops):
            moved = [*self._tops[:index], top * (1.0 + _NUDGE), *self._tops[index + 1 :]]
            follows = nearer(moved, reference) != bounds
            shares.append(float(moments[follows] @ bounds[follows]) / top)
        follows = nearer(self._tops, reference * (1.0 + _NUDGE)) != bounds
        of_reference = float(moments[follows] @ bounds[follows]) / reference
        moving = sum(share * top for share, top in zip(shares, self._tops, strict=True)) + of_reference * reference
        return _Cut(tuple(shares), of_reference, float(moments @ bounds) - moving)

    def _at(
        self, filter: Exchange, tops: Sequence[float], reference: float
    ) -> tuple[Floats, Floats, Floats]:
        """The windows' least, most and tolerance at the references of a filter."""
        windows = self._windows(tops, reference) or ()
        lows = np.array([window.low for window in windows])
        which = np.searchsorted(lows, filter.references, side="right") - 1
        least = np.array([window.least for window in windows])[which]
        most = np.array([window.most for window in windows])[which]
        return least, most, 0.5 * (most - least)


@dataclass(frozen=True, slots=True)
class _Cut:
    """Where `value` is above 0, a length is refused."""

    of_tops: tuple[float, ...]
    of_reference: float
    constant: float

    def least(self, ranges: Sequence[tuple[float, float]]) -> float:
        """A lower bound of the value over all tops, whichever of them is the reference."""
        if not ranges:
            return self.constant + self.of_reference
        values = []
        for highest in range(len(ranges)):
            value = self.constant
            for index, (share, range_) in enumerate(zip(self.of_tops, ranges, strict=True)):
                share += self.of_reference if index == highest else 0.0
                value += share * range_[share < 0.0]
            values.append(value)
        return min(values)


def _best_tops(cuts: Sequence[_Cut], ranges: Sequence[tuple[float, float]]) -> tuple[float, ...] | None:
    """The tops at which the cuts refuse least, by a linear program; None where they refuse all tops."""
    if cuts[-1].least(ranges) > 0.0:
        return None
    from scipy.optimize import linprog  # takes longer to import than most searches take

    best: tuple[float, tuple[float, ...]] | None = None
    for highest in range(len(ranges)):
        rows, limits = [], []
        for cut in cuts:
            row = [*cut.of_tops, -1.0]
            row[highest] += cut.of_reference
            rows.append(row)
            limits.append(-cut.constant)
        for index in range(len(ranges)):
            if index != highest:
                rows.append([float(i == index) - float(i == highest) for i in range(len(ranges) + 1)])
                limits.append(0.0)
        objective = [0.0] * len(ranges) + [1.0]
        solved = linprog(objective, A_ub=rows, b_ub=limits, bounds=[*ranges, (None, None)])
        if solved.success and (best is None or solved.fun < best[0]):
            best = float(solved.fun), tuple(float(top) for top in solved.x[:-1])
    return best[1] if best and best[0] < -_LEAST_GAIN else None


class _Response:
    """The amplitude of a finished symmetric filter on a dense grid, with its local extrema in between."""

    def __init__(self, impulse_response: Floats) -> None:
        taps = len(impulse_response)
        self._impulse_response = impulse_response
        self._delays = np.arange(taps) - 0.5 * (taps - 1)
        size = 1 << (_GRID_PER_TAP * taps - 1).bit_length()
        w = np.arange(size // 2 + 1) * (math.tau / size)
        turn = np.exp(0.5j * (taps - 1) * w)
        orders = [np.fft.rfft(impulse_response * self._delays**order, size) * turn for order in range(3)]
        value, slope, curve = orders[0].real, orders[1].imag, -orders[2].real
        with np.errstate(divide="ignore", invalid="ignore"):
            shift = -slope / curve
        near = np.flatnonzero(np.abs(shift) <= math.pi / size)
        self._w = np.concatenate([w, w[near] + shift[near]])
        self._values = np.concatenate([value, value[near] + 0.5 * slope[near] * shift[near]])

    def range(self, low: float, high: float) -> tuple[float, float]:
        """The least and the most amplitude from `low` to `high` (rad/sample)."""
        edges = np.cos(np.outer([low, high], self._delays)) @ self._impulse_response
        values = np.append(self._values[(self._w >= low) & (self._w <= high)], edges)
        return float(values.min()), float(values.max())


def _transitions(mask: Mask) -> list[tuple[float, float]]:
    """Every stretch from 0 to Nyquist that no pass or stop band covers."""
    edges = [0.0]
    for band in mask.bands:
        if band.kind != "bounds":
            edges += [band.low, band.high]
    edges.append(math.pi)
    return [(low, high) for low, high in zip(edges[::2], edges[1::2], strict=True) if low < high]
