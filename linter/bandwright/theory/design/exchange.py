"""The best linear-phase FIR filter of a given length: a Remez exchange over any number of bands.

Parks & McClellan, "Chebyshev approximation for nonrecursive digital filters with linear phase", 1972;
barycentric evaluation and starting points in the manner of Filip, "A robust and scalable implementation
of the Parks-McClellan algorithm", 2016 (both from memory).

A symmetric filter of N taps has H(e^jw) = A(w) exp(-jw(N-1)/2) with A(w) = Q(w) P(cos w), where P has
degree n: Q = 1, n = (N-1)/2 for odd N, and Q = cos(w/2), n = N/2 - 1 for even N. The error
E = (A - desired) / tolerance is at most 1 in magnitude exactly where the mask is met. On n + 2 references
whose errors alternate in sign, the least possible max|E| is the level: a lower bound for every filter of
that length (de la Vallee-Poussin 1919). Each step moves the references to larger errors, which raises the
level until it meets max|E|.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from bandwright.limits import MAX_EXCHANGE_STEPS
from bandwright.theory.closed_form.fir_length import AmplitudeBand, only_odd

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

CONVERGED = 1e-5
"""The exchange has converged where peak - level is at most this share of the peak."""
SAMPLING = 1e-3
"""Before convergence, the sampled peak may lie below max|E| by this share of it."""

_INSET = 1e-3
"""Bands keep this share of pi/n away from one another and, for even lengths, from the zero at Nyquist."""
_POINTS_BETWEEN = 4
"""Samples between two references, where the error has one lobe, or two while it moves."""
_POINTS_AT_EDGE = 8
"""Samples between a band edge and the nearest reference; twice as many where the edge is none itself."""
_NEAR = 1.2
"""From this ratio of peak to level on, a second parabola finds the top of each lobe."""
_LEJA_DEGREE = 40
"""Up to this degree the exchange starts from Leja points."""
_LEJA_CANDIDATES = 8
"""Candidates for each of them."""
_QUADRATURE = 256
_ROUGH = 0.3
"""How near the level comes to the peak in the designs that only give a start."""
_COEFFICIENT_ERROR = 1e-7
"""What rounding may add to E when the polynomial is turned into coefficients the fast way."""
_ZERO = 1e-300
_BLOCK = 1 << 16
"""Elements of one block of an evaluation: half a megabyte, which stays in the cache."""


@dataclass(frozen=True, slots=True)
class Exchange:
    """The outcome of an exchange: `level` <= the least possible max|E| <= max|E| of this filter."""

    taps: int
    references: Floats
    """rad/sample, rising; they prove the level."""
    level: float
    """No filter of this length has a smaller max|E|: above 1, none meets the mask."""
    peak: float
    """max|E| of this filter as sampled: good to 2 `CONVERGED` where converged, else to some `SAMPLING`."""
    converged: bool
    steps: int
    interpolant: _Interpolant = field(repr=False)

    @property
    def moments(self) -> Floats:
        """Numbers m with sum m A(references) = 0 for every filter of this length: the proof of the level.

        Their signs alternate, and turn so that |sum m desired| = sum m desired.
        """
        return self.interpolant.moments

    def amplitude(self, w: Floats) -> Floats:
        """A at the frequencies `w` (rad/sample, one dimension)."""
        return self.interpolant.problem.zeros(w) * self.interpolant.polynomial(w)

    def impulse_response(self) -> Floats:
        """The coefficients, `taps` of them."""
        half = 0.5 * self.interpolant.coefficients()
        half[0] *= 2.0
        if self.taps % 2:
            return np.concatenate([half[:0:-1], half])
        # cos(w/2) cos(kw) = (cos((k - 1/2) w) + cos((k + 1/2) w)) / 2
        upper = 0.5 * (half + np.append(half[1:], 0.0))
        return np.concatenate([upper[::-1], upper])


def exchange(
    taps: int, bands: Sequence[AmplitudeBand], start: Floats | None = None, *, decide: float = 0.0
) -> Exchange:
    """The filter of `taps` coefficients whose max|E| over the bands is least.

    `bands` are disjoint and rising, as `amplitude_bands` gives them, with tolerances above 0. `start` holds
    the references of a similar problem (rad/sample, any number). `decide` asks whether max|E| can be at
    most 1: the exchange stops early, once this is known and peak / level is no more than `decide`, and goes
    on beyond `CONVERGED` as long as it is not known.

    Raises ValueError for an even length where the mask forbids a zero at Nyquist, and for bands of no width.
    """
    if taps % 2 == 0 and only_odd(bands):
        raise ValueError("an even length has gain 0 at half the sample rate, which the mask forbids")
    if all(band.low == band.high for band in bands):
        raise ValueError("the bands are single frequencies; at least one must have width")
    problem = _Problem(taps, bands)
    if start is not None:
        warm = _exchange(problem, start, CONVERGED, decide)
        if warm.converged or decide * warm.level >= warm.peak:
            return warm
    return _exchange(problem, _first_references(problem, bands), CONVERGED, decide)


def _exchange(problem: _Problem, start: Floats, close: float, decide: float) -> Exchange:
    interpolant = _Interpolant(problem, problem.spread(start))
    for step in range(1, MAX_EXCHANGE_STEPS + 1):
        runs = _runs(interpolant)
        level, peak = abs(interpolant.level), float(runs.sizes.max())
        converged = runs.finite and peak - level <= max(close * peak, _ZERO)
        decided = level > 1.0 or peak * (1.0 if converged else 1.0 + SAMPLING) <= 1.0
        outcome = Exchange(problem.taps, interpolant.nodes, level, peak, converged, step, interpolant)
        if (converged and (decided or not decide)) or (decided and peak <= decide * level):
            break
        choices = [_Interpolant(problem, runs.points[choice]) for choice in runs.choices()]
        interpolant = max(choices, key=lambda choice: abs(choice.level))
        if not abs(interpolant.level) > level:
            break
    return outcome


def _first_references(problem: _Problem, bands: Sequence[AmplitudeBand]) -> Floats:
    """Leja points for low degrees, else the references of half the degree and as many new ones."""
    if problem.degree <= _LEJA_DEGREE:
        return problem.leja(problem.degree + 2)
    share = problem.share()
    halvings = (problem.degree // _LEJA_DEGREE).bit_length()
    points = problem.leja(2 + (problem.degree >> halvings))
    for halving in range(halvings, 0, -1):
        taps = 2 * (problem.degree >> halving) + 2 - problem.taps % 2
        smaller = _Problem(taps, bands)
        points = _exchange(smaller, smaller.spread(points, share), _ROUGH, 0.0).references
    return problem.spread(points, share)


class _Problem:
    """The bands for one length, as arrays, one element a band."""

    def __init__(self, taps: int, bands: Sequence[AmplitudeBand]) -> None:
        self.taps = taps
        self.degree = (taps - 1) // 2
        self.low = np.array([band.low for band in bands])
        self.high = np.array([band.high for band in bands])
        self.desired = np.array([band.desired for band in bands])
        self.tolerance = np.array([band.tolerance for band in bands])
        self._gap = _INSET * math.pi / (self.degree + 1)
        self._inset()

    def _inset(self) -> None:
        """Keep the looser one of two touching bands, and the zero at Nyquist, at a distance."""
        gap = self._gap
        for below in np.flatnonzero(self.low[1:] - self.high[:-1] < gap):
            room_below, room_above = (self.high - self.low)[below : below + 2] / 4.0
            if self.tolerance[below] > self.tolerance[below + 1] and room_below > 0.0:
                self.high[below] -= min(gap, room_below)
            else:
                self.low[below + 1] += min(gap, room_above)
        if self.taps % 2 == 0:
            inside = self.low < math.pi - gap
            self.low, self.high = self.low[inside], np.minimum(self.high[inside], math.pi - gap)
            self.desired, self.tolerance = self.desired[inside], self.tolerance[inside]

    def band(self, w: Floats) -> Indices:
        """The index of the band that each frequency lies in."""
        return np.asarray(np.searchsorted(self.low, w, side="right") - 1)

    def counts(self, w: Floats) -> Indices:
        """How many of the frequencies lie in each band."""
        return np.asarray(np.bincount(self.band(w), minlength=len(self.low)))

    def zeros(self, w: Floats) -> Floats:
        """The factor Q that the length imposes."""
        return np.ones_like(w) if self.taps % 2 else np.cos(0.5 * w)

    def leja(self, count: int) -> Floats:
        """Leja points (Leja 1957, from memory): each with the greatest product of distances to those before.

        They crowd where gaps between the bands demand it, as references do, and uniform points do not.
        """
        widths = self.high - self.low
        candidates = 2 + (_LEJA_CANDIDATES * count / widths.sum() * widths).astype(int)
        points = np.concatenate([self._evenly(i, self._ends(i), n) for i, n in enumerate(candidates)])
        x = np.cos(points)
        logs = np.zeros(len(x))
        chosen = [0]
        with np.errstate(divide="ignore"):
            for _ in range(count - 1):
                logs += np.log(np.abs(x - x[chosen[-1]]))
                chosen.append(int(np.argmax(logs)))
        return np.asarray(points[np.sort(chosen)])

    def share(self) -> Floats:
        """The share of each band in the references as their number grows; touching bands split by width."""
        firsts = np.flatnonzero(np.append(True, self.low[1:] - self.high[:-1] > 2.0 * self._gap))
        lasts = np.append(firsts[1:], len(self.low)) - 1
        widths = self.high - self.low
        group = np.cumsum(np.isin(np.arange(len(widths)), firsts)) - 1
        together = np.bincount(group, widths)
        wide = together > 0.0
        shares = np.zeros(len(firsts))
        shares[wide] = _equilibrium(self.low[firsts[wide]], self.high[lasts[wide]])
        return np.asarray(shares[group] * widths / np.where(wide, together, 1.0)[group])

    def spread(self, start: Floats, share: Floats | None = None) -> Floats:
        """As many references as are needed, as dense in each band as `start`.

        Those that `start` lacks go to the bands by `share`: the tolerances move a number of references
        from band to band that hardly grows with the degree.
        """
        band = self.band(start)
        lacking = max(0, self.degree + 2 - len(start))
        weights = self.counts(start).astype(float)
        if share is not None:
            weights += lacking * share
        parts = []
        for i, count in enumerate(self._shares(weights)):
            ends = self._ends(i)
            points = np.sort(np.clip(start[band == i], *ends))
            points = points[np.diff(points, prepend=-1.0) > self._gap]
            parts.append(self._evenly(i, points if len(points) > 1 else ends, count))
        return np.concatenate(parts)

    def _ends(self, band: int) -> Floats:
        return np.array([self.low[band], self.high[band]])

    def _evenly(self, band: int, points: Floats, count: int) -> Floats:
        """`count` frequencies that divide each step from point to point alike.

        Alike in the angle whose sine runs across the band, as extrema crowd at its edges in the way of
        Chebyshev polynomials; but not at 0 and Nyquist, where the response goes on as its mirror image.
        """
        low, high = self._ends(band)
        if low == high:
            return points[:count]
        mirrored_low = -high if low <= 0.0 else low
        mirrored_high = math.tau - low if high > math.pi - 2.0 * self._gap else high
        centre, radius = 0.5 * (mirrored_low + mirrored_high), 0.5 * (mirrored_high - mirrored_low)
        angles = np.arcsin(np.clip((points - centre) / radius, -1.0, 1.0))
        wanted = np.interp(np.linspace(0.0, len(points) - 1.0, count), np.arange(len(points)), angles)
        w: Floats = centre + radius * np.sin(wanted)
        # A reference beside an edge by a rounding error would be a second knot there.
        w[:1] = np.where(w[:1] < low + 1e-3 * self._gap, low, w[:1])
        w[-1:] = np.where(w[-1:] > high - 1e-3 * self._gap, high, w[-1:])
        return w

    def _shares(self, weights: Floats) -> Indices:
        """The references shared out in proportion to the weights, one at most to a single frequency."""
        wanted = self.degree + 2
        room = np.where(self.high > self.low, wanted, 1)
        exact = weights * (wanted / weights.sum())
        counts: Indices = np.minimum(exact.astype(np.intp), room)
        while (missing := wanted - int(counts.sum())) > 0:
            open_ = np.flatnonzero(counts < room)
            order = open_[np.argsort(counts[open_] - exact[open_], kind="stable")]
            counts[order[:missing]] += 1
        return counts


class _Interpolant:
    """The polynomial whose errors at the nodes alternate in sign with one magnitude, the level."""

    def __init__(self, problem: _Problem, nodes: Floats) -> None:
        self.problem = problem
        self.nodes = nodes
        band = problem.band(nodes)
        zeros = problem.zeros(nodes)
        desired, tolerance = problem.desired[band], problem.tolerance[band]
        signs = np.where(np.arange(len(nodes)) % 2, -1.0, 1.0)
        self._x = np.cos(nodes)
        logs = _log_weights(self._x)
        weights = np.exp(logs - np.max(logs))
        moments = signs * weights / zeros
        # The sum over all nodes of weight times P vanishes, as P has a degree below that of the nodes.
        self.level = float(-(moments @ desired) / np.sum(np.abs(moments) * tolerance))
        self.moments = moments if self.level < 0.0 else -moments
        # Signs alternate even at level 0, where the nodes' desired gains happen to be of that degree.
        self.errors = signs * (self.level or _ZERO)
        self._weights = signs * weights
        self._scale = tolerance / zeros
        self._values = desired / zeros + self.errors * self._scale

    def coefficients(self) -> Floats:
        """P in cosines: its coefficients of cos kw, k = 0..degree."""
        count = len(self.nodes) - 1
        orders = np.arange(count)
        cosines = np.cos(np.outer(self.nodes, orders))
        samples = self.polynomial(np.asarray((orders + 0.5) * (math.pi / count)))
        if np.all(np.isfinite(samples)):
            # The discrete cosine transform of samples at Chebyshev nodes, by way of a full period.
            spectrum = np.fft.fft(np.concatenate([samples, samples[::-1]]))[:count]
            result: Floats = np.real(spectrum * np.exp(-0.5j * math.pi / count * orders)) / count
            result[0] *= 0.5
            if np.max(np.abs(cosines @ result - self._values) / self._scale) < _COEFFICIENT_ERROR:
                return result
        # Noise from wide transitions, where no node holds P; the linear system keeps it out of the bands.
        system = np.column_stack([cosines, -np.sign(self.errors) * self._scale])
        right = self._values - self.errors * self._scale
        return np.asarray(np.linalg.solve(system, right)[:-1])

    def polynomial(self, w: Floats) -> Floats:
        """P = A / Q at the frequencies `w`; not finite where the sums cancel to nothing."""
        x = np.cos(w)
        result = np.empty_like(x)
        both = np.stack([self._values, np.ones_like(self._values)], axis=1)
        rows = max(1, _BLOCK // len(self._x))
        with np.errstate(divide="ignore", invalid="ignore"):
            for first in range(0, len(x), rows):
                block = slice(first, first + rows)
                difference = x[block, None] - self._x
                sums = np.divide(self._weights, difference, out=difference) @ both
                result[block] = sums[:, 0] / sums[:, 1]
        lost = np.flatnonzero(~np.isfinite(result))
        at, node = np.nonzero(x[lost, None] == self._x)
        result[lost[at]] = self._values[node]
        return result

    def error(self, w: Floats) -> Floats:
        """E at frequencies inside the bands."""
        band = self.problem.band(w)
        amplitude = self.problem.zeros(w) * self.polynomial(w)
        error: Floats = (amplitude - self.problem.desired[band]) / self.problem.tolerance[band]
        return error


@dataclass(frozen=True, slots=True)
class _Runs:
    """The stretches where the error keeps its sign: the place and size of the largest error of each."""

    points: Floats
    sizes: Floats
    of_nodes: Indices
    """The run that each node lies in."""
    finite: bool
    """False where cancellation left no digit of an error: the references are far from an optimum."""

    def choices(self) -> Iterator[Indices]:
        """One or two sets of as many runs as nodes, alternating, each with the run of the peak."""
        yield self._nodes_and_peak()
        if len(self.points) > len(self.of_nodes):
            yield self._largest()

    def _nodes_and_peak(self) -> Indices:
        """The nodes' own runs, one of them replaced by that of the peak: this always raises the level."""
        chosen, peak = self.of_nodes.copy(), int(np.argmax(self.sizes))
        place = int(np.searchsorted(chosen, peak))
        if place < len(chosen) and chosen[place] == peak:
            return chosen
        # Neighbouring runs differ in sign, so runs of one parity have one sign.
        if place == 0 and (chosen[0] - peak) % 2:
            return np.concatenate([[peak], chosen[:-1]])
        if place == len(chosen) and (chosen[-1] - peak) % 2:
            return np.concatenate([chosen[1:], [peak]])
        same = place if place < len(chosen) and (chosen[place] - peak) % 2 == 0 else place - 1
        chosen[same] = peak
        return chosen

    def _largest(self) -> Indices:
        """All runs but the smallest ones: an end at a time, or a pair of neighbours."""
        chosen = np.arange(len(self.points))
        while (surplus := len(chosen) - len(self.of_nodes)) > 0:
            sizes = self.sizes[chosen]
            if surplus % 2:
                chosen = chosen[1:] if sizes[0] < sizes[-1] else chosen[:-1]
                continue
            least = int(np.argmin(sizes))
            if least in (0, len(chosen) - 1):
                chosen = np.delete(chosen, least)
            else:
                neighbour = least - 1 if sizes[least - 1] < sizes[least + 1] else least + 1
                chosen = np.delete(chosen, [least, neighbour])
        return chosen


