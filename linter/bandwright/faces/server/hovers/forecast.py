"""What every family would take: the hover on a filter's name, its family, its order and its maxima."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from bandwright.faces.server.markdown import Column, Part, Table, table
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Question
from bandwright.forecast.structures import DEFAULT_STRUCTURE
from bandwright.forecast.types import Figure
from bandwright.forecast.words import shown, time_unit


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
    keeping = next((one for one in able if forecast.within(one)), None)
    otherwise = f"{label(keeping)} keeps every maximum" if keeping is not None else ""
    if chosen is None:
        return f"nothing that it asks for can meet it; {otherwise or f'{label(able[0])} is the smallest'}."
    within = forecast.within(chosen)
    if within:
        return f"{label(chosen)} keeps every maximum."
    if within is None:
        return f"{label(chosen)} is near a maximum, and the exact figure is not known yet."
    if not otherwise:
        smallest = "" if able[0] is chosen else f"; {label(able[0])} is the smallest"
        otherwise = f"no family keeps every maximum{smallest}"
    return f"{label(chosen)} is over its maximum ({forecast.why_not(chosen)}); {otherwise}."


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
    structures = dict.fromkeys(
        one.structure or DEFAULT_STRUCTURE[one.kind] for one in able if bits(forecast, one)
    )
    kind = "bits with the sign" if number_format(forecast) == "fixed" else "significant bits"
    columns = "Multiplications per sample" + (
        f"; {kind} for {' or '.join(f'`{name}`' for name in structures)}. " if structures else ". "
    )
    return columns + certainty(
        (
            ("orders", [one.order for one in able]),
            ("lengths", [one.taps for one in able]),
            ("bits", [bits(forecast, one) for one in able]),
        )
    )


def certainty(named: Sequence[tuple[str, Sequence[Figure | int | None]]]) -> str:
    """A sentence that says which of the figures are estimates: "Orders are computed, bits estimated (~)." """
    there = [(name, [one for one in figures if one is not None]) for name, figures in named]
    estimated = [
        name
        for name, figures in there
        if any(isinstance(one, Figure) and one.certainty == "estimated" for one in figures)
    ]
    sure = [name for name, figures in there if figures and name not in estimated]
    if not estimated:
        return "Every figure is computed."
    said = f"{' and '.join(sure)} are computed, " if sure else ""
    verb = "" if sure else "are "
    sentence = f"{said}{' and '.join(estimated)} {verb}estimated where marked ~."
    return sentence[0].upper() + sentence[1:]


def _unable(forecast: Forecast) -> Iterator[str]:
    """The families that can't meet the mask, with the reason; those with the same reason together."""
    reasons: dict[str, list[str]] = {}
    for one in forecast.candidates:
        if one.order is None and one.taps is None:
            reasons.setdefault(one.why_not, []).append(one.family)
    for reason, families in reasons.items():
        yield f"Without {', '.join(families)}: {reason}."
