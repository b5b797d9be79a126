"""Published lengths, orders and windows of FIR filters. Orders are one less than lengths in taps."""

from __future__ import annotations

import math

import numpy as np
import pytest

from bandwright.theory.closed_form import fir_length
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.design.exchange import exchange
from bandwright.theory.design.fir_length import least_length
from bandwright.theory.design.fir_response import FirResponse


def low_pass(pass_edge: float, stop_edge: float, pass_ripple: float, stop_ripple: float) -> Mask:
    """Gain 1 +- pass_ripple to the pass edge, stop_ripple from the stop edge on (linear, rad/sample)."""

    def decibels(gain: float) -> float:
        return 20.0 * math.log10(gain)

    around_1 = MaskBand(
        "pass", 0.0, pass_edge, decibels(1.0 - pass_ripple), decibels(1.0 + pass_ripple), False
    )
    return Mask((around_1, MaskBand("stop", stop_edge, math.pi, None, decibels(stop_ripple), False)))


# Oppenheim & Schafer, "Discrete-Time Signal Processing", Parks-McClellan example (from memory): edges 0.4 pi
# and 0.6 pi, ripples 0.01 and 0.001. Kaiser's formula gives order 25.34, so 26, which fails with an error of
# 0.0116 in the pass band; order 27 meets.
EQUIRIPPLE = low_pass(0.4 * math.pi, 0.6 * math.pi, 0.01, 0.001)


def test_kaiser_formula_for_equiripple_order() -> None:
    (step,) = fir_length.steps(fir_length.amplitude_bands(EQUIRIPPLE) or ())
    assert fir_length.kaiser(step) - 1.0 == pytest.approx(25.3425, abs=1e-4)


def test_order_26_fails_with_0_0116() -> None:
    found = exchange(27, fir_length.amplitude_bands(EQUIRIPPLE) or ())
    assert 0.01 * found.level == pytest.approx(0.0116, abs=5e-5)


# Ratios of error to specification, computed with a linear program elsewhere, beside the same example.
@pytest.mark.parametrize(("order", "ratio"), [(25, 1.2045), (26, 1.1618), (27, 0.9173)])
def test_error_over_specification(order: int, ratio: float) -> None:
    found = exchange(order + 1, fir_length.amplitude_bands(EQUIRIPPLE) or ())
    assert found.level == pytest.approx(ratio, abs=2e-3)


def test_order_27_is_the_least() -> None:
    found = least_length(EQUIRIPPLE)
    assert (found.taps, found.low) == (28, 28)


def test_kaiser_window_of_order_37() -> None:
    """Oppenheim & Schafer, Kaiser window example (from memory): 0.4 pi, 0.6 pi, 0.001: order 37, beta 5.653.

    The book rounds Kaiser's 7.95 dB to 8, which makes 36.2191 of the order before rounding.
    """
    window = fir_length.kaiser_window_length(low_pass(0.4 * math.pi, 0.6 * math.pi, 0.001, 0.001))
    assert window is not None
    assert window.length.taps - 1 == 37
    assert window.beta == pytest.approx(5.65326, abs=1e-4)
    assert window.exact_order - 0.05 / (2.285 * 0.2 * math.pi) == pytest.approx(36.2191, abs=1e-3)


def test_kaiser_window_of_167_taps() -> None:
    """SciPy documentation of `kaiserord`: sample rate 1 kHz, cutoff 175 Hz, width 24 Hz, 65 dB: 167 taps."""
    ripple = 10.0 ** (-65.0 / 20.0)
    mask = low_pass(math.tau * 0.163, math.tau * 0.187, ripple, ripple)
    window = fir_length.kaiser_window_length(mask)
    assert window is not None
    assert window.length.taps == 167
    assert window.exact_order + 1.0 == pytest.approx(166.5687, abs=1e-3)
    assert window.beta == pytest.approx(6.20426, abs=1e-5)


# Kaiser 1974, from memory; the table there differs from the formula in the third digit at 50 and 100 dB.
@pytest.mark.parametrize(
    ("attenuation_db", "beta"),
    [
        (30.0, 2.1166249),
        (40.0, 3.3953211),
        (50.0, 4.5335141),
        (60.0, 5.65326),
        (70.0, 6.75526),
        (80.0, 7.85726),
        (90.0, 8.95926),
        (100.0, 10.06126),
    ],
)
def test_kaiser_beta(attenuation_db: float, beta: float) -> None:
    assert fir_length.kaiser_beta(attenuation_db) == pytest.approx(beta, abs=1e-4)


# Oppenheim & Schafer, table 7.2 (from memory): peak error, equivalent Kaiser beta, transition width in pi/M.
# Blackman's 7.04 differs from the 7.20 that its rounded 74 dB give.
@pytest.mark.parametrize(
    ("peak_error_db", "beta", "width"),
    [(25.0, 1.33, 2.37), (44.0, 3.86, 5.01), (53.0, 4.86, 6.27), (74.0, 7.04, 9.19)],
    ids=["Bartlett", "Hann", "Hamming", "Blackman"],
)
def test_equivalent_kaiser_windows(peak_error_db: float, beta: float, width: float) -> None:
    assert fir_length.kaiser_beta(peak_error_db) == pytest.approx(beta, abs=0.17)
    ripple = 10.0 ** (-peak_error_db / 20.0)
    window = fir_length.kaiser_window_length(low_pass(0.4 * math.pi, 0.5 * math.pi, ripple, ripple))
    assert window is not None
    assert window.exact_order * 0.1 == pytest.approx(width, abs=0.06)


def test_hamming_window_of_53_taps() -> None:
    """Ifeachor & Jervis, window example (from memory): 8 kHz, 1.5 kHz to 2 kHz, more than 50 dB.

    3.3 / df makes 52.8, so 53 taps, around a cutoff of 1750 Hz. The rule is rough: 50 dB are reached at
    2045 Hz (computed here). An equiripple filter of the same ripple needs fewer taps.
    """
    delays = np.arange(53) - 26.0
    cutoff = 1_750.0 / 4_000.0
    response = FirResponse(cutoff * np.sinc(cutoff * delays) * np.hamming(53))
    stop, passed = response.range(2_045.0 / 4_000.0 * math.pi, math.pi), response.range(0.0, 0.375 * math.pi)
    assert max(map(abs, stop)) < 10.0 ** (-50.0 / 20.0)
    ripple = max(passed[1] - 1.0, 1.0 - passed[0])
    found = least_length(low_pass(0.375 * math.pi, 0.5 * math.pi, ripple, 10.0 ** (-50.0 / 20.0)))
    assert found.taps is not None and found.taps < 53
