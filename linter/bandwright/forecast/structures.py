"""The structures whose figures a forecast knows, with what each of them stores."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True, slots=True)
class StructureRow:
    """One structure: `stores` names the coefficients it keeps, and so which bits it needs."""

    name: str
    kind: Literal["iir", "fir"]
    stores: Literal["expanded", "sections", "taps"]
    states_per_order: int
    """Delay elements it keeps for each order."""


STRUCTURES: dict[str, StructureRow] = {
    row.name: row
    for row in (
        StructureRow("cascade", "iir", "sections", 1),
        StructureRow("direct-form-1", "iir", "expanded", 2),
        StructureRow("direct-form-2", "iir", "expanded", 1),
        StructureRow("direct-form-1-transposed", "iir", "expanded", 2),
        StructureRow("direct-form-2-transposed", "iir", "expanded", 1),
        StructureRow("symmetric", "fir", "taps", 1),
        StructureRow("transversal", "fir", "taps", 1),
    )
}

DEFAULT_STRUCTURE: dict[str, str] = {"iir": "cascade", "fir": "symmetric"}
"""What a candidate is built as where nothing is said."""


def structure_for(kind: Literal["iir", "fir"], asked: tuple[str, ...] | None) -> str | None:
    """The first of the structures asked for that suits a family of this kind; None where none does."""
    if asked is None:
        return DEFAULT_STRUCTURE[kind]
    return next((name for name in asked if name in STRUCTURES and STRUCTURES[name].kind == kind), None)
