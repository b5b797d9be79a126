"""The exchange: optimal, certified, and never silently short of it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import islice

import flint
import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import signal

from bandwright.theory.closed_form.fir_length import AmplitudeBand, ichige, only_odd, steps
from bandwright.theory.design.exchange import CONVERGED, Exchange, exchange
from bandwright.theory.design.fir_response import FirResponse
from unit.theory.random_fir_masks import amplitude_masks

LOW_PASS = (AmplitudeBand(0.0, 0.4 * math.pi, 0.99, 1.01), AmplitudeBand(0.6 * math.pi, math.pi, -1e-3, 1e-3))


def largest_error(response: FirResponse, bands: Sequence[AmplitudeBand]) -> float:
    """max|E| of coefficients, by their own response."""
    ranges = [(band, bound) for band in bands for bound in response.range(band.low, band.high)]
    return max(abs(bound - band.desired) / band.tolerance for band, bound in ranges)


def level_in_balls(found: Exchange, bands: Sequence[AmplitudeBand]) -> flint.arb:
    """The level of these references, enclosed: |sum l D| / sum |l| T with l = 1 / (Q prod(x_i - x_j)).

    For every polynomial P of the degree, sum of P(x_i) / prod(x_i - x_j) is 0 (divided differences), so for
    A = Q P the sum of l A is 0 as well, and some |A - D| must be at least level times T.
    """
    references = [flint.arb(float(w)) for w in found.references]
    x = [w.cos() for w in references]
    desired, tolerance = flint.arb(0), flint.arb(0)
    for i, w in enumerate(references):
        band = next(b for b in bands if b.low <= found.references[i] <= b.high)
        product = flint.arb(1) if found.taps % 2 else (w / 2).cos()
        for j, other in enumerate(x):
            if i != j:
                product *= x[i] - other
        desired += flint.arb(band.desired) / product
        tolerance += flint.arb(band.tolerance) / abs(product)
    return abs(desired) / tolerance


@pytest.fixture(autouse=True)
def precision() -> None:
    flint.ctx.prec = 400


@pytest.mark.parametrize("taps", [1, 2, 3, 8, 27, 28, 61, 120])
def test_level_is_proved_in_balls(taps: int) -> None:
    found = exchange(taps, LOW_PASS)
    proved = level_in_balls(found, LOW_PASS)
    assert found.level == pytest.approx(float(proved.mid()), rel=1e-9)
    assert float(proved.rad()) < 1e-50


def test_levels_of_random_masks_are_proved_in_balls() -> None:
    for bands in islice(amplitude_masks(2001), 12):
        taps = min(120, int(0.8 * max(map(ichige, steps(bands))))) | 1
        found = exchange(taps, bands)
        assert found.level == pytest.approx(float(level_in_balls(found, bands).mid()), rel=1e-6)


@pytest.mark.parametrize("taps", [1, 2, 3, 4, 28, 29, 75, 100])
def test_coefficients_are_symmetric_and_have_the_peak(taps: int) -> None:
    found = exchange(taps, LOW_PASS)
    coefficients = found.impulse_response()
    assert len(coefficients) == taps
    assert np.array_equal(coefficients, coefficients[::-1])
    # The way to coefficients may add 1e-7 to E.
    assert largest_error(FirResponse(coefficients), LOW_PASS) == pytest.approx(found.peak, rel=2e-5, abs=1e-7)


def test_amplitude_is_that_of_the_coefficients() -> None:
    found = exchange(28, LOW_PASS)
    w = np.linspace(0.0, math.pi, 100)
    delays = np.arange(28) - 13.5
    direct = np.cos(np.outer(w, delays)) @ found.impulse_response()
    assert np.allclose(found.amplitude(w), direct, atol=1e-12)


def test_moments_annihilate_every_filter_of_the_length() -> None:
    found = exchange(30, LOW_PASS)
    any_filter = np.random.default_rng(0).standard_normal(30)
    amplitudes = FirResponse(any_filter + any_filter[::-1]).amplitude(found.references)
    assert abs(found.moments @ amplitudes) < 1e-9 * (np.abs(found.moments) @ np.abs(amplitudes))
    assert found.moments @ np.where(found.references < 0.5 * math.pi, 1.0, 0.0) > 0.0


def test_random_masks_converge() -> None:
    """500 masks to 140 dB, at half the length to a little more than they need, up to 400 taps.

    Where the filter is far better than asked, rounding to 16 digits ends the exchange; it says so.
    """
    short = 0
    for index, bands in enumerate(islice(amplitude_masks(2002), 500)):
        share = 0.5 + 0.5 * (index % 11) / 10.0
        taps = max(3, min(400, int(share * max(map(ichige, steps(bands))))))
        found = exchange(taps | 1 if only_odd(bands) else taps, bands)
        assert found.level <= found.peak
        if not found.converged:
            assert found.level < 0.01 and found.peak < 1.01 * found.level
            short += 1
        else:
            assert found.peak - found.level <= CONVERGED * found.peak
    assert short < 10


@pytest.mark.parametrize("taps", [1000, 2001])
@pytest.mark.parametrize("attenuation_db", [60.0, 140.0])
def test_long_filters_converge(taps: int, attenuation_db: float) -> None:
    most = 10.0 ** (-attenuation_db / 20.0)
    stop = 0.9 + math.tau * (attenuation_db / 20.0) / taps
    bands = (
        AmplitudeBand(0.0, 0.3, -most, most),
        AmplitudeBand(0.3 + stop - 0.9, 0.9, 0.999, 1.001),
        AmplitudeBand(stop, math.pi, -most, most),
    )
    found = exchange(taps, bands)
    assert found.converged
    assert largest_error(FirResponse(found.impulse_response()), bands) == pytest.approx(found.level, rel=1e-4)


@pytest.mark.parametrize("taps", [31, 32, 75, 150])
def test_no_worse_than_scipy_and_as_good_on_a_fine_grid(taps: int) -> None:
    bands = (
        AmplitudeBand(0.0, 0.2 * math.pi, -0.01, 0.01),
        AmplitudeBand(0.3 * math.pi, 0.5 * math.pi, 0.98, 1.02),
        AmplitudeBand(0.62 * math.pi, math.pi, -0.003, 0.003),
    )
    edges = [edge / math.pi for band in bands for edge in (band.low, band.high)]
    weights = [1.0 / band.tolerance for band in bands]
    coefficients = signal.remez(taps, edges, [0.0, 1.0, 0.0], weight=weights, fs=2.0, grid_density=200)
    other = largest_error(FirResponse(np.asarray(coefficients)), bands)
    found = exchange(taps, bands)
    assert found.level <= other * (1.0 + 1e-9)
    assert found.level == pytest.approx(other, rel=2e-3)


def test_a_filter_beyond_rounding_is_not_called_converged() -> None:
    """300 taps where 28 do: the least errors lie below what doubles resolve."""
    found = exchange(300, LOW_PASS)
    assert not found.converged
    assert found.level < 1e-10


def test_warm_start_ends_at_the_same_level() -> None:
    cold = exchange(60, LOW_PASS)
    for start in (exchange(62, LOW_PASS).references, exchange(31, LOW_PASS).references, cold.references):
        assert exchange(60, LOW_PASS, start).level == pytest.approx(cold.level, rel=2e-5)


def test_hopeless_start_is_given_up() -> None:
    start: NDArray[np.float64] = np.linspace(0.0, 1e-3, 20)
    assert exchange(60, LOW_PASS, start).level == pytest.approx(exchange(60, LOW_PASS).level, rel=2e-5)


@pytest.mark.parametrize("taps", [20, 26, 27, 28, 29, 40])
def test_deciding_takes_no_more_steps_and_says_the_same(taps: int) -> None:
    full, quick = exchange(taps, LOW_PASS), exchange(taps, LOW_PASS, decide=math.inf)
    assert quick.steps <= full.steps
    assert (quick.level > 1.0) == (full.level > 1.0)
    assert (quick.peak <= 1.0) == (full.peak <= 1.0)


def test_touching_bands_are_held_on_both_sides() -> None:
    bands = (
        AmplitudeBand(0.0, 0.4 * math.pi, 0.95, 1.05),
        AmplitudeBand(0.6 * math.pi, 0.8 * math.pi, -1e-2, 1e-2),
        AmplitudeBand(0.8 * math.pi, math.pi, -1e-3, 1e-3),
    )
    found = exchange(31, bands)
    assert found.converged
    assert largest_error(FirResponse(found.impulse_response()), bands) == pytest.approx(found.level, rel=1e-4)


def test_many_touching_bands_are_held() -> None:
    """A stop level that rises in 40 steps, beside a pass band."""
    edges = np.linspace(0.5 * math.pi, math.pi, 41).tolist()
    levels = np.geomspace(1e-4, 1e-2, 40).tolist()
    stops = [AmplitudeBand(*edges[i : i + 2], -level, level) for i, level in enumerate(levels)]
    bands = (AmplitudeBand(0.0, 0.45 * math.pi, 0.99, 1.01), *stops)
    found = exchange(101, bands)
    assert found.converged
    assert largest_error(FirResponse(found.impulse_response()), bands) == pytest.approx(found.level, rel=1e-3)


def test_single_frequency_is_held() -> None:
    bands = (
        AmplitudeBand(0.0, 0.0, 0.99999, 1.00001),
        AmplitudeBand(0.1, 0.4 * math.pi, 0.95, 1.05),
        AmplitudeBand(0.6 * math.pi, math.pi, -1e-2, 1e-2),
    )
    found = exchange(20, bands)
    assert found.converged
    assert abs(found.impulse_response().sum() - 1.0) <= found.peak * 1.001e-5


def test_even_length_cannot_pass_nyquist() -> None:
    bands = (AmplitudeBand(0.0, 1.0, -0.1, 0.1), AmplitudeBand(2.0, math.pi, 0.9, 1.1))
    assert exchange(9, bands).level < exchange(7, bands).level
    with pytest.raises(ValueError, match="half the sample rate"):
        exchange(8, bands)


def test_bands_without_width_are_refused() -> None:
    with pytest.raises(ValueError, match="width"):
        exchange(9, [AmplitudeBand(1.0, 1.0, 0.9, 1.1)])
