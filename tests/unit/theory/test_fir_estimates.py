"""FIR lengths from the mask alone: what the mask means in amplitudes, and that estimates hold the truth."""

from __future__ import annotations

import math
from itertools import islice, pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bandwright.theory.closed_form import fir_length
from bandwright.theory.closed_form.fir_length import AmplitudeBand
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.design.fir_length import least_length
from bandwright.theory.design.fir_response import FirResponse
from unit.theory.random_fir_masks import many_bands, pass_band, stop_band, two_bands


def decibels(ratio: float) -> float:
    return 20.0 * math.log10(ratio)


def test_floating_window_is_centred_on_gain_1_and_stop_counts_from_its_top() -> None:
    bands = fir_length.amplitude_bands(Mask((pass_band(0.0, 1.0, 6.0), stop_band(1.5, math.pi, 40.0))))
    assert bands is not None
    window, stop = bands
    assert window.least + window.most == pytest.approx(2.0)
    assert decibels(window.most / window.least) == pytest.approx(6.0)
    assert decibels(stop.most / window.most) == pytest.approx(-40.0)
    assert stop.least == -stop.most


def test_absolute_levels_count_from_gain_1() -> None:
    mask = Mask((pass_band(0.0, 1.0, 2.0, floats=False), stop_band(1.5, math.pi, 40.0, floats=False)))
    bands = fir_length.amplitude_bands(mask)
    assert bands is not None
    assert [decibels(bands[0].least), decibels(bands[0].most)] == pytest.approx([-1.0, 1.0])
    assert decibels(bands[1].most) == pytest.approx(-40.0)


def test_stop_counts_from_the_highest_of_several_tops() -> None:
    mask = Mask((pass_band(0.0, 0.5, 0.1), stop_band(1.0, 1.5, 40.0), pass_band(2.0, math.pi, 3.0)))
    bands = fir_length.amplitude_bands(mask)
    assert bands is not None
    assert decibels(bands[1].most / bands[2].most) == pytest.approx(-40.0)
    assert bands[2].most > bands[0].most


def test_bounds_are_intersected_with_what_they_overlap() -> None:
    whole = MaskBand("bounds", 0.0, math.pi, None, 0.1, False)
    mask = Mask((pass_band(0.0, 1.0, 2.0, floats=False), stop_band(1.5, math.pi, 40.0), whole))
    bands = fir_length.amplitude_bands(mask)
    assert bands is not None
    assert [(band.low, band.high) for band in bands] == [(0.0, 1.0), (1.0, 1.5), (1.5, math.pi)]
    assert decibels(bands[0].most) == pytest.approx(0.1)
    assert decibels(bands[0].least) == pytest.approx(-1.0)
    assert decibels(bands[1].most) == pytest.approx(0.1)
    assert decibels(bands[2].most) == pytest.approx(1.0 - 40.0)


def test_single_frequency_keeps_its_own_window() -> None:
    at = MaskBand("bounds", 0.4, 0.4, -0.01, 0.01, False)
    bands = fir_length.amplitude_bands(Mask((pass_band(0.0, 1.0, 2.0), stop_band(1.5, math.pi, 40.0), at)))
    assert bands is not None
    assert [(band.low, band.high) for band in bands] == [(0.0, 0.4), (0.4, 0.4), (0.4, 1.0), (1.5, math.pi)]
    assert decibels(bands[1].most) == pytest.approx(0.01)


def test_floating_window_makes_way_for_bounds() -> None:
    bound = MaskBand("bounds", 0.0, math.pi, None, 0.0, False)
    mask = Mask((pass_band(0.0, 1.0, 1.0), stop_band(1.5, math.pi, 40.0), bound))
    bands = fir_length.amplitude_bands(mask)
    assert bands is not None
    assert (bands[0].most, decibels(bands[0].least)) == pytest.approx((1.0, -1.0))


def test_windows_that_exclude_each_other_have_no_length() -> None:
    above = MaskBand("bounds", 0.0, 0.5, 3.0, None, False)
    mask = Mask((pass_band(0.0, 1.0, 1.0, floats=False), stop_band(1.5, math.pi, 40.0), above))
    assert fir_length.amplitude_bands(mask) is None
    assert fir_length.equiripple_length(mask) is None
    assert fir_length.kaiser_window_length(mask) is None


def test_step_without_a_transition_has_no_length() -> None:
    mask = Mask((pass_band(0.0, 1.0, 1.0), stop_band(1.0, math.pi, 40.0)))
    assert fir_length.equiripple_length(mask) is None


def test_one_constant_gain_takes_one_tap() -> None:
    mask = Mask((pass_band(0.0, 1.0, 1.0), pass_band(1.5, math.pi, 0.1)))
    estimate = fir_length.equiripple_length(mask)
    assert estimate is not None
    assert (estimate.low, estimate.taps, estimate.high, estimate.method) == (1, 1, 1, "constant")
    assert least_length(mask).taps == 1


