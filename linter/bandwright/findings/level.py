"""Findings about levels: ripple, attenuation and gain windows."""

from __future__ import annotations

import math
from collections.abc import Iterator

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Place, Quantity, Setting
from bandwright.findings.case import Case
from bandwright.findings.rules import Find, Hit, finding
from bandwright.forecast.bands import LEAST_HEIGHT_DB, Band
from bandwright.forecast.forecast import Forecast
from bandwright.remedies import levels, words

LEAST_ATTENUATION_DB = 0.5
"""A stop band that takes away less than this is none: half a dB is a gain of 0.94."""

QUIETER_PER_BIT_DB = 20.0 * math.log10(2.0)
SINE_DB = 10.0 * math.log10(1.5)
"""A full-scale sine is 6.02 W + 1.76 dB above the noise of rounding to W bits (Bennett 1948, from memory)."""

MOST_STOP_FACTOR = 10.0
"""A stop band whose gain may be this factor or more is taken for one in dB."""


def _those(id: str) -> Find:
    """The slips of one kind."""
    return lambda case: (hit for hit in _slips(case) if hit.id == id)


negative_attenuation = finding(
    "level/negative-attenuation",
    "error",
    {
        "": "An attenuation of {written} asks for a gain of {gain}, because attenuation counts downwards;"
        " write `{meant}`.",
        "zero": "An attenuation of {written} takes nothing away, so this stop band asks for nothing; write"
        " how much it takes away.",
    },
    remedies=(levels.without_sign,),
)(_those("level/negative-attenuation"))

negative_ripple = finding(
    "level/negative-ripple",
    "error",
    "A ripple of {written} is a window of negative height, because ripple counts from peak to peak; write"
    " `{meant}`.",
    remedies=(levels.without_sign,),
)(_those("level/negative-ripple"))

no_room = finding(
    "level/no-room",
    "error",
    {
        "ripple": "A ripple of {written} leaves the gain no room at all, so only a plain wire meets it;"
        " write what the signal can bear.",
        "window": "The gain may be {written} and nothing else, and no filter holds a gain exactly over a"
        " band; leave it some room.",
        "zero": "A gain of {written} over a whole band can't be had from any filter; write the gain that"
        " the signal can bear.",
    },
)(_those("level/no-room"))

window_inverted = finding(
    "level/window-inverted",
    "error",
    "The least gain {low} is above the highest, {high}, so no gain lies between them; swap the two.",
    remedies=(levels.swap_gains,),
)(_those("level/window-inverted"))

looks_linear = finding(
    "level/looks-linear",
    "warning",
    {
        "attenuation": "An attenuation of {written} stops next to nothing; if the gain {number} is meant,"
        " write `{meant}`.",
        "window": "The pass band is to be amplified by {low} to {high}; if these are factors, write"
        " `{meant}`.",
        "stop": "The stop band may be amplified by {written}; if the factor {number} is meant, write"
        " `{meant}`.",
    },
    remedies=(levels.in_decibels, levels.as_factors),
)(_those("level/looks-linear"))

looks_like_decibels = finding(
    "level/looks-like-decibels",
    "error",
    {
        "negative": "A gain of {written} is below zero, which no gain in factors is; if dB are meant, write"
        " `{meant}`.",
        "stop": "A stop band with a gain of {written} amplifies; if dB are meant, write `{meant}`.",
    },
    remedies=(levels.as_decibels,),
)(_those("level/looks-like-decibels"))


def _slips(case: Case) -> tuple[Hit, ...]:
    """What is wrong with the levels, each told once."""
    return case.once("slips", lambda: tuple(_found(case)))


def _found(case: Case) -> Iterator[Hit]:
    filter = case.filter
    for index, kind in filter.band_kinds():
        band = ("bands", index, kind)
        if kind == "pass":
            yield from _ripple(filter, (*band, "ripple"))
        if kind == "stop":
            yield from _attenuation(filter, (*band, "attenuation"))
        yield from _gain(case, (*band, "gain"), kind)


