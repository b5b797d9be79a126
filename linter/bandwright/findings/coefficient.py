"""Findings about coefficients: the bits they need, their spread, and what rounding does to them."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import NamedTuple

from bandwright.bandfile.quantities import Arithmetic, show, show_number
from bandwright.bandfile.values import Filter, Place
from bandwright.findings.case import CHOICE, Case
from bandwright.findings.rules import Hit, finding
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import RoundedStabilityAnswer
from bandwright.forecast.structures import STRUCTURES
from bandwright.remedies import families, structures, words
from bandwright.theory.closed_form.bits import NumberFormat, zero_scatter

DOUBLE_BITS = 53
"""Significant bits of IEEE 754 binary64, the longest format that processors add and multiply in."""

FEW_BITS = 8
"""An expanded polynomial with fewer bits to spare is worth a word: a stricter mask soon takes them."""

WIDE = 1e4
"""Coefficients that differ by more decades than this are hard to look through, and to scale."""

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
    def number_format(self) -> NumberFormat:
        """Floating where no arithmetic is named."""
        return self.arithmetic.number_format if self.arithmetic is not None else "floating"

    @property
    def double(self) -> bool:
        """Whether no longer floating format is left."""
        return self.number_format == "floating" and self.has >= DOUBLE_BITS


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
        "none": "Order {order} in this structure needs {needed} bits or more and `{arithmetic}` has {has},"
        " because {why}; take another structure, or relax the mask.",
    },
    remedies=(
        structures.second_order_sections,
        words.sections_in_longer_word,
        words.longer_word,
        families.least_order_family,
    ),
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
        form = "none"
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
        "unstable": "One direct form of order {order} needs {needed} bits and is unstable with the {has} of"
        " double precision: denominator up to {largest}, numerator down to {smallest}; sections need"
        " {sections}.",
        "none": "One direct form of order {order} needs {needed} or more bits and double precision has {has}:"
        " denominator up to {largest}, numerator down to {smallest}; store sections.",
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
        ("needed", f"{bits.low if needed is None else needed:g}"),
        ("largest", _power(max(map(abs, both[1])))),
        ("smallest", _power(min(abs(b) for b in both[0] if b))),
    )
    form = "none"
    if needed is not None:
        form = "" if _is_stable(case, stored) else "unstable"
        facts = (*facts, ("sections", _bits_in_sections(case, stored)))
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
    yield from _carried(case, "coefficient/barely-enough", barely=True)


@finding(
    "coefficient/wide-spread",
    "information",
    "The denominator of one direct form of order {order} runs from {largest} down to {smallest} and takes"
    " {needed} of {has} bits; second-order sections take {sections}.",
    remedies=(structures.second_order_sections,),
    needs=CHOICE,
)
def wide_spread(case: Case) -> Iterator[Hit]:
    """An expanded polynomial whose coefficients differ by decades, though the word carries them well."""
    yield from _carried(case, "coefficient/wide-spread", barely=False)


def _carried(case: Case, id: str, *, barely: bool) -> Iterator[Hit]:
    """What an expanded polynomial takes of a word that carries it: nearly all of it, or less."""
    stored = _stored(case)
    if stored is None or not stored.expanded or (stored.one.order or 0) <= 2:
        return  # of order 2, one direct form is one second-order section
    bits, both = case.forecast.own_bits(stored.one), case.forecast.expanded(stored.one)
    if bits is None or both is None or case.exceeds(bits, stored.has):
        return
    sizes = [abs(a) for a in both[1] if a]
    if case.exceeds(bits, stored.has - FEW_BITS) is not barely:
        return
    needed = case.exact(bits) if barely or max(sizes) >= WIDE * min(sizes) else None
    if needed is None:
        return
    facts = (
        ("order", stored.one.order),
        ("needed", f"{needed:g}"),
        ("has", stored.has),
        ("largest", show_number(max(sizes), 3)),
        ("smallest", show_number(min(sizes), 3)),
        ("sections", _bits_in_sections(case, stored)),
    )
    yield Hit(id, _place(case.filter, stored), facts, "", _word(case.filter))


@finding(
    "coefficient/zeros-scatter",
    "information",
    "Rounded to {bits} bits, the {count} zeros of the expanded numerator at {place} scatter by about"
    " {distance}; second-order sections keep each pair there.",
    remedies=(structures.second_order_sections,),
    needs=CHOICE,
)
def zeros_scatter(case: Case) -> Iterator[Hit]:
    """A multiple zero of an expanded numerator that rounding scatters, where the poles still hold."""
    stored = _stored(case)
    design = case.forecast.design(stored.one) if stored is not None else None
    if stored is None or design is None or not stored.expanded:
        return
    bits = case.forecast.own_bits(stored.one)
    scatter = zero_scatter(design, stored.has, stored.number_format)
    if bits is None or scatter is None or case.exceeds(bits, stored.has):
        return
    if scatter.multiplicity >= MULTIPLE and scatter.distance >= SCATTER:
        facts = (
            ("bits", stored.has),
            ("count", scatter.multiplicity),
            ("place", _on_circle(case.forecast, scatter.angle)),
            ("distance", show_number(scatter.distance, 1)),
        )
        yield Hit("coefficient/zeros-scatter", _place(case.filter, stored), facts)


def _is_stable(case: Case, stored: Stored) -> bool:
    """Whether the filter stays stable in the word that there is.

    Raises:
        Waiting: that is not answered yet.
    """
    question = case.forecast.stability_when_rounded(
        stored.one, stored.structure, stored.number_format, stored.has
    )
    answer = case.answer(question) if question is not None else None
    return isinstance(answer, RoundedStabilityAnswer) and answer.stable


def _on_circle(forecast: Forecast, angle: float) -> str:
    """A place on the unit circle in words."""
    if angle in (0.0, math.pi):
        return f"z = {1 if angle == 0.0 else -1}"
    rate_hz = forecast.sample_rate_hz
    return (
        show(angle / math.tau * rate_hz, "frequency") if rate_hz else show(angle / math.pi, "frequency", "pi")
    )


def _bits_in_sections(case: Case, stored: Stored) -> str:
    """The bits that second-order sections need, exactly."""
    bits = case.forecast.bits(stored.one, "cascade", stored.number_format)
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
