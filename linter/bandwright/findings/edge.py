"""Findings about frequencies: edges, their order, and the transitions between bands."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Place, Quantity
from bandwright.findings import maxima
from bandwright.findings.case import CHOICE, Case
from bandwright.findings.level import reaches_pass_band
from bandwright.findings.rules import Hit, finding
from bandwright.forecast import bands, gaps
from bandwright.forecast.bands import Band
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.vary import varied
from bandwright.remedies import edges, relaxations

NYQUIST = math.pi * (1.0 + 1e-12)
"""Half the sample rate in rad/sample, with room for the rounding of a frequency in Hz."""

NARROW_ORDER = relaxations.NARROW_ORDER
"""A transition is narrow where even an elliptic filter needs a higher order (for a band: twice that)."""

UNEVEN = 1.5
"""Transitions differ where one is that many times as wide as the narrowest."""

WORTH_SAVING = 0.1
"""The share of the taps that is worth a word."""

NARROW_TAPS = 1000
"""Where only linear phase is allowed, a transition is narrow that takes more taps."""


@finding(
    "edge/sample-rate-not-positive",
    "error",
    "A sample rate of {rate} has no frequencies below its Nyquist frequency; write the rate of the filter's"
    " input.",
    needs=("sample_rate",),
)
def sample_rate_not_positive(case: Case) -> Iterator[Hit]:
    """A sample rate of zero or less."""
    rate = case.filter.get("sample_rate")
    if rate is not None and case.forecast.sample_rate_hz is None:
        yield Hit("edge/sample-rate-not-positive", Place(("sample_rate",)), (("rate", rate.written),))


@finding(
    "edge/below-zero",
    "error",
    "The {kind} edge {edge} is below 0 Hz, and the bands of a filter lie between 0 Hz and Nyquist; write it"
    " without the sign, or remove it.",
    remedies=(edges.without_sign,),
)
def below_zero(case: Case) -> Iterator[Hit]:
    """A negative edge."""
    for path, _ in _edges(case):
        quantity = case.filter.quantity(*path)
        if quantity is not None and quantity.number < 0:
            yield Hit("edge/below-zero", Place(path), _named(case.filter, path))


@finding(
    "edge/absurd-millihertz",
    "warning",
    {
        "": "{edge} is in millihertz, {share} of the sample rate {rate}; if megahertz are meant, write"
        " `{meant}`.",
        "rate": "The sample rate {rate} is in millihertz, and the edge {edge} lies far above it; if"
        " megahertz are meant, write `{meant}`.",
    },
    remedies=(edges.megahertz,),
    needs=("sample_rate",),
)
def absurd_millihertz(case: Case) -> Iterator[Hit]:
    """A frequency in mHz that only makes sense in MHz: with an edge in MHz it would lie below Nyquist."""
    filter, rate_hz = case.filter, case.forecast.sample_rate_hz
    rate = filter.get("sample_rate")
    if rate_hz is None or rate is None:
        return
    if (path := _millihertz_rate(case)) is not None:
        edge = filter.get(*path)
        facts = (
            ("rate", rate.written),
            ("edge", edge.written if edge else ""),
            ("meant", _in_megahertz(filter, ("sample_rate",))),
        )
        yield Hit(
            "edge/absurd-millihertz", Place(("sample_rate",)), facts, "rate", ((Place(path), "this edge"),)
        )
    for path, quantity in _millihertz_edges(case, rate_hz):
        yield Hit(
            "edge/absurd-millihertz",
            Place(path),
            (
                ("edge", quantities.show_quantity(quantity)),
                ("share", quantities.show_number(quantity.number * 1e-3 / rate_hz, 2)),
                ("rate", rate.written),
                ("meant", _in_megahertz(filter, path)),
            ),
            "",
            ((Place(("sample_rate",)), "the sample rate"),),
        )


def _millihertz_edges(case: Case, rate_hz: float) -> Iterator[tuple[Path, Quantity]]:
    """The edges in mHz that would lie below Nyquist in MHz."""
    for path, _ in _edges(case):
        quantity = case.filter.quantity(*path)
        if quantity is not None and quantity.unit == "mHz" and 0 < quantity.number * 1e6 <= rate_hz / 2:
            yield path, quantity


def _millihertz_rate(case: Case) -> Path | None:
    """The first edge that lies above a sample rate in mHz, and below Nyquist if that is meant in MHz."""
    filter = case.filter
    rate = filter.quantity("sample_rate")
    if rate is None or rate.unit != "mHz":
        return None
    for path, _ in _edges(case):
        edge = filter.quantity(*path)
        hertz = quantities.hertz(edge) if edge is not None else None
        if hertz is not None and rate.number * 0.5e-3 < hertz <= rate.number * 0.5e6:
            return path
    return None


def _in_megahertz(filter: Filter, path: Path) -> str:
    quantity = filter.quantity(*path)
    return f"{quantities.show_number(quantity.number, 7)} MHz" if quantity is not None else ""


@finding(
    "edge/beyond-nyquist",
    "error",
    {
        "": "The {kind} edge {edge} is above Nyquist, {nyquist}, where a filter can't tell frequencies"
        " apart; lower it, or raise the sample rate.",
        "device": "The {kind} edge {edge} is above Nyquist, {nyquist}, because the rate comes from `{device}`"
        " ({rate}); give this filter its own rate.",
        "angular": "The {kind} edge {edge} is above Nyquist, {nyquist}; divided by 2 pi it is {meant}, so"
        " it may be an angular frequency.",
        "convention": "The {kind} edge {edge} is above Nyquist, {nyquist}; the same number in another"
        " convention is `{meant}`, which is below.",
        "all": "All edges of this filter, from {edge} upwards, are above Nyquist, {nyquist}; check the"
        " sample rate {rate}.",
    },
    remedies=(edges.divided_by_two_pi, edges.in_other_convention, edges.larger_rate, edges.own_rate),
    needs=("sample_rate",),
)
def beyond_nyquist(case: Case) -> Iterator[Hit]:
    """An edge above half the sample rate; one for each band, and one for all where all are."""
    filter, rate = case.filter, case.filter.get("sample_rate")
    if _millihertz_rate(case) is not None:
        return
    found = [(path, w) for path, w in _edges(case) if w is not None]
    beyond = [path for path, w in found if w > NYQUIST]
    whole = len(found) > 1 and not filter.is_unknown("bands")
    if whole and len(beyond) == len(found) and not any(_normalised(filter, path) for path in beyond):
        lowest = min(found, key=lambda one: one[1])[0]
        facts = (*_named(filter, lowest), *_half_the_rate(case, lowest))
        related = tuple((Place(path), "above Nyquist") for path in beyond)
        yield Hit("edge/beyond-nyquist", Place(("sample_rate",)), facts, "all", related)
        return
    seen: set[Path] = set()
    for path in beyond:
        if path[:2] not in seen:
            seen.add(path[:2])
            by_rate = rate is not None and not _normalised(filter, path)
            related = ((Place(("sample_rate",)), "the sample rate"),) if by_rate else ()
            form, meant = _reading(filter, path)
            facts = (*_named(filter, path), *_half_the_rate(case, path), ("meant", meant))
            yield Hit("edge/beyond-nyquist", Place(path), facts, form, related)


def _reading(filter: Filter, path: Path) -> tuple[str, str]:
    """Which sentence fits an edge above Nyquist, and what the edge may mean instead."""
    if (angular := edges.angular(filter, path)) is not None:
        return "angular", quantities.show_quantity(angular)
    if (other := edges.other_convention(filter.quantity(*path))) is not None:
        return "convention", quantities.show_quantity(other)
    rate = filter.get("sample_rate")
    from_device = rate is not None and rate.origin == "device" and not _normalised(filter, path)
    return "device" if from_device else "", ""


def _half_the_rate(case: Case, path: Path) -> tuple[tuple[str, object], ...]:
    """Nyquist in the unit of an edge, and where it comes from."""
    filter, edge, rate = case.filter, case.filter.quantity(*path), case.filter.get("sample_rate")
    normalised = quantities.UNITS[edge.unit].per_nyquist if edge is not None else None
    if edge is not None and normalised is not None:
        nyquist = f"{normalised:g} {edge.unit}"
    else:
        nyquist = quantities.show((case.forecast.sample_rate_hz or 0.0) / 2, "frequency")
    return (
        ("nyquist", nyquist),
        ("rate", rate.written if rate else ""),
        ("device", filter.text("device") or ""),
    )


def _normalised(filter: Filter, path: Path) -> bool:
    """Whether an edge is written against the sample rate."""
    edge = filter.quantity(*path)
    return edge is not None and quantities.UNITS[edge.unit].per_nyquist is not None


@finding(
    "edge/from-above-to",
    "error",
    {
        "": "This {kind} band runs from {low} down to {high}, so it holds no frequency; swap the two.",
        "equal": "This {kind} band starts and ends at {low}, so it holds no more than one frequency; give"
        " it a width.",
        "nyquist": "This {kind} band starts at Nyquist, where it has to end, so it holds no more than one"
        " frequency; lower its start.",
        "zero": "This {kind} band ends at 0 Hz, where it starts, so it holds no more than one frequency;"
        " raise its end.",
    },
    remedies=(edges.swap_edges,),
    needs=("sample_rate",),
)
def from_above_to(case: Case) -> Iterator[Hit]:
    """A band whose edges are the wrong way round, or equal."""
    for band in _in_range(case):
        if band.low is None or band.high is None or band.low < band.high:
            continue
        low, high = (case.filter.get(*band.edge_path(side)) for side in ("low", "high"))
        facts = (
            ("kind", band.kind),
            ("low", low.written if low else ""),
            ("high", high.written if high else ""),
        )
        if low is None:
            yield Hit("edge/from-above-to", Place(band.edge_path("high")), facts, "zero")
        elif high is None:
            yield Hit("edge/from-above-to", Place(band.edge_path("low")), facts, "nyquist")
        else:
            form = "equal" if band.low == band.high else ""
            related = ((Place(band.edge_path("high")), "the other edge"),)
            yield Hit("edge/from-above-to", Place(band.edge_path("low")), facts, form, related)


@finding(
    "edge/bands-out-of-order",
    "error",
    "This {kind} band lies below the {other} band that stands ahead of it; put the bands in order of rising"
    " frequency.",
    needs=("sample_rate",),
)
def bands_out_of_order(case: Case) -> Iterator[Hit]:
    """A band that lies wholly below the one before it."""
    for before, after in _neighbours(case):
        if _below(after, before):
            yield Hit(
                "edge/bands-out-of-order",
                Place(("bands", after.index, after.kind), "key"),
                (("kind", after.kind), ("other", before.kind)),
                "",
                ((Place(("bands", before.index, before.kind), "key"), "the band ahead of it"),),
            )


@finding(
    "edge/bands-overlap",
    "error",
    {
        "": "This {kind} band starts at {start}, below the end of the {other} band ahead of it, {end};"
        " leave room for a transition between them.",
        "touch": "This {kind} band starts at {start}, where the {other} band ahead of it ends, so no"
        " transition is left; move one of the two edges.",
        "no-from": "This {kind} band has no `from`, so it starts at 0 Hz inside the {other} band ahead of"
        " it; give it a `from`.",
        "no-to": "This {kind} band has no `to`, so it reaches Nyquist over the {other} band after it; give"
        " it a `to`.",
    },
    needs=("sample_rate",),
)
def bands_overlap(case: Case) -> Iterator[Hit]:
    """Neighbours that share frequencies, or touch where one of them passes."""
    filter = case.filter
    for before, after in _neighbours(case):
        if before.high is None or after.low is None or _below(after, before) or after.low > before.high:
            continue
        if after.low == before.high and before.kind == after.kind == "stop":
            continue
        end, start = filter.get(*before.edge_path("high")), filter.get(*after.edge_path("low"))
        ahead, behind = (Place(("bands", band.index, band.kind), "key") for band in (before, after))
        if end is None:
            facts = (("kind", before.kind), ("other", after.kind))
            yield Hit("edge/bands-overlap", ahead, facts, "no-to", ((behind, "the band after it"),))
        elif start is None:
            facts = (("kind", after.kind), ("other", before.kind))
            yield Hit("edge/bands-overlap", behind, facts, "no-from", ((ahead, "the band ahead of it"),))
        else:
            yield Hit(
                "edge/bands-overlap",
                Place(after.edge_path("low")),
                (
                    ("kind", after.kind),
                    ("other", before.kind),
                    ("start", start.written),
                    ("end", end.written),
                ),
                "touch" if after.low == before.high else "",
                ((Place(before.edge_path("high")), "the end of the band ahead of it"),),
            )


@finding(
    "edge/too-close",
    "error",
    "The edge {edge} is less than a thousand-millionth of Nyquist from {other}, too close to compute with;"
    " part them, or decimate first.",
    needs=("bands", "sample_rate"),
)
def too_close(case: Case) -> Iterator[Hit]:
    """Two edges, or one and 0 Hz or Nyquist, that double precision can't part well enough."""
    found = [(path, w) for path, w in _edges(case) if w is not None]
    close, rate_hz = bands.too_close(case.bands), case.forecast.sample_rate_hz
    if close is None or not all(0.0 <= w <= NYQUIST for _, w in found):
        return
    if rate_hz is not None and any(True for _ in _millihertz_edges(case, rate_hz)):
        return
    paths = {w: path for path, w in found}
    written = {0.0: "0 Hz", math.pi: "Nyquist"}
    written |= {w: setting.written for path, w in found if (setting := case.filter.get(*path)) is not None}
    edge, other = close if close[1] not in paths else close[::-1]
    related = ((Place(paths[other]), "the edge next to it"),) if other in paths else ()
    facts = (("edge", written[edge]), ("other", written[other]))
    yield Hit("edge/too-close", Place(paths[edge]), facts, "", related)