def test_pass_band_at_nyquist_needs_an_odd_length() -> None:
    mask = Mask((stop_band(0.0, 1.0, 40.0), pass_band(1.3, math.pi, 1.0)))
    bands = fir_length.amplitude_bands(mask)
    assert bands is not None
    assert fir_length.only_odd(bands)
    estimate, window = fir_length.equiripple_length(mask), fir_length.kaiser_window_length(mask)
    assert estimate is not None and window is not None
    assert estimate.taps % 2 == window.length.taps % 2 == 1


def test_complement_needs_the_same_length() -> None:
    step = fir_length.Step(0.05, 0.1, 0.35, 0.001, 0.02)
    complement = fir_length.Step(0.05, 0.35, 0.1, 0.02, 0.001)
    assert fir_length.ichige(step) == fir_length.ichige(complement)


@pytest.mark.parametrize(
    "masks",
    [
        pytest.param(list(islice(two_bands(1001), 120)), id="two bands"),
        pytest.param(list(islice(many_bands(1002, 0.006, 0.05), 50)), id="many bands, narrow transitions"),
        pytest.param(list(islice(many_bands(1003, 0.01, 0.2), 60)), id="many bands, wide transitions"),
    ],
)
@pytest.mark.parametrize("bounded", [True, False])
def test_estimate_holds_the_exact_length(masks: list[Mask], bounded: bool) -> None:
    """The masks' seeds are none of those that the estimate was fitted to."""
    if not bounded:
        masks = masks[:20]
    for mask in masks:
        estimate = fir_length.equiripple_length(mask, bounded)
        found = least_length(mask, bounded)
        assert estimate is not None and found.taps is not None
        assert estimate.low <= found.low <= found.taps <= estimate.high, mask


def test_ichige_is_nearer_than_the_older_estimates() -> None:
    masks = list(islice(two_bands(1004), 100))
    truth = np.array([least_length(mask).taps for mask in masks])

    def share_within_2(estimates: list[float]) -> float:
        return float(np.mean(np.abs(np.ceil(estimates) - truth) <= 2))

    only = [fir_length.steps(fir_length.amplitude_bands(mask) or ())[0] for mask in masks]
    ichige = share_within_2([fir_length.ichige(step) for step in only])
    assert ichige > 0.75
    for older in (fir_length.kaiser, fir_length.herrmann_rabiner_chan, fir_length.bellanger):
        assert share_within_2([older(step) for step in only]) < ichige


def windowed(bands: tuple[AmplitudeBand, ...], taps: int, beta: float) -> FirResponse:
    """The response with cutoffs amid the transitions, by the sinc functions of the steps."""
    delays = np.arange(taps) - 0.5 * (taps - 1)
    ideal = bands[-1].desired * np.sinc(delays)
    for below, above in pairwise(bands):
        cutoff = 0.5 * (below.high + above.low) / math.pi
        ideal += (below.desired - above.desired) * cutoff * np.sinc(cutoff * delays)
    return FirResponse(ideal * np.kaiser(taps, beta))


@pytest.mark.parametrize(
    "masks",
    [
        pytest.param(list(islice(two_bands(1005), 25)), id="two bands"),
        pytest.param(list(islice(many_bands(1006, 0.01, 0.1), 25)), id="many bands"),
    ],
)
def test_kaiser_estimate_holds_the_length_of_the_window_design(masks: list[Mask]) -> None:
    for mask in masks:
        bands, window = fir_length.amplitude_bands(mask), fir_length.kaiser_window_length(mask)
        assert bands is not None and window is not None
        if window.length.taps > 300:
            continue

        def meets(taps: int, bands: tuple[AmplitudeBand, ...] = bands, beta: float = window.beta) -> bool:
            if taps % 2 == 0 and fir_length.only_odd(bands):
                return False
            for more in (0.0, 0.05, 0.15, 0.3):
                response = windowed(bands, taps, beta + more)
                ranges = [response.range(band.low, band.high) for band in bands]
                if all(b.least <= r[0] and r[1] <= b.most for b, r in zip(bands, ranges, strict=True)):
                    return True
            return False

        assert not any(map(meets, range(max(1, window.length.low - 2), window.length.low)))
        assert any(map(meets, range(window.length.taps, window.length.high + 1)))


edges = st.lists(st.floats(0.001, math.pi), min_size=4, max_size=8, unique=True).map(sorted)
levels = st.floats(-200.0, 40.0)


@given(edges=edges, least=levels, height=st.floats(1e-6, 60.0), most=levels, relative=st.booleans())
@settings(max_examples=300, deadline=None)
def test_any_mask_has_an_estimate_or_none(
    edges: list[float], least: float, height: float, most: float, relative: bool
) -> None:
    window = (-height, 0.0) if relative else (least, least + height)
    bands: list[MaskBand] = []
    for low, high in zip(edges[::2], edges[1::2], strict=False):
        if len(bands) % 2:
            bands.append(MaskBand("pass", low, high, *window, relative))
        else:
            bands.append(MaskBand("stop", low, high, None, most, relative))
    mask = Mask((*bands, MaskBand("bounds", edges[0], edges[-1], None, 30.0, False)))
    for estimate in (fir_length.equiripple_length(mask), fir_length.kaiser_window_length(mask)):
        if estimate is None:
            continue
        length = estimate.length if isinstance(estimate, fir_length.KaiserWindow) else estimate
        assert 1 <= length.low <= length.taps <= length.high
