"""Remedies that ask for less: the least change of one number of the mask, or of one maximum."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Place, Quantity
from bandwright.forecast import gaps
from bandwright.forecast.forecast import MAXIMA, Forecast
from bandwright.forecast.gaps import Gap
from bandwright.forecast.reliefs import reliefs
from bandwright.remedies.change import Change, Remedy

NARROW_ORDER = 12
"""An order that filters of the trade seldom go beyond: the maximum where a band file names none."""


NAMES = {"taps": "number of taps", "multiplications": "of multiplications per sample"}
"""How titles call the maxima whose key is a plural."""


WIDER = 1.04
"""A length falls somewhat more slowly than 1 / width."""


def wider_transition(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Relax one number of the mask just enough that an elliptic filter has no more than the usual order."""
    if forecast.selectivity is not None and (forecast.mask is None or forecast.mask.phase != "linear"):
        yield from _relax(forecast, "elliptic", NARROW_ORDER * (2 if forecast.selectivity.doubles else 1))


def fewer_taps(most: int) -> Remedy:
    """Widen the narrowest transitions just enough that the filter has no more than `most` taps."""

    def wider(forecast: Forecast, place: Place) -> Iterator[Change]:
        yield from _widened(forecast, most)

    return wider


def _shorter(name: str, taps: Callable[[float], float]) -> Remedy:
    def within(forecast: Forecast, place: Place) -> Iterator[Change]:
        limit = forecast.maximum(name)
        if limit is not None:
            yield from _widened(forecast, math.floor(taps(limit)))

    within.__doc__ = (
        f"Widen the narrowest transitions just enough that an FIR filter keeps its maximum {name}."
    )
    return within


within_maximum_taps = _shorter("taps", lambda limit: limit)
within_maximum_multiplications = _shorter("multiplications", lambda limit: 2 * limit)
within_maximum_delay = _shorter("delay", lambda limit: 2 * limit + 1)


def _widened(forecast: Forecast, most: int) -> Iterator[Change]:
    """Move the stop edges of transitions that are too narrow; an FIR filter's length goes by 1 / width."""
    chosen, filter = forecast.chosen, forecast.filter
    if chosen is None or chosen.taps is None or not most < chosen.taps.value < math.inf:
        return
    found = gaps.gaps(filter, forecast.bands)
    width = WIDER * min((one.width for one in found), default=0.0) * chosen.taps.value / most
    moves = []
    for one in found:
        edge = filter.quantity(*one.stop)
        if edge is None or one.width >= width:
            continue
        after = _moved(one, edge, width)
        if after is None:
            return
        moves.append((one.stop, edge, after))
    if moves:
        words = " and ".join(
            f"from {quantities.show_quantity(before)} to {quantities.show_quantity(after)}"
            for _, before, after in moves
        )
        start = "Move the stop edges" if len(moves) > 1 else "Move the stop edge"
        yield Change(
            "changes-requirement",
            f"{start} {words}: {{after[taps]}} taps instead of {{before[taps]}}",
            tuple((path, quantities.show_quantity(after)) for path, _, after in moves),
        )


def within_maximum_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Relax one number of the mask just enough that the order keeps its maximum; or raise the maximum."""
    limit, chosen = forecast.maximum("order"), forecast.chosen
    if limit is None or chosen is None or chosen.order is None:
        return
    yield from _relax(forecast, chosen.family, int(limit))
    yield from raise_order(forecast, place)


def within_pinned_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Relax one number of the mask just enough that the pinned order meets it."""
    order, chosen = forecast.filter.count("order"), forecast.chosen
    if order is not None and chosen is not None:
        yield from _relax(forecast, chosen.family, order)


