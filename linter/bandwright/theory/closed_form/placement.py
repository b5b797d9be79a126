"""Where a prototype of given order puts its free edge so that it exceeds a mask by the most.

A family with ripple has, besides order and level, the place where its ripple begins. With one transition
that place is given; with transitions that ask for different levels, or a stop band that ends before 0 or
Nyquist, it is searched for. A band-stop is the same problem with pass and stop band swapped: its one stop
band stands where the pass band of the others does, and F falls from there instead of rising.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from functools import partial
from itertools import pairwise

from bandwright import limits
from bandwright.theory.closed_form.elliptic_functions import log_nome
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import Selectivity, Transition

EDGE_STEPS = 60
"""Steps of the search for one edge; regula falsi takes about ten."""

EVEN = 1e-12
"""Levels this close, in nepers, count as even."""

GOLDEN_STEPS = 40
GOLDEN = 0.5 * (math.sqrt(5.0) - 1.0)

LEAST_EDGE = 1e-6
"""The share of the nearest stop edge's e that a prototype's is not searched below."""


def free(family: Family, selectivity: Selectivity) -> bool:
    """Whether the edge on the side of the transitions is a parameter of the family's own."""
    return family.PASS_EDGE_IS_FREE if selectivity.kind == "band-stop" else family.STOP_EDGE_IS_FREE


def best_edge(family: Family, selectivity: Selectivity, order: int) -> float:
    """The e at which a prototype with a free edge exceeds the mask by the most.

    It is not moved to make use of a stop band's end where the mask is met without. Beyond
    `limits.MAX_SCANNED_ORDER` the best of a few likely places is taken.
    """
    transitions = selectivity.transitions
    level = _level_edge(family, selectivity, order) if len(transitions) > 1 else transitions[0].e
    ending = [one for one in transitions if one.until < math.inf]
    if not ending or log_excess(family, selectivity, order, level) >= 0.0:
        return level
    centred: list[float] = []
    for one in ending:
        edges = [one.e, *_centred_edges(family, order, one)]
        if max(one_excess(family, selectivity, order, e, one) for e in edges) < 0.0:
            return level
        centred += edges
    if len(transitions) > 1 and order <= limits.MAX_SCANNED_ORDER:
        return _scanned_edge(family, selectivity, order, level)
    return max([level, *centred], key=lambda e: log_excess(family, selectivity, order, e))


def log_excess(family: Family, selectivity: Selectivity, order: float, e: float) -> float:
    """ln of what the prototype reaches over what is asked, at the transition where it exceeds least."""
    return min(one_excess(family, selectivity, order, e, one) for one in selectivity.transitions)


def one_excess(
    family: Family, selectivity: Selectivity, order: float, e: float, transition: Transition
) -> float:
    """The same at one transition.

    A stop band that counts from a gain below the prototype's peak, with m the least F^2 in the pass bands,
    has to reach g F^2 >= gs + (1 + gs) g m instead of gs.
    """
    excess = _excess(family, selectivity, order, e, transition, transition.until)
    if transition.inner == 0.0:
        return excess
    inner, in_stop_band = transition.inner, excess + math.log(transition.discrimination)
    if selectivity.kind == "band-stop":
        inner *= 1.0 + e
        in_stop_band = family.log_discrimination(order, e)
    lull = family.log_lull(order, e, inner) if inner < 1.0 else 0.0
    left = 1.0 - (1.0 + transition.stop_edge.excess) * math.exp(min(0.0, lull - in_stop_band))
    return excess + math.log(left) if left > 0.0 else -math.inf


def lower_bound(family: Family, selectivity: Selectivity, transition: Transition) -> float:
    """A real-valued order below which no filter of the family serves this transition alone.

    For a stop band that ends at b it is Zolotarev's bound: no rational function of x^2 of degree N has a
    ratio above q^-N between the intervals 0..1 and a^2..b^2, q the nome of an elliptic filter whose stop
    edge E has E^2 - 1 = b^2 (a^2 - 1) / (b^2 - a^2) (Zolotarev 1877, Gonchar 1969; from memory).
    """
    e, until, ratio = transition.e, transition.until, transition.discrimination
    if until == math.inf or ratio <= 1.0 or not free(family, selectivity):
        return family.real_order(e, ratio)
    square = (1.0 + until) ** 2 * e * (2.0 + e) / ((until - e) * (2.0 + until + e))
    k, k_prime = 1.0 / math.sqrt(1.0 + square), math.sqrt(square / (1.0 + square))
    return math.log(ratio) / -log_nome(k, k_prime)


def _excess(
    family: Family, selectivity: Selectivity, order: float, e: float, transition: Transition, until: float
) -> float:
    if selectivity.kind == "band-stop":
        reached = family.log_fall(order, e, transition.e)
    else:
        reached = family.log_rise(order, e, transition.e, until)
    return reached - math.log(transition.discrimination)


