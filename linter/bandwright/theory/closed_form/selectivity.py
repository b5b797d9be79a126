"""From a mask to what the order formulas take: the transitions of a low-pass prototype and their levels."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from bandwright.theory.closed_form.levels import excess
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.closed_form.warping import prewarped, prewarped_difference, prewarped_stretch

Kind = Literal["low-pass", "high-pass", "band-pass", "band-stop"]
Side = Literal["low", "high"]

SHAPES: dict[tuple[str, ...], Kind] = {
    ("pass", "stop"): "low-pass",
    ("stop", "pass"): "high-pass",
    ("stop", "pass", "stop"): "band-pass",
    ("pass", "stop", "pass"): "band-stop",
}


@dataclass(frozen=True, slots=True)
class Edge:
    """The edge of a pass or stop band next to a transition."""

    item: int
    """Index of the band item."""
    side: Side
    """Which edge of that band."""
    w: float
    """rad/sample."""
    db: float
    """The window's height of a pass band, the depth below the highest pass gain of a stop band."""
    excess: float
    """10^(db/10) - 1"""


@dataclass(frozen=True, slots=True)
class Transition:
    """A pass edge and a stop edge as the low-pass prototype sees them."""

    pass_edge: Edge
    stop_edge: Edge
    e: float
    """The ratio of stop edge to pass edge in the prototype, less 1."""
    until: float
    """The ratio at the far end of the stop band, less 1; infinite at 0 and Nyquist, and for a band-stop."""
    discrimination: float
    """What an order has to reach: the ratio gs/gp of the excesses of both edges."""
    inner: float
    """The prototype's lowest frequency in the pass bands, if above 0 and the stop band is counted from the
    highest gain there: over the pass edge, for a band-stop over the stop edge."""


@dataclass(frozen=True, slots=True)
class Selectivity:
    """A low-pass, high-pass, band-pass or band-stop mask, seen from its low-pass prototype.

    Low-pass, high-pass and band-pass share one pass band, at the prototype's pass edge 1, and have a
    transition for every stop band; a band-stop has one stop band, and a transition for every pass band.
    """

    kind: Kind
    transitions: tuple[Transition, ...]
    """By rising `e`."""
    centre: float
    """W0 of the band transformations, prewarped; 0 for low-pass and high-pass."""
    width: float
    """Prewarped: the pass edge of a low-pass or high-pass, the width of the pass band of a band-pass, of
    the stop band of a band-stop."""
    peak_db: float
    """The highest gain in the pass bands: the top of their window."""
    nearest_decides: bool
    """Whether an order that serves the nearest transition serves them all, whatever the family."""

    @property
    def doubles(self) -> bool:
        """Whether the digital order is twice the prototype's."""
        return self.kind in ("band-pass", "band-stop")


def selectivity(mask: Mask) -> Selectivity | None:
    """The selectivity of a mask of pass and stop bands; None for masks of another shape.

    A stop band counts from the highest gain in the pass bands; the height of a pass window is what the
    band allows, and the design is scaled so that its peak is the top of the window: a lower peak would ask
    for a higher order. A pass band is taken to run on to 0 or Nyquist where no stop band lies beyond it, so
    that the gain exceeds the window nowhere.
    """
    runs = _runs(mask.bands)
    if runs is None:
        return None
    passes = [band for band in mask.bands if band.kind == "pass"]
    peak = _peak(passes)
    kind = SHAPES.get(tuple(run[0].kind for run in runs))
    if kind is None or peak is None or any(len(run) > 1 for run in runs if run[0].kind == "pass"):
        return None
    match kind:
        case "low-pass":
            return _low_pass(runs[0][0], runs[1], peak)
        case "high-pass":
            return _high_pass(runs[0], runs[1][0], peak)
        case "band-pass":
            return _band_pass(runs[0], runs[1][0], runs[2], peak)
        case "band-stop":
            return _band_stop(runs[0][0], runs[1][0], runs[2][0], peak) if len(runs[1]) == 1 else None


