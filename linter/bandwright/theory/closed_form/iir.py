"""The least order of a family for a mask, and the reference design that a forecast's figures refer to."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

from bandwright import limits
from bandwright.theory.closed_form import placement, transforms
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.levels import attenuation_db
from bandwright.theory.closed_form.selectivity import Selectivity, Side, Transition
from bandwright.theory.closed_form.types import Design
from bandwright.theory.closed_form.warping import frequency

TIE = 1e-11
"""Orders this close above a whole number, relatively, are that number: a few ulp of a level decide."""

NO_MARGIN = 1e-9
"""Nepers that a mask may be missed by: what `TIE` makes of an order at 200 dB."""

FAR = 32
"""With so many orders to go, they are not all looked at."""


class IirOrder(NamedTuple):
    """The least order of one family for one mask."""

    order: int
    """Of the digital filter: twice the prototype's for band-pass and band-stop."""
    unrounded: float
    """The real-valued order before it is rounded up, on the same scale."""
    prototype_order: int
    tie: bool
    """Whether the unrounded order is a whole number as far as double precision can tell."""
    binding_item: int
    """Index of the stop band at the transition that sets the order."""
    binding_side: Side
    """Which edge of that stop band."""
    spare_db: float
    """How much deeper than asked the stop band gets from that edge on, all of the pass band used."""
    free_edge: float | None
    """rad/sample: how far the edge across the other transition, the stop edge of a band-pass or the pass edge
    of a band-stop, could move towards it for nothing. None where there is no other, or both bind."""


@dataclass(frozen=True, slots=True)
class Margin:
    """By how much a prototype exceeds a mask."""

    log_ratio: float
    """ln of the least ratio of stop-band excess to the one asked, with the pass band used to the full."""
    log_g: float
    """ln of the pass-band excess at the prototype's pass edge when the pass band is used to the full."""
    e: float
    """The prototype's stop edge less 1."""


def least_order(family: Family, selectivity: Selectivity) -> IirOrder | None:
    """The least order of the family that meets the mask; None where it is over `limits.MAX_IIR_ORDER`.

    The worst transition alone decides where the family has no free edge. Where it has, that is a lower
    bound, from which the order is raised until one place of the edge serves all transitions.
    """
    scale = 2 if selectivity.doubles else 1
    most = limits.MAX_IIR_ORDER // scale
    real, binding = _bound(family, selectivity)
    if not real <= most:
        return None
    order = math.ceil(real * (1.0 - TIE)) or 1
    tie = abs(real - order) <= TIE * real
    if _is_closed(family, selectivity):
        reached = family.log_discrimination(order, binding.e)
    else:
        searched = _searched(family, selectivity, order, real)
        if searched is None:
            return None
        order, real, tie, e = searched
        excess = placement.one_excess(family, selectivity, order, e, binding)
        reached = excess + math.log(binding.discrimination)
    return IirOrder(
        order * scale,
        real * scale,
        order,
        tie,
        binding.stop_edge.item,
        binding.stop_edge.side,
        attenuation_db(reached + math.log(binding.pass_edge.excess)) - binding.stop_edge.db,
        _free_edge(family, selectivity, binding, real) if scale == 2 else None,
    )


def order_meets(family: Family, selectivity: Selectivity, order: int) -> bool:
    """Whether some filter of the family with this digital order meets the mask."""
    prototype_order = order // 2 if selectivity.doubles else order
    return prototype_order >= 1 and margin(family, selectivity, prototype_order).log_ratio >= -NO_MARGIN


def margin(family: Family, selectivity: Selectivity, order: int) -> Margin:
    """By how much the best prototype of this order (not the digital one) exceeds the mask."""
    transitions = selectivity.transitions
    free = placement.free(family, selectivity)
    e = placement.best_edge(family, selectivity, order) if free else transitions[0].e
    if selectivity.kind == "band-stop":
        log_g = min(math.log(one.pass_edge.excess) + family.log_fall(order, e, one.e) for one in transitions)
        log_g -= family.log_discrimination(order, e)
    else:
        log_g = math.log(transitions[0].pass_edge.excess)
    return Margin(placement.log_excess(family, selectivity, order, e), log_g, e)


def reference_design(
    family: Family, selectivity: Selectivity, order: int, *, centred: bool = False
) -> Design:
    """The design of this digital order with the spare margin shared equally, in log, by pass and stop band.

    With r the ratio of `Margin`, the pass-band excess is g / sqrt(r); the stop band then has sqrt(r) to
    spare. An order too low for the mask gets all of the pass band, and misses the stop band. The peak is
    the top of the pass window; `centred` puts the gain in the middle of the window instead, so that a
    window that is absolute leaves rounding errors room above and below.
    """
    prototype_order = order // 2 if selectivity.doubles else order
    found = margin(family, selectivity, prototype_order)
    log_g = found.log_g - 0.5 * max(0.0, found.log_ratio)
    prototype = family.prototype(prototype_order, found.e, log_g)
    dips_at_dc = family.PASS_EDGE_IS_FREE and prototype_order % 2 == 0
    ripple, window = math.log1p(math.exp(log_g)), math.log1p(math.exp(found.log_g))
    log_dc_gain = -0.5 * ripple if dips_at_dc else 0.0
    if centred:
        log_dc_gain -= 0.25 * (window - ripple)
    return transforms.to_digital(prototype, selectivity, 1.0 + found.e, log_dc_gain)