@finding(
    "edge/no-pass-band",
    "error",
    "No band passes anything, so a filter of gain 0 would do; add a `pass` band.",
    needs=("bands",),
)
def no_pass_band(case: Case) -> Iterator[Hit]:
    """A mask without any pass band."""
    kinds = [kind for _, kind in case.filter.band_kinds()]
    if kinds and "pass" not in kinds:
        yield Hit("edge/no-pass-band", Place(("bands",), "key"))


@finding(
    "edge/no-stop-band",
    "warning",
    "No band stops anything, so a plain wire of gain 1 would do; add a `stop` band.",
    needs=("bands",),
)
def no_stop_band(case: Case) -> Iterator[Hit]:
    """A mask that only passes."""
    kinds = {kind for _, kind in case.filter.band_kinds()}
    if kinds == {"pass"}:
        yield Hit("edge/no-stop-band", Place(("bands",), "key"))


@finding(
    "edge/shape-not-judged-yet",
    "warning",
    "No IIR order can be computed yet for a mask of this shape, so nothing here says whether it can be met;"
    " FIR families are judged.",
    needs=CHOICE,
)
def shape_not_judged_yet(case: Case) -> Iterator[Hit]:
    """Only IIR families are allowed, and the mask is none that their orders are computed for."""
    forecast, kinds = case.forecast, {kind for _, kind in case.filter.band_kinds()}
    allowed = [one for one in forecast.candidates if one.allowed]
    if not allowed or forecast.selectivity is not None or any(one.kind == "fir" for one in allowed):
        return
    if {"pass", "stop"} <= kinds and not reaches_pass_band(case):
        yield Hit("edge/shape-not-judged-yet", Place(("bands",), "key"))