def one_order_less(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Relax one number of the mask just enough to save an order (two for band-pass and band-stop)."""
    chosen = forecast.chosen
    if chosen is not None and chosen.order is not None:
        yield from _relax(forecast, chosen.family, chosen.order - 1)


def release_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Leave the order to the mask."""
    yield Change(
        "keeps-requirement",
        "Leave the order to the mask: {after[family]} order {after[order]}",
        ((("order",), None),),
    )


def even_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Pin an even order: the next higher or lower one, or the least."""
    order = forecast.filter.count("order")
    if order is not None:
        for even in (order + 1, order - 1):
            yield Change("keeps-requirement", f"Pin order {even}", ((("order",), str(even)),))
    yield from release_order(forecast, place)


def drop_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Remove an order that pins nothing."""
    yield Change("keeps-requirement", "Remove the order", ((("order",), None),))


def even_transitions(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Widen the transition whose stop edge stands at `place` to the width of the next narrowest."""
    wider = evened(forecast.filter, gaps.gaps(forecast.filter, forecast.bands))
    if wider is not None:
        before, after = forecast.filter.quantity(*place.path), wider[1]
        if before is not None:
            yield Change(
                "changes-requirement",
                f"Move the stop edge from {quantities.show_quantity(before)} to"
                f" {quantities.show_quantity(after)}: {{after[taps]}} taps instead of {{before[taps]}}",
                ((place.path, quantities.show_quantity(after)),),
            )


def evened(filter: Filter, found: Sequence[Gap]) -> tuple[Gap, Quantity] | None:
    """The narrowest transition, and the stop edge that makes it as wide as the next narrowest."""
    if len(found) < 2:
        return None
    narrow, other = sorted(found, key=lambda gap: gap.width)[:2]
    edge = filter.quantity(*narrow.stop)
    moved = _moved(narrow, edge, other.width) if edge is not None else None
    return (narrow, moved) if moved is not None else None


def _moved(gap: Gap, edge: Quantity, width: float) -> Quantity | None:
    """The stop edge of a transition that is to have this width, rounded outward; None below 0 Hz."""
    own, other = (gap.low, gap.high) if gap.stop == gap.below else (gap.high, gap.low)
    number = edge.number * (other + (own - other) * width / gap.width) / own
    if not number > 0:
        return None
    rounded = quantities.round_outward(number, "up" if number > edge.number else "down", edge.number)
    return Quantity(rounded, edge.unit)


def next_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Pin the next higher order, which leaves a margin for rounding."""
    chosen = forecast.chosen
    if chosen is not None and chosen.order is not None:
        step = 2 if forecast.selectivity is not None and forecast.selectivity.doubles else 1
        yield Change(
            "keeps-requirement",
            "Take order {after[order]} instead of {before[order]}, which leaves a margin for rounding",
            ((("order",), str(chosen.order + step)),),
        )


def raise_maxima(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Raise whichever one maximum lets some family through."""
    for name in MAXIMA:
        yield from _raise(name)(forecast, place)


def _raise(name: str) -> Remedy:
    def raised(forecast: Forecast, place: Place) -> Iterator[Change]:
        limit = forecast.maximum(name)
        figures = [
            figure.value
            for one in forecast.candidates
            if one.allowed and (figure := forecast.figure(one, name)) is not None
        ]
        enough = [value for value in figures if limit is not None and value > limit]
        if enough:
            before, after = f"{{before[maximum_{name}]}}", f"{{after[maximum_{name}]}}"
            yield Change(
                "changes-requirement",
                f"Raise the maximum {NAMES.get(name, name)} from {before} to {after}",
                ((("at_most", name), _written(forecast, name, min(enough))),),
            )

    raised.__doc__ = f"Raise the maximum {name} to what the nearest family needs."
    return raised


raise_order = _raise("order")
raise_taps = _raise("taps")
raise_delay = _raise("delay")
raise_multiplications = _raise("multiplications")
raise_memory = _raise("memory")


def _written(forecast: Forecast, name: str, value: float) -> str:
    """A maximum that holds the value, as a person would write it; a delay in the unit of the old one."""
    old = forecast.filter.quantity("at_most", name)
    if old is None or old.unit == "samples":
        whole = str(math.ceil(value - 1e-9))
        return f"{whole} samples" if old is not None else whole
    seconds = value / forecast.sample_rate_hz if forecast.sample_rate_hz else value
    number = quantities.in_unit(seconds, old.unit)
    return quantities.show(quantities.round_outward(number or 0.0, "up"), "time", old.unit, 7)


def _relax(forecast: Forecast, family: str, wanted: int) -> Iterator[Change]:
    for relief in reliefs(forecast.filter, family, wanted):
        before, after = quantities.show_quantity(relief.before), quantities.show_quantity(relief.after)
        yield Change(
            "changes-requirement",
            f"{_verb(relief.path)} from {before} to {after}: {family} order"
            f" {relief.order_before} to {relief.order_after}",
            ((relief.path, after),),
        )


def _verb(path: Path) -> str:
    kind, key = path[2], path[-1]
    return {
        "from": f"Move the {kind} edge",
        "to": f"Move the {kind} edge",
        "ripple": "Allow more ripple,",
        "attenuation": "Ask for less attenuation,",
    }[str(key)]
