"""The families that a forecast lists, with what sets them apart from one another."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from bandwright.theory.closed_form import butterworth, chebyshev_1, chebyshev_2, elliptic
from bandwright.theory.closed_form.family import Family


@dataclass(frozen=True, slots=True)
class FamilyRow:
    """One family: `theory` is its module in the theory, None for FIR."""

    name: str
    kind: Literal["iir", "fir"]
    theory: Family | None
    monotone_pass: bool
    """Without ripple in the pass band."""


FAMILIES: dict[str, FamilyRow] = {
    row.name: row
    for row in (
        FamilyRow("butterworth", "iir", butterworth, monotone_pass=True),
        FamilyRow("chebyshev-1", "iir", chebyshev_1, monotone_pass=False),
        FamilyRow("chebyshev-2", "iir", chebyshev_2, monotone_pass=True),
        FamilyRow("elliptic", "iir", elliptic, monotone_pass=False),
        FamilyRow("equiripple", "fir", None, monotone_pass=False),
        FamilyRow("kaiser-window", "fir", None, monotone_pass=False),
    )
}
