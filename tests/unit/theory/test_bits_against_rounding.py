"""Predicted coefficient bits against those found by rounding, over seeded random masks."""

from __future__ import annotations

import itertools
import math
import random
from collections.abc import Iterator
from dataclasses import replace

import numpy as np
import pytest

from bandwright.limits import MAX_SEARCHED_WORD_BITS
from bandwright.theory.closed_form import bits
from bandwright.theory.closed_form.types import Design, Mask, MaskBand
from bandwright.theory.design.coefficient_bits import required_bits
from unit.theory.random_masks import random_masks, reference_designs

SEED = 101
"""The constants of the prediction were fitted on seeds 1 to 6, 70 masks each, and are tested on this one."""

MASKS = 40
MOST_ORDER = 14


@pytest.fixture(scope="module")
def cases() -> list[tuple[Mask, Design]]:
    masks = itertools.islice(random_masks(SEED), MASKS)
    return [(mask, design) for mask in masks for _, design in reference_designs(mask, MOST_ORDER)]


def compared(
    cases: list[tuple[Mask, Design]], structure: str, number_format: bits.NumberFormat
) -> Iterator[tuple[bits.Prediction, int]]:
    predict = bits.cascade_bits if structure == "cascade" else bits.direct_form_bits
    for mask, design in cases:
        predicted = predict(design, mask, number_format)
        found = required_bits(design, mask, structure, number_format)
        assert predicted is not None
        if found is None:
            assert predicted.high > MAX_SEARCHED_WORD_BITS
            continue
        yield predicted, found


@pytest.mark.parametrize("number_format", ["fixed", "floating"])
@pytest.mark.parametrize("structure", ["direct-form-2", "cascade"])
def test_the_bars(cases: list[tuple[Mask, Design]], structure: str, number_format: bits.NumberFormat) -> None:
    both = list(compared(cases, structure, number_format))
    assert len(both) > 60
    errors = np.array([predicted.value - found for predicted, found in both])
    assert np.median(np.abs(errors)) <= 0.5
    assert np.percentile(np.abs(errors), 95) <= 1.5
    assert errors.min() >= -2
    assert all(predicted.low <= found <= predicted.high for predicted, found in both)


@pytest.mark.parametrize("structure", ["direct-form-2", "cascade"])
def test_absolute_levels_and_bounds(cases: list[tuple[Mask, Design]], structure: str) -> None:
    source = random.Random(SEED)
    absolute = []
    for mask, design in cases[::3]:
        over = math.exp(source.uniform(math.log(0.005), math.log(0.5)))
        bands = tuple(
            replace(band, relative=False, most=over if band.kind == "pass" else band.most)
            for band in mask.bands
        )
        absolute.append((Mask(bands), design))
        absolute.append((Mask((*mask.bands, MaskBand("bounds", 0.0, math.pi, None, over, False))), design))
    both = list(compared(absolute, structure, "fixed"))
    assert len(both) > 20
    assert all(predicted.low <= found <= predicted.high for predicted, found in both)
