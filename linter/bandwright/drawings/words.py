"""What a plot says in words: for readers of the picture, and for those who hear it."""

from __future__ import annotations

import math
from collections.abc import Sequence

from bandwright.drawings.areas import most_db
from bandwright.drawings.axes import Scale, three_digits
from bandwright.drawings.edges import Edge
from bandwright.drawings.responses import Response
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form.types import Mask


def title(forecast: Forecast) -> str:
    """The filter's name and what it is."""
    return f"{forecast.filter.name}: {forecast.summary()}"


def caption(forecast: Forecast, mask: Mask, shown: Sequence[Response], frequency: Scale) -> str:
    """What the reader has to know to read the plot, and what is not in it."""
    said = ["Hatched: where the gain may not be."]
    if any(one.chosen for one in shown) and len(shown) > 1:
        said.append("Thick: what the forecast chooses.")
    if any(band.relative for band in mask.bands if band.kind == "pass"):
        said.append("The pass window may float; here its top is at 0 dB.")
    if any(band.relative for band in mask.bands if band.kind == "stop"):
        said.append("Stop levels count from the top of the pass window.")
    if frequency.start > 0.0 or frequency.end < math.pi * (1.0 - 1e-9):
        said.append("The frequencies shown are those around the edges; the outer bands go on beyond them.")
    drawn = {one.family for one in shown}
    left_out = [one for one in forecast.candidates if one.allowed and one.family not in drawn]
    if any(one.kind == "fir" for one in left_out):
        fir = _and([one.family for one in left_out if one.kind == "fir"])
        said.append(f"Not drawn: the FIR responses, {fir}.")
    for reason in dict.fromkeys(forecast.why_not(one) for one in left_out if one.kind == "iir"):
        iir = _and([one.family for one in left_out if forecast.why_not(one) == reason])
        said.append(f"Not drawn: {iir}; {reason}.")
    return " ".join(said)


def description(forecast: Forecast, mask: Mask, shown: Sequence[Response], edges: Sequence[Edge]) -> str:
    """The plot for somebody who does not see it."""
    said = ["Gain in dB over frequency: above, the pass bands' window enlarged; below, the whole range."]
    for band in mask.bands:
        names = [edge.name.partition(" ")[2] for edge in edges if edge.item == band.item]
        most = most_db(mask, band)
        bounds = [
            *([f"at least {three_digits(band.least)} dB"] if band.least is not None else []),
            *([f"at most {three_digits(most)} dB"] if most is not None else []),
        ]
        said.append(f"{band.kind.capitalize()} {' '.join(names) or 'everywhere'}: {' and '.join(bounds)}.")
    for one in shown:
        chosen = ", which the forecast chooses" if one.chosen else ""
        sets = [edge.name for edge in edges if one.family in edge.sets]
        said.append(f"Drawn: {one.label}{chosen}" + (f"; its order is set by {_and(sets)}." if sets else "."))
    return " ".join(said)


def _and(words: Sequence[str]) -> str:
    *first, last = words
    return f"{', '.join(first)} and {last}" if first else last
