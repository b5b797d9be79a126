"""Seeded random masks, and the reference designs of the classical families for them."""

from __future__ import annotations

import math
import random
from collections.abc import Iterator

from bandwright.theory.closed_form import butterworth, chebyshev_1, chebyshev_2, elliptic, iir
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import Design, Mask, MaskBand

FAMILIES: dict[str, Family] = {
    "butterworth": butterworth,
    "chebyshev-1": chebyshev_1,
    "chebyshev-2": chebyshev_2,
    "elliptic": elliptic,
}


def pass_band(low: float, high: float, ripple_db: float) -> MaskBand:
    """A pass band whose window floats."""
    return MaskBand("pass", low, high, -ripple_db, 0.0, True)


def stop_band(low: float, high: float, attenuation_db: float) -> MaskBand:
    """A stop band that counts from the pass bands."""
    return MaskBand("stop", low, high, None, -attenuation_db, True)


def low_pass(pass_edge: float, stop_edge: float, ripple_db: float, attenuation_db: float) -> Mask:
    """Edges in rad/sample."""
    return Mask((pass_band(0.0, pass_edge, ripple_db), stop_band(stop_edge, math.pi, attenuation_db)))


def random_masks(seed: int) -> Iterator[Mask]:
    """Low-pass, high-pass, band-pass and band-stop masks: 0.01 to 3 dB, 20 to 100 dB, wide to very narrow."""
    source = random.Random(seed)
    while True:
        ripple, attenuation = _between(source, 0.01, 3.0), source.uniform(20.0, 100.0)
        transition = _between(source, 0.05, 1.5)
        kind = source.choice(("low-pass", "low-pass", "high-pass", "band-pass", "band-stop"))
        if kind.endswith("-pass") and kind != "band-pass":
            near = math.pi * _between(source, 0.002, 0.8)
            far = near * (1.0 + transition)
            mirrored = kind == "high-pass" and source.random() < 0.5
            if far > 0.98 * math.pi:
                continue
            if kind == "low-pass":
                yield low_pass(near, far, ripple, attenuation)
                continue
            low, high = (math.pi - far, math.pi - near) if mirrored else (near, far)
            yield Mask((stop_band(0.0, low, attenuation), pass_band(high, math.pi, ripple)))
            continue
        centre, width = math.pi * source.uniform(0.03, 0.95), math.pi * _between(source, 0.005, 0.5)
        low, high = centre - width / 2.0, centre + width / 2.0
        outer_low = low - transition * width * source.uniform(0.5, 1.0)
        outer_high = high + transition * width * source.uniform(0.5, 1.0)
        if outer_low < 0.005 or outer_high > math.pi - 0.02:
            continue
        outer, inner = (stop_band, pass_band) if kind == "band-pass" else (pass_band, stop_band)
        outer_level, inner_level = (attenuation, ripple) if kind == "band-pass" else (ripple, attenuation)
        yield Mask(
            (
                outer(0.0, outer_low, outer_level),
                inner(low, high, inner_level),
                outer(outer_high, math.pi, outer_level),
            )
        )


def reference_designs(mask: Mask, most_order: int) -> Iterator[tuple[str, Design]]:
    """Family and design of each family that needs no higher order."""
    select = selectivity(mask)
    assert select is not None
    for name, family in FAMILIES.items():
        least = iir.least_order(family, select)
        if least is not None and least.order <= most_order:
            yield name, iir.reference_design(family, select, least.order)


def _between(source: random.Random, low: float, high: float) -> float:
    """Evenly in logarithm."""
    return math.exp(source.uniform(math.log(low), math.log(high)))
