"""Seeded random masks for FIR filters."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from bandwright.theory.closed_form.fir_length import AmplitudeBand
from bandwright.theory.closed_form.types import Mask, MaskBand


def pass_band(low: float, high: float, ripple_db: float, *, floats: bool = True) -> MaskBand:
    """A pass band of this height, floating or around 0 dB."""
    if floats:
        return MaskBand("pass", low, high, -ripple_db, 0.0, True)
    return MaskBand("pass", low, high, -0.5 * ripple_db, 0.5 * ripple_db, False)


def stop_band(low: float, high: float, attenuation_db: float, *, floats: bool = True) -> MaskBand:
    """A stop band that counts from the pass bands, or from 0 dB."""
    return MaskBand("stop", low, high, None, -attenuation_db, floats)


def two_bands(seed: int) -> Iterator[Mask]:
    """Low-pass and high-pass: 0.01 to 3 dB, 20 to 110 dB, transitions of 0.006 to 0.15 cycles/sample."""
    source = np.random.default_rng(seed)
    while True:
        width, edge = math.tau * _log_uniform(source, 0.006, 0.15), math.pi * source.uniform(0.01, 0.97)
        if edge + width > 0.99 * math.pi:
            continue
        ripple, attenuation = _log_uniform(source, 0.01, 3.0), float(source.uniform(20.0, 110.0))
        floats = bool(source.random() < 0.7)
        if source.random() < 0.5:
            first = pass_band(0.0, edge, ripple, floats=floats)
            second = stop_band(edge + width, math.pi, attenuation, floats=floats)
        else:
            first = stop_band(0.0, edge, attenuation, floats=floats)
            second = pass_band(edge + width, math.pi, ripple, floats=floats)
        yield Mask((first, second))


def many_bands(seed: int, narrowest: float, widest: float) -> Iterator[Mask]:
    """3 to 5 bands, one ripple, similar stops; transitions from `narrowest` to `widest` cycles/sample."""
    source = np.random.default_rng(seed)
    while True:
        count = int(source.integers(3, 6))
        gaps = math.tau * np.exp(source.uniform(math.log(narrowest), math.log(widest), count - 1))
        room = math.pi - gaps.sum()
        widths = room * source.dirichlet(np.full(count, 2.0))
        if room < 0.2 * math.pi or widths.min() < 0.015 * math.pi:
            continue
        ripple, attenuation = _log_uniform(source, 0.01, 2.0), float(source.uniform(25.0, 80.0))
        floats, phase = bool(source.random() < 0.8), int(source.integers(2))
        low = 0.0
        bands = []
        for index, width in enumerate(widths):
            high = math.pi if index == count - 1 else low + float(width)
            if index % 2 == phase:
                bands.append(pass_band(low, high, ripple, floats=floats))
            else:
                deeper = attenuation + float(source.uniform(0.0, 20.0))
                bands.append(stop_band(low, high, deeper, floats=floats))
            low = high + (float(gaps[index]) if index < count - 1 else 0.0)
        yield Mask(tuple(bands))


def amplitude_masks(seed: int) -> Iterator[tuple[AmplitudeBand, ...]]:
    """2 to 6 bands anywhere, pass ripples of 0.0001 to 0.05, stop bands down to 140 dB."""
    source = np.random.default_rng(seed)
    while True:
        count = 2 if source.random() < 0.4 else int(source.integers(3, 7))
        edges = np.concatenate([[0.0], np.sort(source.uniform(0.0, math.pi, 2 * count - 2)), [math.pi]])
        edges = edges.reshape(-1, 2)
        if (
            min(edges[1:, 0] - edges[:-1, 1]) < 0.01 * math.pi
            or min(edges[:, 1] - edges[:, 0]) < 0.004 * math.pi
        ):
            continue
        phase = int(source.integers(2))
        bands = []
        for index, (low, high) in enumerate(edges.tolist()):
            if index % 2 == phase:
                ripple = _log_uniform(source, 1e-4, 0.05)
                bands.append(AmplitudeBand(low, high, 1.0 - ripple, 1.0 + ripple))
            else:
                most = 10.0 ** (-source.uniform(20.0, 140.0) / 20.0)
                bands.append(AmplitudeBand(low, high, -most, most))
        yield tuple(bands)


def _log_uniform(source: np.random.Generator, low: float, high: float) -> float:
    return math.exp(source.uniform(math.log(low), math.log(high)))
