"""Numbers with units: read from text, converted, and printed as a person would write them."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Final, Literal, NamedTuple

from bandwright.bandfile.grammar import FLOATING_FORMATS, nearest
from bandwright.bandfile.values import Filter, Quantity


class Unit(NamedTuple):
    """What a unit measures: `number` times ten to `exponent` of the base unit of its dimension.

    Base units: Hz, dB, dBFS, x (a ratio of amplitudes), s, degrees, and plain shares of one. For a
    frequency that is normalised, `per_nyquist` is how many of it make half the sample rate.
    """

    dimension: str
    exponent: int
    doc: str
    per_nyquist: float | None = None


UNITS: Final = {
    "mHz": Unit("frequency", -3, "millihertz"),
    "Hz": Unit("frequency", 0, "hertz"),
    "kHz": Unit("frequency", 3, "kilohertz"),
    "MHz": Unit("frequency", 6, "megahertz"),
    "GHz": Unit("frequency", 9, "gigahertz"),
    "pi": Unit("frequency", 0, "times pi radians per sample", 1.0),
    "fs": Unit("frequency", 0, "cycles per sample", 0.5),
    "nyquist": Unit("frequency", 0, "of half the sample rate", 1.0),
    "dB": Unit("level", 0, "decibels"),
    "dBFS": Unit("noise", 0, "decibels below a full-scale sine"),
    "x": Unit("gain", 0, "as a factor"),
    "%": Unit("share", -2, "per cent"),
    "ppm": Unit("share", -6, "parts per million"),
    "s": Unit("time", 0, "seconds"),
    "ms": Unit("time", -3, "milliseconds"),
    "us": Unit("time", -6, "microseconds"),
    "samples": Unit("time", 0, "sample periods"),
    "deg": Unit("angle", 0, "degrees"),
}
_ALIASES: Final = {
    "π": "pi",
    "×": "x",
    "\N{MICRO SIGN}s": "us",
    "\N{GREEK SMALL LETTER MU}s": "us",
    "sample": "samples",
}

FITS: Final = {
    "frequency": ("Hz", "kHz", "MHz", "GHz", "mHz", "pi", "fs", "nyquist"),
    "rate": ("Hz", "kHz", "MHz", "GHz", "mHz"),
    "level": ("dB",),
    "gain": ("dB", "x", "%"),
    "peak": ("x", "%", "dBFS"),
    "noise": ("dBFS",),
    "time": ("ms", "s", "us", "samples"),
    "angle": ("deg",),
    "share": ("%", "ppm"),
    "figure": tuple(UNITS),
}
"""By what a key asks for, the units that it takes, the likeliest first."""

_REACH: Final = {
    "frequency": (1e-9, 1e15),
    "level": (1e-9, 1e3),
    "noise": (1e-9, 1e3),
    "gain": (1e-50, 1e50),
    "share": (1e-50, 1e50),
    "time": (1e-15, 1e9),
}
"""By what a unit measures, how small and how large a number of it can be, in the base unit; zero is apart.

No filter that can be built comes near, and all arithmetic on what lies between stays in range.
"""

_BARE: Final = ("gain", "peak")
"""Dimensions under which 0 and 1 may stand without a unit, because they can mean one thing only."""

_BLANKS: Final = {ord(blank): " " for blank in "\u00a0\u2009\u202f\u2007\t\n\r"}
_SIGN = r"(±|\+-|[-+]?)"
_NUMBER = r"((?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?)"
_QUANTITY: Final = re.compile(rf"{_SIGN} *{_NUMBER} *([^\s0-9.,;:+-]*)")
_COMMA: Final = re.compile(rf"{_SIGN} *([0-9]+),([0-9]+) *([^\s0-9.,;:+-]*)")
_POWER: Final = re.compile(r"([-+]?)([0-9]{1,9})\^([-+]?[0-9]{1,4})")
_LONGEST: Final = 64
"""No number that a person writes is longer; the rest would only cost time."""


class Trouble(NamedTuple):
    """Why a text is not what its key asks for: the fault's id, form and facts, and the likely readings."""

    id: str
    form: str = ""
    facts: tuple[tuple[str, str], ...] = ()
    mends: tuple[tuple[str, str], ...] = ()
    """(corrected text, what it then means), the likeliest first."""