@finding(
    "edge/uneven-transitions",
    "information",
    "The transition from {low} to {high} alone sets the length, as the next one is {times} times as wide; as"
    " much for both saves {saved} of {taps} taps.",
    remedies=(relaxations.even_transitions,),
    needs=CHOICE,
)
def uneven_transitions(case: Case) -> Iterator[Hit]:
    """An FIR filter whose narrowest transition is much narrower than the others."""
    chosen, filter = case.chosen(), case.filter
    if chosen is None or chosen.taps is None or not maxima.keeps_all(case):
        return
    wider = relaxations.evened(filter, case.gaps)
    if wider is None:
        return
    gap, edge = wider
    times = sorted(one.width for one in case.gaps)[1] / gap.width
    after = Forecast(varied(filter, gap.stop, edge), case.forecast.answers).candidate(chosen.family)
    if times < UNEVEN or after is None or after.taps is None:
        return
    taps, fewer = case.exact(chosen.taps), case.exact(after.taps)
    if taps is None or fewer is None or taps - fewer < WORTH_SAVING * taps:
        return
    facts = (
        *gap.facts,
        ("times", quantities.show_number(times, 2)),
        ("saved", f"{taps - fewer:g}"),
        ("taps", f"{taps:g}"),
    )
    yield Hit("edge/uneven-transitions", Place(gap.stop), facts, "", gap.places)