def _runs(interpolant: _Interpolant) -> _Runs:
    problem, nodes = interpolant.problem, interpolant.nodes
    w, node_places = _samples(problem, nodes)
    error = np.empty_like(w)
    between = np.ones(len(w), dtype=bool)
    between[node_places] = False
    error[node_places] = interpolant.errors
    error[between] = interpolant.error(w[between])
    finite = np.isfinite(error)
    error[~finite] = 0.0
    turns = np.flatnonzero(np.diff(error > 0.0)) + 1
    starts = np.concatenate([[0], turns])
    run = np.zeros(len(w), dtype=np.intp)
    run[turns] = 1
    run = np.cumsum(run)
    sizes = np.abs(error)
    tops = np.flatnonzero(sizes == np.maximum.reduceat(sizes, starts)[run])
    tops = tops[np.diff(run[tops], prepend=-1) > 0]
    points, sizes = _refined(interpolant, w, sizes, tops)
    return _Runs(points, sizes, run[node_places], bool(finite.all()))


def _samples(problem: _Problem, nodes: Floats) -> tuple[Floats, Indices]:
    """Frequencies that show every lobe of the error, nodes and band edges among them; where the nodes are.

    Beside the edges of bands they are denser by the square, as lobes are.
    """
    knots = np.unique(np.concatenate([nodes, problem.low, problem.high]))
    node_knots = np.searchsorted(knots, nodes)
    is_node = np.zeros(len(knots), dtype=bool)
    is_node[node_knots] = True
    band = problem.band(knots)
    gaps = np.diff(knots)
    at_low, at_high = knots[:-1] == problem.low[band[:-1]], knots[1:] == problem.high[band[1:]]
    share = gaps * ((problem.degree + 1) / math.pi)
    counts = np.where(at_low | at_high, _POINTS_AT_EDGE, _POINTS_BETWEEN)
    counts = np.maximum(counts, share * (_POINTS_BETWEEN / 1.5)).astype(np.intp)
    counts = np.where(is_node[:-1] & is_node[1:], counts, 2 * counts)
    counts = np.where(band[:-1] == band[1:], counts + 1, 1)
    starts = np.concatenate([[0], np.cumsum(counts)])
    of = np.repeat(np.arange(len(gaps)), counts)
    part = (np.arange(starts[-1]) - starts[of]) / counts[of]
    low_sided, high_sided = (at_low & ~at_high)[of], (at_high & ~at_low)[of]
    both = (at_low & at_high)[of]
    part[low_sided] = 1.0 - np.cos(0.5 * math.pi * part[low_sided])
    part[high_sided] = np.sin(0.5 * math.pi * part[high_sided])
    part[both] = 0.5 - 0.5 * np.cos(math.pi * part[both])
    return np.append(knots[of] + gaps[of] * part, knots[-1]), starts[node_knots]


