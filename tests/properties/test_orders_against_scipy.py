"""From the text of a band file to `forecast --as json`: orders and bits against designs of scipy.

Only low-pass and high-pass masks, for which scipy's order functions are exact. An order is judged by what a
design does: scipy's design of that order meets the mask, and that of one less can't.
"""

from __future__ import annotations

import json
import math
import random
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import signal

from properties.whole_path import times

RATE = 8000.0
SLACK_DB = 1e-5
"""For a design that just meets the mask, and for peaks between the frequencies that are looked at."""

CLOSE = 0.01
"""An order this little above a whole one misses the mask by less than the slack."""

FAMILIES: dict[str, Callable[..., Any]] = {
    "butterworth": signal.buttord,
    "chebyshev-1": signal.cheb1ord,
    "chebyshev-2": signal.cheb2ord,
    "elliptic": signal.ellipord,
}
BITS_APART = 2
"""Between the bits that a forecast states and those found by rounding the coefficients of scipy's design."""


class Case(NamedTuple):
    """A low-pass or high-pass mask: edges in Hz, levels in dB."""

    kind: str
    pass_edge: float
    stop_edge: float
    ripple: float
    attenuation: float

    @property
    def bands(self) -> str:
        to, start = ("to", "from") if self.kind == "low" else ("from", "to")
        passing = f"pass: {{{to}: {self.pass_edge!r} Hz, ripple: {self.ripple!r} dB}}"
        stopping = f"stop: {{{start}: {self.stop_edge!r} Hz, attenuation: {self.attenuation!r} dB}}"
        both = (passing, stopping) if self.kind == "low" else (stopping, passing)
        return "\n".join(f"      - {band}" for band in both)


def random_case(dice: random.Random) -> Case:
    """Edges within 5 % to 90 % of Nyquist, transitions of 3 % and more."""
    low = RATE / 2 * 10 ** dice.uniform(-1.3, -0.3)
    high = low + (0.95 * RATE / 2 - low) * dice.uniform(0.03, 0.6)
    kind = dice.choice(["low", "high"])
    pass_edge, stop_edge = (low, high) if kind == "low" else (high, low)
    levels = round(10 ** dice.uniform(-2, 0.3), 4), round(dice.uniform(20, 90), 2)
    return Case(kind, round(pass_edge, 3), round(stop_edge, 3), *levels)


def forecasts(cases: list[Case], folder: Path) -> Iterator[dict[str, dict[str, Any]]]:
    """What the command says of each case, by family."""
    heads = (f"  case-{number}:\n    sample_rate: 8 kHz\n    bands:\n" for number in range(len(cases)))
    blocks = [head + case.bands for head, case in zip(heads, cases, strict=True)]
    file = folder / "cases.bands.yaml"
    file.write_text("\n".join(["format: bandwright/1", "filters:", *blocks, ""]), encoding="utf-8")
    command = [Path(sys.executable).with_name("bandwright"), "forecast", file.name, "--as", "json"]
    done = subprocess.run([*command, "--certainty", "estimated"], cwd=folder, capture_output=True, check=True)
    for filter in json.loads(done.stdout)["filters"]:
        yield {one["family"]: one for one in filter["candidates"]}


def design(family: str, order: int, case: Case, stop_edge: float) -> NDArray[np.float64]:
    """Second-order sections with all of the ripple used; a Butterworth filter just reaches it."""
    kind = case.kind + "pass"
    match family:
        case "butterworth":
            # The half-power edge, by the prewarped frequency at which the ripple is reached.
            warped = math.tan(math.pi * case.pass_edge / RATE)
            power = (10 ** (case.ripple / 10) - 1) ** (-1 / (2 * order))
            half_power = warped * (power if case.kind == "low" else 1 / power)
            return signal.butter(order, math.atan(half_power) * RATE / math.pi, kind, fs=RATE, output="sos")
        case "chebyshev-1":
            return signal.cheby1(order, case.ripple, case.pass_edge, kind, fs=RATE, output="sos")
        case "chebyshev-2":
            return signal.cheby2(order, case.attenuation, stop_edge, kind, fs=RATE, output="sos")
        case _:
            return signal.ellip(
                order, case.ripple, case.attenuation, case.pass_edge, kind, fs=RATE, output="sos"
            )


def excess_db(sos: NDArray[np.float64], case: Case) -> float:
    """By how many dB a filter leaves the mask; negative where it keeps it."""
    bottom, top = (0.0, case.pass_edge) if case.kind == "low" else (case.pass_edge, RATE / 2)
    first, last = (case.stop_edge, RATE / 2) if case.kind == "low" else (0.0, case.stop_edge)
    passed = levels(sos, np.linspace(bottom, top, 2001))
    stopped = levels(sos, np.linspace(first, last, 2001))
    ripple = float(passed.max() - passed.min()) - case.ripple
    return max(ripple, float(stopped.max() - passed.max()) + case.attenuation)


