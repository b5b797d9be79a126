"""Findings about what a filter costs: delay, multiplications, memory; and the wish that costs all."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.grammar import IIR_FAMILIES
from bandwright.bandfile.values import Place
from bandwright.findings import maxima
from bandwright.findings.case import CHOICE, Case
from bandwright.findings.rules import Hit, finding
from bandwright.findings.words import a_filter, opening, title
from bandwright.forecast import gaps
from bandwright.remedies import families, relaxations

FAR_DEARER = 2.5
"""A family is far dearer that takes this many times the multiplications of another one."""


@finding(
    "cost/linear-phase-with-iir-family",
    "error",
    "{family} is an IIR family, and no IIR filter has exactly linear phase; take an FIR family, or leave out"
    " `phase: linear`.",
    remedies=(families.linear_phase_fir, families.any_phase),
    needs=("phase", "family"),
)
def linear_phase_with_iir_family(case: Case) -> Iterator[Hit]:
    """Linear phase is asked for, and only IIR families are allowed."""
    filter = case.filter
    names = filter.names("family")
    if filter.text("phase") != "linear" or not names or any(name not in IIR_FAMILIES for name in names):
        return
    family = filter.get("family")
    own = family is not None and family.origin == "own"
    here, there = (("family",), ("phase",)) if own else (("phase",), ("family",))
    words = "asks for linear phase" if own else "allows IIR families only"
    facts = (("family", " or ".join(opening(name) for name in names)),)
    yield Hit("cost/linear-phase-with-iir-family", Place(here), facts, "", ((Place(there), words),))


@finding(
    "cost/delay-over-maximum",
    "error",
    {
        "": "The shortest delay is {delay} ({family}), maximum {maximum}, because the transition is only"
        " {low} to {high}; widen it, or allow more.",
        "one": "{family} delays the pass band by {delay}, maximum {maximum}, because the transition is only"
        " {low} to {high}; widen it, or allow more.",
        "other": "{family} delays the pass band by {delay}, maximum {maximum}, because the transition is only"
        " {low} to {high}; {other} by {less}.",
    },
    remedies=(families.shortest_delay_family, relaxations.within_maximum_delay, relaxations.raise_delay),
    needs=CHOICE,
)
def delay_over_maximum(case: Case) -> Iterator[Hit]:
    """Every allowed family delays the pass bands for longer than the maximum."""
    yield from _over(case, "delay")


@finding(
    "cost/multiplications-over-maximum",
    "error",
    {
        "": "The fewest multiplications are {multiplications} per sample ({family}), maximum {maximum},"
        " because the transition is only {low} to {high}; widen it, or allow more.",
        "one": "{family} takes {multiplications} multiplications per sample, maximum {maximum}, because the"
        " transition is only {low} to {high}; widen it, or allow more.",
        "other": "{family} takes {multiplications} multiplications per sample, maximum {maximum}; {other}"
        " takes {less}.",
    },
    remedies=(
        families.fewest_multiplications_family,
        relaxations.within_maximum_multiplications,
        relaxations.raise_multiplications,
    ),
    needs=CHOICE,
)
def multiplications_over_maximum(case: Case) -> Iterator[Hit]:
    """Every allowed family takes more multiplications than the maximum."""
    yield from _over(case, "multiplications")


@finding(
    "cost/memory-over-maximum",
    "error",
    {
        "": "The least memory is {memory} ({family}), maximum {maximum}, because the transition is only"
        " {low} to {high}; widen it, or allow more.",
        "one": "{family} takes {memory} of memory, maximum {maximum}, because the transition is only {low}"
        " to {high}; widen it, or allow more.",
        "other": "{family} takes {memory} of memory, maximum {maximum}; {other} takes {less}.",
    },
    remedies=(families.least_memory_family, relaxations.raise_memory),
    needs=CHOICE,
)
def memory_over_maximum(case: Case) -> Iterator[Hit]:
    """Every allowed family takes more memory than the maximum."""
    yield from _over(case, "memory")


@finding(
    "cost/far-dearer",
    "information",
    "{family} takes {multiplications} multiplications per sample, order {order}; {other} meets the same"
    " mask with {fewer}, order {less}.",
    remedies=(families.fewest_multiplications_family, families.least_order_family),
    needs=CHOICE,
)
def far_dearer(case: Case) -> Iterator[Hit]:
    """The one IIR family that the filter names takes several times what another one takes."""
    filter, forecast, chosen = case.filter, case.forecast, case.chosen()
    names = filter.names("family") or ()
    if chosen is None or chosen.order is None or len(names) != 1 or not maxima.keeps_all(case):
        return
    mine = forecast.multiplications(chosen)
    costs = [
        (figure.value, one.family, one)
        for one in forecast.candidates
        if one.kind == "iir" and one.order and (figure := forecast.multiplications(one)) is not None
    ]
    if mine is None or not costs or mine.value < FAR_DEARER * min(costs)[0]:
        return
    fewer, _, other = min(costs)
    facts = (
        ("family", opening(chosen.family)),
        ("multiplications", f"{mine.value:g}"),
        ("order", chosen.order),
        ("other", a_filter(other.family)),
        ("fewer", f"{fewer:g}"),
        ("less", other.order),
    )
    yield Hit("cost/far-dearer", Place(("family",)), facts)


def _over(case: Case, name: str) -> Iterator[Hit]:
    filter, forecast = case.filter, case.forecast
    over = maxima.excess(case, name)
    gap = gaps.bound_by(case.gaps, over.candidate.binding) if over is not None else None
    if over is None or gap is None:
        return
    exact = case.exact(over.figure)
    value = exact if exact is not None else over.figure.low
    words = forecast.in_words(name, value)
    form = "one" if len(maxima.built(case)) == 1 else ""
    family = opening(over.candidate.family) if form else title(over.candidate.family)
    facts: tuple[tuple[str, object], ...] = (
        ("family", family),
        (name, words if exact is not None else f"at least {words}"),
        ("maximum", forecast.in_words(name, over.limit)),
        *gap.facts,
    )
    out = maxima.way_out(case, name, over.limit) if form else None
    if out is not None:
        form = "other"
        less = forecast.in_words(name, out[1].high)
        facts = (
            *facts,
            ("other", a_filter(out[0].family)),
            ("less", less if out[1].exact else f"at most {less}"),
        )
    maximum, limit = filter.get("at_most", name), Place(("at_most", name))
    own = maximum is not None and maximum.origin == "own"
    yield Hit(
        f"cost/{name}-over-maximum",
        limit if own else Place(gap.stop),
        facts,
        form,
        gap.places if own else (*gap.places, (limit, "the maximum")),
        _figure(case, name, value),
    )


def _figure(case: Case, name: str, value: float) -> tuple[float, str]:
    """The figure of a maximum that an `up_to` is held against: a delay in seconds where there is a rate."""
    rate_hz = case.forecast.sample_rate_hz
    if name == "delay":
        return (value, "samples") if rate_hz is None else (value / rate_hz, "s")
    return value, "bytes" if name == "memory" else ""
