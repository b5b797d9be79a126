"""`bandwright forecast`: tables for people, every figure for programs."""

from __future__ import annotations

import json
import subprocess
from collections.abc import Callable
from pathlib import Path

import jsonschema
import pytest

Run = Callable[..., subprocess.CompletedProcess[bytes]]
SCHEMAS = Path(__file__).resolve().parents[2] / "schemas"

HOIST = """\
format: bandwright/1
devices:
  hoist-node:
    sample_rate: 4 kHz
    arithmetic: q31
    structure: [cascade, symmetric]
    at_most: {order: 16, multiplications: 60, delay: 25 ms}
filters:
  strain-slow:
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
  gearbox-envelope:
    device: hoist-node
    sample_rate: 16 kHz
    bands:
      - stop: {to: 1.8 kHz, attenuation: 50 dB}
      - pass: {from: 2 kHz, to: 4 kHz, ripple: ±0.05 dB}
      - stop: {from: 4.4 kHz, attenuation: 60 dB}
    phase: linear
"""

CANDIDATE = [
    *(
        "family",
        "structure",
        "order",
        "taps",
        "order_unrounded",
        "certainty",
        "within_maxima",
        "why_not",
        "binding",
    ),
    *("multiplications_per_input", "memory_bytes", "delay_worst_s", "delay_dc_s", "settling_s", "overshoot"),
    *("noise_dbfs", "headroom_bits", "mantissa_bits", "word_bits", "bits_certainty", "coefficient_ratio"),
]


@pytest.fixture(autouse=True)
def hoist(tmp_path: Path) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST, encoding="utf-8")


def test_the_tables_fit_a_terminal_and_name_every_family(bandwright: Run) -> None:
    done = bandwright("forecast", "hoist.bands.yaml")
    assert (done.returncode, done.stderr) == (0, b"")
    text = done.stdout.decode()
    assert max(map(len, text.splitlines())) <= 80
    names = [line for line in text.splitlines() if line in ("strain-slow", "gearbox-envelope")]
    assert names == ["strain-slow", "gearbox-envelope"]
    for family in ("butterworth", "chebyshev-1", "chebyshev-2", "elliptic", "equiripple", "kaiser-window"):
        assert family in text


def test_one_filter_is_shown_where_one_is_named(bandwright: Run) -> None:
    text = bandwright("forecast", "hoist.bands.yaml", "strain-slow").stdout.decode()
    assert "strain-slow" in text
    assert "gearbox-envelope" not in text


def test_the_json_has_its_keys_and_meets_its_schema(bandwright: Run) -> None:
    done = bandwright("forecast", "hoist.bands.yaml", "--as", "json", "--certainty", "estimated")
    assert (done.returncode, done.stderr) == (0, b"")
    output = json.loads(done.stdout)
    jsonschema.validate(output, json.loads((SCHEMAS / "forecast.schema.json").read_text(encoding="utf-8")))
    assert list(output) == ["version", "filters"]
    slow, envelope = output["filters"]
    assert list(slow) == ["name", "file", "line", "max_order", "candidates"]
    assert (slow["name"], slow["file"], slow["line"], slow["max_order"]) == (
        "strain-slow",
        "hoist.bands.yaml",
        9,
        16,
    )
    for candidate in (*slow["candidates"], *envelope["candidates"]):
        assert list(candidate) == CANDIDATE


def test_the_orders_are_those_of_the_reference_design(bandwright: Run) -> None:
    """Orders from the closed forms (Butterworth 1930, Cauer 1931): recalled, recomputed with scipy.signal."""
    output = json.loads(bandwright("forecast", "hoist.bands.yaml", "strain-slow", "--as", "json").stdout)
    orders = {one["family"]: one["order"] for one in output["filters"][0]["candidates"]}
    assert orders["butterworth"] == 45
    assert orders["chebyshev-1"] == 16
    assert orders["chebyshev-2"] == 16
    assert orders["elliptic"] == 9


def test_the_order_of_an_fir_filter_is_its_taps_less_one_and_computed_by_default(bandwright: Run) -> None:
    output = json.loads(bandwright("forecast", "hoist.bands.yaml", "gearbox-envelope", "--as", "json").stdout)
    [equiripple] = [one for one in output["filters"][0]["candidates"] if one["family"] == "equiripple"]
    assert equiripple["order"] == equiripple["taps"] - 1
    assert equiripple["certainty"] == "computed"
    quick = bandwright(
        "forecast", "hoist.bands.yaml", "gearbox-envelope", "--as", "json", "--certainty", "estimated"
    )
    [estimate] = [
        one for one in json.loads(quick.stdout)["filters"][0]["candidates"] if one["family"] == "equiripple"
    ]
    assert estimate["certainty"] == "estimated"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (
            ("hoist.bands.yaml", "strain-slov"),
            "there is no filter `strain-slov`; did you mean `strain-slow`?",
        ),
        (("hoist.bands.yaml", "--certainty", "proved"), "proofs are not available in this version"),
        (("gone.bands.yaml",), "gone.bands.yaml: can't be read: No such file or directory"),
        ((), "the following arguments are required: FILE"),
    ],
)
def test_what_can_not_be_shown_is_told_in_words(
    bandwright: Run, arguments: tuple[str, ...], words: str
) -> None:
    done = bandwright("forecast", *arguments)
    assert (done.returncode, done.stdout) == (2, b"")
    assert words in done.stderr.decode()


def test_a_filter_that_can_not_be_read_does_not_hide_the_others(bandwright: Run, tmp_path: Path) -> None:
    broken = HOIST.replace("to: 20 Hz", "to: soon")
    (tmp_path / "hoist.bands.yaml").write_text(broken, encoding="utf-8")
    done = bandwright("forecast", "hoist.bands.yaml", "--certainty", "estimated")
    assert done.returncode == 0
    assert "no forecast while its bands can't be read" in done.stdout.decode()
    assert "equiripple" in done.stdout.decode()
