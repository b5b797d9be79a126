"""What the theory takes and gives: masks in radians per sample, and designs as poles and zeros."""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass
from typing import Literal

BandKind = Literal["pass", "stop", "bounds"]


@dataclass(frozen=True, slots=True)
class MaskBand:
    """One band of a mask: between `low` and `high` (rad/sample) the gain keeps `least` to `most` (dB).

    None is no bound on that side. `relative`: for a pass band, the window `least`..`most` (with
    `most` = 0) may float as long as it contains 0 dB; for a stop band, `most` counts from the highest
    gain in the pass bands, or from 0 dB where there are none.
    """

    kind: BandKind
    low: float
    high: float
    least: float | None
    most: float | None
    relative: bool
    item: int = 0
    """Index of the band item that says so, counted from 0."""


@dataclass(frozen=True, slots=True)
class Mask:
    """The tolerance scheme of a filter: bands in order of frequency, and the phase that is asked for."""

    bands: tuple[MaskBand, ...]
    phase: Literal["any", "linear", "minimum"] = "any"


@dataclass(frozen=True, slots=True)
class Root:
    """A pole or zero of a digital filter: one real root, or a conjugate pair.

    `gap` is 1 - |z|^2. It is carried beside the angle because |z| alone loses it: near the circle
    1 - |z| from z keeps 6 to 10 digits fewer.
    """

    angle: float
    """rad/sample, 0..pi; 0 or pi for a real root."""
    gap: float
    """1 - |z|^2: positive inside the circle, 0 on it, negative outside."""
    pair: bool
    """True: z and its conjugate; False: one real root."""

    @property
    def z(self) -> complex:
        """The root of the upper half plane."""
        return cmath.rect(math.sqrt(1.0 - self.gap), self.angle)


@dataclass(frozen=True, slots=True)
class Design:
    """A digital filter as H(z) = exp(log_gain) prod(1 - z_i/z) / prod(1 - p_i/z), times `sign`."""

    poles: tuple[Root, ...]
    zeros: tuple[Root, ...]
    log_gain: float
    sign: int = 1

    @property
    def order(self) -> int:
        """The number of poles, a pair counted as two."""
        return sum(2 if root.pair else 1 for root in self.poles)
