"""Remedies that meet the same mask with another family, or that free the choice of one."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.values import Path, Place
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.structures import DEFAULT_STRUCTURE, STRUCTURES
from bandwright.remedies.change import Change, Remedy

ORDER = "Use the {after[family]} family: order {after[order]} instead of {before[order]}"
BITS = "Use the {after[family]} family: {after[bits]} coefficient bits instead of {before[bits]}"
WITH_ORDER = "Use the {after[family]} family, which meets the mask with order {after[order]}"
FIR = (
    "Use a linear-phase FIR filter: {after[taps]} taps, {after[multiplications]} multiplications per sample,"
    " {after[delay]} delay"
)
LEAST = {
    "delay": "Use the {after[family]} family: {after[delay]} delay instead of {before[delay]}",
    "multiplications": "Use the {after[family]} family: {after[multiplications]} multiplications per sample"
    " instead of {before[multiplications]}",
    "memory": "Use the {after[family]} family: {after[memory]} instead of {before[memory]}",
}


def least_order_family(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the family with the least order, and the least that is monotone in the pass band."""
    chosen = forecast.chosen
    before = chosen.order if chosen is not None else None
    smaller = sorted(
        (one.order, one.family)
        for one in forecast.candidates
        if one.order is not None and (before is None or one.order < before)
    )
    proposed = [name for _, name in smaller[:1]]
    proposed += [name for _, name in smaller if FAMILIES[name].monotone_pass and name not in proposed][:1]
    for name in proposed:
        yield Change("keeps-requirement", WITH_ORDER if before is None else ORDER, _taking(forecast, name))


def fewest_bits_family(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take the IIR family that needs the fewest coefficient bits in the filter's structure."""
    needs = [
        (bits.value, one.family)
        for one in forecast.candidates
        if one.order is not None and (bits := forecast.own_bits(one)) is not None
    ]
    if needs:
        yield Change("keeps-requirement", BITS, _taking(forecast, min(needs)[1]))


def family_of_pinned_order(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Take a family that meets the mask with the order that the filter pins."""
    order = forecast.filter.count("order")
    fitting = [
        (one.least_order, one.family)
        for one in forecast.candidates
        if one.least_order is not None and order is not None and one.least_order <= order
    ]
    for _, name in sorted(fitting, reverse=True)[:1]:
        yield Change("keeps-requirement", WITH_ORDER, _taking(forecast, name))


def linear_phase_fir(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Go to an equiripple FIR filter."""
    chosen = forecast.chosen
    if chosen is None or chosen.kind != "fir":
        yield Change("keeps-requirement", FIR, _taking(forecast, "equiripple"))


def any_phase(forecast: Forecast, place: Place) -> Iterator[Change]:
    """Ask for no particular phase."""
    yield Change(
        "changes-requirement",
        "Leave out `phase: linear`: {after[family]} order {after[order]}, whose delay differs over the pass"
        " band",
        ((("phase",), None),),
    )


def _least(name: str) -> Remedy:
    def least(forecast: Forecast, place: Place) -> Iterator[Change]:
        figures = [
            (figure.value, one)
            for one in forecast.candidates
            if (figure := forecast.figure(one, name)) is not None and _other(forecast, one)
        ]
        if figures:
            family = min(figures, key=lambda pair: pair[0])[1].family
            yield Change("keeps-requirement", LEAST[name], _taking(forecast, family))

    least.__doc__ = f"Take the family with the least {name}."
    return least


shortest_delay_family = _least("delay")
fewest_multiplications_family = _least("multiplications")
least_memory_family = _least("memory")


def _other(forecast: Forecast, one: Candidate) -> bool:
    """Whether a candidate can meet the mask and is not what the filter is built as already."""
    linear = forecast.mask is not None and forecast.mask.phase == "linear"
    return one is not forecast.chosen and not (linear and one.kind == "iir")


def _taking(forecast: Forecast, family: str) -> tuple[tuple[Path, str | None], ...]:
    """The settings that make the filter one of this family, in a structure that suits it."""
    settings: tuple[tuple[Path, str | None], ...] = ((("family",), family),)
    kind, structure = FAMILIES[family].kind, forecast.filter.get("structure")
    names = forecast.filter.names("structure") or ()
    if structure is None or structure.origin != "own" or any(_suits(name, kind) for name in names):
        return settings
    return (*settings, (("structure",), DEFAULT_STRUCTURE[kind]))


def _suits(structure: str, kind: str) -> bool:
    return structure in STRUCTURES and STRUCTURES[structure].kind == kind