# ---------------------------------------------------------------------------------------------- reading


def parse(text: str, dimension: str, symmetric: bool = False) -> Quantity | Trouble:
    """The quantity that `text` writes, for a key that asks for `dimension` (one of `FITS`).

    `symmetric` allows a plus-minus sign, for keys that count from peak to peak.
    """
    plain = text.translate(_BLANKS).replace("\N{MINUS SIGN}", "-").strip()
    match = _QUANTITY.fullmatch(plain) if len(plain) <= _LONGEST else None
    if match is None:
        return _comma(plain, dimension) or Trouble("key/wrong-kind", "not-a-number")
    sign, digits, unit = match.groups()
    plus_minus = sign in ("±", "+-")
    number = float(digits)
    if not math.isfinite(number) or (plus_minus and not symmetric):
        return Trouble("key/wrong-kind", "not-a-number")
    if sign == "-":
        number = -number
    fits = FITS[dimension]
    if not unit:
        if dimension in _BARE and number in (0.0, 1.0):
            return Quantity(number, "x")
        if dimension == "figure":
            return Quantity(number, "")
        mends = tuple((f"{plain} {name}", UNITS[name].doc) for name in _readings(number, dimension))
        return Trouble("key/number-without-unit", "", (("dimension", dimension),), mends)
    name = _ALIASES.get(unit, unit)
    if name in fits:
        return _out_of_range(number, name) or Quantity(number, name, plus_minus)
    return _wrong_unit(plain[: match.end(2)], unit, name, dimension)


def _out_of_range(number: float, unit: str) -> Trouble | None:
    """What is wrong with a number that no filter has to do with; None where it is a likely one."""
    dimension, exponent = UNITS[unit].dimension, UNITS[unit].exponent
    least, most = _REACH.get(dimension, (0.0, math.inf))
    if number == 0.0 or least <= abs(_scaled(number, exponent)) <= most:
        return None
    facts = tuple(
        (name, show(_scaled(end, -exponent), dimension, unit))
        for name, end in (("least", least), ("most", most))
    )
    return Trouble("key/wrong-kind", "out-of-range", facts)


def _readings(number: float, dimension: str) -> tuple[str, ...]:
    """The units that a bare number may have been meant in, the likeliest first."""
    fits = FITS[dimension]
    if dimension == "frequency":
        normalised = ("pi", "nyquist", "fs") if 0 < abs(number) <= 0.5 else ("pi", "nyquist")
        return (*normalised, "Hz", "kHz") if 0 < abs(number) <= 1 else ("Hz", "kHz", "MHz")
    return tuple(name for name in fits if name not in ("mHz", "GHz"))


def _wrong_unit(number: str, unit: str, name: str, dimension: str) -> Trouble:
    fits = FITS[dimension]
    facts = (("unit", unit), ("dimension", dimension))
    if name in UNITS:
        found = (("found", UNITS[name].dimension), ("units", ", ".join(fits)))
        return Trouble("key/wrong-unit", "dimension", facts + found)
    spelt = [known for known in fits if known.casefold() == name.casefold()]
    if not spelt and len(name) > 1 and (near := nearest(name, (known for known in fits if len(known) > 2))):
        spelt = [near]
    if spelt:
        mends = tuple((f"{number} {known}", UNITS[known].doc) for known in spelt)
        return Trouble("key/wrong-unit", "spelling", (facts[0], ("nearest", spelt[0]), facts[1]), mends)
    return Trouble("key/wrong-unit", "unknown", (*facts, ("units", ", ".join(fits))))


def _comma(plain: str, dimension: str) -> Trouble | None:
    match = _COMMA.fullmatch(plain) if len(plain) <= _LONGEST else None
    if match is None:
        return None
    sign, whole, part, unit = match.groups()
    tail = f" {unit}" if unit else ""
    point, none = f"{sign}{whole}.{part}{tail}", f"{sign}{whole}{part}{tail}"
    if len(part) == 3 and len(whole) <= 3 and not whole.startswith("0"):
        mends = ((point, "a decimal comma"), (none, "a comma between thousands"))
        return Trouble("key/decimal-comma", "thousands", (("meant", point), ("or", none)), mends)
    return Trouble("key/decimal-comma", "", (("meant", point),), ((point, ""),))