def _refined(interpolant: _Interpolant, w: Floats, sizes: Floats, tops: Indices) -> tuple[Floats, Floats]:
    """The largest errors of the runs, those inside bands moved to the tops of parabolas."""
    points, largest = w[tops], sizes[tops]
    band = interpolant.problem.band(w)
    last = len(w) - 1
    inside = (band[np.maximum(tops - 1, 0)] == band[np.minimum(tops + 1, last)]) & (tops > 0) & (tops < last)
    inner, at = np.flatnonzero(inside), tops[inside]
    left, right = w[at] - w[at - 1], w[at + 1] - w[at]
    shift = _top(left, right, sizes[at - 1], sizes[at], sizes[at + 1])
    _move(interpolant, points, largest, inner, w[at] + shift)
    if largest.max() < _NEAR * abs(interpolant.level):
        step = 0.1 * np.minimum(left, right)
        sides = np.concatenate([points[inner] - step, points[inner] + step])
        below, above = np.abs(interpolant.error(sides)).reshape(2, -1)
        shift = _top(step, step, below, largest[inner], above)
        _move(interpolant, points, largest, inner, points[inner] + shift)
    if np.any(np.diff(points) <= 0.0):  # noise far from an optimum made two tops meet
        return w[tops], sizes[tops]
    return points, largest


