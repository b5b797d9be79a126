"""The least length of a symmetric FIR filter that meets a mask, by exchange."""

from __future__ import annotations

import math
from dataclasses import dataclass

from bandwright.limits import MAX_EXACT_TAPS, MAX_LENGTH_TRIALS, MAX_UNDECIDED_LENGTHS
from bandwright.theory.closed_form.fir_length import (
    AmplitudeBand,
    amplitude_bands,
    equiripple_length,
    ichige,
    only_odd,
    steps,
)
from bandwright.theory.closed_form.types import Mask
from bandwright.theory.design.exchange import CONVERGED, Exchange, Floats, exchange
from bandwright.theory.design.fir_response import FirResponse
from bandwright.theory.design.fir_windows import FirWindows

BOUNDED = 10.0 ** (1.0 / 20.0)
"""In bounded transitions the gain stays within 1 dB above the highest upper bound of any pass band."""
UNBOUNDED = 1e4
"""The same for unbounded ones: coefficients in double precision hold no mask beside a still higher gain."""

_TAPS_PER_DECADE = 1.37
"""Taps that lower max|E| tenfold, times the transition in cycles/sample: 20 / 14.6 of Kaiser (1974)."""
_NEAR = 1.1
"""The ratio of peak to level from which on they tell how many taps are missing."""
_WIDE = 2.5
"""Transitions this many times wider than the hardest one are limited from the start: most would need it."""


@dataclass(frozen=True, slots=True)
class LeastLength:
    """`taps` meets the mask; where `low` equals it, nothing shorter can."""

    taps: int | None
    """None where the limits ended the search."""
    low: int
    """No shorter filter meets the mask, as is proved for its parity and the other one.

    Below `taps` where rounding hides the answer, or where stop bands count from a highest gain that the
    filter reaches nowhere (pass bands of several dB, or of very unequal ripple).
    """
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
    estimate = equiripple_length(mask, bounded_transitions)
    if estimate is None:
        return LeastLength(None, most_taps + 1, 0, None, (), ())
    search = _Search(mask, bounded_transitions, most_taps)
    length = search.open_near(estimate.taps)
    while length is not None:
        search.probe(length)
        length = search.following()
    return search.outcome()


class _Search:
    """What is known so far: the shortest length that meets the mask, the longest refused ones."""

    def __init__(self, mask: Mask, bounded_transitions: bool, most_taps: int) -> None:
        windows = amplitude_bands(mask) or ()
        hardest = max(steps(windows), key=ichige, default=None)
        width = hardest.width if hardest else math.inf
        self._windows = FirWindows(mask, BOUNDED if bounded_transitions else UNBOUNDED)
        if bounded_transitions:
            self._windows.limit_wider_than(_WIDE * math.tau * width)
        self._taps_per_decade = _TAPS_PER_DECADE / width
        self._most_taps = most_taps
        self._refused = [most_taps if only_odd(windows) else 0, -1]
        """The longest refused length of each parity, even first."""
        self._refusals: dict[int, Exchange] = {}
        self._undecided: set[int] = set()
        self._best: Exchange | None = None
        self._best_bands: tuple[AmplitudeBand, ...] = ()
        self._references: Floats | None = None
        self._probes = 0
        self._decades: dict[int, float] = {}
        """log10 of max|E| for each length, the last probed one last."""
        self._bracket = math.inf

    def outcome(self) -> LeastLength:
        """The least length and what proves it."""
        taps = self._best.taps if self._best else None
        refusals = tuple(self._refusals[parity] for parity in sorted(self._refusals))
        return LeastLength(taps, self._low(), self._probes, self._best, self._best_bands, refusals)

    def probe(self, taps: int) -> None:
        """Find out about this length, unless another one looks more likely on the way."""
        windows = self._windows
        windows.start(taps)
        near = math.inf if self._best and taps >= self._best.taps - 2 else _NEAR
        self._decades.pop(taps, None)
        self._decades[taps] = 0.0
        for _ in range(MAX_LENGTH_TRIALS):
            bands = windows.bands()
            if bands is None:
                break
            self._probes += 1
            filter = exchange(taps, bands, self._references, decide=near)
            self._references = filter.references
            self._decades[taps] = _decades(filter)
            if filter.level > 1.0 and not windows.reference_lowered:
                if windows.refused_by(filter):
                    self._refused[taps % 2] = max(self._refused[taps % 2], taps)
                    self._refusals[taps % 2] = filter
                    return
                continue
            if filter.peak > 1.0:
                break
            response = FirResponse(filter.impulse_response())
            if windows.limit(response):
                self._references = None  # they would leave the new band empty
                if self._taps_per_decade * self._decades[taps] < -1.0:
                    return
            elif windows.met_by(response):
                self._best, self._best_bands = filter, bands
                return
            elif not filter.converged:
                near = 1.0 + CONVERGED
            elif not windows.lower_reference(response):
                break
        self._undecided.add(taps)

    def following(self) -> int | None:
        """The length to probe next; None where all is known, or too much is hidden.

        The open length nearest to where max|E| should be 1: between two lengths by interpolation in its
        logarithm, else by the slope. But limits on transitions can hold the level just below 1 at any
        length. So a bracket that the last probe did not halve is halved now, and steps may double.
        """
        if len(self._undecided) > MAX_UNDECIDED_LENGTHS:
            return None
        best = self._best.taps if self._best else self._most_taps + 1
        refused = max((refused for refused in self._refused if refused < self._most_taps), default=0)
        decades, probed = self._decades, list(self._decades)
        last = probed[-1]
        if self._best and 0 < refused < best:
            share = decades[refused] / max(decades[refused] - decades[best], 1e-9)
            target = math.ceil(refused + (best - refused) * share)
            if best - refused > max(4, 0.5 * self._bracket):
                target = (best + refused) // 2
            self._bracket = best - refused
        else:
            step = self._taps_per_decade * abs(decades[last])
            if len(probed) > 1:
                moved, changed = last - probed[-2], decades[last] - decades[probed[-2]]
                flatter = abs(moved * decades[last] / changed) if changed else math.inf
                step = max(step, min(flatter, 2.0 * abs(moved)))
            target = math.ceil(last + math.copysign(step, decades[last]))
        return self.open_near(target)

    def open_near(self, target: int) -> int | None:
        """The length nearest to this one of which nothing is known, below the best one and the limit."""
        low, best = self._low(), self._best.taps if self._best else self._most_taps + 1
        target = min(max(target, low), best - 1)
        for distance in range(best - low):
            for taps in (target - distance, target + distance):
                if low <= taps < best and self._is_open(taps):
                    return taps
        return None

    def _low(self) -> int:
        """The shortest length that is not refused."""
        return min(refused + 2 for refused in self._refused)

    def _is_open(self, taps: int) -> bool:
        return taps > max(0, self._refused[taps % 2]) and taps not in self._undecided


def _decades(filter: Exchange) -> float:
    """log10 of the least max|E|, as far as level and peak tell."""
    near = filter.peak < 10.0 * filter.level
    return math.log10(max(math.sqrt(filter.level * filter.peak) if near else filter.level, 0.1))
