"""The least FIR length: the design meets the mask, one and two taps fewer cannot, by independent means."""

from __future__ import annotations

import math
from collections.abc import Iterator
from itertools import islice

import mpmath
import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import linprog

from bandwright.exact import fir_length as exact
from bandwright.forecast.questions import FirLength, FirLengthAnswer
from bandwright.theory.closed_form.fir_length import amplitude_bands, pass_tops
from bandwright.theory.closed_form.types import Mask, MaskBand
from bandwright.theory.design.exchange import exchange
from bandwright.theory.design.fir_length import LeastLength, least_length
from unit.theory.random_fir_masks import many_bands, pass_band, stop_band, two_bands

HERTZ = math.tau / 16_000.0
GEARBOX = Mask(
    (
        stop_band(0.0, 1_800.0 * HERTZ, 50.0),
        pass_band(2_000.0 * HERTZ, 4_000.0 * HERTZ, 0.1),
        stop_band(4_400.0 * HERTZ, math.pi, 60.0),
    ),
    "linear",
)


def gains(coefficients: NDArray[np.float64], low: float, high: float) -> tuple[float, float]:
    """The least and the most |H| from `low` to `high`, from a zoomed grid of 60 points a lobe."""
    count = 60 * len(coefficients) + 2
    w = np.linspace(low, high, count)
    magnitude = np.abs(np.polyval(coefficients, np.exp(-1j * w)))
    results = []
    for sign in (1.0, -1.0):
        best = int(np.argmin(sign * magnitude))
        near = np.linspace(w[max(best - 1, 0)], w[min(best + 1, count - 1)], 200)
        results.append(float(sign * np.min(sign * np.abs(np.polyval(coefficients, np.exp(-1j * near))))))
    return results[0], results[1]


def assert_meets(mask: Mask, coefficients: NDArray[np.float64], *, bounded: bool) -> None:
    """The mask in dB, as it is written, up to 1e-5 dB of rounding."""
    found = [(band, *gains(coefficients, band.low, band.high)) for band in mask.bands]
    highest = max((most for band, _, most in found if band.kind == "pass"), default=1.0)
    for band, least, most in found:
        if band.kind == "pass" and band.relative:
            assert band.least is not None
            assert 20.0 * math.log10(most / least) <= -band.least + 1e-5
            continue
        reference = highest if band.kind == "stop" and band.relative else 1.0
        assert band.most is None or 20.0 * math.log10(most / reference) <= band.most + 1e-5
        assert band.least is None or 20.0 * math.log10(least) >= band.least - 1e-5
    if bounded:
        tops = max(pass_tops(mask))
        floating = [-(band.least or 0.0) for band in mask.bands if band.kind == "pass" and band.relative]
        above = max([20.0 * math.log10(tops), *floating])
        assert 20.0 * math.log10(gains(coefficients, 0.0, math.pi)[1]) <= above + 1.0 + 1e-5


def assert_settled(mask: Mask, found: LeastLength, *, bounded: bool = True) -> None:
    assert found.taps is not None and found.design is not None
    assert found.low == found.taps == found.design.taps
    assert_meets(mask, found.design.impulse_response(), bounded=bounded)
    odd_only = mask.bands[-1].kind == "pass" and mask.bands[-1].high == math.pi
    for fewer in (2,) if odd_only else (1, 2):
        if found.taps > fewer:
            (refusal,) = [r for r in found.refusals if (found.taps - fewer - r.taps) % 2 == 0]
            assert refusal.level > 1.0
            assert refusal.taps >= found.taps - fewer