def _top(left: Floats, right: Floats, below: Floats, here: Floats, above: Floats) -> Floats:
    """How far from `here` the parabola through three sizes has its top, half a step at most."""
    fall_left, fall_right = here - below, here - above
    curve = fall_left * right + fall_right * left
    shift = 0.5 * (fall_left * right * right - fall_right * left * left) / np.where(curve > 0.0, curve, 1.0)
    return np.where(curve > 0.0, np.clip(shift, -0.5 * left, 0.5 * right), 0.0)


def _move(interpolant: _Interpolant, points: Floats, sizes: Floats, which: Indices, w: Floats) -> None:
    """Move these points to `w` where the error is larger there."""
    there = np.abs(interpolant.error(w))
    larger = np.isfinite(there) & (there > sizes[which])
    points[which[larger]], sizes[which[larger]] = w[larger], there[larger]


def _equilibrium(low: Floats, high: Floats) -> Floats:
    """The equilibrium measure of each of these disjoint intervals of frequency, in x = cos w.

    Its density is |q| / sqrt|h| (Widom 1969, from memory), where h has its zeros at all ends in x, and q is
    the polynomial with one root in each gap whose integral with 1 / sqrt|h| vanishes over every gap.
    """
    ends = np.cos(np.column_stack([high, low])[::-1].ravel())
    middles, halves = 0.5 * (ends[1:] + ends[:-1]), 0.5 * (ends[1:] - ends[:-1])
    # Gauss-Chebyshev nodes for bands and gaps by turns, whose weights hold the roots of their own two ends.
    nodes = np.cos((np.arange(_QUADRATURE) + 0.5) * (math.pi / _QUADRATURE))
    x = middles[:, None] + halves[:, None] * nodes
    distances = np.abs(x[:, :, None] - ends)
    own = np.arange(len(middles))
    distances[own, :, own] = distances[own, :, own + 1] = 1.0
    weights = 1.0 / np.sqrt(distances.prod(axis=2))
    factors = x - middles[1::2, None, None]
    basis = np.cumprod(np.concatenate([np.ones((1, *x.shape)), factors]), axis=0)
    integrals = np.mean(basis * weights, axis=2)
    coefficients = np.append(np.linalg.solve(integrals[:-1, 1::2].T, -integrals[-1, 1::2]), 1.0)
    masses = np.mean(np.abs(np.tensordot(coefficients, basis, 1)) * weights, axis=1)[::2]
    return np.asarray(masses[::-1] / masses.sum())


def _log_weights(x: Floats) -> Floats:
    """log of the barycentric weights' magnitudes, up to a common term: -sum over j of log|x_i - x_j|.

    Products of 16 factors stay within the range of doubles, and save 15 of 16 logarithms.
    """
    count = len(x)
    factors = np.ones((-(-count // 16) * 16, count))
    np.abs(2.0 * np.subtract.outer(x, x), out=factors[:count])
    np.fill_diagonal(factors, 1.0)
    logs: Floats = -np.log(factors.reshape(-1, 16, count).prod(axis=1)).sum(axis=0)
    return logs