def level_order(family: Family, selectivity: Selectivity) -> float:
    """The real-valued order that serves all transitions if the stop bands ran on to 0 or Nyquist.

    Each e has the order that the transitions from there on take; it falls as e grows, and so does what
    that order reaches at the transitions inside.
    """

    def taken(outside: Sequence[Transition], e: float) -> float:
        return max(family.real_order(e, one.discrimination) for one in outside)

    def short(inside: Sequence[Transition], outside: Sequence[Transition], e: float) -> float:
        order = taken(outside, e)
        return -min(_excess(family, selectivity, order, e, one, math.inf) for one in inside)

    count, e = _divided(selectivity, short)
    last = selectivity.transitions[count - 1]
    return taken((last,) if e == last.e else selectivity.transitions[count:], e)


def _level_edge(family: Family, selectivity: Selectivity, order: float) -> float:
    """The best e if all stop bands ran on to 0 or Nyquist.

    Moving the edge outward raises the discrimination beyond it and lets F fall inside. So between two
    neighbouring transitions there is one place where the outer ones are ahead by as much as the inner ones.
    """

    def least(transitions: Sequence[Transition], e: float) -> float:
        return min(_excess(family, selectivity, order, e, one, math.inf) for one in transitions)

    def ahead(inside: Sequence[Transition], outside: Sequence[Transition], e: float) -> float:
        return least(outside, e) - least(inside, e)

    return _divided(selectivity, ahead)[1]


def _divided(
    selectivity: Selectivity, rising: Callable[[Sequence[Transition], Sequence[Transition], float], float]
) -> tuple[int, float]:
    """Where a function of the transitions inside e, of those outside, and of e turns positive.

    The number of transitions inside, and e: that of the last transition if it never does.
    """
    transitions = selectivity.transitions
    for count in range(1, len(transitions)):
        function = partial(rising, transitions[:count], transitions[count:])
        low, high = transitions[count - 1].e, transitions[count].e
        at_high = function(high)
        if at_high >= 0.0:
            at_low = function(low)
            return count, low if at_low >= 0.0 else _root(function, low, high, at_low, at_high)
    return len(transitions), transitions[-1].e


def _centred_edges(family: Family, order: int, transition: Transition) -> Iterator[float]:
    """Every e that puts a pole of F into the middle of the stop band, as lobes are counted.

    There both ends of the band are as far from a minimum of the ripple as they get.
    """
    near, far = transition.e, transition.until

    def lobes(e: float) -> float:
        return family.lobes(order, e, near) + family.lobes(order, e, far)

    least = LEAST_EDGE * near
    most, fewest = lobes(least), lobes(near)
    for odd in range(1, order + 1, 2):
        if fewest < odd < most:
            yield _root(partial(_short_of, lobes, odd), least, near, odd - most, odd - fewest)


def _scanned_edge(family: Family, selectivity: Selectivity, order: int, level: float) -> float:
    """The best e for several transitions, one of which at least ends between minima of the ripple.

    There is one maximum between neighbouring places at which an end of such a stop band is on a minimum.
    """
    largest, least = selectivity.transitions[-1].e, LEAST_EDGE * selectivity.transitions[0].e
    corners = {least, level, *(one.e for one in selectivity.transitions)}
    for one in selectivity.transitions:
        for end in (one.e, one.until) if one.until < math.inf else ():
            lobes = partial(_lobes_to, family, order, end)
            most, fewest = lobes(least), lobes(min(end, largest))
            for whole in range(math.floor(fewest) + 1, math.ceil(most)):
                corners.add(
                    _root(
                        partial(_short_of, lobes, whole),
                        least,
                        min(end, largest),
                        whole - most,
                        whole - fewest,
                    )
                )
    excess = partial(log_excess, family, selectivity, order)
    return max((_maximum(excess, low, high) for low, high in pairwise(sorted(corners))), key=excess)


def _lobes_to(family: Family, order: int, end: float, e: float) -> float:
    return family.lobes(order, e, end)


def _short_of(count: Callable[[float], float], wanted: float, e: float) -> float:
    """How much a falling count is short of what is wanted."""
    return wanted - count(e)


def _root(
    function: Callable[[float], float], low: float, high: float, at_low: float, at_high: float
) -> float:
    """The zero of a rising function by regula falsi, an end kept twice halved (Dowell & Jarratt 1971)."""
    kept = 0
    for _ in range(EDGE_STEPS):
        middle = (low * at_high - high * at_low) / (at_high - at_low)
        value = function(middle)
        if abs(value) <= EVEN or not low < middle < high:
            return middle
        if value < 0.0:
            low, at_low = middle, value
            at_high *= 0.5 if kept == 1 else 1.0
            kept = 1
        else:
            high, at_high = middle, value
            at_low *= 0.5 if kept == -1 else 1.0
            kept = -1
    return 0.5 * (low + high)


def _maximum(function: Callable[[float], float], low: float, high: float) -> float:
    """The place of the maximum of a function that has one, by golden section."""
    a, b = high - GOLDEN * (high - low), low + GOLDEN * (high - low)
    at_a, at_b = function(a), function(b)
    for _ in range(GOLDEN_STEPS):
        if at_a > at_b:
            high, b, at_b = b, a, at_a
            a = high - GOLDEN * (high - low)
            at_a = function(a)
        else:
            low, a, at_a = a, b, at_b
            b = low + GOLDEN * (high - low)
            at_b = function(b)
    return a if at_a > at_b else b