def is_feasible(mask: Mask, taps: int) -> bool:
    """By linear programs on a grid, over the coefficients and the tops, with bounded transitions.

    The grid asks less than the mask, so False is a proof, up to the solver's 1e-7.
    """
    passes = [band for band in mask.bands if band.kind == "pass"]
    edges = [0.0, *(edge for band in mask.bands for edge in (band.low, band.high)), math.pi]
    limited = [MaskBand("stop", *gap, None, 1.0, True) for gap in zip(edges[::2], edges[1::2], strict=True)]
    for highest in range(len(passes)):
        rows = []
        for band in (*mask.bands, *limited):
            w = np.linspace(band.low, band.high, max(8, int(20 * taps * (band.high - band.low) / math.pi)))
            basis = np.cos(np.outer(w, np.arange((taps + 1) // 2)))
            if taps % 2 == 0:
                basis *= np.cos(0.5 * w)[:, None]
            top = np.zeros((len(w), len(passes)))
            top[:, passes.index(band) if band.kind == "pass" else highest] = 1.0
            most = 10.0 ** ((band.most or 0.0) / 20.0) * top
            least = 10.0 ** ((band.least or 0.0) / 20.0) * top if band.kind == "pass" else -most
            rows += [np.hstack([basis, -most]), np.hstack([-basis, least])]
        lower = np.zeros((len(passes), rows[0].shape[1]))
        lower[:, -len(passes) :] = np.eye(len(passes))
        lower[:, highest - len(passes)] -= 1.0
        matrix = np.vstack([*rows, lower])
        free = [(None, None)] * (matrix.shape[1] - len(passes))
        ranges = [(1.0, 10.0 ** (-(band.least or 0.0) / 20.0)) for band in passes]
        solved = linprog(
            np.zeros(matrix.shape[1]), A_ub=matrix, b_ub=np.zeros(len(matrix)), bounds=[*free, *ranges]
        )
        if solved.status == 0:
            return True
    return False


def test_demo_mask() -> None:
    """196 was computed here and is checked below; no outside source."""
    found = least_length(GEARBOX)
    assert found.taps == 196
    assert_settled(GEARBOX, found)


@pytest.mark.parametrize(
    "masks",
    [
        pytest.param(islice(two_bands(3001), 60), id="two bands"),
        pytest.param(islice(many_bands(3002, 0.006, 0.05), 25), id="many bands, narrow transitions"),
        pytest.param(islice(many_bands(3003, 0.01, 0.2), 35), id="many bands, wide transitions"),
    ],
)
@pytest.mark.parametrize("bounded", [True, False])
def test_random_masks_are_settled(masks: Iterator[Mask], bounded: bool) -> None:
    for mask in masks if bounded else islice(masks, 15):
        assert_settled(mask, least_length(mask, bounded), bounded=bounded)


def test_refusals_hold_in_50_digits() -> None:
    """The moments of a refusal, recomputed with mpmath from the references alone, exclude every filter."""
    mpmath.mp.dps = 50
    for mask in islice(two_bands(3004), 6):
        bands = amplitude_bands(mask)
        assert bands is not None
        for refusal in least_length(mask).refusals:
            if refusal.taps > 120:
                continue
            x = [mpmath.cos(mpmath.mpf(float(w))) for w in refusal.references]
            total, weight = mpmath.mpf(0), mpmath.mpf(0)
            for i, w in enumerate(refusal.references):
                band = next(band for band in bands if band.low <= w <= band.high)
                zeros = mpmath.mpf(1) if refusal.taps % 2 else mpmath.cos(mpmath.mpf(float(w)) / 2)
                moment = 1 / (zeros * mpmath.fprod(x[i] - other for j, other in enumerate(x) if j != i))
                total += moment * mpmath.mpf(band.desired)
                weight += abs(moment) * mpmath.mpf(band.tolerance)
            assert abs(total) > weight


def test_floating_pass_bands_are_placed_best() -> None:
    """Band-stop masks, some of which need more taps with centred windows: against linear programs."""
    source = np.random.default_rng(3005)
    moved = 0
    for _ in range(40):
        edges = np.sort(source.uniform(0.1, math.pi - 0.1, 4)).tolist()
        if min(np.diff(edges)) < 0.3:
            continue
        ripple, attenuation = float(source.uniform(0.3, 1.8)), float(source.uniform(25.0, 50.0))
        mask = Mask(
            (
                pass_band(0.0, edges[0], ripple),
                stop_band(edges[1], edges[2], attenuation),
                pass_band(edges[3], math.pi, ripple),
            )
        )
        found = least_length(mask)
        assert found.taps is not None
        if found.low == found.taps:
            assert is_feasible(mask, found.taps)
            assert not is_feasible(mask, found.taps - 2)
        moved += found.bands != amplitude_bands(mask)
    assert moved > 2


def test_wider_masks_against_linear_programs() -> None:
    checked = 0
    for mask in islice(many_bands(3006, 0.03, 0.15), 25):
        found = least_length(mask, bounded_transitions=False)
        if (
            found.taps is None
            or found.taps > 60
            or not all(b.relative for b in mask.bands if b.kind == "pass")
        ):
            continue
        checked += 1
        for fewer in (1, 2):
            assert not is_feasible(mask, found.taps - fewer)
    assert checked > 3


def test_a_length_may_do_where_one_more_does_not() -> None:
    """Feasibility is not monotone across parities: some N meets its mask while N + 1 cannot."""
    for mask in islice(two_bands(3007), 100):
        if mask.bands[0].kind == "pass":
            found = least_length(mask)
            assert found.taps is not None
            if found.taps < 100 and exchange(found.taps + 1, found.bands).level > 1.0:
                assert is_feasible(mask, found.taps) and not is_feasible(mask, found.taps + 1)
                return
    pytest.fail("no such mask among 100")


def test_bounded_transitions_cost_taps() -> None:
    """A wide transition: without a limit the best filter rises high above its pass band in it."""
    mask = Mask((stop_band(0.0, 0.2, 60.0), pass_band(0.5, 0.6, 0.5), stop_band(2.0, math.pi, 60.0)))
    bounded, free = least_length(mask), least_length(mask, bounded_transitions=False)
    assert_settled(mask, bounded)
    assert free.taps is not None and bounded.taps is not None and free.design is not None
    assert free.taps < bounded.taps
    assert gains(free.design.impulse_response(), 0.6, 2.0)[1] > 2.0


def test_absolute_stop_lets_the_pass_band_rise() -> None:
    """An absolute stop level is met most easily with the pass band's window at its highest."""
    mask = Mask((pass_band(0.0, 1.0, 1.5), stop_band(1.6, math.pi, 30.0, floats=False)))
    assert_settled(mask, least_length(mask))


def test_bounds_hold_besides() -> None:
    plain = Mask((pass_band(0.0, 1.0, 1.0), stop_band(1.4, math.pi, 40.0)))
    bound = MaskBand("bounds", 0.0, 0.8, -0.02, 0.02, False)
    tighter = Mask((*plain.bands, bound))
    found, more = least_length(plain), least_length(tighter)
    assert found.taps is not None and more.taps is not None and more.design is not None
    assert more.taps > found.taps
    least, most = gains(more.design.impulse_response(), 0.0, 0.8)
    assert 20.0 * math.log10(least) >= -0.02 - 1e-5
    assert 20.0 * math.log10(most) <= 0.02 + 1e-5


def test_one_tap_where_nothing_is_stopped() -> None:
    found = least_length(Mask((pass_band(0.0, 2.0, 0.1),)))
    assert (found.taps, found.low) == (1, 1)


def test_contradiction_has_no_length() -> None:
    mask = Mask((pass_band(0.0, 1.0, 1.0), stop_band(1.0, math.pi, 40.0)))
    assert (least_length(mask, most_taps=50).taps, least_length(mask, most_taps=50).low) == (None, 51)


@pytest.mark.parametrize("most_taps", [40, 41])
def test_search_ends_at_the_limit(most_taps: int) -> None:
    mask = Mask((pass_band(0.0, 1.0, 0.1), stop_band(1.1, math.pi, 60.0)))
    found = least_length(mask, most_taps=most_taps)
    assert (found.taps, found.low, found.design) == (None, most_taps + 1, None)
    assert {refusal.taps for refusal in found.refusals} == {most_taps - 1, most_taps}


@pytest.mark.parametrize("most_taps", [40, 41])
def test_search_for_an_odd_length_ends_at_the_limit(most_taps: int) -> None:
    mask = Mask((stop_band(0.0, 1.0, 60.0), pass_band(1.1, math.pi, 0.1)))
    found = least_length(mask, most_taps=most_taps)
    assert found.taps is None
    assert found.low > most_taps
    assert [refusal.taps for refusal in found.refusals] == [most_taps - 1 + most_taps % 2]


def test_limit_is_included() -> None:
    mask = Mask((pass_band(0.0, 1.0, 0.1), stop_band(1.4, math.pi, 60.0)))
    taps = least_length(mask).taps
    assert taps is not None
    assert least_length(mask, most_taps=taps).taps == taps
    assert least_length(mask, most_taps=taps - 1).taps is None


def test_few_probes() -> None:
    """The bar is 5 on average."""
    masks = [*islice(two_bands(3008), 30), *islice(many_bands(3009, 0.006, 0.05), 30)]
    assert np.mean([least_length(mask).probes for mask in masks]) < 5.0


def test_answer() -> None:
    answer = exact.answer(FirLength(GEARBOX))
    assert isinstance(answer, FirLengthAnswer)
    assert (answer.taps, answer.low) == (196, 196)
    assert exact.answer(FirLength(GEARBOX)) == answer


def test_answer_names_no_length_that_might_not_be_the_least() -> None:
    """Pass bands of very unequal ripple: 33 taps do, and it stays open whether 31 could (computed here)."""
    mask = Mask(
        (
            pass_band(0.0, 0.1351, 0.02588),
            stop_band(0.8305, 2.3363, 72.563),
            pass_band(3.0723, math.pi, 1.2303),
        )
    )
    found = least_length(mask)
    assert found.taps is not None and found.low < found.taps
    assert exact.answer(FirLength(mask)).taps is None
    assert exact.answer(FirLength(mask)).low == found.low
