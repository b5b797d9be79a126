"""The table of every key of a band file.

The reader, completion, hover, the reference and the JSON Schema all come from `KEYS`. A path is a
pattern inside its block, with `"*"` for any index or name: `("bands", "*", "pass", "from")`.
"""

from __future__ import annotations

from collections.abc import Iterable
from itertools import islice
from typing import Final, Literal, NamedTuple

from bandwright import limits
from bandwright.bandfile.values import Path

FORMAT: Final = "bandwright/1"

Where = Literal["top", "device", "filter"]

Kind = Literal[
    "text",  # str
    "name",  # str, one of `names`
    "names",  # tuple[str, ...]: one name or a list of names
    "reference",  # str, the name of a device
    "date",  # str, YYYY-MM-DD
    "finding",  # str, area/name
    "quantity",  # Quantity of `dimension`; or str where it is one of `names`
    "figure",  # Quantity of any dimension; its unit is "" where the number stands bare
    "count",  # int of at least `least`; or str where it is one of `names`
    "number",  # float, without a unit
    "numbers",  # tuple[float, ...]
    "arithmetic",  # str, a number format; where `arithmetic` is a mapping, its keys have their own paths
    "mapping",  # only its keys have values
    "list",  # only its items have values
]


class Key(NamedTuple):
    """One row of the grammar."""

    path: tuple[str, ...]
    kind: Kind
    doc: str
    """One sentence, shown in completion, hover, the reference and the schema."""
    example: str
    where: tuple[Where, ...] = ("filter",)
    dimension: str = ""
    """Of a quantity: a key of `quantities.FITS`."""
    names: tuple[str, ...] = ()
    default: str | int | None = None
    required: bool = False
    judged: bool = True
    """Whether this release judges what the key asks. Its default may always be written out."""
    unjudged_names: tuple[str, ...] = ()
    """Names that may be written but are not judged yet, of a key that is."""
    least: int = 1
    """The smallest count."""
    symmetric: bool = False
    """Whether the quantity may be written with a plus-minus sign."""


FAMILIES: Final = {
    "butterworth": "Maximally flat in the pass band and monotone throughout.",
    "chebyshev-1": "Ripples in the pass band, falls monotonically beyond it.",
    "chebyshev-2": "Monotone in the pass band, ripples in the stop band, zeros on the unit circle.",
    "elliptic": "The least order of all; ripples in the pass bands and in the stop bands.",
    "bessel": "The flattest group delay in the pass band, and the slowest roll-off.",
    "legendre": "The steepest of the families whose gain falls monotonically throughout.",
    "equiripple": "The shortest linear-phase FIR filter that meets the mask.",
    "kaiser-window": "The ideal impulse response under a Kaiser window; simple and somewhat long.",
    "least-squares": "The linear-phase FIR filter with the least squared error over the bands.",
    "half-band": "A linear-phase FIR filter whose every second coefficient is zero; edges mirror at fs/4.",
    "interpolated": "A sparse linear-phase FIR filter and a short one that removes its images.",
}
IIR_FAMILIES: Final = tuple(FAMILIES)[:6]
FIR_FAMILIES: Final = tuple(FAMILIES)[6:]

STRUCTURES: Final = {
    "direct-form-1": "One difference equation with separate delay lines for input and output.",
    "direct-form-2": "One difference equation with a single shared delay line ahead of the zeros.",
    "direct-form-1-transposed": "The transpose of direct form 1: poles and zeros in separate chains of sums.",
    "direct-form-2-transposed": "The transpose of direct form 2: one chain of sums, good in floating point.",
    "cascade": "Second-order sections in series: each pole pair is rounded alone.",
    "parallel": "Second-order sections side by side, their outputs added.",
    "lattice-ladder": "Reflection coefficients with taps: stable while every one stays below 1.",
    "allpass-sum": "Half the sum or difference of two all-pass filters, insensitive in the pass band.",
    "coupled": "Pole pairs as rotations: an even grid of poles, also near z = 1.",
    "state-space": "Sections with a full state matrix, scaled for the least round-off noise.",
    "transversal": "A tapped delay line with one multiplication per tap.",
    "symmetric": "A tapped delay line that folds equal taps: half the multiplications, linear phase only.",
}
IIR_STRUCTURES: Final = tuple(STRUCTURES)[:10]
FIR_STRUCTURES: Final = tuple(STRUCTURES)[10:]

