"""A number format: its range and step, and what the filter needs of it."""

from __future__ import annotations

from bandwright.bandfile import quantities
from bandwright.bandfile.quantities import Word
from bandwright.faces.forecast_table import label
from bandwright.faces.markdown import Part
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.words import shown


def parts(forecast: Forecast, name: str) -> list[Part]:
    """The number format called `name`."""
    word = quantities.parse_word(name)
    if not isinstance(word, Word):
        return []
    return [" ".join([_word(word), *_need(forecast, word)])]


def _word(word: Word) -> str:
    if word.number_format == "floating":
        return f"`{word.name}`, IEEE 754 floating point with {word.bits} significant bits."
    reach = f"{2**word.integer_bits}"
    step = quantities.show_number(2.0**-word.fraction_bits, 2)
    return (
        f"`{word.name}`, {word.bits}-bit words with {word.fraction_bits} fraction bits: from -{reach} to just"
        f" below {reach}, in steps of {step}."
    )


def _need(forecast: Forecast, word: Word) -> list[str]:
    """How many of its bits the filter's coefficients need."""
    chosen = forecast.chosen
    if chosen is None or chosen.structure is None:
        return []
    needed = forecast.bits(chosen, chosen.structure, word.number_format)
    if needed is None:
        return []
    return [f"{label(chosen)} in `{chosen.structure}` needs {shown(needed)} of its {word.bits} bits."]
