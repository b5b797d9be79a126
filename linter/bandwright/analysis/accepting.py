"""Findings accepted on purpose: which hits they cover, and which entries are not in order themselves."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from bandwright.analysis.types import Analysis
from bandwright.bandfile import quantities
from bandwright.bandfile.grammar import nearest
from bandwright.bandfile.values import Filter, Place, Quantity
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import Hit

NEVER = ("syntax/", "key/", "accepted/", "proof/fails")
"""What can't be accepted: it has to be put right."""


@dataclass(frozen=True, slots=True)
class Entry:
    """One item of a filter's `accepted`."""

    index: int
    finding: str
    up_to: Quantity | None
    until: str | None
    reason: str
    readable: bool
    """False where its limits are written but can't be read; then it accepts nothing."""


def entries(filter: Filter) -> Iterator[Entry]:
    """The entries whose finding can be read."""
    indices = sorted(
        {
            path[1]
            for path, _ in filter.settings
            if path[:1] == ("accepted",) and len(path) > 1 and isinstance(path[1], int)
        }
    )
    for index in indices:
        at = ("accepted", index)
        name = filter.text(*at, "finding")
        if name is None:
            continue
        yield Entry(
            index,
            name,
            filter.quantity(*at, "up_to"),
            filter.text(*at, "until"),
            filter.text(*at, "reason") or "",
            not any(filter.is_unknown(*at, key) for key in ("up_to", "until", "reason")),
        )


def judge(filter: Filter, analysis: Analysis, today: str) -> Iterator[tuple[Hit, Entry | None]]:
    """Each hit of the filter with the entry that accepts it, then hits about the entries themselves."""
    listed = list(entries(filter))
    rate_hz = analysis.forecast.sample_rate_hz
    used: set[int] = set()
    for hit in analysis.hits:
        covering = [entry for entry in listed if _covers(entry, hit, today, rate_hz)]
        used.update(entry.index for entry in covering)
        yield hit, covering[0] if covering else None
    waiting = {name for _, ids in analysis.open for name in ids}
    for entry in listed:
        if entry.index not in used and entry.finding not in waiting:
            problem = _problem(entry, analysis, today)
            if problem is not None:
                yield problem, None


def _covers(entry: Entry, hit: Hit, today: str, rate_hz: float | None) -> bool:
    if entry.finding != hit.id or not entry.readable or not entry.reason or hit.id.startswith(NEVER):
        return False
    if entry.until is not None and entry.until < today:
        return False
    if hit.figure is None:
        return True
    limit = _in_unit_of(hit.figure[1], entry.up_to, rate_hz) if entry.up_to is not None else None
    return limit is not None and hit.figure[0] <= limit * (1.0 + 1e-12)


def _in_unit_of(unit: str, limit: Quantity, rate_hz: float | None) -> float | None:
    """The number of an `up_to` in the unit of a finding's figure; None where it is of another kind."""
    if unit == "s":
        return quantities.seconds(limit, rate_hz)
    return limit.number if limit.unit in ("", unit) else None


def _problem(entry: Entry, analysis: Analysis, today: str) -> Hit | None:
    """What is wrong with an entry that covers nothing; None where it only lacks its reason."""
    place = Place(("accepted", entry.index, "finding"))
    if entry.finding.startswith(NEVER):
        return Hit("accepted/not-acceptable", place, (("finding", entry.finding),))
    if entry.finding not in RULES:
        near = nearest(entry.finding, RULES)
        facts = (("finding", entry.finding), ("nearest", near or ""))
        return Hit("accepted/unknown-finding", place, facts)
    if entry.until is not None and entry.until < today:
        until = Place(("accepted", entry.index, "until"))
        return Hit("accepted/expired", until, (("finding", entry.finding), ("until", entry.until)))
    hit = next((hit for hit in analysis.hits if hit.id == entry.finding), None)
    if hit is None:
        nothing = Hit("accepted/nothing-to-accept", place, (("finding", entry.finding),))
        return nothing if _was_looked_for(entry.finding, analysis) else None
    if not entry.readable or not entry.reason or hit.figure is None:
        return None
    facts = (("finding", entry.finding), ("value", _in_words(*hit.figure)))
    if entry.up_to is None:
        return Hit("accepted/no-limit", place, facts)
    return Hit("accepted/over-its-limit", Place(("accepted", entry.index, "up_to")), facts)


def _was_looked_for(id: str, analysis: Analysis) -> bool:
    """Whether the filter could be judged for this finding: all that it needs is known."""
    needs = RULES[id].needs
    if any(analysis.filter.is_unknown(*key.split(".")) for key in needs):
        return False
    return analysis.forecast.mask is not None or "bands" not in needs


def _in_words(value: float, unit: str) -> str:
    return quantities.show(value, "time") if unit == "s" else f"{value:g} {unit}".strip()