FLOATING_FORMATS: Final = {
    "float64": "IEEE 754 binary64: 53 significant bits.",
    "float32": "IEEE 754 binary32: 24 significant bits.",
    "float16": "IEEE 754 binary16: 11 significant bits.",
}
COMMON_FORMATS: Final = {
    **FLOATING_FORMATS,
    "q31": "32-bit words with 31 fraction bits: -1 to just below 1.",
    "q15": "16-bit words with 15 fraction bits: -1 to just below 1.",
    "q1.14": "16-bit words with one integer bit and 14 fraction bits: -2 to just below 2.",
    "q7": "8-bit words with 7 fraction bits: -1 to just below 1.",
}
"""Number formats to offer; any `q<fraction bits>` and `q<integer bits>.<fraction bits>` is one."""

ROUNDINGS: Final = {
    "nearest-even": "To the nearest number, ties to the even one.",
    "nearest-up": "To the nearest number, ties upwards.",
    "down": "To the next lower number: the low bits are dropped.",
    "toward-zero": "To the next number of smaller magnitude.",
}
OVERFLOWS: Final = {
    "saturate": "A sum beyond the range becomes the nearest number in range.",
    "wrap": "A sum beyond the range wraps around, as two's complement does.",
}
BAND_KINDS: Final = ("pass", "stop", "bounds")

RESERVED: Final[dict[Where, tuple[str, ...]]] = {
    "top": ("masks", "together"),
    "device": (),
    "filter": ("mask", "after", "curve", "grid", "isi", "pulse"),
}
"""Keys kept for later, so that no file gives them another meaning."""

MERGED: Final = ("at_most", "signal")
"""Mappings of a filter that take over their device's keys one by one."""

_BOTH: Final[tuple[Where, ...]] = ("device", "filter")
_TOP: Final[tuple[Where, ...]] = ("top",)
_FROM = "The lower edge of the band; without it the band starts at 0 Hz."
_TO = "The upper edge of the band; without it the band ends at Nyquist."
_AT = "A single frequency in place of a band, judged at exactly that one."
_GAIN_MAX = "The highest gain that is allowed."
_GAIN_MIN = "The lowest gain that is allowed."


def _edges(kind: str) -> tuple[Key, ...]:
    band = ("bands", "*", kind)
    return (
        Key((*band, "from"), "quantity", _FROM, "25 Hz", dimension="frequency"),
        Key((*band, "to"), "quantity", _TO, "20 Hz", dimension="frequency"),
        Key((*band, "at"), "quantity", _AT, "50 Hz", dimension="frequency", judged=False),
    )


def _bounds(kind: str, *sides: str) -> tuple[Key, ...]:
    """The rows of a gain window: of a pass or stop band it is whole, of bounds either side may be missing."""
    band = ("bands", "*", kind)
    window = "The gain window itself, counted from 0 dB, in place of a ripple or an attenuation."
    docs = {"min": (_GAIN_MIN, "-0.2 dB"), "max": (_GAIN_MAX, "0.1 dB")}
    return (
        Key((*band, "gain"), "mapping", window, "{min: -0.2 dB, max: 0.1 dB}"),
        *(
            Key(
                (*band, "gain", side),
                "quantity",
                *docs[side],
                dimension="gain",
                required=kind != "bounds",
            )
            for side in sides
        ),
    )