@finding(
    "edge/transition-narrow",
    "warning",
    {
        "": "The transition is only {low} to {high}, so even an elliptic filter, the smallest of all, needs"
        " order {order}; widen it, or decimate first.",
        "linear": "The transition is only {low} to {high}, so linear phase takes {taps} taps; widen it, or"
        " decimate first.",
        "about": "The transition is only {low} to {high}, so linear phase takes about {taps} taps; widen it,"
        " or decimate first.",
    },
    remedies=(relaxations.wider_transition, relaxations.fewer_taps(NARROW_TAPS)),
    needs=CHOICE,
)
def transition_narrow(case: Case) -> Iterator[Hit]:
    """A transition that makes every filter long, of a filter that keeps its maxima all the same."""
    forecast, chosen = case.forecast, case.chosen()
    if chosen is None or not maxima.keeps_all(case):
        return
    scale = 2 if forecast.selectivity is not None and forecast.selectivity.doubles else 1
    elliptic = forecast.candidate("elliptic")
    if elliptic is not None and elliptic.least_order is not None:
        gap = gaps.bound_by(case.gaps, elliptic.binding)
        if gap is not None and elliptic.least_order > NARROW_ORDER * scale:
            facts = (*gap.facts, ("order", elliptic.least_order))
            yield Hit("edge/transition-narrow", Place(gap.stop), facts, "", gap.places)
    elif chosen.taps is not None and case.exceeds(chosen.taps, NARROW_TAPS):
        gap, exact = gaps.narrowest(case.gaps), case.exact(chosen.taps)
        if gap is not None:
            taps = exact if exact is not None else chosen.taps.value
            form = "linear" if exact is not None else "about"
            yield Hit(
                "edge/transition-narrow",
                Place(gap.stop),
                (*gap.facts, ("taps", f"{taps:g}")),
                form,
                gap.places,
            )


