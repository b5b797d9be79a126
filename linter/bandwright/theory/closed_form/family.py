"""What every family of IIR filters offers: the same few functions in each module.

All speak of the low-pass prototype whose pass band ends at 1 and of its characteristic function F:
|H|^2 = 1 / (1 + g F^2) with F(1) = 1 and g = 10^(Ap/10) - 1. `e` is the prototype's stop edge E less 1;
the discrimination is F(E)^2, the ratio gs/gp that an order reaches between the two edges. Ratios are
handed over as natural logarithms, which hold at any order.
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
        """The number of poles, a pair counted as two."""
        return sum(1 if pole.imag == 0.0 else 2 for pole in self.poles)


class Family(Protocol):
    """The functions of a family's module."""

    STOP_EDGE_IS_FREE: bool
    """Ripple in the stop band: where it starts is a parameter, besides order and pass-band ripple."""
    PASS_EDGE_IS_FREE: bool
    """Ripple in the pass band: where it ends is a parameter, once the stop edge is given."""

    def real_order(self, e: float, discrimination: float) -> float:
        """The real-valued order at which the stop edge 1 + e reaches a discrimination; 0 for one below 1."""

    def edge(self, order: float, log_discrimination: float) -> float:
        """The e at which this order reaches a discrimination over 1, the inverse of `log_discrimination`."""

    def log_discrimination(self, order: float, e: float) -> float:
        """ln F^2 at the stop edge 1 + e."""

    def log_rise(self, order: float, e: float, low: float, high: float) -> float:
        """ln of the least F^2 between the frequencies 1 + low and 1 + high, high may be infinite."""

    def log_fall(self, order: float, e: float, x: float) -> float:
        """ln of F^2 at the stop edge over the greatest F^2 from 0 to the frequency 1 + x times lower."""

    def log_lull(self, order: float, e: float, x: float) -> float:
        """ln of the least F^2 between a frequency x <= 1 and the pass edge; -inf where F has a zero there."""

    def lobes(self, order: float, e: float, x: float) -> float:
        """How many lobes of ripple lie between the edge of its band and a frequency; 0 without ripple.

        In the stop band from 1 + e to 1 + x; in the pass band, seen from the stop edge, between the
        frequencies that lie 1 + e and 1 + x times lower.
        """

    def prototype(self, order: int, e: float, log_g: float) -> Prototype:
        """Poles and zeros of the prototype with the pass-band excess exp(log_g) and the stop edge 1 + e."""