KEYS: Final[tuple[Key, ...]] = (
    Key(
        ("format",),
        "name",
        "The version of the band-file format that this file is written in.",
        FORMAT,
        where=_TOP,
        names=(FORMAT,),
        required=True,
    ),
    Key(
        ("devices",),
        "mapping",
        "What the filters run on, by name; every key of a device is a default for its filters.",
        "{hoist-node: {sample_rate: 4 kHz}}",
        where=_TOP,
    ),
    Key(("devices", "*"), "mapping", "One device, by name.", "{sample_rate: 4 kHz}", where=_TOP),
    Key(
        ("filters",),
        "mapping",
        "The requirements of the filters, by name.",
        "{strain-slow: {bands: []}}",
        where=_TOP,
        required=True,
    ),
    Key(("filters", "*"), "mapping", "One filter, by name.", "{bands: []}", where=_TOP),
    Key(
        ("purpose",),
        "text",
        "What the filter is for, shown in outlines and reports.",
        "Static load, ahead of the 50 Hz log",
    ),
    Key(
        ("device",),
        "reference",
        "The device that the filter runs on; the device's keys are defaults for this filter.",
        "hoist-node",
    ),
    Key(
        ("sample_rate",),
        "quantity",
        "The rate of the filter's input; required unless every edge is normalised to it.",
        "4 kHz",
        where=_BOTH,
        dimension="rate",
    ),
    Key(
        ("bands",),
        "list",
        "The mask: pass and stop bands in order of rising frequency, and bounds that hold besides.",
        "[pass: {to: 20 Hz, ripple: 0.1 dB}, stop: {from: 25 Hz, attenuation: 70 dB}]",
        required=True,
    ),
    Key(
        ("bands", "*"),
        "mapping",
        "One band: exactly one of pass, stop and bounds.",
        "pass: {to: 20 Hz, ripple: 0.1 dB}",
    ),
    Key(
        ("bands", "*", "pass"),
        "mapping",
        "A band to keep: the gain stays inside a window.",
        "{to: 20 Hz, ripple: 0.1 dB}",
    ),
    *_edges("pass"),
    Key(
        ("bands", "*", "pass", "ripple"),
        "quantity",
        "The height of the gain window from peak to peak; the window contains 0 dB. ±0.05 dB says 0.1 dB.",
        "0.1 dB",
        dimension="level",
        symmetric=True,
    ),
    *_bounds("pass", "min", "max"),
    Key(
        ("bands", "*", "pass", "delay_ripple"),
        "quantity",
        "The variation of the group delay over the band, from peak to peak.",
        "1 ms",
        dimension="time",
        judged=False,
        symmetric=True,
    ),
    Key(
        ("bands", "*", "stop"),
        "mapping",
        "A band to suppress: the gain stays below a bound.",
        "{from: 25 Hz, attenuation: 70 dB}",
    ),
    *_edges("stop"),
    Key(
        ("bands", "*", "stop", "attenuation"),
        "quantity",
        "How far the gain stays below the highest gain in the pass bands, or below 0 dB without one.",
        "70 dB",
        dimension="level",
    ),
    *_bounds("stop", "max"),
    Key(
        ("bands", "*", "bounds"),
        "mapping",
        "Bounds that hold besides the pass and stop bands, and may overlap them.",
        "{gain: {max: 0.5 dB}}",
        judged=False,
    ),
    *_edges("bounds"),
    *_bounds("bounds", "min", "max"),
    Key(
        ("bands", "*", "bounds", "points"),
        "list",
        "Bounds that slope: straight lines in dB between neighbouring points.",
        "[{at: 10 Hz, max: 1 dB}, {at: 100 Hz, max: -20 dB}]",
        judged=False,
    ),
    Key(
        ("bands", "*", "bounds", "points", "*"),
        "mapping",
        "One point: a frequency with its bounds, or with a level and its tolerances.",
        "{at: 10 Hz, min: -1 dB, max: 1 dB}",
    ),
    Key(
        ("bands", "*", "bounds", "points", "*", "at"),
        "quantity",
        "The frequency of the point; the same frequency twice makes a step.",
        "10 Hz",
        dimension="frequency",
        required=True,
    ),
    Key(
        ("bands", "*", "bounds", "points", "*", "min"),
        "quantity",
        _GAIN_MIN,
        "-1 dB",
        dimension="gain",
    ),
    Key(("bands", "*", "bounds", "points", "*", "max"), "quantity", _GAIN_MAX, "1 dB", dimension="gain"),
    Key(
        ("bands", "*", "bounds", "points", "*", "level"),
        "quantity",
        "The nominal gain at the point, with `plus` and `minus` as its tolerances.",
        "-3 dB",
        dimension="gain",
    ),
    Key(
        ("bands", "*", "bounds", "points", "*", "plus"),
        "quantity",
        "How far the gain may be above the level.",
        "1 dB",
        dimension="level",
    ),
    Key(
        ("bands", "*", "bounds", "points", "*", "minus"),
        "quantity",
        "How far the gain may be below the level.",
        "1.5 dB",
        dimension="level",
    ),
    Key(
        ("bands", "*", "bounds", "interpolation"),
        "name",
        "Over which axis the lines between points are straight.",
        "linear-frequency",
        names=("log-frequency", "linear-frequency"),
        default="log-frequency",
        judged=False,
    ),
    Key(
        ("bands", "*", "bounds", "lag"),
        "mapping",
        "The phase lag, continuous from 0 Hz, as control loops need it.",
        "{max: 8 deg}",
        judged=False,
    ),
    Key(
        ("bands", "*", "bounds", "lag", "max"),
        "quantity",
        "The largest phase lag that is allowed.",
        "8 deg",
        dimension="angle",
        required=True,
    ),
    Key(
        ("zero_db",),
        "quantity",
        "What levels count from: gain 1, any constant, or the gain at a frequency.",
        "unity",
        dimension="frequency",
        names=("unity", "free"),
        default="unity",
        judged=False,
    ),
    Key(
        ("phase",),
        "name",
        "Which phase the filter has; linear is exact, so it leaves only FIR filters.",
        "linear",
        names=("any", "linear", "minimum"),
        default="any",
        unjudged_names=("minimum",),
    ),
    Key(
        ("run",),
        "name",
        "Whether the filter runs forward, or forward and backward over recorded data.",
        "forward",
        names=("forward", "forward-backward"),
        default="forward",
        judged=False,
    ),
    Key(
        ("decimate",),
        "count",
        "The whole number by which the output rate is lower than the input rate.",
        "4",
        judged=False,
    ),
    Key(
        ("interpolate",),
        "count",
        "The whole number by which the output rate is higher than the input rate.",
        "4",
        judged=False,
    ),
    Key(
        ("family",),
        "names",
        "The filter family, or a list of them; without it all are candidates.",
        "butterworth",
        where=_BOTH,
        names=tuple(FAMILIES),
        unjudged_names=("bessel", "legendre", "least-squares", "half-band", "interpolated"),
    ),
    Key(
        ("order",),
        "count",
        "The order of the digital IIR filter; without it the least that meets the mask.",
        "9",
    ),
    Key(
        ("taps",),
        "count",
        "The number of coefficients of the FIR filter; without it the least that meets the mask.",
        "115",
        judged=False,
    ),
    Key(
        ("structure",),
        "names",
        "How the filter is computed; of a list, the first that suits the candidate.",
        "cascade",
        where=_BOTH,
        names=tuple(STRUCTURES),
        unjudged_names=("parallel", "lattice-ladder", "allpass-sum", "coupled", "state-space"),
    ),
    Key(
        ("arithmetic",),
        "arithmetic",
        "The number format that coefficients and signals are stored in.",
        "q31",
        where=_BOTH,
    ),
    Key(
        ("arithmetic", "coefficients"),
        "arithmetic",
        "The number format of the coefficients.",
        "q31",
        where=_BOTH,
        required=True,
    ),
    Key(
        ("arithmetic", "data"),
        "arithmetic",
        "The number format of input, output and states; without it that of the coefficients.",
        "q15",
        where=_BOTH,
    ),
    Key(
        ("arithmetic", "accumulator_bits"),
        "count",
        "The length of the accumulator in bits, sign included.",
        "64",
        where=_BOTH,
    ),
    Key(
        ("arithmetic", "rounding"),
        "name",
        "How a result is brought to the word length.",
        "nearest-even",
        where=_BOTH,
        names=tuple(ROUNDINGS),
    ),
    Key(
        ("arithmetic", "on_overflow"),
        "name",
        "What becomes of a result beyond the range.",
        "saturate",
        where=_BOTH,
        names=tuple(OVERFLOWS),
    ),
    Key(
        ("arithmetic", "coefficient_shift"),
        "count",
        "By how many bits coefficients can be shifted to reach beyond the word's range; free: as needed.",
        "free",
        where=_BOTH,
        names=("free",),
        default="free",
        least=0,
    ),
    Key(
        ("coefficients",),
        "mapping",
        "Coefficients that exist already, to be verified rather than designed.",
        "{file: strain-slow.csv, feedback: subtracted}",
        judged=False,
    ),
    Key(
        ("coefficients", "file"),
        "text",
        "The file that holds the coefficients, from the band file's folder.",
        "strain-slow.csv",
    ),
    Key(
        ("coefficients", "b"),
        "numbers",
        "The feed-forward coefficients, in rising powers of 1/z.",
        "[0.25, 0.5, 0.25]",
    ),
    Key(
        ("coefficients", "a"),
        "numbers",
        "The feedback coefficients, in rising powers of 1/z.",
        "[1, -0.5]",
    ),
    Key(
        ("coefficients", "sections"),
        "list",
        "Second-order sections in series.",
        "[{b: [1, 2, 1], a: [1, -0.5, 0.25]}]",
    ),
    Key(
        ("coefficients", "sections", "*"),
        "mapping",
        "One section.",
        "{b: [1, 2, 1], a: [1, -0.5, 0.25]}",
    ),
    Key(
        ("coefficients", "sections", "*", "b"),
        "numbers",
        "The feed-forward coefficients of the section.",
        "[1, 2, 1]",
        required=True,
    ),
    Key(
        ("coefficients", "sections", "*", "a"),
        "numbers",
        "The feedback coefficients of the section.",
        "[1, -0.5, 0.25]",
    ),
    Key(("coefficients", "gain"), "number", "A factor ahead of all sections.", "0.01"),
    Key(
        ("coefficients", "feedback"),
        "name",
        "Whether the products with `a` are subtracted, as in the transfer function, or added.",
        "subtracted",
        names=("subtracted", "added"),
    ),
    Key(
        ("coefficients", "scale"),
        "number",
        "The factor that turns stored integers into coefficients.",
        "2^-30",
    ),
    Key(
        ("transitions",),
        "name",
        "Whether the gain between the bands stays within 1 dB above the highest pass-band bound.",
        "bounded",
        names=("bounded", "unbounded"),
        default="bounded",
    ),
    Key(
        ("signal",),
        "mapping",
        "The signal that the filter gets and the noise that it may add.",
        "{peak: 0.5 x, allowed_noise: -90 dBFS}",
        where=_BOTH,
        judged=False,
    ),
    Key(
        ("signal", "peak"),
        "quantity",
        "The highest magnitude of the input; full scale is 1.",
        "0.5 x",
        where=_BOTH,
        dimension="peak",
    ),
    Key(
        ("signal", "allowed_noise"),
        "quantity",
        "The round-off noise allowed at the output; a full-scale sine is 0 dBFS.",
        "-90 dBFS",
        where=_BOTH,
        dimension="noise",
    ),
    Key(
        ("step",),
        "mapping",
        "The step response, as a requirement.",
        "{overshoot: 5 %, settle: {to: 2 %, within: 5 ms}}",
        judged=False,
    ),
    Key(
        ("step", "overshoot"),
        "quantity",
        "How far the step response may go beyond its final value.",
        "5 %",
        dimension="share",
    ),
    Key(
        ("step", "settle"),
        "mapping",
        "How close to its final value the step response stays, and from when on.",
        "{to: 2 %, within: 5 ms}",
    ),
    Key(
        ("step", "settle", "to"),
        "quantity",
        "How close to its final value the step response stays.",
        "2 %",
        dimension="share",
        required=True,
    ),
    Key(
        ("step", "settle", "within"),
        "quantity",
        "The time after which the step response stays that close.",
        "5 ms",
        dimension="time",
        required=True,
    ),
    Key(
        ("at_most",),
        "mapping",
        "What the filter may cost at most; a missing maximum is no limit, but the order's is 12.",
        "{order: 16, multiplications: 60, delay: 25 ms}",
        where=_BOTH,
    ),
    Key(
        ("at_most", "order"),
        "count",
        "The highest order of an IIR filter.",
        "16",
        where=_BOTH,
        default=12,
    ),
    Key(("at_most", "taps"), "count", "The most coefficients of an FIR filter.", "128", where=_BOTH),
    Key(
        ("at_most", "multiplications"),
        "count",
        "The most multiplications per input sample, symmetry folded, by 0 and ±1 free.",
        "60",
        where=_BOTH,
    ),
    Key(
        ("at_most", "delay"),
        "quantity",
        "The longest group delay in the pass bands.",
        "25 ms",
        where=_BOTH,
        dimension="time",
    ),
    Key(
        ("at_most", "memory"),
        "count",
        "The most bytes for coefficients and states.",
        "1024",
        where=_BOTH,
    ),
    Key(
        ("delay",),
        "name",
        "Asks for a delay of a whole number of samples.",
        "whole",
        names=("whole",),
        judged=False,
    ),
    Key(
        ("proof",),
        "name",
        "Whether a proof file must be there.",
        "required",
        where=_BOTH,
        names=("optional", "required"),
        default="optional",
        judged=False,
    ),
    Key(
        ("accepted",),
        "list",
        "Findings that are accepted on purpose, each with a reason.",
        "[{finding: cost/delay-over-maximum, up_to: 30 ms, reason: Agreed with the drive team.}]",
    ),
    Key(
        ("accepted", "*"),
        "mapping",
        "One accepted finding.",
        "{finding: cost/delay-over-maximum, up_to: 30 ms, reason: Agreed with the drive team.}",
    ),
    Key(
        ("accepted", "*", "finding"),
        "finding",
        "The finding that is accepted.",
        "cost/delay-over-maximum",
        required=True,
    ),
    Key(
        ("accepted", "*", "up_to"),
        "figure",
        "The figure up to which it is accepted, in the finding's unit.",
        "30 ms",
    ),
    Key(("accepted", "*", "reason"), "text", "Why it is accepted.", "Agreed with the drive team."),
    Key(
        ("accepted", "*", "until"),
        "date",
        "The last day on which it is accepted (UTC).",
        "2027-06-30",
    ),
)


