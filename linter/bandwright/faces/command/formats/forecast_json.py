"""The output of `forecast --as json`: its records, and how rows of a forecast fill them.

The docstrings of the fields are the descriptions in `schemas/forecast.schema.json`.
"""

from __future__ import annotations

import json
import math
from collections.abc import Iterable, Mapping
from dataclasses import asdict, dataclass
from typing import Literal

from bandwright.faces.command.formats.records import DOCUMENTED
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.rows import Row, rows
from bandwright.forecast.types import Binding, Certainty, Figure

CERTAINTIES: tuple[Certainty, ...] = ("estimated", "computed", "proved")
"""From least sure to surest."""


@dataclass(frozen=True, slots=True)
class BindingRecord:
    """The edge that sets the order."""

    __pydantic_config__ = DOCUMENTED

    band: int
    """Which item of `bands`, counted from 0."""
    side: Literal["low", "high"]
    """Which edge of that band."""
    spare_db: float
    """How much deeper than asked the filter gets there, because the order is rounded up."""


@dataclass(frozen=True, slots=True)
class CandidateRecord:
    """What one family would take. A figure that is absent is null."""

    __pydantic_config__ = DOCUMENTED

    family: str
    structure: str | None
    """The structure that the figures are for; null where none that the filter names suits the family."""
    order: int | None
    """Of the digital filter: twice the prototype's for band-pass and band-stop, taps - 1 for FIR."""
    taps: int | None
    order_unrounded: float | None
    """The real-valued order, before rounding up."""
    certainty: Certainty | None
    """How sure the order or the number of taps is."""
    within_maxima: bool | None
    """Whether it keeps `at_most`; null while an estimate can't tell."""
    why_not: str | None
    """Why it does not serve; null where it does."""
    binding: BindingRecord | None
    multiplications_per_input: float | None
    """Per input sample: symmetry folded, exact 0, +-1 and +-2 free."""
    memory_bytes: float | None
    """For coefficients and state."""
    delay_worst_s: float | None
    """The largest group delay in the pass bands."""
    delay_dc_s: float | None
    """The group delay at 0 Hz, where the filter passes it."""
    settling_s: float | None
    overshoot: float | None
    noise_dbfs: float | None
    headroom_bits: float | None
    mantissa_bits: dict[str, int]
    """By structure: significant bits that coefficients need in a floating format."""
    word_bits: dict[str, int]
    """By structure: bits that coefficients need in fixed point, the sign bit included."""
    bits_certainty: Certainty | None
    """That of the least sure of the bits."""
    coefficient_ratio: float | None
    """The largest over the smallest non-zero magnitude in the direct form."""


@dataclass(frozen=True, slots=True)
class FilterRecord:
    """The forecast of one filter."""

    __pydantic_config__ = DOCUMENTED

    name: str
    file: str
    line: int
    """Of its name, counted from 1."""
    max_order: int | None
    """`at_most: {order}`; null where there is no maximum."""
    candidates: tuple[CandidateRecord, ...]
    """Cheapest first; empty where the filter makes no mask yet."""


@dataclass(frozen=True, slots=True)
class ForecastRecord:
    """What `bandwright forecast --as json` prints."""

    __pydantic_config__ = DOCUMENTED

    version: Literal[1]
    """The version of this form; it grows when a key changes its meaning or goes."""
    filters: tuple[FilterRecord, ...]


def record(file: str, line: int, forecast: Forecast) -> FilterRecord:
    """The forecast of a filter as it is printed."""
    maximum = forecast.maximum("order")
    return FilterRecord(
        name=forecast.filter.name,
        file=file,
        line=line,
        max_order=round(maximum) if maximum is not None else None,
        candidates=tuple(map(_candidate, rows(forecast))),
    )


def document(filters: Iterable[FilterRecord]) -> str:
    """The whole output. Only ASCII, so that no terminal and no pipe spoils it."""
    return json.dumps(asdict(ForecastRecord(1, tuple(filters))), indent=2)


def _candidate(row: Row) -> CandidateRecord:
    length = row.order or row.taps
    taps = round(row.taps.value) if row.taps else None
    order = round(row.order.value) if row.order else taps - 1 if taps else None
    bits = (*row.mantissa_bits.values(), *row.word_bits.values())
    return CandidateRecord(
        family=row.family,
        structure=row.structure,
        order=order,
        taps=taps,
        order_unrounded=row.order_unrounded,
        certainty=length.certainty if length else None,
        within_maxima=row.within_maxima,
        why_not=row.why_not or None,
        binding=_binding(row.binding),
        multiplications_per_input=_value(row.multiplications),
        memory_bytes=_value(row.memory_bytes),
        delay_worst_s=_value(row.delay_worst_s),
        delay_dc_s=_value(row.delay_dc_s),
        settling_s=None,
        overshoot=None,
        noise_dbfs=None,
        headroom_bits=None,
        mantissa_bits=_whole(row.mantissa_bits),
        word_bits=_whole(row.word_bits),
        bits_certainty=min((one.certainty for one in bits), key=CERTAINTIES.index, default=None),
        coefficient_ratio=_finite(row.coefficient_ratio),
    )


def _binding(binding: Binding | None) -> BindingRecord | None:
    return BindingRecord(binding.band, binding.side, binding.spare_db) if binding else None


def _value(figure: Figure | None) -> float | None:
    return _finite(figure.value) if figure else None


def _finite(value: float | None) -> float | None:
    """JSON has no infinity."""
    return value if value is not None and math.isfinite(value) else None


def _whole(bits: Mapping[str, Figure]) -> dict[str, int]:
    return {name: math.ceil(figure.value) for name, figure in bits.items() if math.isfinite(figure.value)}
