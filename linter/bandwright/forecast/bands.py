"""From the band items of a filter to edges in rad/sample and levels in dB, and to the mask they make."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterable
from dataclasses import dataclass

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Quantity
from bandwright.theory.closed_form.types import BandKind, Mask, MaskBand

LEAST_WIDTH = 1e-9 * math.pi
"""rad/sample. Edges nearer to one another, to 0 Hz or to Nyquist are too close for double precision."""

LEAST_HEIGHT_DB = 1e-9
"""A window of gains that is lower leaves a filter no room."""


@dataclass(frozen=True, slots=True)
class Band:
    """One band item as far as it can be read: None is an edge or a level that can't be."""

    index: int
    kind: BandKind
    low: float | None
    """rad/sample; 0 where the item has no `from`."""
    high: float | None
    """rad/sample; pi where the item has no `to`."""
    least: float | None
    """dB, -inf where nothing is asked."""
    most: float | None
    """dB, +inf where nothing is asked."""
    relative: bool

    def edge_path(self, side: str) -> Path:
        """The path of the edge on this side, `low` or `high`."""
        return ("bands", self.index, self.kind, "from" if side == "low" else "to")


def sample_rate_hz(filter: Filter) -> float | None:
    """The filter's input rate in Hz, or None where it is absent, unknown or not positive."""
    rate = filter.quantity("sample_rate")
    hertz = quantities.hertz(rate, None) if rate is not None else None
    return hertz if hertz is not None and hertz > 0.0 else None


def bands(filter: Filter) -> tuple[Band, ...]:
    """Every band item whose kind can be told, in the order of the file."""
    rate_hz = sample_rate_hz(filter)
    return tuple(_band(filter, index, kind, rate_hz) for index, kind in filter.band_kinds())


def mask(filter: Filter, items_read: tuple[Band, ...] | None = None) -> Mask | None:
    """The mask that the band items make, or None where they don't make one.

    They don't where a part of them can't be read, where bands are out of order, overlap or leave the
    range from 0 to Nyquist, where edges are too close, and where nothing is passed. Findings say which of
    it is the case.
    """
    if filter.is_unknown("bands") or filter.is_unknown("sample_rate") or filter.is_unknown("phase"):
        return None
    items = []
    for band in bands(filter) if items_read is None else items_read:
        if band.low is None or band.high is None or band.least is None or band.most is None:
            return None
        if not 0.0 <= band.low < band.high <= math.pi * (1.0 + 1e-12):
            return None
        if not band.most - band.least >= LEAST_HEIGHT_DB:
            return None
        if band.kind == "stop" and band.relative and band.most >= 0.0:
            return None
        items.append(
            MaskBand(
                band.kind,
                band.low,
                min(band.high, math.pi),
                band.least if math.isfinite(band.least) else None,
                band.most if math.isfinite(band.most) else None,
                band.relative,
                band.index,
            )
        )
    ordered = [item for item in items if item.kind != "bounds"]
    for before, after in itertools.pairwise(ordered):
        if after.low < before.high or (after.low == before.high and "pass" in (before.kind, after.kind)):
            return None
    if not any(item.kind == "pass" for item in items) or too_close(items):
        return None
    phase = filter.text("phase")
    return Mask(tuple(items), "linear" if phase == "linear" else "minimum" if phase == "minimum" else "any")


def too_close(items: Iterable[Band | MaskBand]) -> tuple[float, float] | None:
    """The first two edges, 0 Hz and Nyquist among them, nearer than `LEAST_WIDTH`; rad/sample."""
    edges = {0.0, math.pi}
    for item in items:
        edges.update(min(edge, math.pi) for edge in (item.low, item.high) if edge is not None)
    for low, high in itertools.pairwise(sorted(edges)):
        if high - low < LEAST_WIDTH:
            return low, high
    return None


def _band(filter: Filter, index: int, kind: str, rate_hz: float | None) -> Band:
    place: Path = ("bands", index, kind)
    item_kind: BandKind = "pass" if kind == "pass" else "stop" if kind == "stop" else "bounds"
    low = _edge(filter, (*place, "from"), 0.0, rate_hz)
    high = _edge(filter, (*place, "to"), math.pi, rate_hz)
    main = (*place, "ripple" if kind == "pass" else "attenuation")
    if filter.get(*main) is None:
        least = _gain(filter, (*place, "gain", "min"), -math.inf)
        most = _gain(filter, (*place, "gain", "max"), math.inf)
        says_nothing = filter.get(*place, "gain", "min") is None and filter.get(*place, "gain", "max") is None
        if says_nothing or filter.is_unknown(*place, "gain"):
            least = most = None
        return Band(index, item_kind, low, high, least, most, relative=False)
    level = filter.quantity(*main)
    if level is None:
        return Band(index, item_kind, low, high, None, None, relative=True)
    if kind == "pass":
        return Band(
            index,
            item_kind,
            low,
            high,
            -quantities.decibels(quantities.peak_to_peak(level)),
            0.0,
            relative=True,
        )
    return Band(index, item_kind, low, high, -math.inf, -quantities.decibels(level), relative=True)


def _edge(filter: Filter, path: Path, absent: float, rate_hz: float | None) -> float | None:
    setting = filter.get(*path)
    if setting is None:
        return None if filter.is_unknown(*path) else absent
    return quantities.radians(setting.value, rate_hz) if isinstance(setting.value, Quantity) else None


def _gain(filter: Filter, path: Path, absent: float) -> float | None:
    setting = filter.get(*path)
    if setting is None:
        return absent
    return quantities.decibels(setting.value) if isinstance(setting.value, Quantity) else None