ROWS: Final[dict[Where, dict[tuple[str, ...], Key]]] = {
    where: {row.path: row for row in KEYS if where in row.where} for where in ("top", "device", "filter")
}
"""By block kind: the row of each pattern."""

INSIDE: Final[dict[Where, dict[tuple[str, ...], dict[str, Key]]]] = {
    where: {path: {} for path in ((), *rows)} for where, rows in ROWS.items()
}
"""By block kind: the rows directly inside each pattern, by name; none inside a value."""
for _where, _rows in ROWS.items():
    for _path, _row in _rows.items():
        INSIDE[_where][_path[:-1]][_path[-1]] = _row


_RANK: Final[dict[Path, int]] = {row.path: place for place, row in enumerate(KEYS)}


def pattern(path: Path) -> tuple[str, ...]:
    """The path with `"*"` for every index."""
    return tuple("*" if isinstance(part, int) else part for part in path)


def key(where: Where, path: Path) -> Key | None:
    """The row for this path of a block, or None where the grammar has none."""
    return ROWS[where].get(pattern(path))


def children(where: Where, path: Path) -> tuple[Key, ...]:
    """The rows directly inside this path, in the order of the grammar."""
    return tuple(INSIDE[where].get(pattern(path), {}).values())


def leaves(where: Where, path: Path) -> tuple[Path, ...]:
    """Every path below `path` that can hold a value, not reaching into lists."""
    found: list[Path] = []
    for row in children(where, path):
        if row.path[-1] == "*":
            continue
        below = (*path, row.path[-1])
        found.extend([below] if row.kind not in ("mapping",) else leaves(where, below))
    return tuple(found)


