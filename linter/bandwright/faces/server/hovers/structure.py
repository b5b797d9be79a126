"""A structure: what it is, and the coefficient bits that it needs beside what there are."""

from __future__ import annotations

from bandwright.bandfile import grammar
from bandwright.faces.forecast_table import certainty, label, number_format
from bandwright.faces.markdown import Column, Part, table
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.structures import STRUCTURES
from bandwright.forecast.types import Figure
from bandwright.forecast.words import ESTIMATE, shown

SHOWN_ONCE = ("direct-form-2", "direct-form-1", "direct-form-1-transposed", "direct-form-2-transposed")
"""These store the same coefficients; one of them stands for all."""


def parts(forecast: Forecast, name: str) -> list[Part]:
    """The structure called `name`, for the candidate that the filter will be built as."""
    about: list[Part] = [grammar.STRUCTURES[name]] if name in grammar.STRUCTURES else []
    chosen, arithmetic, form = forecast.chosen, forecast.arithmetic, number_format(forecast)
    if chosen is None or name not in STRUCTURES:
        return about
    if STRUCTURES[name].kind != chosen.kind:
        return [*about, f"It does not suit {label(chosen)}, so it is passed over here."]
    others = [one for one in STRUCTURES if one == name or one not in SHOWN_ONCE]
    if name not in SHOWN_ONCE:
        others.append(SHOWN_ONCE[0])
    needs = [(one, figure) for one in others if (figure := forecast.bits(chosen, one, form)) is not None]
    if not needs:
        return about
    columns: list[Column] = [
        (f"structure, {label(chosen)}", "left", [one for one, _ in needs]),
        ("bits needed", "right", [shown(figure) for _, figure in needs]),
    ]
    if arithmetic is not None:
        has = arithmetic.coefficient_bits
        columns.append((f"`{arithmetic.coefficients.name}` has", "right", [str(has)] * len(needs)))
        columns.append(("enough", "left", [_enough(figure, has) for _, figure in needs]))
    own = next((at for at, (one, _) in enumerate(needs) if one == name), None)
    kind = "The sign is counted. " if form == "fixed" else "Significant bits of a floating-point number. "
    return [*about, table(columns, own), kind + certainty(figure for _, figure in needs)]


def _enough(needed: Figure, has: int) -> str:
    """Whether `has` bits are enough, with the sign of an estimate where the figure's band leaves it open."""
    if needed.low <= has < needed.high:
        return ESTIMATE + ("yes" if needed.value <= has else "no")
    return "yes" if needed.high <= has else "no"