def levels(sos: NDArray[np.float64], hertz: NDArray[np.float64]) -> NDArray[np.float64]:
    response = np.abs(signal.sosfreqz(sos, hertz, fs=RATE)[1])
    return 20 * np.log10(np.maximum(response, 1e-15))


def meets(family: str, order: int, case: Case) -> bool:
    """Whether scipy's design of this order meets the mask."""
    return order > 0 and excess_db(design(family, order, case, case.stop_edge), case) <= SLACK_DB


@pytest.fixture(scope="module")
def judged(tmp_path_factory: pytest.TempPathFactory) -> list[tuple[Case, dict[str, dict[str, Any]]]]:
    dice = random.Random(8)
    cases = [random_case(dice) for _ in times(40)]
    return list(zip(cases, forecasts(cases, tmp_path_factory.mktemp("scipy")), strict=True))


@pytest.mark.parametrize("family", FAMILIES)
def test_the_order_is_the_one_that_designs_need(
    family: str, judged: list[tuple[Case, dict[str, dict[str, Any]]]]
) -> None:
    for case, said in judged:
        order = said[family]["order"]
        assert meets(family, order, case), case
        unrounded = said[family]["order_unrounded"]
        assert not meets(family, order - 1, case) or unrounded - (order - 1) < CLOSE, case
        theirs, _ = FAMILIES[family](case.pass_edge, case.stop_edge, case.ripple, case.attenuation, fs=RATE)
        assert order == theirs or abs(unrounded - round(unrounded)) < 1e-9, case


def rounded(values: NDArray[np.float64], bits: int, exponent: int | None) -> NDArray[np.float64]:
    """Values in words of so many bits that share a power of two, or in mantissas of so many bits."""
    _, exponents = np.frexp(values)
    step = np.ldexp(1.0, (exponents if exponent is None else exponent + 1) - bits)
    return np.asarray(np.round(values / step) * step)


def least_bits(sos: NDArray[np.float64], case: Case, exponent: int | None) -> int:
    """The least word from which on all plain roundings of a1, a2 and b1 up to 53 bits keep the mask."""
    for bits in range(53, 2, -1):
        trial = sos.copy()
        gains = trial[:, :1].copy()
        trial[:, :3] /= gains
        trial[:, 1] = rounded(trial[:, 1], bits, exponent)
        trial[:, 4:] = rounded(trial[:, 4:], bits, exponent)
        trial[:, :3] *= gains
        stable = bool(np.all(np.abs(trial[:, 5]) < 1) and np.all(np.abs(trial[:, 4]) < 1 + trial[:, 5]))
        if not stable or excess_db(trial, case) > SLACK_DB:
            return bits + 1
    return 3


CASES = [
    Case("low", 400.0, 600.0, 0.5, 60.0),
    Case("low", 1000.0, 1500.0, 0.1, 40.0),
    Case("high", 900.0, 500.0, 1.0, 50.0),
]


@pytest.mark.parametrize("case", CASES)
def test_the_bits_of_a_cascade_are_about_those_of_direct_rounding(case: Case, tmp_path: Path) -> None:
    (said,) = forecasts([case], tmp_path)
    order = said["elliptic"]["order"]
    # The margin shared as the reference design shares it: half of it, in log, to either side.
    spare = spare_of(order, case)
    excess = 10 ** (case.ripple / 10) - 1
    inner = case._replace(ripple=10 * math.log10(1 + excess / math.sqrt(spare)))
    kind = case.kind + "pass"
    reached = reached_db(order, inner)
    sos = signal.ellip(order, inner.ripple, reached, inner.pass_edge, kind, fs=RATE, output="sos")
    assert excess_db(sos, case) < 0.0
    for key, exponent in (("word_bits", 1), ("mantissa_bits", None)):
        assert abs(least_bits(sos, case, exponent) - said["elliptic"][key]["cascade"]) <= BITS_APART, key


def reached_db(order: int, case: Case) -> float:
    """The attenuation at which an elliptic filter of this order just reaches the stop edge, by bisection."""
    low, high = 1.0, 300.0
    for _ in range(60):
        middle = (low + high) / 2
        if meets("elliptic", order, case._replace(attenuation=middle)):
            low = middle
        else:
            high = middle
    return low


def spare_of(order: int, case: Case) -> float:
    """How many times the ratio of the excesses of stop and pass band exceeds what is asked."""
    reached = reached_db(order, case)
    return (10 ** (reached / 10) - 1) / (10 ** (case.attenuation / 10) - 1)
