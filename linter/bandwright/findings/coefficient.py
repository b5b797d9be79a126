"""Findings about coefficients: the bits they need, their spread, and what rounding does to them."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import NamedTuple

from bandwright.bandfile.quantities import Arithmetic, show_number
from bandwright.bandfile.values import Filter, Place
from bandwright.findings.case import CHOICE, Case
from bandwright.findings.rules import Hit, finding
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.structures import STRUCTURES
from bandwright.remedies import families, structures, words

DOUBLE_BITS = 53
"""Significant bits of IEEE 754 binary64, the longest format that processors add and multiply in."""

FEW_BITS = 8
"""An expanded polynomial with fewer bits to spare is worth a word: a stricter mask soon takes them."""

CROWDED = 0.35
"""Poles within this angle (rad) of z = 1 or z = -1 are said to crowd there."""

SCATTER = 0.05
"""Zeros that rounding moves by less than this from z = -1 or z = 1 still make one notch."""

MULTIPLE = 4
"""A multiple zero of this order or more is worth looking at."""


class Stored(NamedTuple):
    """A candidate as it will be stored."""

    one: Candidate
    structure: str
    arithmetic: Arithmetic | None
    has: int
    """Bits of a coefficient; those of double precision where no arithmetic is named."""

    @property
    def expanded(self) -> bool:
        """Whether one polynomial holds all poles."""
        return STRUCTURES[self.structure].stores == "expanded"

    @property
    def double(self) -> bool:
        """Whether no longer floating format is left."""
        return self.arithmetic is None or (
            self.arithmetic.number_format == "floating" and self.has >= DOUBLE_BITS
        )


def _stored(case: Case) -> Stored | None:
    """How the filter will be stored; None where nothing can be built.

    Raises:
        Waiting: an answer could still change the choice.
    """
    chosen, arithmetic = case.chosen(), case.forecast.arithmetic
    if chosen is None or chosen.structure is None:
        return None
    has = arithmetic.coefficient_bits if arithmetic is not None else DOUBLE_BITS
    return Stored(chosen, chosen.structure, arithmetic, has)


@finding(
    "coefficient/too-few-bits",
    "warning",
    {
        "": "Order {order} in one direct form needs {needed}-bit coefficients and `{arithmetic}` has {has},"
        " because {why}; second-order sections need {sections}.",
        "sections": "Order {order} in second-order sections needs {needed}-bit coefficients and"
        " `{arithmetic}` has {has}, because {why}; take a longer word.",
        "taps": "{taps} taps need {needed}-bit coefficients or longer and `{arithmetic}` has {has}, because"
        " {why}; take a longer word.",
        "none": "No coefficient word of {limit} bits or less carries order {order} in `{structure}`,"
        " because {why}; `{arithmetic}` has {has}.",
    },
    remedies=(structures.second_order_sections, families.least_order_family, words.longer_word),
    needs=CHOICE,
)
def too_few_bits(case: Case) -> Iterator[Hit]:
    """The arithmetic has fewer bits than the coefficients need in their structure."""
    stored = _stored(case)
    if stored is None or stored.arithmetic is None or (stored.expanded and stored.double):
        return
    bits = case.forecast.own_bits(stored.one)
    if bits is None or not case.exceeds(bits, stored.has):
        return
    needed = case.exact(bits)
    arithmetic = stored.arithmetic.coefficients.name
    facts: tuple[tuple[str, object], ...] = (
        ("order", stored.one.order),
        ("arithmetic", arithmetic),
        ("has", stored.has),
        ("structure", stored.structure),
        ("needed", f"{bits.low if needed is None else needed:g}"),
        ("why", _why(case, stored)),
    )
    if stored.one.taps is not None:
        taps = case.exact(stored.one.taps)
        form, facts = "taps", (*facts, ("taps", f"{stored.one.taps.value if taps is None else taps:g}"))
    elif needed is None:
        form, facts = "none", (*facts, ("limit", f"{bits.low:g}"))
    elif stored.expanded:
        form, facts = "", (*facts, ("sections", _bits_in_sections(case, stored)))
    else:
        form = "sections"
    figure = (bits.low if needed is None else needed, "")
    yield Hit(
        "coefficient/too-few-bits", _place(case.filter, stored), facts, form, _word(case.filter), figure
    )


@finding(
    "coefficient/double-precision-not-enough",
    "error",
    {
        "": "One direct form of order {order} needs {needed} bits and double precision has {has}:"
        " denominator up to {largest}, numerator down to {smallest}; sections need {sections}.",
        "none": "No word of {limit} bits or less carries one direct form of order {order}, whose"
        " denominator reaches {largest}; store it as second-order sections.",
    },
    remedies=(structures.second_order_sections, families.least_order_family, families.fewest_bits_family),
    needs=CHOICE,
)
def double_precision_not_enough(case: Case) -> Iterator[Hit]:
    """Not even double precision carries the filter as one polynomial."""
    stored = _stored(case)
    if stored is None or not stored.expanded or not stored.double:
        return
    bits, both = case.forecast.own_bits(stored.one), case.forecast.expanded(stored.one)
    if bits is None or both is None or not case.exceeds(bits, stored.has):
        return
    needed = case.exact(bits)
    facts: tuple[tuple[str, object], ...] = (
        ("order", stored.one.order),
        ("has", stored.has),
        ("largest", _power(max(map(abs, both[1])))),
        ("smallest", _power(min(abs(b) for b in both[0] if b))),
    )
    if needed is None:
        form, facts = "none", (*facts, ("limit", f"{bits.low:g}"))
    else:
        form = ""
        facts = (*facts, ("needed", f"{needed:g}"), ("sections", _bits_in_sections(case, stored)))
    figure = (bits.low if needed is None else needed, "")
    yield Hit(
        "coefficient/double-precision-not-enough",
        _place(case.filter, stored),
        facts,
        form,
        _word(case.filter),
        figure,
    )


@finding(
    "coefficient/barely-enough",
    "information",
    "Order {order} in one direct form takes {needed} of {has} bits, its denominator from {largest} down to"
    " {smallest}; second-order sections take {sections}.",
    remedies=(structures.second_order_sections,),
    needs=CHOICE,
)
def barely_enough(case: Case) -> Iterator[Hit]:
    """An expanded polynomial that leaves few bits to spare."""
    stored = _stored(case)
    if stored is None or not stored.expanded:
        return
    bits, both = case.forecast.own_bits(stored.one), case.forecast.expanded(stored.one)
    if bits is None or both is None or bits.high <= stored.has - FEW_BITS or bits.low > stored.has:
        return
    needed = case.exact(bits)
    if needed is None or not stored.has - FEW_BITS < needed <= stored.has:
        return
    sizes = [abs(a) for a in both[1] if a]
    facts = (
        ("order", stored.one.order),
        ("needed", f"{needed:g}"),
        ("has", stored.has),
        ("largest", show_number(max(sizes), 2)),
        ("smallest", show_number(min(sizes), 2)),
        ("sections", _bits_in_sections(case, stored)),
    )
    yield Hit("coefficient/barely-enough", _place(case.filter, stored), facts, "", _word(case.filter))


@finding(
    "coefficient/zeros-scatter",
    "information",
    "Rounded to {bits} bits, the {count} zeros of the expanded numerator at z = {place} scatter by about"
    " {distance}; second-order sections keep each pair there.",
    remedies=(structures.second_order_sections,),
    needs=CHOICE,
)
def zeros_scatter(case: Case) -> Iterator[Hit]:
    """A multiple zero of an expanded numerator that rounding scatters."""
    stored = _stored(case)
    if stored is None or not stored.expanded:
        return
    bits = case.forecast.own_bits(stored.one)
    if bits is None or case.exceeds(bits, stored.has):
        return  # then the poles move first
    found = _scatter(case.forecast, stored)
    if found is None:
        return
    count, place, distance = found
    if count >= MULTIPLE and distance >= SCATTER:
        facts = (
            ("bits", stored.has),
            ("count", count),
            ("place", place),
            ("distance", show_number(distance, 1)),
        )
        yield Hit("coefficient/zeros-scatter", _place(case.filter, stored), facts)


def _scatter(forecast: Forecast, stored: Stored) -> tuple[int, int, float] | None:
    """How many zeros lie at z = 1 or z = -1, where, and how far rounding the expanded numerator moves them.

    With B(x) = c (x - x0)^n R(x), x = 1/z, an error E(x) of the coefficients moves the n-fold zero x0 by
    |E(x0) / (c R(x0))|^(1/n) (Wilkinson, "Rounding Errors in Algebraic Processes", 1963, from memory). The
    errors are uniform over one step, so that E(x0) has the variance of their sum.
    """
    design, both = forecast.design(stored.one), forecast.expanded(stored.one)
    if design is None or both is None:
        return None
    there = {
        place: sum(2 if zero.pair else 1 for zero in design.zeros if zero.gap == 0.0 and zero.angle == angle)
        for place, angle in ((-1, math.pi), (1, 0.0))
    }
    place = max(there, key=lambda place: there[place])
    count = there[place]
    if count == 0:
        return None
    numerator = both[0]
    fixed = stored.arithmetic is not None and stored.arithmetic.number_format == "fixed"
    shared = math.frexp(max(map(abs, numerator)))[1]
    steps = [
        math.ldexp(1.0, (shared if fixed else math.frexp(b)[1]) - stored.has + fixed) for b in numerator if b
    ]
    error = math.sqrt(sum(step * step for step in steps) / 12.0)
    # c R(x0) is the count-th derivative of B at x0, over count!.
    slope = abs(
        sum(b * math.comb(k, count) * place ** (k - count) for k, b in enumerate(numerator) if k >= count)
    )
    return count, place, (error / slope) ** (1.0 / count)


def _bits_in_sections(case: Case, stored: Stored) -> str:
    """The bits that second-order sections need, exactly."""
    number_format = stored.arithmetic.number_format if stored.arithmetic is not None else "floating"
    bits = case.forecast.bits(stored.one, "cascade", number_format)
    exact = case.exact(bits) if bits is not None else None
    return f"{exact:g}" if exact is not None else "fewer"


def _why(case: Case, stored: Stored) -> str:
    """What makes the coefficients so sensitive, in a few words."""
    design = case.forecast.design(stored.one)
    if design is None or not design.poles:
        return "the stop band is that deep"
    angles = [pole.angle for pole in design.poles]
    if max(angles) < CROWDED:
        return "its poles crowd z = 1"
    if min(angles) > math.pi - CROWDED:
        return "its poles crowd z = -1"
    nearest = min(pole.gap for pole in design.poles) / 2.0
    if stored.expanded:
        return "one polynomial holds all its poles"
    return f"a pole lies {show_number(nearest, 2)} from the circle"


def _place(filter: Filter, stored: Stored) -> Place:
    """The structure where the filter or its device names one, else the arithmetic."""
    structure = filter.get("structure")
    if stored.expanded or structure is not None:
        return Place(("structure",))
    return Place(("arithmetic",))


def _word(filter: Filter) -> tuple[tuple[Place, str], ...]:
    """Where the arithmetic is named."""
    return ((Place(("arithmetic",)), "the arithmetic"),) if filter.text("arithmetic") else ()


def _power(value: float) -> str:
    """A magnitude in one digit: 1e8."""
    return f"{value:.0e}".replace("e+0", "e").replace("e+", "e").replace("e-0", "e-")
