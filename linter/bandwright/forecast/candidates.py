"""The candidates of a filter: each family at its least order or length, before any costlier figure."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from bandwright import limits
from bandwright.bandfile.values import Filter
from bandwright.forecast.families import FAMILIES, FamilyRow
from bandwright.forecast.questions import Answers, FirLength
from bandwright.forecast.settle import settled
from bandwright.forecast.structures import DEFAULT_STRUCTURE, structure_for
from bandwright.forecast.types import Binding, Figure
from bandwright.theory.closed_form import fir_length, iir
from bandwright.theory.closed_form.selectivity import Selectivity
from bandwright.theory.closed_form.types import Mask


@dataclass(frozen=True, slots=True)
class Candidate:
    """One family's way to meet a mask; where it has none, `order` and `taps` are None, `why_not` says why."""

    family: str
    kind: Literal["iir", "fir"]
    structure: str | None
    """None where none of the structures asked for suits the family."""
    allowed: bool
    """Whether the filter's own `family`, `phase` and `structure` admit it."""
    order: int | None = None
    """The digital order that it is built with: the least, or the one that the filter pins."""
    least_order: int | None = None
    order_unrounded: float | None = None
    tie: bool = False
    taps: Figure | None = None
    binding: Binding | None = None
    why_not: str = ""


def candidates(
    filter: Filter, mask: Mask, selectivity: Selectivity | None, answers: Answers
) -> tuple[Candidate, ...]:
    """A candidate of every family that is judged, in the order of `families.FAMILIES`."""
    asked_families = filter.names("family")
    asked_structures, structure_key = filter.names("structure"), filter.get("structure")
    found = []
    for row in FAMILIES.values():
        structure = structure_for(row.kind, asked_structures)
        if structure is None and structure_key is not None and structure_key.origin == "device":
            structure = DEFAULT_STRUCTURE[row.kind]
        allowed = (
            (asked_families is None or row.name in asked_families)
            and not (row.kind == "iir" and mask.phase == "linear")
            and structure is not None
        )
        if row.kind == "iir":
            found.append(_iir(filter, mask, selectivity, row, structure, allowed))
        else:
            found.append(_fir(filter, mask, row, structure, allowed, answers))
    return tuple(found)


def _iir(
    filter: Filter,
    mask: Mask,
    selectivity: Selectivity | None,
    row: FamilyRow,
    structure: str | None,
    allowed: bool,
) -> Candidate:
    if mask.phase == "linear":
        return Candidate(row.name, "iir", structure, allowed, why_not="its phase is not linear")
    if selectivity is None or row.theory is None:
        return Candidate(row.name, "iir", structure, allowed, why_not="this shape of mask is not judged yet")
    least = iir.least_order(row.theory, selectivity)
    if least is None:
        return Candidate(
            row.name, "iir", structure, allowed, why_not=f"its order is over {limits.MAX_IIR_ORDER}"
        )
    return Candidate(
        row.name,
        "iir",
        structure,
        allowed,
        filter.count("order") or least.order,
        least.order,
        least.unrounded,
        least.tie,
        None,
        Binding(least.binding_item, least.binding_side, least.spare_db),
    )


def _fir(
    filter: Filter, mask: Mask, row: FamilyRow, structure: str | None, allowed: bool, answers: Answers
) -> Candidate:
    bounded = filter.text("transitions") != "unbounded"
    if row.name == "equiripple":
        estimate = fir_length.equiripple_length(mask, bounded)
    else:
        window = fir_length.kaiser_window_length(mask)
        estimate = window.length if window is not None else None
    if estimate is None:
        return Candidate(
            row.name, "fir", structure, allowed, why_not="its length can't be told for this mask"
        )
    question = FirLength(mask, bounded) if row.name == "equiripple" else None
    if estimate.low > limits.MAX_EXACT_TAPS:
        question = None
    taps = Figure(estimate.taps, estimate.low, estimate.high, "estimated", "taps", question)
    return Candidate(row.name, "fir", structure, allowed, taps=settled(taps, answers))
