"""From a mask to what the order formulas take: the edges of the low-pass prototype and their levels."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from bandwright.theory.closed_form.levels import excess
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.closed_form.warping import prewarped, prewarped_difference

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
    """One edge of a stop or pass band, as the prototype sees it."""

    item: int
    """Index of the band item."""
    side: Side
    w: float
    """rad/sample."""
    e: float
    """The ratio of stop edge to pass edge less 1: of a stop edge to the prototype's pass edge at 1, or,
    for a pass edge of a band-stop, of the prototype's stop edge to it."""
    excess: float
    """10^(A/10) - 1 of the attenuation allowed (pass) or asked (stop)."""


@dataclass(frozen=True, slots=True)
class Selectivity:
    """A low-pass, high-pass, band-pass or band-stop mask as a low-pass prototype whose pass band ends at 1.

    `stops` are all stop edges by rising `e`: from each on, outward, its attenuation is asked. `passes`
    are the pass edges; those of a band-stop may lie inside the prototype's pass band.
    """

    kind: Kind
    stops: tuple[Edge, ...]
    passes: tuple[Edge, ...]
    centre: float
    """W0 of the band transformations, prewarped; 0 for low-pass and high-pass."""
    width: float
    """The prototype's pass edge for a low-pass, its reciprocal scale for the others (see `transforms`)."""
    peak_db: float
    """The highest gain in the pass bands."""

    @property
    def doubles(self) -> bool:
        """Whether the digital order is twice the prototype's."""
        return self.kind in ("band-pass", "band-stop")


def selectivity(mask: Mask) -> Selectivity | None:
    """The selectivity of a mask of pass and stop bands; None for masks of another shape.

    Levels: a stop band counts from the highest gain in the pass bands; the pass window's height is what
    the pass band allows, and the design is scaled so that its peak is the window's top.
    """
    bands = [band for band in mask.bands if band.kind != "bounds"]
    if len(bands) != len(mask.bands):
        return None
    runs: list[list[MaskBand]] = []
    for band in bands:
        if runs and runs[-1][0].kind == band.kind:
            runs[-1].append(band)
        else:
            runs.append([band])
    kind = SHAPES.get(tuple(run[0].kind for run in runs))
    passes = [band for band in bands if band.kind == "pass"]
    if kind is None or any(len(run) > 1 for run in runs if run[0].kind == "pass"):
        return None
    if any(band.least is None or band.most is None for band in passes):
        return None
    tops = {band.most for band in passes}
    peak = passes[0].most or 0.0
    if len(tops) > 1 or (kind == "band-stop" and len(runs[1]) > 1):
        return None
    match kind:
        case "low-pass":
            return _low_pass(runs, peak)
        case "high-pass":
            return _high_pass(runs, peak)
        case "band-pass":
            return _band_pass(runs, peak)
        case "band-stop":
            return _band_stop(runs, peak)


def _low_pass(runs: list[list[MaskBand]], peak: float) -> Selectivity | None:
    passing = runs[0][0]
    edge = prewarped(passing.high)
    stops = [
        Edge(band.item, "low", band.low, prewarped_difference(passing.high, band.low) / edge, _asked(band, peak))
        for band in runs[1]
    ]
    return _checked("low-pass", stops, (_pass_edge(passing, "high"),), 0.0, edge, peak)


def _high_pass(runs: list[list[MaskBand]], peak: float) -> Selectivity | None:
    passing = runs[1][0]
    edge = prewarped(passing.low)
    stops = [
        Edge(
            band.item,
            "high",
            band.high,
            prewarped_difference(band.high, passing.low) / prewarped(band.high),
            _asked(band, peak),
        )
        for band in runs[0]
    ]
    return _checked("high-pass", stops, (_pass_edge(passing, "low"),), 0.0, edge, peak)


def _band_pass(runs: list[list[MaskBand]], peak: float) -> Selectivity | None:
    """W0^2 = Wp1 Wp2; e = (p1-s)(s+p2)/(s B) below and (s-p2)(s+p1)/(s B) above, B = p2 - p1."""
    passing = runs[1][0]
    p1, p2 = prewarped(passing.low), prewarped(passing.high)
    width = prewarped_difference(passing.low, passing.high)
    stops = []
    for band in runs[0]:
        s = prewarped(band.high)
        e = prewarped_difference(band.high, passing.low) * (s + p2) / (s * width)
        stops.append(Edge(band.item, "high", band.high, e, _asked(band, peak)))
    for band in runs[2]:
        s = prewarped(band.low)
        e = prewarped_difference(passing.high, band.low) * (1.0 + p1 / s) / width
        stops.append(Edge(band.item, "low", band.low, e, _asked(band, peak)))
    passes = (_pass_edge(passing, "low"), _pass_edge(passing, "high"))
    return _checked("band-pass", stops, passes, math.sqrt(p1 * p2), width, peak)


def _band_stop(runs: list[list[MaskBand]], peak: float) -> Selectivity | None:
    """W0^2 = Ws1 Ws2; e = (s1-p1)(p1+s2)/(p1 Bs) below and (p2-s2)(p2+s1)/(p2 Bs) above, Bs = s2 - s1."""
    below, stopping, above = runs[0][0], runs[1][0], runs[2][0]
    s1, s2 = prewarped(stopping.low), prewarped(stopping.high)
    width = prewarped_difference(stopping.low, stopping.high)
    p1, p2 = prewarped(below.high), prewarped(above.low)
    e1 = prewarped_difference(below.high, stopping.low) * (p1 + s2) / (p1 * width)
    e2 = prewarped_difference(stopping.high, above.low) * (p2 + s1) / (p2 * width)
    passes = (
        Edge(below.item, "high", below.high, e1, _allowed(below)),
        Edge(above.item, "low", above.low, e2, _allowed(above)),
    )
    e = min(e1, e2)
    side: Side = "low" if e1 <= e2 else "high"
    w = stopping.low if side == "low" else stopping.high
    stops = [Edge(stopping.item, side, w, e, _asked(stopping, peak))]
    return _checked("band-stop", stops, passes, math.sqrt(s1 * s2), width, peak)


def _checked(
    kind: Kind,
    stops: list[Edge],
    passes: tuple[Edge, ...],
    centre: float,
    width: float,
    peak: float,
) -> Selectivity | None:
    """The selectivity, unless an edge leaves no transition or an attenuation is below the ripple."""
    allowed = max(edge.excess for edge in passes)
    if any(not edge.e > 0.0 for edge in (*stops, *(passes if kind == "band-stop" else ()))):
        return None
    # A stop edge at Nyquist asks for nothing: the bilinear transform has its zeros there.
    stops = [edge for edge in stops if math.isfinite(edge.e)]
    if not stops or any(edge.excess <= allowed for edge in stops) or not width > 0.0:
        return None
    return Selectivity(kind, tuple(sorted(stops, key=lambda edge: edge.e)), passes, centre, width, peak)


def _pass_edge(band: MaskBand, side: Side) -> Edge:
    return Edge(band.item, side, band.high if side == "high" else band.low, 0.0, _allowed(band))


def _allowed(band: MaskBand) -> float:
    return excess((band.most or 0.0) - (band.least or 0.0))


def _asked(band: MaskBand, peak: float) -> float:
    most = band.most if band.most is not None else math.inf
    return excess(-most if band.relative else peak - most)
