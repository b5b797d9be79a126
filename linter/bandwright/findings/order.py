"""Findings about orders and lengths."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright import limits
from bandwright.bandfile import quantities
from bandwright.bandfile.grammar import IIR_FAMILIES
from bandwright.bandfile.values import Place
from bandwright.findings import maxima
from bandwright.findings.case import CHOICE, Case
from bandwright.findings.rules import Hit, finding
from bandwright.findings.words import a_filter, opening, title
from bandwright.forecast import gaps, reliefs
from bandwright.forecast.forecast import MAXIMA
from bandwright.forecast.gaps import Gap
from bandwright.remedies import families, relaxations

NEAR = 0.25
"""An order is near the next smaller one where it exceeds that by less than this before rounding up."""

SMALL_MOVE = 0.2
"""A stop edge that moves by less than this share of its transition asks for little less."""


@finding(
    "order/over-maximum",
    "error",
    {
        "": "{family} needs order {order}, maximum {maximum}, because the transition is only {low} to"
        " {high}; {other} needs order {less}.",
        "alone": "{family} needs order {order}, maximum {maximum}, because the transition is only {low} to"
        " {high}; widen it, or allow more.",
        "pinned": "The order is pinned to {order}, over the maximum {maximum}; lower it, or allow more.",
        "beyond": "{family} needs an order above {order}, maximum {maximum}, because the transition is only"
        " {low} to {high}; widen it.",
    },
    remedies=(families.least_order_family, families.linear_phase_fir, relaxations.within_maximum_order),
    needs=CHOICE,
)
def over_maximum(case: Case) -> Iterator[Hit]:
    """Every allowed family is IIR and needs a higher order than the maximum."""
    filter, pinned, limit = case.filter, case.filter.count("order"), case.forecast.maximum("order")
    if pinned is not None:
        if limit is not None and pinned > limit and any(one.kind == "iir" for one in maxima.built(case)):
            said = (("order", pinned), ("maximum", f"{limit:g}"))
            yield Hit(
                "order/over-maximum", Place(("order",)), said, "pinned", _maximum(case), (float(pinned), "")
            )
        return
    over = maxima.excess(case, "order")
    if over is None:
        yield from _beyond(case)
        return
    one, order = over.candidate, over.figure.value
    facts = (("family", opening(one.family)), ("order", f"{order:g}"), ("maximum", f"{over.limit:g}"))
    figure = (order, "")
    gap = gaps.bound_by(case.gaps, one.binding)
    if gap is None:
        return
    out = maxima.way_out(case, "order", over.limit)
    words = (("other", a_filter(out[0].family)), ("less", out[0].order)) if out is not None else ()
    family_key = filter.get("family")
    one_family = (
        family_key is not None and family_key.origin == "own" and len(filter.names("family") or ()) == 1
    )
    place = Place(("family",)) if one_family else Place(gap.stop)
    yield Hit(
        "order/over-maximum",
        place,
        (*facts, *gap.facts, *words),
        "" if out is not None else "alone",
        (*gap.places, *_maximum(case)),
        figure,
    )


def _beyond(case: Case) -> Iterator[Hit]:
    """No allowed family can be built, and one of them because its order is beyond all use."""
    if maxima.built(case) or case.forecast.mask is None:
        return
    limit, gap = case.forecast.maximum("order"), gaps.narrowest(case.gaps)
    for one in case.forecast.candidates:
        if one.allowed and one.kind == "iir" and one.order is None and case.forecast.selectivity is not None:
            if gap is not None and limit is not None:
                facts = (
                    ("family", opening(one.family)),
                    ("order", limits.MAX_IIR_ORDER),
                    ("maximum", f"{limit:g}"),
                    *gap.facts,
                )
                places = (*gap.places, *_maximum(case))
                figure = (float(limits.MAX_IIR_ORDER), "")
                yield Hit("order/over-maximum", Place(gap.stop), facts, "beyond", places, figure)
            return


def _maximum(case: Case, name: str = "order") -> tuple[tuple[Place, str], ...]:
    """Where the maximum is written, as a related place."""
    setting = case.filter.get("at_most", name)
    if setting is None or setting.origin == "default":
        return ()
    return ((Place(("at_most", name)), "the maximum"),)


@finding(
    "order/taps-over-maximum",
    "error",
    {
        "": "{family} needs {taps} taps, maximum {maximum}, because the transition is only {low} to {high};"
        " widen it, or allow more.",
        "about": "{family} needs {taps} taps or more, maximum {maximum}, because the transition is only"
        " {low} to {high}; widen it, or allow more.",
    },
    remedies=(relaxations.within_maximum_taps, relaxations.raise_taps),
    needs=CHOICE,
)
def taps_over_maximum(case: Case) -> Iterator[Hit]:
    """Every allowed family is FIR and needs more taps than the maximum."""
    over, gap = maxima.excess(case, "taps"), gaps.narrowest(case.gaps)
    if over is None or gap is None:
        return
    exact = case.exact(over.figure)
    taps = exact if exact is not None else over.figure.low
    yield Hit(
        "order/taps-over-maximum",
        Place(gap.stop),
        (
            ("family", opening(over.candidate.family)),
            ("taps", f"{taps:g}"),
            ("maximum", f"{over.limit:g}"),
            *gap.facts,
        ),
        "" if exact is not None else "about",
        (*gap.places, *_maximum(case, "taps")),
        (taps, ""),
    )


@finding(
    "order/nothing-fits",
    "error",
    "No allowed family keeps all maxima: {nearest} comes nearest, with {name} {value}, maximum {maximum};"
    " relax the mask, or allow more.",
    remedies=(relaxations.raise_maxima,),
    needs=CHOICE,
)
def nothing_fits(case: Case) -> Iterator[Hit]:
    """Each maximum is kept by some family, but no family keeps them all."""
    if maxima.keeps_all(case) or any(maxima.excess(case, name) is not None for name in MAXIMA):
        return
    forecast = case.forecast
    worst = []
    for one in maxima.built(case):
        ratios = [
            (figure.value / limit, name, figure.exact, figure.value, limit)
            for name in MAXIMA
            if (limit := forecast.maximum(name)) and (figure := forecast.figure(one, name)) is not None
        ]
        if ratios:
            worst.append((max(ratios), one))
    if not worst:
        return
    (_, name, is_exact, value, limit), one = min(worst, key=lambda pair: pair[0])
    gap = gaps.bound_by(case.gaps, one.binding)
    if gap is None:
        return
    yield Hit(
        "order/nothing-fits",
        Place(gap.stop),
        (
            ("nearest", a_filter(one.family)),
            ("name", name),
            ("value", ("" if is_exact else "about ") + forecast.in_words(name, value)),
            ("maximum", forecast.in_words(name, limit)),
        ),
        "",
        (*gap.places, *(place for key in MAXIMA for place in _maximum(case, key))),
    )


@finding(
    "order/pinned-too-low",
    "error",
    "Order {order} can't meet the mask, because {family} needs order {least} for the transition from {low}"
    " to {high}; raise the order, or widen the transition.",
    remedies=(relaxations.release_order, families.family_of_pinned_order, relaxations.within_pinned_order),
    needs=CHOICE,
)
def pinned_too_low(case: Case) -> Iterator[Hit]:
    """The order that the filter pins is below what every allowed IIR family needs."""
    order = case.filter.count("order")
    found = [one for one in maxima.built(case) if one.least_order is not None]
    if order is None or not found or any(one.least_order <= order for one in found if one.least_order):
        return
    one = min(found, key=lambda one: one.least_order or 0)
    gap = gaps.bound_by(case.gaps, one.binding)
    if gap is not None:
        facts = (("order", order), ("family", title(one.family)), ("least", one.least_order), *gap.facts)
        yield Hit("order/pinned-too-low", Place(("order",)), facts, "", gap.places)


@finding(
    "order/pinned-odd",
    "error",
    "The order is pinned to {order}, and a {kind} filter of an IIR family has twice its prototype's order,"
    " an even number; write {even}.",
    remedies=(relaxations.even_order,),
    needs=CHOICE,
)
def pinned_odd(case: Case) -> Iterator[Hit]:
    """An odd order is pinned for a band-pass or band-stop, and would be high enough."""
    order, select = case.filter.count("order"), case.forecast.selectivity
    if order is None or order % 2 == 0 or select is None or not select.doubles:
        return
    if any(one.least_order is not None and one.least_order <= order for one in maxima.built(case)):
        facts = (("order", order), ("kind", select.kind), ("even", order + 1))
        yield Hit("order/pinned-odd", Place(("order",)), facts)


@finding(
    "order/pinned-without-iir",
    "warning",
    "`order` pins IIR filters only, and {cause} leaves only FIR filters, so it asks for nothing; remove it.",
    remedies=(relaxations.drop_order,),
    needs=("order", "family", "phase"),
)
def pinned_without_iir(case: Case) -> Iterator[Hit]:
    """An order is pinned, and no IIR family is allowed."""
    filter, names = case.filter, case.filter.names("family")
    linear = filter.text("phase") == "linear"
    only_fir = names is not None and not any(name in IIR_FAMILIES for name in names)
    if filter.count("order") is None or not (linear or only_fir):
        return
    cause, key = ("`phase: linear`", "phase") if linear else (f"`{', '.join(names or ())}`", "family")
    related = ((Place((key,)), "leaves only FIR filters"),)
    yield Hit("order/pinned-without-iir", Place(("order",)), (("cause", cause),), "", related)


@finding(
    "order/pinned-above-least",
    "information",
    "The order is pinned to {order}, and {family} meets the mask with order {least}; a lower order costs"
    " less.",
    remedies=(relaxations.release_order,),
    needs=CHOICE,
)
def pinned_above_least(case: Case) -> Iterator[Hit]:
    """The order that the filter pins is higher than the chosen family needs."""
    order, chosen = case.filter.count("order"), case.chosen()
    if order is None or chosen is None or chosen.least_order is None or not maxima.keeps_all(case):
        return
    odd = _step(case) == 2 and order % 2 == 1
    if odd or order <= chosen.least_order + (_step(case) if chosen.tie else 0):
        return
    facts = (("order", order), ("family", title(chosen.family)), ("least", chosen.least_order))
    yield Hit("order/pinned-above-least", Place(("order",)), facts)


@finding(
    "order/one-less-is-near",
    "information",
    "The {family} order is {unrounded} before rounding up to {order}; {after} here instead of {before} makes"
    " it {less}.",
    remedies=(relaxations.one_order_less,),
    needs=CHOICE,
)
def one_less_is_near(case: Case) -> Iterator[Hit]:
    """A small move of the stop edge saves an order, of a filter that is in order as it stands."""
    chosen, step = case.chosen(), _step(case)
    if chosen is None or chosen.order is None or chosen.order_unrounded is None or chosen.tie:
        return
    smaller, gap = chosen.order - step, gaps.bound_by(case.gaps, chosen.binding)
    if gap is None or smaller < 1 or chosen.order_unrounded - smaller > NEAR * step:
        return
    if case.filter.count("order") is not None or not maxima.keeps_all(case):
        return
    relief = next(reliefs.reliefs(case.filter, chosen.family, smaller), None)
    if relief is None or relief.path != gap.stop:
        return
    moved = abs(relief.after.number / relief.before.number - 1.0) * _stop_edge(gap)
    if moved > SMALL_MOVE * gap.width:
        return
    facts = (
        ("family", title(chosen.family)),
        ("unrounded", _unrounded(chosen.order_unrounded)),
        ("order", chosen.order),
        ("before", quantities.show_quantity(relief.before)),
        ("after", quantities.show_quantity(relief.after)),
        ("less", relief.order_after),
    )
    yield Hit("order/one-less-is-near", Place(relief.path), facts, "", gap.places)


def _step(case: Case) -> int:
    """From one order to the next: two for band-pass and band-stop."""
    return 2 if case.forecast.selectivity is not None and case.forecast.selectivity.doubles else 1


def _unrounded(order: float) -> str:
    """An order with two places, or as many as it takes to tell it from a whole number."""
    places = next((places for places in range(2, 9) if float(f"{order:.{places}f}") % 1.0), 9)
    return f"{order:.{places}f}"


def _stop_edge(gap: Gap) -> float:
    return gap.low if gap.stop == gap.below else gap.high


@finding(
    "order/tie",
    "information",
    "{family} of order {order} meets the mask with nothing to spare, so any rounding of its coefficients"
    " breaks it; leave some room.",
    remedies=(relaxations.next_order,),
    needs=CHOICE,
)
def tie(case: Case) -> Iterator[Hit]:
    """The order before rounding is a whole number, so that no margin is left."""
    chosen = case.chosen()
    if chosen is None or not chosen.tie or chosen.order is None or case.filter.count("order") is not None:
        return
    gap = gaps.bound_by(case.gaps, chosen.binding)
    if gap is not None:
        facts = (("family", opening(chosen.family)), ("order", chosen.order))
        yield Hit("order/tie", Place(gap.stop), facts, "", gap.places)