def rank(path: Path) -> tuple[int, int]:
    """Sorts the settings of a block by key; what stands inside one key keeps its order."""
    inner = _RANK.get(path[:2], 0) if len(path) > 1 and isinstance(path[1], str) else 0
    return _RANK.get(path[:1], len(KEYS)), inner


def nearest(word: str, names: Iterable[str]) -> str | None:
    """The name that `word` most likely means: a start of it, or a few slips away; None where none is near.

    Only the first `limits.MAX_NAMES_COMPARED` names are looked at.
    """
    wanted = word.casefold().replace("_", "-")
    best: tuple[float, str] | None = None
    for name in islice(names, limits.MAX_NAMES_COMPARED):
        known = name.casefold().replace("_", "-")
        most = len(known) // 3
        slips = 0.5 if len(wanted) >= 3 and known.startswith(wanted) else _slips(wanted, known, most)
        if slips <= max(most, 0.5) and (best is None or slips < best[0]):
            best = slips, name
    return best[1] if best else None


def _slips(word: str, name: str, most: int) -> float:
    """Letters to add, drop, change or swap to turn `word` into `name`; counted up to about `most`."""
    if abs(len(word) - len(name)) > most or len(set(word) - set(name)) > most:
        return most + 1
    before: list[int] = []
    row = list(range(len(name) + 1))
    for i, letter in enumerate(word, 1):
        earlier, before, row = before, row, [i]
        for j, other in enumerate(name, 1):
            cost = min(before[j] + 1, row[j - 1] + 1, before[j - 1] + (letter != other))
            if i > 1 and j > 1 and letter == name[j - 2] and word[i - 2] == other:
                cost = min(cost, earlier[j - 2] + 1)
            row.append(cost)
    return row[-1]