def _ripple(filter: Filter, path: Path) -> Iterator[Hit]:
    setting, ripple = filter.get(*path), filter.quantity(*path)
    if setting is None or ripple is None:
        return
    if ripple.number == 0:
        yield Hit("level/no-room", Place(path), (("written", setting.written),), "ripple")
    elif ripple.number < 0:
        meant = quantities.show_quantity(Quantity(-ripple.number, ripple.unit, ripple.symmetric))
        yield Hit("level/negative-ripple", Place(path), (("written", setting.written), ("meant", meant)))


def _attenuation(filter: Filter, path: Path) -> Iterator[Hit]:
    setting, level = filter.get(*path), filter.quantity(*path)
    if setting is None or level is None:
        return
    decibels, written = quantities.decibels(level), ("written", setting.written)
    if decibels == 0:
        yield Hit("level/negative-attenuation", Place(path), (written,), "zero")
    elif decibels < 0:
        meant = quantities.show_quantity(Quantity(-level.number, level.unit))
        yield Hit("level/negative-attenuation", Place(path), (written, ("gain", meant), ("meant", meant)))
    elif decibels < LEAST_ATTENUATION_DB:
        meant = quantities.show(-20.0 * math.log10(level.number), "level")
        facts = (written, ("number", quantities.show_number(level.number)), ("meant", meant))
        yield Hit("level/looks-linear", Place(path), facts, "attenuation")


def _gain(case: Case, path: Path, kind: str) -> Iterator[Hit]:
    filter = case.filter
    low, high = (*path, "min"), (*path, "max")
    least, most = filter.quantity(*low), filter.quantity(*high)
    for side, level in ((low, least), (high, most)):
        if level is not None and level.unit in ("x", "%") and level.number < 0:
            yield _in_factors(filter, side, level, "negative")
            return
    if least is not None and most is not None:
        yield from _window(filter, path, kind, least, most)
    elif most is not None and kind == "stop":
        yield from _stop_gain(case, high, most)


def _window(filter: Filter, path: Path, kind: str, least: Quantity, most: Quantity) -> Iterator[Hit]:
    low, high = filter.get(*path, "min"), filter.get(*path, "max")
    if low is None or high is None:
        return
    words = (("low", low.written), ("high", high.written))
    place, other = Place((*path, "min")), ((Place((*path, "max")), "the highest gain"),)
    bottom, top = quantities.decibels(least), quantities.decibels(most)
    if bottom > top:
        yield Hit("level/window-inverted", place, words, "", other)
    elif top - bottom < LEAST_HEIGHT_DB:
        yield Hit("level/no-room", place, (("written", low.written),), "window", other)
    elif kind == "pass" and least.unit == most.unit == "dB" and 0.5 <= bottom < top == 1.0:
        # Only a window that ends at exactly 1 is taken for factors: 0.99 to 1 is the usual way to write one.
        meant = ", ".join(quantities.show_quantity(Quantity(one.number, "x")) for one in (least, most))
        yield Hit("level/looks-linear", place, (*words, ("meant", meant)), "window", other)


def _stop_gain(case: Case, path: Path, most: Quantity) -> Iterator[Hit]:
    filter = case.filter
    setting = _written(filter, path)
    if most.unit == "dB" and 0 < most.number < 1:
        meant = quantities.show_quantity(Quantity(most.number, "x"))
        facts = (("written", setting), ("number", quantities.show_number(most.number)), ("meant", meant))
        yield Hit("level/looks-linear", Place(path), facts, "stop")
    elif most.number == 0 and most.unit in ("x", "%"):
        yield Hit("level/no-room", Place(path), (("written", setting),), "zero")
    elif most.unit in ("x", "%") and quantities.linear(most) >= max(
        MOST_STOP_FACTOR, _highest_pass_gain(case)
    ):
        yield _in_factors(filter, path, most, "stop")


def _in_factors(filter: Filter, path: Path, level: Quantity, form: str) -> Hit:
    number = -abs(level.number) if path[2] == "stop" else level.number
    facts = (
        ("written", _written(filter, path)),
        ("meant", quantities.show_quantity(Quantity(number, "dB"))),
    )
    return Hit("level/looks-like-decibels", Place(path), facts, form)


def _highest_pass_gain(case: Case) -> float:
    """The highest gain that a pass band allows, as a factor."""
    tops = [band.most for band in case.bands if band.kind == "pass" and band.most is not None]
    return max((math.pow(10.0, top / 20.0) for top in tops if top < math.inf), default=1.0)


