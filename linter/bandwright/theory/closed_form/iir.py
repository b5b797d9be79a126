"""The least order of a family for a mask, and the reference design that a forecast's figures refer to."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

from bandwright import limits
from bandwright.theory.closed_form import transforms
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.levels import attenuation_db
from bandwright.theory.closed_form.selectivity import Edge, Selectivity, Side
from bandwright.theory.closed_form.types import Design
from bandwright.theory.closed_form.warping import frequency, prewarped

TIE = 1e-11
"""Orders this close above a whole number, relatively, are that number: a few ulp of a level decide."""

EDGE_BISECTIONS = 40
"""Halvings of the range of a prototype's free stop edge."""


@dataclass(frozen=True, slots=True)
class IirOrder:
    """The least order of one family for one mask."""

    order: int
    """Of the digital filter: twice the prototype's for band-pass and band-stop."""
    unrounded: float
    """The real-valued order before it is rounded up, on the same scale."""
    prototype_order: int
    tie: bool
    """Whether the unrounded order is a whole number as far as double precision can tell."""
    binding_item: int
    binding_side: Side
    spare_db: float
    """How much deeper than asked the binding stop edge gets, with the pass band used to the full."""
    free_edge: float | None
    """rad/sample: how far the other stop edge of a band-pass could move inward for nothing."""


def least_order(family: Family, selectivity: Selectivity) -> IirOrder | None:
    """The least order of the family that meets the mask; None where it is over `limits.MAX_IIR_ORDER`.

    One stop edge and one pass edge decide wherever the family has no free stop edge. Where it has, that
    pair gives a lower bound, from which the order is raised until one stop edge serves all bands.
    """
    real, binding, pass_edge = max(
        ((family.real_order(e, stop.excess / allowed), stop, edge) for e, allowed, stop, edge in _pairs(family, selectivity)),
        key=lambda pair: pair[0],
    )
    scale = 2 if selectivity.doubles else 1
    if not real * scale <= limits.MAX_IIR_ORDER:
        return None
    nearest = max(1, round(real))
    tie = abs(real - nearest) <= TIE * real
    order = max(1, math.ceil(real * (1.0 - TIE)))
    while margin(family, selectivity, order)[0] < 1.0 - 1e-9:
        order, real, tie = order + 1, float(order), False
        if order * scale > limits.MAX_IIR_ORDER:
            return None
    bound = pass_edge if selectivity.kind == "band-stop" else binding
    spare = attenuation_db(pass_edge.excess * family.discrimination(order, bound.e))
    return IirOrder(
        order * scale,
        real * scale,
        order,
        tie,
        bound.item,
        bound.side,
        spare - attenuation_db(binding.excess),
        _free_edge(selectivity, bound),
    )


def margin(family: Family, selectivity: Selectivity, order: int) -> tuple[float, float, float]:
    """How far a prototype of this order exceeds what is asked: (r, g, e).

    r is the least ratio of stop-band excess to that asked, with the pass band used to the full: the
    order meets the mask if r >= 1. g is the pass-band excess at the pass edge 1, e + 1 the stop edge.
    """
    e = _stop_edge(family, selectivity, order)
    g = _allowed_at_edge(family, selectivity, order, e)
    return g * min(_reached(family, selectivity, order, e, stop) / stop.excess for stop in selectivity.stops), g, e


def reference_design(family: Family, selectivity: Selectivity, order: int) -> Design:
    """The design of this digital order with the spare margin shared equally, in log, by pass and stop band.

    With r of `margin`, the pass-band excess is g / sqrt(r); the stop band then has sqrt(r) to spare.
    """
    prototype_order = order // 2 if selectivity.doubles else order
    r, allowed, e = margin(family, selectivity, prototype_order)
    g = allowed / math.sqrt(max(1.0, r))
    prototype = family.prototype(prototype_order, e, g)
    ripples_at_dc = not family.MONOTONE_PASS and prototype_order % 2 == 0
    log_dc_gain = -0.5 * math.log1p(g) if ripples_at_dc else 0.0
    return transforms.to_digital(prototype, selectivity, 1.0 + selectivity.stops[0].e, log_dc_gain)


def _pairs(family: Family, selectivity: Selectivity) -> Iterator[tuple[float, float, Edge, Edge]]:
    """(e, allowed excess, stop edge, pass edge) of each pair that alone bounds the order from below."""
    if selectivity.kind == "band-stop" and family.MONOTONE_PASS:
        for edge in selectivity.passes:
            yield edge.e, edge.excess, selectivity.stops[0], edge
        return
    tightest = min(selectivity.passes, key=lambda edge: (edge.e, edge.excess))
    allowed = min(edge.excess for edge in selectivity.passes)
    for stop in selectivity.stops:
        yield stop.e, allowed, stop, replace(tightest, excess=allowed)


def _allowed_at_edge(family: Family, selectivity: Selectivity, order: int, e: float) -> float:
    """The largest pass-band excess at the prototype's pass edge that every pass band admits."""
    if selectivity.kind != "band-stop" or not family.MONOTONE_PASS:
        return min(edge.excess for edge in selectivity.passes)
    nearest = min(edge.e for edge in selectivity.passes)
    return min(
        edge.excess / family.characteristic(order, e, (nearest - edge.e) / (1.0 + edge.e))
        for edge in selectivity.passes
    )


def _reached(family: Family, selectivity: Selectivity, order: int, e: float, stop: Edge) -> float:
    """The least F^2 from a stop edge on, for the prototype with the stop edge 1 + e."""
    if stop.e < e:
        return family.characteristic(order, e, stop.e)
    return family.discrimination(order, e if family.STOP_EDGE_IS_FREE else stop.e)


def _stop_edge(family: Family, selectivity: Selectivity, order: int) -> float:
    """The prototype's stop edge less 1 that serves all stop bands best.

    Moving it outward deepens the stop band beyond it and lets the bands inside rise, so the best place
    is where the two are even.
    """
    stops = selectivity.stops
    low, high = stops[0].e, stops[-1].e
    if not family.STOP_EDGE_IS_FREE or low == high:
        return low

    def outer_is_ahead(e: float) -> bool:
        outer = min((family.discrimination(order, e) / s.excess for s in stops if s.e >= e), default=math.inf)
        inner = min((family.characteristic(order, e, s.e) / s.excess for s in stops if s.e < e), default=math.inf)
        return outer >= inner

    for _ in range(EDGE_BISECTIONS):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (low, middle) if outer_is_ahead(middle) else (middle, high)
    return high if outer_is_ahead(high) else low


def _free_edge(selectivity: Selectivity, binding: Edge) -> float | None:
    """Where the edge on the other side of a band-pass or band-stop would bind as well.

    Both edges of equal e lie mirrored about the centre; the inner edge solves
    s^2 + s (B + e B) - W0^2 = 0 with B the distance of the outer ones.
    """
    edges = selectivity.passes if selectivity.kind == "band-stop" else selectivity.stops
    if not selectivity.doubles or len({(edge.excess) for edge in edges}) > 1 or len(edges) != 2:
        return None
    half = 0.5 * selectivity.width * (1.0 + binding.e)
    square = selectivity.centre**2
    below = square / (half + math.sqrt(half * half + square))
    other = edges[0] if edges[1].w == binding.w else edges[1]
    is_below = prewarped(other.w) < selectivity.centre
    return frequency(below if is_below else square / below)
