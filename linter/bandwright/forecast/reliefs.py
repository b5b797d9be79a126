"""Reliefs: the least change of one number of the mask that brings an order down to what is wanted."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Quantity
from bandwright.forecast import bands
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.vary import varied
from bandwright.theory.closed_form import iir
from bandwright.theory.closed_form.selectivity import selectivity

BISECTIONS = 50
"""Halvings of the searched range: enough for double precision."""

FARTHEST_EDGE = 4.0
"""A stop edge is not proposed beyond this multiple of the pass edge's distance."""

FARTHEST_LEVEL = 0.5
"""No level is proposed that is relaxed to less than this share of what was asked (ripple: times 1 / share)."""


@dataclass(frozen=True, slots=True)
class Relief:
    """Change the quantity at `path` from `before` to `after`, and the family's order falls as said."""

    path: Path
    before: Quantity
    after: Quantity
    order_before: int
    order_after: int


def order_of(filter: Filter, family: str) -> int | None:
    """The least order of one family for this filter's mask, None where there is none."""
    theory, mask = FAMILIES[family].theory, bands.mask(filter)
    select = selectivity(mask) if mask is not None else None
    least = iir.least_order(theory, select) if theory is not None and select is not None else None
    return least.order if least is not None else None


def reliefs(filter: Filter, family: str, wanted: int) -> Iterator[Relief]:
    """For each number of the mask, the least change that brings the family's order down to `wanted`.

    Each is rounded outward to a number that a person would write, and holds as written. Edges first,
    then attenuation, then ripple; a number whose change would be out of proportion is left out.
    """
    before = order_of(filter, family)
    if before is None or before <= wanted:
        return
    for path, farthest in _movable(filter):
        quantity = filter.quantity(*path)
        if quantity is None:
            continue
        after = _least_change(filter, family, wanted, path, quantity, farthest)
        if after is not None:
            reached = order_of(varied(filter, path, after), family)
            if reached is not None and reached <= wanted:
                yield Relief(path, quantity, after, before, reached)


def _least_change(
    filter: Filter, family: str, wanted: int, path: Path, quantity: Quantity, farthest: float
) -> Quantity | None:
    """Bisect between the number as written and the farthest one; the order falls monotonically between."""

    def meets(number: float) -> bool:
        order = order_of(varied(filter, path, _with(quantity, number)), family)
        return order is not None and order <= wanted

    if not meets(farthest):
        return None
    fails, holds = quantity.number, farthest
    for _ in range(BISECTIONS):
        middle = 0.5 * (fails + holds)
        if middle in (fails, holds):
            break
        fails, holds = (fails, middle) if meets(middle) else (middle, holds)
    rounded = quantities.round_outward(holds, "up" if holds > quantity.number else "down", quantity.number)
    return _with(quantity, rounded) if meets(rounded) else None


def _with(quantity: Quantity, number: float) -> Quantity:
    return Quantity(number, quantity.unit, quantity.symmetric)


def _movable(filter: Filter) -> Iterator[tuple[Path, float]]:
    """The numbers of the mask that may be relaxed, each with the farthest value worth proposing."""
    items = [band for band in bands.bands(filter) if band.kind != "bounds"]
    for left, right in zip(items, items[1:], strict=False):
        if left.kind == right.kind or left.high is None or right.low is None:
            continue
        for band, side, own, other in (
            (left, "high", left.high, right.low),
            (right, "low", right.low, left.high),
        ):
            if band.kind != "stop":
                continue
            path = band.edge_path(side)
            quantity = filter.quantity(*path)
            if quantity is None or own == 0.0:
                continue
            # The stop edge moves away from the pass edge, up to Nyquist or down to 0 Hz.
            limit = math.pi if side == "low" else 0.0
            target = other + FARTHEST_EDGE * (own - other)
            target = min(target, 0.999 * limit) if side == "low" else max(target, 0.001 * own)
            yield path, quantity.number * target / own
    for band in items:
        if band.relative:
            name = "ripple" if band.kind == "pass" else "attenuation"
            path = ("bands", band.index, band.kind, name)
            quantity = filter.quantity(*path)
            if quantity is not None:
                share = FARTHEST_LEVEL
                yield path, quantity.number / share if band.kind == "pass" else quantity.number * share