def _edges(case: Case) -> Iterator[tuple[Path, float | None]]:
    """The path of every edge that is written, with its frequency in rad/sample where that can be told."""
    for band in case.bands:
        for side, w in (("low", band.low), ("high", band.high)):
            path = band.edge_path(side)
            if case.filter.get(*path) is not None:
                yield path, w


def _named(filter: Filter, path: Path) -> tuple[tuple[str, object], ...]:
    """An edge in words."""
    setting = filter.get(*path)
    return (("kind", path[2]), ("edge", setting.written if setting is not None else ""))


def _in_range(case: Case) -> Iterator[Band]:
    """The bands whose edges can be read and lie between 0 Hz and Nyquist."""
    for band in case.bands:
        if band.low is not None and band.high is not None and 0.0 <= band.low <= NYQUIST >= band.high >= 0.0:
            yield band


def _neighbours(case: Case) -> Iterator[tuple[Band, Band]]:
    """Each two pass or stop bands that follow one another in the file."""
    ordered = [
        band
        for band in _in_range(case)
        if band.kind != "bounds" and band.low is not None and band.high is not None and band.low < band.high
    ]
    yield from itertools.pairwise(ordered)


def _below(one: Band, other: Band) -> bool:
    """Whether a band lies wholly below another."""
    return one.high is not None and other.low is not None and one.high <= other.low
