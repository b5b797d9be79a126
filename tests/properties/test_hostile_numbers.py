"""Numbers at the ends of what a double or the grammar takes: nothing raises, nothing hangs."""

from __future__ import annotations

import math
import random
import sys
from types import FrameType

import pytest

from properties.whole_path import examine, times

MOST_CALLS = 4_000_000
"""Calls of Python functions that one file may take; the worst of `COSTLY` takes 1.7 million."""

BEYOND = {
    "edge": ["1e-300 Hz", "1e300 Hz", "4e-320 Hz", "1e308 GHz", "1e-12 pi", "-1e300 Hz", "1e16 Hz"],
    "ripple": ["1e-12 dB", "1e-300 dB", "3000 dB", "1e300 dB", "±1e-10 dB"],
    "attenuation": ["3000 dB", "1e-12 dB", "1e300 dB", "7000 dB", "-3000 dB"],
    "min": ["-1e-12 dB", "-3000 dB", "1e-300 x", "1e300 x"],
    "max": ["1e300 x", "3000 dB", "1e-300 %", "1e-12 dB"],
    "rate": ["1e-12 Hz", "1e300 Hz", "1e308 GHz", "0 Hz", "-4 kHz"],
}
"""Written numbers that no filter has to do with."""

AT_THE_END = {
    "edge": [
        *("1e-9 Hz", "1e15 Hz", "0 Hz", "1e-5 Hz", "0.000003 Hz", "1 Hz", "20 Hz", "1 kHz", "1000.000003 Hz"),
        *("1001 Hz", "1999.999997 Hz", "1999.9999999999998 Hz", "2 kHz", "2000.0000000000002 Hz"),
        *("1e-9 pi", "0.5 pi", "1 pi", "0.5 fs"),
    ],
    "ripple": ["1e-9 dB", "1e-6 dB", "0.1 dB", "60 dB", "100 dB", "1000 dB", "0 dB"],
    "attenuation": ["1e-9 dB", "0.01 dB", "3 dB", "60 dB", "300 dB", "400 dB", "1000 dB"],
    "min": ["-1e-9 dB", "-1000 dB", "0", "0.5 x", "1e-50 x", "-1 dB"],
    "max": ["1", "1e50 x", "0 dB", "1000 dB", "1e-9 dB", "1e-6 dB", "-1000 dB", "1e-50 x"],
    "rate": ["4 kHz", "4 kHz", "4 kHz", "4.1 kHz", "1e15 Hz", "1e-9 Hz", "10 MHz"],
}
"""Written numbers that are just taken, and ordinary ones among them."""

CLOSE = [1000.0, 20.0, 1999.0]
"""Edges in Hz that others are put next to."""

MAXIMA = ["order: 511", "order: 1", "taps: 1000000000", "taps: 1", "multiplications: 1", "memory: 10"]
MAXIMA += ["multiplications: 1000000000000", "delay: 1e-15 s", "delay: 1e9 s", "delay: 3 samples"]
FAMILIES = ["butterworth", "chebyshev-1", "chebyshev-2", "elliptic", "equiripple", "kaiser-window"]
STRUCTURES = ["cascade", "direct-form-2", "direct-form-1", "symmetric", "transversal"]
WORDS = ["q15", "float32", "q31", "float16", "q1", "q0.127", "float64"]
ORDERS = [1, 2, 30, 511, 512, 513, 10**9]
SHAPES = ["pass", "pass stop", "stop pass", "stop pass stop", "pass stop pass"]
SHAPES += ["pass stop stop", "stop stop pass"]


def close_edges(dice: random.Random) -> list[str]:
    """Edges an ulp, or three thousand-millionths of Nyquist, apart."""
    first = dice.choice(CLOSE)
    second = dice.choice([math.nextafter(first, math.inf), first + 3e-6])
    third = dice.choice([math.nextafter(second, math.inf), first + 6e-6])
    return [f"{hertz!r} Hz" for hertz in (first, second, third, first + dice.choice([1.0, 1e-4, 9e-6]))]


def hertz(edge: str) -> float:
    number, unit = edge.split()
    return float(number) * {"Hz": 1.0, "kHz": 1e3, "GHz": 1e9, "pi": 2000.0, "fs": 4000.0}[unit]


def band_file(dice: random.Random, numbers: dict[str, list[str]]) -> str:
    """One filter of some shape, with odd numbers everywhere."""
    keys = [f"sample_rate: {dice.choice(numbers['rate'])}"]
    for share, key in (
        (0.5, f"family: {dice.choice(FAMILIES)}"),
        (0.5, f"structure: {dice.choice(STRUCTURES)}"),
        (0.3, f"order: {dice.choice(ORDERS)}"),
        (0.2, "phase: linear"),
        (0.4, f"arithmetic: {dice.choice(WORDS)}"),
        (0.4, f"at_most: {{{', '.join(dice.sample(MAXIMA, 2))}}}"),
    ):
        if dice.random() < share:
            keys.append(key)
    kinds = dice.choice(SHAPES).split()
    edges = [dice.choice(numbers["edge"]) for _ in range(2 * len(kinds))]
    if dice.random() < 0.8:
        edges.sort(key=hertz)
    if dice.random() < 0.3:
        edges[1:5] = close_edges(dice)[: len(edges) - 1]
    bands = []
    for number, kind in enumerate(kinds):
        start = f"from: {edges[2 * number]}, " if number else ""
        end = f"to: {edges[2 * number + 1]}, " if number < len(kinds) - 1 else ""
        level = "ripple" if kind == "pass" else "attenuation"
        said = f"{level}: {dice.choice(numbers[level])}"
        if dice.random() < 0.25:
            least = f"min: {dice.choice(numbers['min'])}, " if kind == "pass" else ""
            said = f"gain: {{{least}max: {dice.choice(numbers['max'])}}}"
        bands.append(f"  - {kind}: {{{start}{end}{said}}}")
    rows = [*keys, "bands:", *bands]
    return "\n".join(["format: bandwright/1", "filters:", "  odd:", *(f"    {row}" for row in rows), ""])


