"""What every family would take, as a title, a table and notes: the same words in editors and terminals."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from bandwright.faces.markdown import Column, Part, Table, table
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Question
from bandwright.forecast.structures import DEFAULT_STRUCTURE
from bandwright.forecast.types import Figure
from bandwright.forecast.words import ESTIMATE, shown, time_unit


def parts(forecast: Forecast) -> list[Part]:
    """Title, table, and how sure the figures are."""
    title = f"**{forecast.summary()}**"
    if forecast.mask is None:
        return [f"{title}: no forecast while its bands can't be read."]
    able = _able(forecast)
    if not able:
        return [f"{title}: no family that is judged can meet it.", *_unable(forecast)]
    return [
        f"{title}: {_verdict(forecast, able)}",
        _table(forecast, able),
        _note(forecast, able),
        *_unable(forecast),
    ]


def questions(forecast: Forecast) -> Iterator[Question]:
    """What would settle the figures of the table, lengths before bits."""
    able = _able(forecast)
    for figure in (*(one.taps for one in able), *(bits(forecast, one) for one in able)):
        if figure is not None and figure.question is not None and not figure.exact:
            yield figure.question


def label(one: Candidate) -> str:
    """A candidate in words: "elliptic order 9", "equiripple with ~115 taps"."""
    return (
        f"{one.family} order {one.order}"
        if one.order is not None
        else f"{one.family} with {shown(one.taps)} taps"
    )


def bits(forecast: Forecast, one: Candidate) -> Figure | None:
    """The coefficient bits of a candidate in its structure, else in the usual one."""
    structure = one.structure or DEFAULT_STRUCTURE[one.kind]
    return forecast.bits(one, structure, number_format(forecast))


def number_format(forecast: Forecast) -> str:
    """Which bits count: of a fixed word, or of a mantissa where the arithmetic floats or is not said."""
    arithmetic = forecast.arithmetic
    return arithmetic.number_format if arithmetic is not None else "floating"


def _able(forecast: Forecast) -> list[Candidate]:
    """The candidates that can meet the mask, cheapest first."""
    return sorted(
        (one for one in forecast.candidates if one.order is not None or one.taps is not None),
        key=forecast.cost,
    )


def _verdict(forecast: Forecast, able: Sequence[Candidate]) -> str:
    """What becomes of the filter as asked, in one sentence."""
    chosen = forecast.chosen
    if chosen is not None and forecast.within(chosen) is not False:
        keeps = "keeps every maximum" if forecast.within(chosen) else "is near a maximum"
        return f"{label(chosen)} {keeps}."
    asked = (
        f"{label(chosen)} breaks {_maxima(forecast, forecast.over(chosen))}" if chosen else "none asked for"
    )
    keeping = next((one for one in able if forecast.within(one)), None)
    if keeping is not None:
        keeps = "keeps" if keeping.allowed else "would keep"
        return f"{asked}; {label(keeping)} {keeps} every maximum."
    never = [name for name in forecast.over(able[0]) if all(name in forecast.over(one) for one in able)]
    none = f"no family keeps {_maxima(forecast, never)}" if never else "no family keeps every maximum"
    return f"{none}; {label(able[0])} is the smallest."


def _maxima(forecast: Forecast, names: Sequence[str]) -> str:
    """Maxima with their values: "order 16 and delay 25 ms"."""
    limits = [(name, forecast.maximum(name)) for name in names]
    return " and ".join(
        f"{name} {forecast.in_words(name, limit)}" for name, limit in limits if limit is not None
    )


def _table(forecast: Forecast, able: Sequence[Candidate]) -> Table:
    delays = [forecast.in_seconds(forecast.delay_worst(one)) for one in able]
    unit, factor = time_unit(delays)
    if forecast.sample_rate_hz is None:
        unit, factor, delays = "samples", 1.0, [forecast.delay_worst(one) for one in able]
    columns: list[Column] = [
        ("family", "left", [one.family for one in able]),
        ("order", "right", ["" if one.order is None else str(one.order) for one in able]),
        ("taps", "right", [shown(one.taps) for one in able]),
        ("mult.", "right", [shown(forecast.multiplications(one)) for one in able]),
        (f"delay {unit}", "right", [shown(delay, factor) for delay in delays]),
        ("bits", "right", [shown(bits(forecast, one)) for one in able]),
        ("over maximum", "left", [", ".join(_short(name) for name in forecast.over(one)) for one in able]),
    ]
    chosen = forecast.chosen
    return table(columns, able.index(chosen) if chosen is not None else None)


def _short(name: str) -> str:
    return "mult." if name == "multiplications" else name


def _note(forecast: Forecast, able: Sequence[Candidate]) -> str:
    """What the columns mean, and how sure their figures are."""
    needs = {one.structure or DEFAULT_STRUCTURE[one.kind]: bits(forecast, one) for one in able}
    structures = " or ".join(f"`{name}`" for name, figure in needs.items() if figure is not None)
    kind = "bits with the sign" if number_format(forecast) == "fixed" else "significant bits"
    columns = "Multiplications per sample" + (f"; {kind} for {structures}. " if structures else ". ")
    figures = [(one.taps, bits(forecast, one)) for one in able]
    return columns + certainty(figure for pair in figures for figure in pair)


def certainty(figures: Iterable[Figure | None]) -> str:
    """A sentence on how sure the figures of a table are."""
    if any(figure is not None and figure.certainty == "estimated" for figure in figures):
        return f"{ESTIMATE} marks an estimate; everything else is computed."
    return "Every figure is computed."


def _unable(forecast: Forecast) -> Iterator[str]:
    """The families that can't meet the mask, with the reason; those with the same reason together."""
    reasons: dict[str, list[str]] = {}
    linear = forecast.mask is not None and forecast.mask.phase == "linear"
    for one in forecast.candidates:
        # Who asks for linear phase knows that it leaves FIR filters only.
        if one.order is None and one.taps is None and not (linear and one.kind == "iir"):
            reasons.setdefault(one.why_not, []).append(one.family)
    for reason, families in reasons.items():
        yield f"Not {' or '.join(families)}: {reason}."