def parse_number(text: str) -> float | Trouble:
    """A number without a unit: `0.5`, `1e-9`, or a power such as `2^-30`."""
    plain = text.replace("\N{MINUS SIGN}", "-").strip()
    if len(plain) <= _LONGEST:
        if match := _POWER.fullmatch(plain):
            sign, base, exponent = match.groups()
            try:
                return math.copysign(math.pow(float(base), float(exponent)), -1.0 if sign == "-" else 1.0)
            except (OverflowError, ValueError):
                return Trouble("key/wrong-kind", "not-a-number")
        if re.fullmatch(rf"[-+]?{_NUMBER}", plain) and math.isfinite(number := float(plain)):
            return number
    return _comma(plain, "figure") or Trouble("key/wrong-kind", "not-a-number")


def parse_count(text: str, least: int = 1) -> int | Trouble:
    """A whole number of at least `least`."""
    plain = text.strip()
    if re.fullmatch(r"[-+]?[0-9]{1,15}", plain):
        count = int(plain)
        return count if count >= least else Trouble("key/wrong-kind", "too-small", (("least", str(least)),))
    number = parse_number(plain)
    if isinstance(number, Trouble):
        return number if number.id == "key/decimal-comma" else Trouble("key/wrong-kind", "not-a-whole-number")
    whole = int(number) if number.is_integer() and least <= number < 1e15 else None
    mends = () if whole is None else ((str(whole), ""),)
    return Trouble("key/wrong-kind", "not-a-whole-number", (), mends)


def parse_date(text: str) -> str | Trouble:
    """A day of the calendar as `YYYY-MM-DD`."""
    match = re.fullmatch(r"([0-9]{4})-([0-9]{2})-([0-9]{2})", text)
    if match:
        year, month, day = (int(part) for part in match.groups())
        leap = year % 4 == 0 and (year % 100 != 0 or year % 400 == 0)
        days = (31, 29 if leap else 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31)
        if year >= 1 and 1 <= month <= 12 and 1 <= day <= days[month - 1]:
            return text
    return Trouble("key/wrong-kind", "bad-date")


# ------------------------------------------------------------------------------------------- converting


def _scaled(number: float, exponent: int) -> float:
    """`number` times ten to `exponent`, rounded once: 4.1 kHz is 4100 Hz, not 4099.999."""
    if not exponent or not math.isfinite(number):
        return number
    mantissa, _, power = repr(number).partition("e")
    return float(f"{mantissa}e{int(power or 0) + exponent}")


def hertz(quantity: Quantity, rate_hz: float | None = None) -> float | None:
    """A frequency in Hz; None where it is normalised and the sample rate is not known."""
    unit = UNITS[quantity.unit]
    if unit.per_nyquist is None:
        return _scaled(quantity.number, unit.exponent)
    return None if rate_hz is None else quantity.number / unit.per_nyquist * rate_hz / 2


def radians(quantity: Quantity, rate_hz: float | None = None) -> float | None:
    """A frequency in radians per sample; None where it is in Hz and the sample rate is not known."""
    unit = UNITS[quantity.unit]
    if unit.per_nyquist is not None:
        return quantity.number / unit.per_nyquist * math.pi
    return None if not rate_hz else _scaled(quantity.number, unit.exponent) / rate_hz * (2 * math.pi)


def decibels(quantity: Quantity) -> float:
    """A level or gain in dB; minus infinity for a gain of zero and below."""
    if quantity.unit in ("dB", "dBFS"):
        return quantity.number
    factor = linear(quantity)
    return 20 * math.log10(factor) if factor > 0 else -math.inf


def linear(quantity: Quantity) -> float:
    """A level or gain as a ratio of amplitudes; infinity where a level is beyond the range of a float."""
    if quantity.unit in ("dB", "dBFS"):
        return math.inf if quantity.number > 6000 else math.pow(10.0, quantity.number / 20)
    return _scaled(quantity.number, UNITS[quantity.unit].exponent)


