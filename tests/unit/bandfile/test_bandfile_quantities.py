"""Quantities and number formats: read, converted, printed."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bandwright.bandfile import quantities
from bandwright.bandfile.quantities import FITS, UNITS, Arithmetic, Trouble, Word
from bandwright.bandfile.values import Filter, Quantity, Setting


@pytest.mark.parametrize(
    ("text", "dimension", "number", "unit"),
    [
        ("8 kHz", "frequency", 8, "kHz"),
        ("8kHz", "frequency", 8, "kHz"),
        ("50 mHz", "frequency", 50, "mHz"),
        ("0.2 pi", "frequency", 0.2, "pi"),
        ("0.2π", "frequency", 0.2, "pi"),
        ("0.1 fs", "frequency", 0.1, "fs"),
        (".2 nyquist", "frequency", 0.2, "nyquist"),
        ("1e3 Hz", "frequency", 1000, "Hz"),
        ("20\u00a0Hz", "frequency", 20, "Hz"),
        ("−0.2 dB", "gain", -0.2, "dB"),
        ("-0.2 dB", "gain", -0.2, "dB"),
        ("0.99 x", "gain", 0.99, "x"),
        ("0.99×", "gain", 0.99, "x"),
        ("99 %", "gain", 99, "%"),
        ("1", "gain", 1, "x"),
        ("0", "gain", 0, "x"),
        ("25 ms", "time", 25, "ms"),
        ("3 µs", "time", 3, "us"),
        ("3 μs", "time", 3, "us"),
        ("1 sample", "time", 1, "samples"),
        ("8 deg", "angle", 8, "deg"),
        ("20 ppm", "share", 20, "ppm"),
        ("-90 dBFS", "noise", -90, "dBFS"),
        ("110", "figure", 110, ""),
    ],
)
def test_reads(text: str, dimension: str, number: float, unit: str) -> None:
    assert quantities.parse(text, dimension) == Quantity(number, unit)


@pytest.mark.parametrize("text", ["±0.05 dB", "+-0.05 dB", "± 0.05 dB"])
def test_a_plus_minus_sign_halves(text: str) -> None:
    quantity = quantities.parse(text, "level", symmetric=True)
    assert quantity == Quantity(0.05, "dB", symmetric=True)
    assert quantities.peak_to_peak(quantity) == Quantity(0.1, "dB")
    assert isinstance(quantities.parse(text, "level"), Trouble), "only where levels count from peak to peak"


@pytest.mark.parametrize(
    ("text", "dimension", "id", "form"),
    [
        ("20", "frequency", "key/number-without-unit", ""),
        ("0.5", "gain", "key/number-without-unit", ""),
        ("0.1", "level", "key/number-without-unit", ""),
        ("20 dB", "frequency", "key/wrong-unit", "dimension"),
        ("0.2 pi", "rate", "key/wrong-unit", "dimension"),
        ("20 khz", "frequency", "key/wrong-unit", "spelling"),
        ("0.1 db", "level", "key/wrong-unit", "spelling"),
        ("20 furlong", "frequency", "key/wrong-unit", "unknown"),
        ("0,1 dB", "level", "key/decimal-comma", ""),
        ("1,8 kHz", "frequency", "key/decimal-comma", ""),
        ("1,800 Hz", "frequency", "key/decimal-comma", "thousands"),
        ("twenty", "frequency", "key/wrong-kind", "not-a-number"),
        ("20 - 30 Hz", "frequency", "key/wrong-kind", "not-a-number"),
        ("1_000 Hz", "frequency", "key/wrong-kind", "not-a-number"),
        ("1e999 Hz", "frequency", "key/wrong-kind", "not-a-number"),
        (".inf Hz", "frequency", "key/wrong-kind", "not-a-number"),
        ("٢٠ Hz", "frequency", "key/wrong-kind", "not-a-number"),
        ("9" * 100_000 + " Hz", "frequency", "key/wrong-kind", "not-a-number"),
    ],
)
def test_names_what_is_wrong(text: str, dimension: str, id: str, form: str) -> None:
    trouble = quantities.parse(text, dimension)
    assert isinstance(trouble, Trouble)
    assert (trouble.id, trouble.form) == (id, form)


@pytest.mark.parametrize(
    ("text", "dimension", "mended"),
    [
        ("20", "frequency", ["20 Hz", "20 kHz", "20 MHz"]),
        ("0.2", "frequency", ["0.2 pi", "0.2 nyquist", "0.2 fs", "0.2 Hz", "0.2 kHz"]),
        ("0.8", "frequency", ["0.8 pi", "0.8 nyquist", "0.8 Hz", "0.8 kHz"]),
        ("0.1", "level", ["0.1 dB"]),
        ("0.9", "gain", ["0.9 dB", "0.9 x", "0.9 %"]),
        ("20 mhz", "frequency", ["20 MHz", "20 mHz"]),
        ("0,1 dB", "level", ["0.1 dB"]),
        ("1,800 Hz", "frequency", ["1.800 Hz", "1800 Hz"]),
    ],
)
def test_offers_every_reading(text: str, dimension: str, mended: list[str]) -> None:
    trouble = quantities.parse(text, dimension)
    assert isinstance(trouble, Trouble)
    assert [mend for mend, _ in trouble.mends] == mended
    for mend, _ in trouble.mends:
        assert isinstance(quantities.parse(mend, dimension), Quantity)


@given(st.text(max_size=30), st.sampled_from(sorted(FITS)), st.booleans())
def test_any_text_gives_a_quantity_or_a_trouble(text: str, dimension: str, symmetric: bool) -> None:
    found = quantities.parse(text, dimension, symmetric)
    assert isinstance(found, Quantity | Trouble)
    assert isinstance(quantities.parse_count(text), int | Trouble)
    assert isinstance(quantities.parse_number(text), float | Trouble)
    assert isinstance(quantities.parse_date(text), str | Trouble)
    assert isinstance(quantities.parse_arithmetic(text), Arithmetic | Trouble)


def test_conversions_of_frequencies() -> None:
    # By definition: 20 Hz at 4 kHz is 2 pi 20/4000 = 0.01 pi rad/sample.
    assert quantities.radians(Quantity(20, "Hz"), 4000) == pytest.approx(0.01 * math.pi, rel=1e-15)
    assert quantities.radians(Quantity(0.2, "pi")) == pytest.approx(0.2 * math.pi, rel=1e-15)
    assert quantities.radians(Quantity(0.1, "fs")) == pytest.approx(0.2 * math.pi, rel=1e-15)
    assert quantities.radians(Quantity(0.2, "nyquist")) == pytest.approx(0.2 * math.pi, rel=1e-15)
    assert quantities.radians(Quantity(20, "Hz")) is None
    assert quantities.hertz(Quantity(4.1, "kHz")) == 4100.0  # not 4099.9..., as 4.1 * 1000 gives
    assert quantities.hertz(Quantity(0.01, "pi"), 4000) == pytest.approx(20)
    assert quantities.hertz(Quantity(0.25, "fs"), 4000) == 1000
    assert quantities.hertz(Quantity(0.01, "pi")) is None


def test_conversions_of_levels_times_and_shares() -> None:
    assert quantities.decibels(Quantity(0.5, "x")) == pytest.approx(-6.0206, abs=1e-4)  # 20 lg 0.5
    assert quantities.decibels(Quantity(0, "x")) == -math.inf
    assert quantities.linear(Quantity(99, "%")) == 0.99
    assert quantities.linear(Quantity(-20, "dB")) == pytest.approx(0.1)
    assert quantities.linear(Quantity(1e9, "dB")) == math.inf
    assert quantities.seconds(Quantity(25, "ms")) == 0.025
    assert quantities.seconds(Quantity(8, "samples"), 4000) == 0.002
    assert quantities.seconds(Quantity(8, "samples")) is None
    assert quantities.fraction(Quantity(5, "%")) == 0.05
    assert quantities.fraction(Quantity(20, "ppm")) == 20e-6


@given(st.floats(1e-6, 1e9), st.sampled_from(["Hz", "kHz", "mHz", "GHz", "pi", "fs", "nyquist"]))
def test_a_frequency_goes_to_a_unit_and_back(hertz: float, unit: str) -> None:
    number = quantities.in_unit(hertz, unit, 48000)
    assert number is not None
    assert quantities.hertz(Quantity(number, unit), 48000) == pytest.approx(hertz, rel=1e-12)


@pytest.mark.parametrize(
    ("value", "dimension", "unit", "shown"),
    [
        (20, "frequency", None, "20 Hz"),
        (1800, "frequency", None, "1.8 kHz"),
        (44100, "rate", None, "44.1 kHz"),
        (2.4e6, "rate", None, "2.4 MHz"),
        (0.05, "frequency", None, "0.05 Hz"),
        (0, "frequency", None, "0 Hz"),
        (0.0125, "frequency", "pi", "0.0125 pi"),
        (25.6, "frequency", "Hz", "25.6 Hz"),
        (1999.99999999, "frequency", None, "2 kHz"),
        (0.025, "time", None, "25 ms"),
        (0.24211113, "time", None, "242.1 ms"),
        (1.5, "time", None, "1.5 s"),
        (6.2e-6, "time", None, "6.2 us"),
        (0.1, "level", None, "0.1 dB"),
        (-70, "level", None, "-70 dB"),
        (0.05, "share", None, "5 %"),
        (2e-5, "share", None, "20 ppm"),
        (110, "figure", None, "110"),
        (4.656612873e-10, "gain", "x", "4.657e-10 x"),
        (1.0116, "gain", "x", "1.0116 x"),
        (123456.7, "angle", None, "123500 deg"),
    ],
)
def test_prints(value: float, dimension: str, unit: str | None, shown: str) -> None:
    assert quantities.show(value, dimension, unit) == shown


@pytest.mark.parametrize("text", ["±0.05 dB", "20 Hz", "0.0125 pi", "1.8 kHz", "110", "-0.2 dB"])
def test_prints_a_quantity_as_it_was_written(text: str) -> None:
    quantity = quantities.parse(text, "figure", symmetric=True)
    assert isinstance(quantity, Quantity)
    assert quantities.show_quantity(quantity) == text


@given(st.floats(1e-3, 1e8), st.sampled_from(sorted(set(FITS) - {"figure", "noise"})))
def test_what_is_printed_can_be_read(value: float, dimension: str) -> None:
    if FITS[dimension][0] == "dB":
        value /= 1e5  # no level is above 1000 dB
    shown = quantities.show(value, dimension)
    quantity = quantities.parse(shown, dimension)
    assert isinstance(quantity, Quantity)
    unit = UNITS[quantity.unit]
    assert quantity.number * 10.0**unit.exponent == pytest.approx(value, rel=1e-3)


@pytest.mark.parametrize(
    ("value", "direction", "start", "rounded"),
    [
        (25.57, "up", 25, 25.6),  # 26 would nearly double the change
        (25.9, "up", 25, 26),
        (19.931, "down", 20, 19.9),
        (0.40012, "up", 0.4, 0.401),  # a quarter per cent of the value at most
        (1612.3, "down", 1800, 1600),
        (0.1234, "up", 0.1, 0.124),
        (-0.2345, "down", -0.2, -0.24),
        (25.57, "up", None, 25.6),
        (25.51, "down", None, 25.5),
        (5, "up", 4, 5),
        (0, "up", -1, 0),
    ],
)
def test_rounds_outward(value: float, direction: str, start: float | None, rounded: float) -> None:
    assert quantities.round_outward(value, "up" if direction == "up" else "down", start) == rounded


@given(st.floats(-1e9, 1e9), st.floats(-1e9, 1e9))
def test_rounding_outward_never_falls_short_and_adds_little(value: float, start: float) -> None:
    direction = "up" if value >= start else "down"
    rounded = quantities.round_outward(value, "up" if value >= start else "down", start)
    assert rounded >= value if direction == "up" else rounded <= value
    assert abs(rounded - value) <= max(abs(value - start) / 4, abs(value) / 400)


@pytest.mark.parametrize(
    ("text", "word"),
    [
        # Significant bits from IEEE 754-2019, table 3.5; Q formats: one sign bit besides.
        ("float64", Word("float64", "floating", 53)),
        ("float32", Word("float32", "floating", 24)),
        ("float16", Word("float16", "floating", 11)),
        ("q15", Word("q15", "fixed", 16, 0, 15)),
        ("q31", Word("q31", "fixed", 32, 0, 31)),
        ("q1.14", Word("q1.14", "fixed", 16, 1, 14)),
        ("q0.15", Word("q0.15", "fixed", 16, 0, 15)),
    ],
)
def test_number_formats(text: str, word: Word) -> None:
    arithmetic = quantities.parse_arithmetic(text)
    assert isinstance(arithmetic, Arithmetic)
    assert arithmetic.coefficients == arithmetic.data == word
    assert arithmetic.coefficient_bits == word.bits
    assert arithmetic.coefficient_shift is None


@pytest.mark.parametrize(
    ("text", "id", "mended"),
    [
        ("Q15", "key/unknown-name", ["q15"]),
        ("float46", "key/unknown-name", ["float64"]),
        ("double", "key/unknown-name", []),
        ("q0", "key/wrong-kind", []),
        ("q999", "key/wrong-kind", []),
    ],
)
def test_no_number_formats(text: str, id: str, mended: list[str]) -> None:
    trouble = quantities.parse_arithmetic(text)
    assert isinstance(trouble, Trouble)
    assert trouble.id == id
    assert [mend for mend, _ in trouble.mends] == mended


def test_the_arithmetic_of_a_filter() -> None:
    named = Filter("f", ((("arithmetic",), Setting("q1.14", "q1.14")),))
    arithmetic = quantities.arithmetic_of(named)
    assert arithmetic is not None and arithmetic.integer_bits == 1 and arithmetic.fraction_bits == 14
    spelt = Filter(
        "f",
        (
            (("arithmetic", "coefficients"), Setting("q31", "q31")),
            (("arithmetic", "data"), Setting("q15", "q15")),
            (("arithmetic", "accumulator_bits"), Setting(64, "64")),
            (("arithmetic", "coefficient_shift"), Setting(1, "1")),
        ),
    )
    arithmetic = quantities.arithmetic_of(spelt)
    assert arithmetic is not None
    assert (arithmetic.data.bits, arithmetic.accumulator_bits, arithmetic.coefficient_shift) == (16, 64, 1)
    assert quantities.arithmetic_of(Filter("f", ())) is None


@pytest.mark.parametrize(
    ("text", "valid"),
    [
        ("2027-06-30", True),
        ("2028-02-29", True),
        ("2027-02-29", False),
        ("2027-13-01", False),
        ("30.6.2027", False),
    ],
)
def test_dates(text: str, valid: bool) -> None:
    assert isinstance(quantities.parse_date(text), str) is valid


@pytest.mark.parametrize(
    ("text", "form", "mended"),
    [
        ("8.0", "not-a-whole-number", ["8"]),
        ("8.5", "not-a-whole-number", []),
        ("0", "too-small", []),
        ("8 dB", "not-a-whole-number", []),
    ],
)
def test_counts(text: str, form: str, mended: list[str]) -> None:
    trouble = quantities.parse_count(text)
    assert isinstance(trouble, Trouble) and trouble.form == form
    assert [mend for mend, _ in trouble.mends] == mended


def test_numbers() -> None:
    assert quantities.parse_number("2^-30") == 2.0**-30
    assert quantities.parse_number("-1e-9") == -1e-9
    assert isinstance(quantities.parse_number("9^9999"), Trouble)
