"""What a remedy proposes: new texts for settings of one filter, and the title that tells their effect."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Literal

from bandwright.bandfile.values import Path, Place
from bandwright.forecast.forecast import Forecast

Kind = Literal["keeps-requirement", "changes-requirement", "accepts"]


@dataclass(frozen=True, slots=True)
class Change:
    """An edit of one filter, by paths: each gets a new text, or is removed where the text is None."""

    kind: Kind
    title: str
    """Words with figures to fill in: `{before[bits]}`, `{after[order]}`; names as in `analysis.quotes`."""
    settings: tuple[tuple[Path, str | None], ...] = ()


Remedy = Callable[[Forecast, Place], Iterator[Change]]
"""Takes the filter's forecast and the place that the finding points at; yields changes, best first."""