def _bound(family: Family, selectivity: Selectivity) -> tuple[float, Transition]:
    """The real-valued order that the worst transition alone takes, and that transition."""
    binding = selectivity.transitions[0]
    real = placement.lower_bound(family, selectivity, binding)
    for one in selectivity.transitions[1:]:
        bound = placement.lower_bound(family, selectivity, one)
        if bound > real:
            real, binding = bound, one
    return real, binding


def _is_closed(family: Family, selectivity: Selectivity) -> bool:
    """Whether the order of the worst transition is the least order of the mask."""
    if selectivity.nearest_decides:
        return True
    return not placement.free(family, selectivity) and all(
        one.inner == 0.0 for one in selectivity.transitions
    )


def _searched(
    family: Family, selectivity: Selectivity, order: int, real: float
) -> tuple[int, float, bool, float] | None:
    """Least order, real-valued order, tie and e, from an order on that no lower one can do; None if over."""
    most = limits.MAX_IIR_ORDER // (2 if selectivity.doubles else 1)
    plain = real > 1.0 and all(one.until == math.inf and one.inner == 0.0 for one in selectivity.transitions)
    if plain and not _reaches_beyond_ripple(family, selectivity, order):
        level = placement.level_order(family, selectivity)
        if not level <= most:
            return None
        order = math.ceil(level * (1.0 - TIE))
        return order, level, abs(level - order) <= TIE * level, margin(family, selectivity, order).e
    failed = order - 1
    leaping = True
    while True:
        found = margin(family, selectivity, order)
        if found.log_ratio < -NO_MARGIN:
            if order >= most:
                return None
            failed = order
            order = min(order + (_leap(selectivity, order, found.log_ratio) if leaping else 1), most)
        elif order > failed + 1:
            order, leaping = failed + 1, False
        else:
            break
    real = max(real, _unrounded(family, selectivity, order, found.log_ratio))
    return order, real, abs(found.log_ratio) <= NO_MARGIN, found.e


def _leap(selectivity: Selectivity, order: int, log_ratio: float) -> int:
    """How many orders on to look next: where many are still to go, a quarter of them at the pace so far."""
    gained = max(math.log(one.discrimination) for one in selectivity.transitions) + log_ratio
    if not gained > 0.0:
        return 1
    left = -log_ratio / gained * order
    return 1 if left < FAR else round(min(left / 4.0, limits.MAX_IIR_ORDER))


def _reaches_beyond_ripple(family: Family, selectivity: Selectivity, order: int) -> bool:
    """Whether a transition may lie beyond the last minimum of the ripple, of an odd order from this one on.

    From there on F rises to infinity, which serves such a transition better than the discrimination.
    """
    odd = order + 1 - order % 2
    nearest, farthest = selectivity.transitions[0], selectivity.transitions[-1]
    return family.lobes(odd, nearest.e, farthest.e) > 0.5 * (odd - 1)


def _unrounded(family: Family, selectivity: Selectivity, order: int, log_ratio: float) -> float:
    """The real-valued order by the margins of this one and of the one before, which is too low."""
    if order > 1:
        before = margin(family, selectivity, order - 1).log_ratio
    else:
        before = -max(math.log(one.discrimination) for one in selectivity.transitions)
    return order - max(0.0, log_ratio) / (log_ratio - before) if before < 0.0 else float(order)


def _free_edge(family: Family, selectivity: Selectivity, binding: Transition, order: float) -> float | None:
    """The edge across the other of two transitions at which that one would bind as well.

    A prototype frequency x lies at the two W with |W^2 - W0^2| = W B x, which are W0^2 / W of one another.
    """
    others = [one for one in selectivity.transitions if one is not binding]
    if len(others) != 1:
        return None
    other = others[0]
    if other.discrimination == binding.discrimination:
        e = binding.e
    elif placement.free(family, selectivity) or order <= 0.0 or other.discrimination <= 1.0:
        return None
    else:
        e = family.edge(order, math.log(other.discrimination))
    half = 0.5 * selectivity.width * (1.0 + e)
    above = half + math.hypot(half, selectivity.centre)
    is_below = other.stop_edge.side == ("low" if selectivity.kind == "band-stop" else "high")
    return frequency(selectivity.centre**2 / above if is_below else above)
