"""Findings about keys, names and units; the reader reports all but the last ones."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright.bandfile.grammar import FIR_FAMILIES, FIR_STRUCTURES, IIR_FAMILIES, IIR_STRUCTURES
from bandwright.bandfile.values import Place
from bandwright.findings.case import Case
from bandwright.findings.rules import Hit, finding, reported
from bandwright.remedies import structures

unknown_key = reported(
    "key/unknown-key",
    "error",
    {
        "": (
            "`{key}` is not a key of {where}, so it asks for nothing; the nearest one is `{nearest}`.",
            "`{key}` is not a key of {where}, so it asks for nothing; remove it, or put `#` before a remark.",
        ),
        "misplaced": "`{key}` is not a key of {where}, so it asks for nothing here; it belongs in {belongs}.",
    },
)

reserved_key = reported(
    "key/reserved-key",
    "error",
    "`{key}` is kept for a later version of the band file and asks for nothing yet; remove it.",
)

unknown_name = reported(
    "key/unknown-name",
    "error",
    {
        "": (
            "`{written}` is none of the names of `{key}`; the nearest one is `{nearest}`.",
            "`{written}` is none of the names of `{key}`, which are {names}.",
            "`{written}` is none of the names of `{key}`; take one that the reference lists.",
        )
    },
)

unknown_device = reported(
    "key/unknown-device",
    "error",
    {
        "": (
            "No device is named `{written}`, so this filter lacks what it would bring; the nearest one is"
            " `{nearest}`.",
            "No device is named `{written}`, so this filter lacks what it would bring; there are {names}.",
        ),
        "no-devices": "No device is named `{written}`, because the file has no `devices`; add it there, or"
        " give the filter its own keys.",
    },
)

missing_key = reported(
    "key/missing-key",
    "error",
    {
        "": "`{key}` is missing, and {where} can't be judged without it; add it.",
        "either": "Either `{key}` or `{or}` is missing, and {where} can't be judged without one of them;"
        " add it.",
        "feedback": "With `a` given, `{key}` must say whether the products with it are subtracted or added,"
        " because both are in use.",
    },
)

wrong_kind = reported(
    "key/wrong-kind",
    "error",
    {
        "mapping-wanted": (
            "`{key}` holds keys of its own, but `{written}` is not a key with a value; write for instance"
            " `{example}`.",
            "`{key}` holds keys of its own, but `{written}` is not a key with a value; write each key on a"
            " line below it.",
        ),
        "list-wanted": (
            "`{key}` is a list, but `{written}` is not one; write for instance `{example}`.",
            "`{key}` is a list, but `{written}` is not one; start each item on a line of its own with a"
            " dash.",
        ),
        "text-wanted": (
            "`{key}` takes one value ({wanted}), not a list or keys; write for instance `{example}`.",
            "`{key}` takes one value, not a list or keys; write for instance `{example}`.",
        ),
        "empty": (
            "`{key}` has no value; write {wanted}, for instance `{example}`.",
            "`{key}` has no value; write for instance `{example}`.",
            "`{key}` has no value; write one, or remove the key.",
        ),
        "not-a-number": (
            "`{written}` can't be read as {wanted}, which `{key}` takes; write for instance `{example}`.",
            "`{written}` can't be read as what `{key}` takes; write for instance `{example}`.",
        ),
        "not-a-whole-number": "`{written}` is not a whole number, which `{key}` takes; write for instance"
        " `{example}`.",
        "too-small": "`{key}: {written}` is too small; the least that it takes is {least}.",
        "out-of-range": (
            "`{key}: {written}` is beyond all that filters have to do with; sizes from {least} to {most} are"
            " read.",
            "`{written}` is beyond all that filters have to do with; sizes from {least} to {most} are read.",
        ),
        "bad-date": "`{written}` is not a day of the calendar, which `{key}` takes; write for instance"
        " `{example}`.",
        "bad-finding": "`{written}` is not the name of a finding, which has an area and a slash; write for"
        " instance `{example}`.",
        "band-keys": (
            "A band item has exactly one of the keys `pass`, `stop` and `bounds`, but this one has {found};"
            " give each its own item.",
            "A band item has exactly one of the keys `pass`, `stop` and `bounds`, but this one has none of"
            " them.",
        ),
        "key-not-text": "A key is a plain word, but a list or keys stand before the colon here, in {where}.",
        "bad-word": "`{written}` is no number format that can be built, which `{key}` takes; write for"
        " instance `{example}`.",
    },
)

number_without_unit = reported(
    "key/number-without-unit",
    "error",
    {
        "": (
            "`{key}: {written}` has no unit, so its {dimension} can't be told; write for instance `{mend}`.",
            "`{key}: {written}` has no unit, so its {dimension} can't be told; add the unit that is meant.",
        )
    },
)

wrong_unit = reported(
    "key/wrong-unit",
    "error",
    {
        "dimension": (
            "`{unit}` is a unit of {found}, not of {dimension}; the units of `{key}` are {units}.",
            "`{unit}` is a unit of {found}, not of {dimension}, which `{key}` takes.",
        ),
        "spelling": "`{unit}` is not spelt like a unit of `{key}`, where capitals count; write `{nearest}`.",
        "unknown": (
            "`{unit}` is not a unit of `{key}`; its units are {units}.",
            "`{unit}` is not a unit of {dimension}, which `{key}` takes.",
        ),
    },
)

decimal_comma = reported(
    "key/decimal-comma",
    "error",
    {
        "": "`{written}` has a comma, and a band file takes a decimal point; write `{meant}`.",
        "thousands": "The comma of `{written}` may be a decimal point or part thousands; write `{meant}` or"
        " `{or}`.",
    },
)

format_missing = reported(
    "key/format-missing",
    "warning",
    "The file does not say which format it is written in, so a later version may read it otherwise; start"
    " with `format: {known}`.",
)

format_unknown = reported(
    "key/format-unknown",
    "error",
    "`{written}` is not a format of band files that is known here; this version reads `{known}`.",
)

unused_device = reported(
    "key/unused-device",
    "hint",
    "No filter runs on the device `{device}`, so its keys ask for nothing; name it in a filter, or remove"
    " it.",
    tag="unnecessary",
)

duplicate_name = reported(
    "key/duplicate-name",
    "error",
    "A {kind} named `{name}` stands further up, so that this name means two; give this one another name.",
)

cannot_apply = reported(
    "key/cannot-apply",
    "error",
    {
        "device": "`{key}` is a key of filters and brings nothing from a device; move it to the filters"
        " that need it.",
        "beside": "`{key}` can't stand beside `{beside}` in {where}, because both say the same; keep one of"
        " them.",
    },
)

not_judged_yet = reported(
    "key/not-judged-yet",
    "warning",
    {
        "": "`{key}` can be read but this version does not judge it, so nothing here says whether it can be"
        " met.",
        "value": "`{key}: {written}` can be read but this version does not judge it, so nothing here says"
        " whether it can be met.",
    },
)


@finding(
    "key/structure-does-not-suit",
    "error",
    {
        "iir": "`{structure}` is a structure of IIR filters, and {cause} leaves only FIR filters; take"
        " `{suitable}`.",
        "fir": "`{structure}` is a structure of FIR filters, and {cause} leaves only IIR filters; take"
        " `{suitable}`.",
    },
    remedies=(structures.suitable_structure,),
    needs=("structure", "family", "phase"),
)
def structure_does_not_suit(case: Case) -> Iterator[Hit]:
    """None of the filter's own structures suits a family that its keys admit."""
    filter = case.filter
    structure, family = filter.get("structure"), filter.get("family")
    names = filter.names("structure") or ()
    if structure is None or structure.origin != "own":
        return
    families = filter.names("family") or (*IIR_FAMILIES, *FIR_FAMILIES)
    linear = filter.text("phase") == "linear"
    iir = not linear and any(name in IIR_FAMILIES for name in families)
    fir = any(name in FIR_FAMILIES for name in families)
    if (
        iir == fir
        or (iir and any(n in IIR_STRUCTURES for n in names))
        or (fir and any(n in FIR_STRUCTURES for n in names))
    ):
        return
    by_phase = linear and any(name in IIR_FAMILIES for name in families)
    cause, place = ("`phase: linear`", ("phase",)) if by_phase else (f"`{families[0]}`", ("family",))
    facts = (
        ("structure", names[0] if names else ""),
        ("cause", cause),
        ("suitable", "cascade" if iir else "symmetric"),
    )
    related = ((Place(place), "leaves them"),) if by_phase or family is not None else ()
    yield Hit("key/structure-does-not-suit", Place(("structure",)), facts, "fir" if iir else "iir", related)