def _written(filter: Filter, path: Path) -> str:
    setting: Setting | None = filter.get(*path)
    return setting.written if setting is not None else ""


@finding(
    "level/stop-above-pass",
    "warning",
    {
        "": "The stop band may have a gain of {stop}, but the pass band may be as low as {passed}, so a plain"
        " wire would do; stop more, or pass more evenly.",
        "relative": "The stop band is to lie {attenuation} below the pass band, whose gain alone may vary by"
        " {ripple}; ask for more attenuation, or less ripple.",
    },
)
def stop_above_pass(case: Case) -> Iterator[Hit]:
    """A stop band that allows the gain that a pass band may have; told where nothing else is wrong."""
    filter, lowest = case.filter, _lowest_pass_band(case)
    if lowest is None or _slips(case):
        return
    for band in _reaching(case):
        stop, passed = band.most or 0.0, lowest.least or 0.0
        facts = (
            ("stop", _in_words(stop)),
            ("passed", _in_words(passed)),
            ("attenuation", quantities.show(-stop, "level")),
            ("ripple", quantities.show(-passed, "level")),
        )
        form = "relative" if band.relative and lowest.relative else ""
        related = ((Place(_level_path(filter, lowest.index, "pass")), "the pass band's level"),)
        place = Place(_level_path(filter, band.index, "stop"))
        yield Hit("level/stop-above-pass", place, facts, form, related)


def noise_floor(forecast: Forecast) -> float | None:
    """How far rounding noise lies below a full-scale sine, dB; None where data are in floating point."""
    arithmetic = forecast.arithmetic
    if arithmetic is None or arithmetic.data.number_format != "fixed":
        return None
    return QUIETER_PER_BIT_DB * arithmetic.data.bits + SINE_DB


@finding(
    "level/deeper-than-arithmetic",
    "information",
    "A stop band {attenuation} down lies below the total rounding noise of `{data}` data, {floor} below a"
    " full-scale sine; ask for less, or store data in a longer word.",
    remedies=(levels.down_to(lambda forecast: noise_floor(forecast) or 0.0), words.longer_data),
    needs=("arithmetic",),
)
def deeper_than_arithmetic(case: Case) -> Iterator[Hit]:
    """A stop band below the noise that data in the filter's fixed-point format carry over all frequencies."""
    arithmetic, floor = case.forecast.arithmetic, noise_floor(case.forecast)
    if arithmetic is None or floor is None:
        return
    depths = [
        (-band.most, band.index)
        for band in case.bands
        if band.kind == "stop" and band.most is not None and band.most > -math.inf
    ]
    deepest, index = max(depths, default=(0.0, 0))
    if deepest > floor:
        facts = (
            ("attenuation", quantities.show(deepest, "level")),
            ("data", arithmetic.data.name),
            ("floor", quantities.show(floor, "level", digits=2)),
        )
        place = Place(_level_path(case.filter, index, "stop"))
        yield Hit(
            "level/deeper-than-arithmetic", place, facts, "", ((Place(("arithmetic",)), "the arithmetic"),)
        )


def _in_words(decibels: float) -> str:
    """A gain as a sentence quotes it."""
    return quantities.show(decibels, "gain") if decibels > -math.inf else "0"


def reaches_pass_band(case: Case) -> bool:
    """Whether some stop band allows the gain that a pass band may have."""
    return any(True for _ in _reaching(case))


def _reaching(case: Case) -> Iterator[Band]:
    lowest = _lowest_pass_band(case)
    for band in case.bands:
        most = band.most if band.kind == "stop" else None
        if lowest is not None and most is not None and most >= (lowest.least or 0.0):
            yield band


def _lowest_pass_band(case: Case) -> Band | None:
    """The pass band whose gain may be the lowest."""
    floors = [band for band in case.bands if band.kind == "pass" and band.least is not None]
    return min(floors, key=lambda band: band.least or 0.0, default=None)


def _level_path(filter: Filter, index: int, kind: str) -> Path:
    """Where the level of a band stands that bounds its gain towards the other bands."""
    band: Path = ("bands", index, kind)
    main = (*band, "ripple" if kind == "pass" else "attenuation")
    return main if filter.get(*main) is not None else (*band, "gain", "min" if kind == "pass" else "max")