def _runs(bands: tuple[MaskBand, ...]) -> list[list[MaskBand]] | None:
    """The bands with neighbours of one kind together; None where a band asks for something else."""
    runs: list[list[MaskBand]] = []
    for band in bands:
        if band.kind == "bounds" or (band.kind == "stop" and (band.most is None or band.least is not None)):
            return None
        if runs and runs[-1][0].kind == band.kind:
            runs[-1].append(band)
        else:
            runs.append([band])
    return runs


def _peak(passes: list[MaskBand]) -> float | None:
    """The highest gain that all pass windows admit, in dB; None where it isn't one number."""
    tops = [band.most for band in passes if band.most is not None and band.least is not None]
    if not tops or len(tops) < len(passes) or len({band.relative for band in passes}) > 1:
        return None
    peak = min(tops)
    return peak if all(band.least is not None and band.least < peak for band in passes) else None


def _low_pass(passing: MaskBand, stops: list[MaskBand], peak: float) -> Selectivity | None:
    pass_edge = _pass_edge(passing, "high", peak)
    inner = prewarped(passing.low) / prewarped(passing.high)
    transitions = [
        _transition(
            band,
            pass_edge,
            edge,
            prewarped_stretch(passing.high, edge.w),
            prewarped_stretch(passing.high, far),
            inner,
        )
        for band, edge, far in _above(stops, peak)
    ]
    return _checked("low-pass", transitions, 0.0, prewarped(passing.high), peak)


def _high_pass(stops: list[MaskBand], passing: MaskBand, peak: float) -> Selectivity | None:
    pass_edge = _pass_edge(passing, "low", peak)
    inner = prewarped(passing.low) / prewarped(passing.high)
    transitions = [
        _transition(
            band,
            pass_edge,
            edge,
            prewarped_stretch(edge.w, passing.low),
            prewarped_stretch(far, passing.low),
            inner,
        )
        for band, edge, far in _below(stops, peak)
    ]
    return _checked("high-pass", transitions, 0.0, prewarped(passing.low), peak)


def _band_pass(
    below: list[MaskBand], passing: MaskBand, above: list[MaskBand], peak: float
) -> Selectivity | None:
    """W0^2 = Wp1 Wp2: with both pass edges at 1, any other centre would narrow both transitions.

    Ws lies at |Ws^2 - W0^2| / (Ws B), so e = (p1-s)(s+p2)/(s B) below and (s-p2)(s+p1)/(s B) above.
    """
    p1, p2 = prewarped(passing.low), prewarped(passing.high)
    width = prewarped_difference(passing.low, passing.high)
    if not width > 0.0:
        return None
    stretch_below, stretch_above = _stretches(passing, width)
    low, high = _pass_edge(passing, "low", peak), _pass_edge(passing, "high", peak)
    transitions = [
        _transition(band, low, edge, stretch_below(edge.w), stretch_below(far), 0.0)
        for band, edge, far in _below(below, peak)
    ]
    transitions += [
        _transition(band, high, edge, stretch_above(edge.w), stretch_above(far), 0.0)
        for band, edge, far in _above(above, peak)
    ]
    return _checked("band-pass", transitions, math.sqrt(p1 * p2), width, peak)


