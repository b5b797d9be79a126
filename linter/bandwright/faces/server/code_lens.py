"""Code lenses: above each filter its smallest IIR and FIR filter, and its worst findings.

They are for reading: a command with an empty name is shown as text by the editors that show lenses, and
can't be run.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any, Literal

from lsprotocol import types

from bandwright.analysis.types import Finding
from bandwright.bandfile.blocks import in_document
from bandwright.faces.server.client import Client
from bandwright.faces.server.session import Session
from bandwright.findings.rules import SEVERITIES
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.words import shown


async def code_lens(
    session: Session, client: Client, params: types.CodeLensParams
) -> list[dict[str, Any]] | None:
    """A lens for each filter that can be read and has something to show."""
    file = session.files.get(params.text_document.uri)
    if file is None:
        return None
    findings = await session.findings(file)
    document, lines = session.read(file), session.lines(file)
    found = []
    for index, filter in document.filters:
        block = document.blocks[index]
        if not block.whole:
            continue
        forecast = session.newest_forecast(file, index, filter)
        own = [one for one in findings if one.block == index and not one.accepted]
        if title := " · ".join([*_smallest(forecast), *_worst(own)]):
            name = in_document(document, block, block.marks[()].key)
            found.append({"range": lines.plain_range(name), "command": {"title": title, "command": ""}})
    return found


def _smallest(forecast: Forecast) -> Iterator[str]:
    """The IIR and the FIR filter with the fewest multiplications that meet the mask."""
    kinds: tuple[Literal["iir", "fir"], ...] = ("iir", "fir")
    for kind in kinds:
        able = [one for one in forecast.candidates if one.kind == kind and (one.order or one.taps)]
        best = min(able, key=forecast.cost, default=None)
        if best is not None and best.taps is not None:
            yield f"{best.family} {shown(best.taps)} taps"
        elif best is not None:
            yield f"{best.family} order {best.least_order}"


def _worst(findings: Sequence[Finding]) -> Iterator[str]:
    for severity in SEVERITIES:
        if count := sum(one.severity == severity for one in findings):
            yield f"{count} {severity}{'s' if count > 1 and severity != 'information' else ''}"
            return