def peak_to_peak(quantity: Quantity) -> Quantity:
    """The same range written from peak to peak: ±0.05 dB is 0.1 dB."""
    return Quantity(2 * quantity.number, quantity.unit) if quantity.symmetric else quantity


def seconds(quantity: Quantity, rate_hz: float | None = None) -> float | None:
    """A time in seconds; None where it is in samples and the sample rate is not known."""
    if quantity.unit == "samples":
        return quantity.number / rate_hz if rate_hz else None
    return _scaled(quantity.number, UNITS[quantity.unit].exponent)


def fraction(quantity: Quantity) -> float:
    """A share of one: 5 % is 0.05."""
    return _scaled(quantity.number, UNITS[quantity.unit].exponent)


def in_unit(value: float, unit: str, rate_hz: float | None = None) -> float | None:
    """A value in the base unit (Hz, s, dB, a factor, a share of one) as the number to write before `unit`.

    None where the unit is normalised to a sample rate that is not known.
    """
    known = UNITS[unit]
    if known.per_nyquist is not None:
        return value / (rate_hz / 2) * known.per_nyquist if rate_hz else None
    if unit == "samples":
        return value * rate_hz if rate_hz else None
    return _scaled(value, -known.exponent)


# --------------------------------------------------------------------------------------------- printing


def show_number(number: float, digits: int = 4) -> str:
    """The number in `digits` significant digits, in more (up to 6) only where these are all it has."""
    if number == 0 or not math.isfinite(number):
        return "0" if number == 0 else f"{number}"
    short = f"{number:.{digits}g}"
    full = f"{number:.6g}"
    text = full if float(full) == number else short
    if "e" not in text:
        return text
    return (
        f"{float(text):.0f}"
        if 1 <= abs(number) < 1e7
        else text.replace("e-0", "e-").replace("e+0", "e").replace("e+", "e")
    )


def show(value: float, dimension: str, unit: str | None = None, digits: int = 4) -> str:
    """A value as a person would write it: `20 Hz`, `1.8 kHz`, `0.0125 pi`, `25.6 ms`.

    Without `unit`, `value` is in the base unit of its dimension (Hz, dB, s, a factor, degrees, a share of
    one) and the unit is chosen; with `unit`, `value` is in that unit.
    """
    if unit is None:
        unit = _fitting(abs(value), dimension)
        value = _scaled(value, -UNITS[unit].exponent if unit else 0)
    return f"{show_number(value, digits)} {unit}" if unit else show_number(value, digits)


_STEPS: Final = {
    "frequency": ((1e9, "GHz"), (1e6, "MHz"), (1e3, "kHz"), (1e-3, "Hz"), (0.0, "mHz")),
    "time": ((1.0, "s"), (1e-3, "ms"), (0.0, "us")),
    "share": ((1e-4, "%"), (0.0, "ppm")),
}
"""From which size on a unit is chosen."""
_USUAL: Final = {"frequency": "Hz", "time": "ms", "share": "%", "gain": "dB", "peak": "x", "figure": ""}


def _fitting(size: float, dimension: str) -> str:
    dimension = "frequency" if dimension == "rate" else dimension
    if size and dimension in _STEPS:
        return next(unit for least, unit in _STEPS[dimension] if size >= least)
    return _USUAL.get(dimension, FITS[dimension][0])


def show_quantity(quantity: Quantity) -> str:
    """The quantity in its own unit: `±0.05 dB`."""
    sign = "±" if quantity.symmetric else ""
    number = sign + show_number(quantity.number, 7)
    return f"{number} {quantity.unit}" if quantity.unit else number


def round_outward(value: float, direction: Literal["up", "down"], start: float | None = None) -> float:
    """The number that a person would write for the least change from `start` to `value`.

    It lies at or beyond `value` in `direction`, and has the fewest significant digits, from two, with
    which the change grows by no more than a quarter, or by no more than a quarter per cent of the value:
    from 25 to 25.57 this gives 25.6, since 26 would nearly double the change, and from 0.4 to 0.40012 it
    gives 0.401. Without `start` it has three digits.
    """
    if value == 0 or not math.isfinite(value):
        return value
    allowed = math.inf if start is None else max(abs(value - start) / 4, abs(value) / 400)
    for digits in range(3 if start is None else 2, 17):
        mantissa, _, power = f"{value:.{digits - 1}e}".partition("e")
        steps, exponent = int(mantissa.replace(".", "")), int(power) - digits + 1
        rounded = float(f"{steps}e{exponent}")
        if (rounded < value) if direction == "up" else (rounded > value):
            rounded = float(f"{steps + (1 if direction == 'up' else -1)}e{exponent}")
        if abs(rounded - value) <= allowed:
            return rounded
    return value


