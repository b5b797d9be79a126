"""A filter in a few words, for titles and outlines."""

from __future__ import annotations

from bandwright.bandfile.values import Filter

KINDS = {
    ("pass", "stop"): "Low-pass",
    ("stop", "pass"): "High-pass",
    ("stop", "pass", "stop"): "Band-pass",
    ("pass", "stop", "pass"): "Band-stop",
}


def kind(filter: Filter) -> str:
    """What kind of filter its bands make: "Low-pass", "Band-stop", "Multiband"."""
    kinds = [kind for _, kind in filter.band_kinds() if kind != "bounds"]
    merged = tuple(kind for at, kind in enumerate(kinds) if at == 0 or kind != kinds[at - 1])
    return KINDS.get(merged, "Multiband")


def summary(filter: Filter) -> str:
    """The filter in a few words: "Low-pass, 20 Hz to 25 Hz at 4 kHz"."""
    name = kind(filter)
    if name in ("Low-pass", "High-pass"):
        edges = _edges(filter, ("pass", "stop") if name == "Low-pass" else ("stop", "pass"))
    else:
        inner = "stop" if name == "Band-stop" else "pass"
        edges = next(
            (_edges(filter, (inner,), index) for index, kind in filter.band_kinds() if kind == inner), ""
        )
    rate = filter.get("sample_rate")
    words = name + (f", {edges}" if edges else "") + (f" at {rate.written}" if rate and rate.known else "")
    phase = filter.text("phase")
    return words if phase in (None, "any") else f"{words}, {phase} phase"


def _edges(filter: Filter, kinds: tuple[str, ...], only: int | None = None) -> str:
    """The inner edges "20 Hz to 25 Hz" of the bands named, or both edges of one band."""
    written = []
    for index, kind in filter.band_kinds():
        if kind not in kinds or (only is not None and index != only):
            continue
        sides = ("from", "to") if len(kinds) == 1 else ("to",) if kind == kinds[0] else ("from",)
        written += [s.written for side in sides if (s := filter.get("bands", index, kind, side)) and s.known]
    return " to ".join(written[:2])
