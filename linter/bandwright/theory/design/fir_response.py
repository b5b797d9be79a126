"""The amplitude of a symmetric FIR filter with given coefficients."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_GRID_PER_TAP = 32


class FirResponse:
    """A(w) of H(e^jw) = A(w) exp(-jw(N-1)/2) on a dense grid, and at the extrema in between."""

    def __init__(self, impulse_response: Floats) -> None:
        """`impulse_response`: N coefficients, symmetric."""
        taps = len(impulse_response)
        odd = taps % 2
        self._delays = np.arange((taps + 1) // 2) + 0.5 * (1 - odd)
        self._weights = 2.0 * impulse_response[taps // 2 :]
        self._weights[:odd] *= 0.5
        size = 1 << (_GRID_PER_TAP * taps - 1).bit_length()
        grid = np.arange(size // 2 + 1) * (math.tau / size)
        turn = np.exp(-1j * self._delays[0] * grid)
        spectra = [np.fft.rfft(self._weights * self._delays**order, size) * turn for order in range(3)]
        value, slope, curve = spectra[0].real, spectra[1].imag, -spectra[2].real
        # A step of Newton's from the nearest grid point; the error of the place hardly counts at an extremum.
        near = np.flatnonzero(np.abs(slope) <= np.abs(curve) * (math.pi / size))
        extrema = grid[near] - slope[near] / np.where(curve[near], curve[near], 1.0)
        self._w = np.concatenate([grid, extrema])
        self._values = np.concatenate([value, self.amplitude(extrema)])

    def amplitude(self, w: Floats) -> Floats:
        """A at frequencies `w` (rad/sample, one dimension)."""
        amplitude: Floats = np.cos(np.outer(w, self._delays)) @ self._weights
        return amplitude

    def range(self, low: float, high: float) -> tuple[float, float]:
        """The least and the most A from `low` to `high` (rad/sample)."""
        values = self._values[(self._w >= low) & (self._w <= high)]
        values = np.append(values, self.amplitude(np.array([low, high])))
        return float(values.min()), float(values.max())