# ------------------------------------------------------------------------------------------- arithmetic

_FIXED: Final = re.compile(r"q(?:([0-9]{1,3})\.)?([0-9]{1,3})")
_LONGEST_WORD: Final = 128
_SIGNIFICANT_BITS: Final = {"float64": 53, "float32": 24, "float16": 11}


class Word(NamedTuple):
    """A number format. Bits: of floating point the significant ones, else the word's length with its sign."""

    name: str
    number_format: Literal["floating", "fixed"]
    bits: int
    integer_bits: int = 0
    fraction_bits: int = 0

    @property
    def storage_bytes(self) -> int:
        """Bytes that one number takes in memory."""
        return (
            int(self.name.removeprefix("float")) // 8
            if self.number_format == "floating"
            else -(-self.bits // 8)
        )


@dataclass(frozen=True, slots=True)
class Arithmetic:
    """What coefficients and signals are stored in. None is not said, so nothing may lean on it."""

    coefficients: Word
    data: Word
    accumulator_bits: int | None = None
    rounding: str | None = None
    on_overflow: str | None = None
    coefficient_shift: int | None = None
    """By how many bits coefficients can be shifted up; None: as far as the structure needs."""

    @property
    def number_format(self) -> Literal["floating", "fixed"]:
        return self.coefficients.number_format

    @property
    def coefficient_bits(self) -> int:
        return self.coefficients.bits

    @property
    def integer_bits(self) -> int:
        return self.coefficients.integer_bits

    @property
    def fraction_bits(self) -> int:
        return self.coefficients.fraction_bits


def parse_word(text: str) -> Word | Trouble:
    """A number format by its name: `float64`, `q15`, `q1.14`."""
    if bits := _SIGNIFICANT_BITS.get(text):
        return Word(text, "floating", bits)
    if match := _FIXED.fullmatch(text):
        integer_bits, fraction_bits = int(match[1] or 0), int(match[2])
        bits = 1 + integer_bits + fraction_bits
        if 2 <= bits <= _LONGEST_WORD:
            return Word(text, "fixed", bits, integer_bits, fraction_bits)
        return Trouble("key/wrong-kind", "bad-word")
    lower = text.casefold().strip()
    known = lower if lower in FLOATING_FORMATS or _FIXED.fullmatch(lower) else nearest(text, FLOATING_FORMATS)
    facts = (("nearest", known),) if known else ()
    names = (("names", ", ".join((*FLOATING_FORMATS, "q15", "q1.14"))),)
    return Trouble("key/unknown-name", "", facts + names, ((known, ""),) if known else ())


def parse_arithmetic(text: str) -> Arithmetic | Trouble:
    """The arithmetic that a number format's name stands for: coefficients and data both in it."""
    word = parse_word(text)
    return word if isinstance(word, Trouble) else Arithmetic(word, word)


def arithmetic_of(requirement: Filter) -> Arithmetic | None:
    """The arithmetic of a filter, from a name or a mapping; None where it is absent or unreadable."""
    name = requirement.text("arithmetic")
    if name is not None:
        named = parse_arithmetic(name)
        return named if isinstance(named, Arithmetic) else None
    coefficients = requirement.text("arithmetic", "coefficients")
    if coefficients is None or requirement.is_unknown("arithmetic"):
        return None
    word = parse_word(coefficients)
    data = parse_word(requirement.text("arithmetic", "data") or coefficients)
    if isinstance(word, Trouble) or isinstance(data, Trouble):
        return None
    return Arithmetic(
        word,
        data,
        requirement.count("arithmetic", "accumulator_bits"),
        requirement.text("arithmetic", "rounding"),
        requirement.text("arithmetic", "on_overflow"),
        requirement.count("arithmetic", "coefficient_shift"),
    )
