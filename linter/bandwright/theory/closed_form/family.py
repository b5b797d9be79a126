"""What every family of IIR filters offers: the same few functions in each module.

All speak of the low-pass prototype whose pass band ends at 1 and of its characteristic function F:
|H|^2 = 1 / (1 + g F^2) with F(1) = 1 and g = 10^(Ap/10) - 1. `e` is the prototype's stop edge less 1.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol


@dataclass(frozen=True, slots=True)
class Prototype:
    """Poles with Im >= 0 (a complex one stands for its pair) and zeros at +-j times each of `zeros`."""

    poles: tuple[complex, ...]
    zeros: tuple[float, ...]

    @property
    def order(self) -> int:
        return sum(1 if pole.imag == 0.0 else 2 for pole in self.poles)


class Family(Protocol):
    """The functions of a family's module."""

    STOP_EDGE_IS_FREE: bool
    """Whether the prototype has a stop edge of its own to choose, besides order and ripple."""
    MONOTONE_PASS: bool
    """Without ripple in the pass band."""

    def real_order(self, e: float, discrimination: float) -> float:
        """The real-valued order at which the stop edge 1 + e reaches the discrimination gs/gp."""

    def discrimination(self, order: float, e: float) -> float:
        """F^2 at the stop edge 1 + e; every frequency beyond it gets at least as much."""

    def characteristic(self, order: int, e: float, x: float) -> float:
        """F^2 at the frequency 1 + x, for the prototype whose stop edge is 1 + e; x <= e."""

    def prototype(self, order: int, e: float, g: float) -> Prototype:
        """Poles and zeros of the prototype with the pass-band excess g and the stop edge 1 + e."""
