"""Reliefs: the least change of one number of the mask that brings an order down to what is wanted."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Quantity
from bandwright.forecast import bands
from bandwright.forecast.families import FAMILIES
from bandwright.theory.closed_form import iir
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Mask, MaskBand

STEPS = 40
"""Steps of the search for the least change at most; it takes about eight."""

FARTHEST_EDGE = 4.0
"""A stop edge is not proposed beyond this multiple of the transition's width."""

FARTHEST_LEVEL = 0.5
"""No level is proposed that asks for less than this share (ripple: allows more than its reciprocal)."""


@dataclass(frozen=True, slots=True)
class Relief:
    """Change the quantity at `path` from `before` to `after`, and the family's order falls as said."""

    path: Path
    before: Quantity
    after: Quantity
    order_before: int
    order_after: int


@dataclass(frozen=True, slots=True)
class _Number:
    """One number of a mask that can be moved, without reading the filter anew."""

    path: Path
    quantity: Quantity
    farthest: float
    """The most relaxed number worth proposing, in the quantity's own unit."""
    mask: Mask
    position: int
    """Which of the mask's bands it belongs to."""
    band: MaskBand

    def moved(self, number: float) -> Mask:
        """The mask with another number: an edge in proportion, a level as it is written."""
        band, scale = self.band, number / self.quantity.number
        match self.path[-1]:
            case "from":
                band = replace(band, low=band.low * scale)
            case "to":
                band = replace(band, high=band.high * scale)
            case "ripple":
                band = replace(band, least=(band.least or 0.0) * scale)
            case "attenuation":
                band = replace(band, most=(band.most or 0.0) * scale)
        return Mask((*self.mask.bands[: self.position], band, *self.mask.bands[self.position + 1 :]))


def reliefs(filter: Filter, family: str, wanted: int) -> Iterator[Relief]:
    """For each number of the mask, the least change that brings the family's order down to `wanted`.

    Each is rounded outward to a number that a person would write, and holds as written. Edges first,
    then attenuation, then ripple; a number whose change would be out of proportion is left out.
    """
    theory, mask = FAMILIES[family].theory, bands.mask(filter)
    before = _order(theory, mask) if theory is not None and mask is not None else None
    if theory is None or mask is None or before is None or before.order <= wanted:
        return
    # Orders of band-pass and band-stop filters are even.
    target = wanted - wanted % (before.order // before.prototype_order)
    for number in _numbers(filter, mask):
        after = _least_change(theory, target, number) if target > 0 else None
        reached = _order(theory, number.moved(after)) if after is not None else None
        if after is not None and reached is not None and reached.order <= wanted:
            quantity = replace(number.quantity, number=after)
            yield Relief(number.path, number.quantity, quantity, before.order, reached.order)


def _order(theory: Family, mask: Mask) -> iir.IirOrder | None:
    select = selectivity(mask)
    return iir.least_order(theory, select) if select is not None else None


def _least_change(theory: Family, wanted: int, number: _Number) -> float | None:
    """Where the unrounded order crosses the wanted one, between the number as written and the farthest.

    False position with Illinois weights (Dowell & Jarratt 1971); the order falls monotonically.
    """

    def above(value: float) -> float:
        order = _order(theory, number.moved(value))
        return order.unrounded - wanted if order is not None else math.inf

    fails, holds = number.quantity.number, number.farthest
    above_fails, above_holds = above(fails), above(holds)
    if not above_holds <= 0.0:
        return None
    for _ in range(STEPS):
        if abs(holds - fails) <= 1e-7 * abs(holds) or above_holds == 0.0:
            break
        if math.isinf(above_fails):
            between = 0.5 * (fails + holds)
        else:
            between = holds - above_holds * (holds - fails) / (above_holds - above_fails)
        value = above(between)
        if value > 0.0:
            fails, above_fails, above_holds = between, value, 0.5 * above_holds
        else:
            holds, above_holds, above_fails = between, value, 0.5 * above_fails
    return quantities.round_outward(
        holds, "up" if holds > number.quantity.number else "down", number.quantity.number
    )


def _numbers(filter: Filter, mask: Mask) -> Iterator[_Number]:
    """The numbers of the mask that may be relaxed: stop edges, attenuations, ripples."""
    ordered = [(position, band) for position, band in enumerate(mask.bands) if band.kind != "bounds"]
    for (at, left), (beside, right) in itertools.pairwise(ordered):
        if left.kind == right.kind:
            continue
        # The stop edge moves away from the pass edge, up to Nyquist or down to 0 Hz.
        if right.kind == "stop":
            target = min(
                left.high + FARTHEST_EDGE * (right.low - left.high), 0.999 * min(right.high, math.pi)
            )
            yield from _number(filter, mask, beside, "from", target / right.low)
        elif left.high > 0.0:
            target = max(
                right.low - FARTHEST_EDGE * (right.low - left.high), 0.001 * left.high, 1.001 * left.low
            )
            yield from _number(filter, mask, at, "to", target / left.high)
    for kind, key, share in (
        ("stop", "attenuation", FARTHEST_LEVEL),
        ("pass", "ripple", 1.0 / FARTHEST_LEVEL),
    ):
        for position, band in ordered:
            if band.kind == kind and band.relative:
                yield from _number(filter, mask, position, key, share)


def _number(filter: Filter, mask: Mask, position: int, key: str, share: float) -> Iterator[_Number]:
    """The number under this key of a band, where it is written, and `share` of it as the farthest one."""
    band = mask.bands[position]
    path = ("bands", band.item, band.kind, key)
    quantity = filter.quantity(*path)
    if quantity is not None and quantity.number != 0.0:
        yield _Number(path, quantity, quantity.number * share, mask, position, band)
