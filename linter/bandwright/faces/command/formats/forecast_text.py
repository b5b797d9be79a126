"""The forecast of a filter as a table of at most 80 columns."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Literal, NamedTuple

from bandwright.forecast.forecast import Forecast
from bandwright.forecast.rows import Row, rows
from bandwright.forecast.types import Figure
from bandwright.forecast.words import ESTIMATE, shown, time_unit


class Column(NamedTuple):
    """A column: its head, the side to which its cells lean, and the cells."""

    head: str
    side: Literal["left", "right"]
    cells: list[str]


def table(forecast: Forecast) -> str:
    """What the filter is, a row for each family that can meet its mask, and notes."""
    title = f"{forecast.filter.name}: {forecast.summary()}"
    if forecast.mask is None:
        return f"{title}\nNo forecast, because its bands can't be read; `bandwright check` says why."
    listed = rows(forecast)
    able = [row for row in listed if row.order or row.taps]
    lines = [title, _verdict(able), ""]
    if able:
        lines += [*_aligned(_columns(forecast, able)), ""]
    return "\n".join([*lines, *_notes(forecast, able), *_unable(listed)]).rstrip()


def _verdict(able: Sequence[Row]) -> str:
    """The row that a reader looks for: the smallest family that serves."""
    if not able:
        return "No family that is judged can meet it."
    fitting = [row for row in able if row.allowed and row.within_maxima is not False]
    if fitting:
        return f"Smallest within the maxima: {fitting[0].family}."
    others = [row for row in able if row.within_maxima is not False]
    if others:
        return f"What it asks for breaks its maxima; {others[0].family} keeps them."
    return f"No family keeps its maxima; {able[0].family} is the smallest."


def _columns(forecast: Forecast, able: Sequence[Row]) -> list[Column]:
    unit, factor = time_unit(row.delay_worst_s for row in able)
    columns = [
        Column("family", "left", [row.family for row in able]),
        Column("order", "right", [shown(row.order) for row in able]),
        Column("taps", "right", [shown(row.taps) for row in able]),
        Column("mult.", "right", [shown(row.multiplications) for row in able]),
        Column(f"delay {unit}", "right", [shown(row.delay_worst_s, factor) for row in able]),
        Column("bits", "right", [shown(_bits(forecast, row)) for row in able]),
        Column("over maximum", "left", [", ".join(row.over) for row in able]),
    ]
    return [column for column in columns if any(column.cells)]


def _bits(forecast: Forecast, row: Row) -> Figure | None:
    """What the coefficients need in the row's structure and the filter's kind of number."""
    if row.structure is None:
        return None
    floating = forecast.arithmetic is not None and forecast.arithmetic.number_format == "floating"
    return (row.mantissa_bits if floating else row.word_bits).get(row.structure)


def _aligned(columns: Sequence[Column]) -> list[str]:
    widths = [max(len(column.head), *map(len, column.cells)) for column in columns]
    padded = [
        [
            cell.ljust(width) if column.side == "left" else cell.rjust(width)
            for cell in (column.head, *column.cells)
        ]
        for column, width in zip(columns, widths, strict=True)
    ]
    head, *lines = ("  ".join(cells).rstrip() for cells in zip(*padded, strict=True))
    return [head, "  ".join("-" * width for width in widths), *lines]


def _notes(forecast: Forecast, able: Sequence[Row]) -> Iterator[str]:
    """What the columns mean, and what the filter itself asks for."""
    if able:
        structures = sorted({row.structure for row in able if _bits(forecast, row) and row.structure})
        bits = f"; bits of the coefficients in {' or '.join(structures)}, sign included" if structures else ""
        yield f"mult.: multiplications for each input sample{bits}."
    if any(_bits(forecast, row) and _bits(forecast, row).certainty == "estimated" for row in able):
        yield f"{ESTIMATE} marks an estimate."
    asked = forecast.filter.names("family")
    if asked:
        yield f"The filter asks for {', '.join(asked)}."


def _unable(listed: Sequence[Row]) -> Iterator[str]:
    """The families without a figure, those with the same reason together."""
    reasons: dict[str, list[str]] = {}
    for row in listed:
        if not (row.order or row.taps):
            reasons.setdefault(row.why_not, []).append(row.family)
    for reason, families in reasons.items():
        yield f"{', '.join(families)}: {reason}."