class Calls:
    """Counts the calls of functions, and stops the work where there are too many: no clock is asked."""

    def __init__(self) -> None:
        self.count = 0

    def __call__(self, frame: FrameType, event: str, argument: object) -> None:
        if event == "call":
            self.count += 1
            if self.count > MOST_CALLS:
                raise RecursionError(f"more than {MOST_CALLS} calls")


def counted(text: str) -> int:
    """How many calls it takes to examine a text."""
    calls = Calls()
    before = sys.getprofile()
    sys.setprofile(calls)
    try:
        examine(text)
    except Exception as error:
        error.add_note(text)
        raise
    finally:
        sys.setprofile(before)
    return calls.count


@pytest.mark.parametrize("numbers", [BEYOND, AT_THE_END], ids=["beyond", "at the end"])
def test_odd_numbers_are_answered(numbers: dict[str, list[str]]) -> None:
    for seed in times(100):
        text = band_file(random.Random(seed), numbers)
        try:
            examine(text)
        except Exception as error:
            error.add_note(text)
            raise


COSTLY = [
    # many lobes of an elliptic filter of a high order over a stop band that ends at once
    "    bands:\n      - pass: {to: 20 Hz, ripple: 0.1 dB}\n"
    "      - stop: {from: 20.000003 Hz, to: 20.000006 Hz, attenuation: 300 dB}\n"
    "      - stop: {from: 20.0001 Hz, attenuation: 400 dB}\n",
    # the highest order that is designed, in every family and structure
    "    order: 511\n    bands:\n      - stop: {to: 1 kHz, attenuation: 90 dB}\n"
    "      - pass: {from: 1000.5 Hz, ripple: 1 dB}\n",
    # ripples so deep that the gain is looked at in thousands of places
    "    bands:\n      - pass: {to: 1 kHz, ripple: 100 dB}\n"
    "      - stop: {from: 1000.000003 Hz, attenuation: 400 dB}\n",
]


@pytest.mark.parametrize("bands", COSTLY, ids=["lobes", "order 511", "deep ripples"])
def test_the_costliest_masks_take_bounded_work(bands: str) -> None:
    counted(f"format: bandwright/1\nfilters:\n  odd:\n    sample_rate: 4 kHz\n{bands}")


PASS, STOP = "pass: {to: 1 Hz, ripple: 0.1 dB}", "stop: {from: 2 Hz, attenuation: 60 dB}"


@pytest.mark.parametrize(
    ("passing", "stopping", "id"),
    [
        ("pass: {to: 1e-300 Hz, ripple: 0.1 dB}", STOP, "key/wrong-kind"),
        ("pass: {to: 1e300 Hz, ripple: 1 dB}", STOP, "key/wrong-kind"),
        ("pass: {to: 1 Hz, ripple: 1e-12 dB}", STOP, "key/wrong-kind"),
        (PASS, "stop: {from: 2 Hz, attenuation: 3000 dB}", "key/wrong-kind"),
        (PASS, "stop: {from: 1.0000000000000002 Hz, attenuation: 60 dB}", "edge/too-close"),
        (PASS, "stop: {from: 1999.9999999999998 Hz, attenuation: 60 dB}", "edge/too-close"),
        ("pass: {to: 1e-9 Hz, ripple: 0.1 dB}", STOP, "edge/too-close"),
        (PASS, "stop: {from: 2 kHz, attenuation: 60 dB}", "edge/from-above-to"),
        ("pass: {to: 1 Hz, ripple: 80 dB}", STOP, "level/stop-above-pass"),
        ("pass: {to: 1 Hz, gain: {min: 60 dB, max: 60.0000000000001 dB}}", STOP, "level/no-room"),
    ],
)
def test_what_is_odd_is_said(passing: str, stopping: str, id: str) -> None:
    bands = f"      - {passing}\n      - {stopping}\n"
    text = f"format: bandwright/1\nfilters:\n  odd:\n    sample_rate: 4 kHz\n    bands:\n{bands}"
    assert id in [finding.id for finding in examine(text, settled=True)]


def test_a_high_order_that_is_pinned_costs_no_more_than_a_high_least_order() -> None:
    keys = "sample_rate: 4 kHz\n    order: 1000000000"
    bands = f"      - {PASS}\n      - {STOP}\n"
    text = f"format: bandwright/1\nfilters:\n  odd:\n    {keys}\n    bands:\n{bands}"
    assert counted(text) < MOST_CALLS / 10