def _band_stop(below: MaskBand, stopping: MaskBand, above: MaskBand, peak: float) -> Selectivity | None:
    """W0^2 = Ws1 Ws2: with both stop edges at 1, any other centre would narrow both transitions.

    Wp lies at Wp Bs / |W0^2 - Wp^2|, the stop edges at 1; so e = (s1-p)(p+s2)/(p Bs) below and
    (p-s2)(p+s1)/(p Bs) above.
    """
    s1, s2 = prewarped(stopping.low), prewarped(stopping.high)
    width = prewarped_difference(stopping.low, stopping.high)
    if not width > 0.0:
        return None
    stretch_below, stretch_above = _stretches(stopping, width)
    inner = 1.0 / (1.0 + max(stretch_below(below.low), stretch_above(above.high)))
    transitions = [
        _transition(
            stopping,
            _pass_edge(below, "high", peak),
            _stop_edge(stopping, "low", peak),
            stretch_below(below.high),
            math.inf,
            inner,
        ),
        _transition(
            stopping,
            _pass_edge(above, "low", peak),
            _stop_edge(stopping, "high", peak),
            stretch_above(above.low),
            math.inf,
            inner,
        ),
    ]
    return _checked("band-stop", transitions, math.sqrt(s1 * s2), width, peak)


def _stretches(inner: MaskBand, width: float) -> tuple[Callable[[float], float], Callable[[float], float]]:
    """e of a frequency below, and of one above, the inner band of a band-pass or band-stop with edges at 1.

    Below: (i1-x)(x+i2)/(x B); above: (x-i2)(x+i1)/(x B), all prewarped, B = i2 - i1.
    """
    low, high = prewarped(inner.low), prewarped(inner.high)

    def below(w: float) -> float:
        difference = prewarped_difference(w, inner.low)
        return difference * (1.0 + high / prewarped(w)) / width if w > 0.0 else math.inf

    def above(w: float) -> float:
        return prewarped_difference(inner.high, w) * (1.0 + low / prewarped(w)) / width

    return below, above


def _above(stops: list[MaskBand], peak: float) -> list[tuple[MaskBand, Edge, float]]:
    """Each stop band above a pass band with its near edge and where its attenuation ceases to be asked."""
    return _as_far_as_asked([(band, _stop_edge(band, "low", peak), band.high) for band in stops])


def _below(stops: list[MaskBand], peak: float) -> list[tuple[MaskBand, Edge, float]]:
    """The same for stop bands below a pass band, again from it outward."""
    return _as_far_as_asked([(band, _stop_edge(band, "high", peak), band.low) for band in reversed(stops)])


def _as_far_as_asked(outward: list[tuple[MaskBand, Edge, float]]) -> list[tuple[MaskBand, Edge, float]]:
    """The far ends moved outward over a stop band that touches and is no shallower."""
    found: list[tuple[MaskBand, Edge, float]] = []
    for band, edge, far in reversed(outward):
        if found and found[-1][1].w == far and found[-1][1].db >= edge.db:
            far = found[-1][2]
        found.append((band, edge, far))
    return found


def _transition(
    stopping: MaskBand, pass_edge: Edge, stop_edge: Edge, e: float, until: float, inner: float
) -> Transition:
    return Transition(
        pass_edge,
        stop_edge,
        e,
        until,
        stop_edge.excess / pass_edge.excess,
        inner if stopping.relative else 0.0,
    )


def _checked(
    kind: Kind, transitions: list[Transition], centre: float, width: float, peak: float
) -> Selectivity | None:
    """The selectivity, unless edges or levels are out of order, or a stop edge is at 0 or Nyquist itself."""
    if not all(0.0 < one.e < math.inf and one.discrimination > 0.0 for one in transitions):
        return None
    ordered = tuple(sorted(transitions, key=lambda one: one.e))
    nearest_decides = all(
        one.until == math.inf and one.inner == 0.0 and one.discrimination <= ordered[0].discrimination
        for one in ordered
    )
    return Selectivity(kind, ordered, centre, width, peak, nearest_decides)


def _pass_edge(band: MaskBand, side: Side, peak: float) -> Edge:
    db = peak - (band.least or 0.0)
    return Edge(band.item, side, band.high if side == "high" else band.low, db, excess(db))


def _stop_edge(band: MaskBand, side: Side, peak: float) -> Edge:
    most = band.most or 0.0
    db = -most if band.relative else peak - most
    return Edge(band.item, side, band.high if side == "high" else band.low, db, excess(db))
