"""Half-typed and broken text: the fault points where it went wrong, and all else is read."""

from __future__ import annotations

import pytest

from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Path
from unit.bandfile.example import EXAMPLE, faults, filter_of, pointed_at, unknown, with_line

PASS = "      - pass: {to: 20 Hz, ripple: 0.1 dB}\n"
FAMILY = "    family: butterworth\n"
PURPOSE = "    purpose: Static load, ahead of the 50 Hz log\n"
INSIDE_PASS: list[Path] = [("bands", 0, "pass", name) for name in ("from", "at", "delay_ripple")] + [
    ("bands", 0, "pass", "gain", "min"),
    ("bands", 0, "pass", "gain", "max"),
]

# What is written instead, the form of the fault, what it points at, what is unknown afterwards.
STATES: list[tuple[str, str, str, str, list[Path]]] = [
    (
        PASS,
        "      - pass: {to: 20 Hz, ripple: 0.1 dB\n",
        "unclosed-bracket",
        "{to: 20 Hz, ripple: 0.1 dB",
        INSIDE_PASS,
    ),
    (
        PASS,
        "      - pass: {to: 20 Hz, rip\n",
        "unclosed-bracket",
        "{to: 20 Hz, rip",
        [("bands", 0, "pass", "ripple"), *INSIDE_PASS],
    ),
    (
        PASS,
        "      - pass: {\n",
        "unclosed-bracket",
        "{",
        [("bands", 0, "pass", "to"), ("bands", 0, "pass", "ripple"), *INSIDE_PASS],
    ),
    (PASS, "      - pass: {to: 20 Hz, ripple: 0.1 dB}}\n", "unopened-bracket", "}", []),
    (PASS, "      - pass: {to: 20 Hz, ripple: 0.1 dB]\n", "unclosed-bracket", "]", []),
    (
        PASS,
        '      - pass: {to: "20 Hz, ripple: 0.1 dB}\n',
        "unclosed-quote",
        '"20 Hz, ripple: 0.1 dB}',
        [("bands", 0, "pass", "to"), ("bands", 0, "pass", "ripple"), *INSIDE_PASS],
    ),
    (
        PASS,
        "      - pass: {to:20 Hz, ripple: 0.1 dB}\n",
        "no-space",
        "to:20 Hz",
        [("bands", 0, "pass", "to")],
    ),
    (
        PASS,
        "      - pass: {to: 20 Hz ripple: 0.1 dB}\n",
        "missing-comma",
        "20 Hz ripple: 0.1 dB",
        [("bands", 0, "pass", "to"), ("bands", 0, "pass", "ripple"), *INSIDE_PASS],
    ),
    (
        PASS,
        "      - pass: {to: @20 Hz, ripple: 0.1 dB}\n",
        "character",
        "@20 Hz",
        [("bands", 0, "pass", "to")],
    ),
    (
        PASS,
        "      - pass: {to: a:b:c, ripple: 0.1 dB}\n",
        "colon-in-value",
        "a:b:c",
        [("bands", 0, "pass", "to")],
    ),
    (PASS, "        pass: {to: 20 Hz, ripple: 0.1 dB}\n", "no-dash", "pass: {to: 20 Hz, ripple: 0.1 dB}", []),
    (
        PASS,
        "    - pass: {to: 20 Hz, ripple: 0.1 dB}\n",
        "indent",
        "- stop: {from: 25 Hz, attenuation: 70 dB}",
        [],
    ),
    (
        PASS,
        "        - pass: {to: 20 Hz, ripple: 0.1 dB}\n",
        "indent",
        "- stop: {from: 25 Hz, attenuation: 70 dB}",
        [],
    ),
    (PASS, "      - pass:\n          to: 20 Hz\n         ripple: 0.1 dB\n", "indent", "ripple: 0.1 dB", []),
    (FAMILY, "    famil\n", "no-colon", "famil", [("family",)]),
    (FAMILY, "    family:butterworth\n", "no-space", "family:butterworth", [("family",)]),
    (FAMILY, "      family: butterworth\n", "indent", "family: butterworth", []),
    (FAMILY, "   family: butterworth\n", "indent", "family: butterworth", []),
    (FAMILY, "    family: [butterworth, elli\n", "unclosed-bracket", "[butterworth, elli", [("family",)]),
    (FAMILY, "    family: 'butter\n", "unclosed-quote", "'butter", [("family",)]),
    (FAMILY, "    family: butterworth\n       order: 3\n", "indent", "order: 3", []),
    (PURPOSE, "    purpose: Static load: slow\n", "colon-in-value", "Static load: slow", [("purpose",)]),
    (PURPOSE, "    purpose: 'Static load\n", "unclosed-quote", "'Static load", [("purpose",)]),
    (PURPOSE, "    purpose: @home\n", "character", "@home", [("purpose",)]),
    (PURPOSE, "    purpose: > 5\n", "character", "> 5", [("purpose",)]),
    (PURPOSE, "    purpose: *bold*\n", "character", "*bold*", [("purpose",)]),
    (
        PURPOSE,
        "purpose: Static load, ahead of the 50 Hz log\n",
        "indent",
        "purpose: Static load, ahead of the 50 Hz log",
        [],
    ),
    ("    bands:\n      - pass: {to: 20", "    bands\n      - pass: {to: 20", "no-colon", "bands", []),
    ("  strain-slow:\n", "  strain-slow\n", "no-colon", "strain-slow", []),
]


@pytest.mark.parametrize(
    ("old", "new", "form", "at", "lost"), STATES, ids=[state[1].strip()[:40] for state in STATES]
)
def test_a_broken_line(old: str, new: str, form: str, at: str, lost: list[Path]) -> None:
    before = read(EXAMPLE)
    document = read(with_line(EXAMPLE, old, new))
    assert [(fault.id, fault.form) for fault in faults(document)][:1] == [("syntax/not-yaml", form)]
    assert pointed_at(document)[0] == at
    slow = filter_of(document, "strain-slow")
    assert sorted(unknown(slow), key=str) == sorted(lost, key=str)
    for path, setting in filter_of(before, "strain-slow").settings:
        said = slow.get(*path)
        assert said == setting or slow.is_unknown(*path) or path == ("purpose",) or path[:1] == ("order",), (
            path
        )
    assert filter_of(document, "gearbox-envelope") == filter_of(before, "gearbox-envelope")
    assert [found.name for _, found in document.filters] == ["strain-slow", "gearbox-envelope"]


@pytest.mark.parametrize(
    ("old", "new", "form", "at", "lost"), STATES, ids=[state[1].strip()[:40] for state in STATES]
)
def test_a_block_that_was_mended_says_so(old: str, new: str, form: str, at: str, lost: list[Path]) -> None:
    whole = {block.name: block.whole for block in read(with_line(EXAMPLE, old, new)).blocks}
    assert whole == {"": True, "hoist-node": True, "strain-slow": False, "gearbox-envelope": True}


def test_a_lost_item_keeps_its_place_in_the_list() -> None:
    document = read(with_line(EXAMPLE, PASS, f"{PASS}      oops\n"))
    assert [(fault.form, at) for fault, at in zip(faults(document), pointed_at(document), strict=True)] == [
        ("no-colon", "oops"),
        ("no-dash", "oops"),
    ]
    slow = filter_of(document, "strain-slow")
    assert unknown(slow) == [("bands", 1)]
    assert slow.get("bands", 2, "stop", "from") is not None


def test_a_name_that_is_gone_leaves_the_names_after_it() -> None:
    document = read(with_line(EXAMPLE, "  strain-slow:\n", "\n"))
    assert filter_of(document, "gearbox-envelope") == filter_of(read(EXAMPLE), "gearbox-envelope")
    assert faults(document) != []


@pytest.mark.parametrize("tabs", ["\t", "\t\t", "  \t"])
def test_a_tab_is_read_as_the_indent_of_its_neighbours(tabs: str) -> None:
    document = read(with_line(EXAMPLE, FAMILY, f"{tabs}family: butterworth\n"))
    (fault,) = faults(document)
    assert fault.id == "syntax/tab"
    assert set(pointed_at(document)[0]) == {"\t"}
    assert filter_of(document, "strain-slow") == filter_of(read(EXAMPLE), "strain-slow")


def test_a_file_indented_by_tabs_throughout_reads_with_one_fault_for_each_block() -> None:
    document = read(EXAMPLE.replace("  ", "\t"))
    assert [fault.id for fault in faults(document)] == ["syntax/tab"] * 3
    for name in ("strain-slow", "gearbox-envelope"):
        assert filter_of(document, name).settings == filter_of(read(EXAMPLE), name).settings


def test_tabs_elsewhere_are_no_fault() -> None:
    text = with_line(EXAMPLE, "sample_rate: 4 kHz", "sample_rate:\t4 kHz\t# tab")
    text = with_line(text, PURPOSE, "    purpose: |\n      one\n      \ttwo\n")
    assert faults(read(text)) == []


def test_one_slip_is_named_once_and_many_not_all() -> None:
    text = with_line(EXAMPLE, PURPOSE, "".join(f"    stray {n}\n" for n in range(50)))
    assert len(faults(read(text))) == 4


def test_a_stray_line_inside_a_block_does_not_end_it() -> None:
    for stray in ("?!", "{", "- x", "x: y z", "word"):
        for indent in ("", " "):
            text = with_line(EXAMPLE, FAMILY, f"{indent}{stray}\n{FAMILY}")
            document = read(text)
            slow = filter_of(document, "strain-slow")
            assert faults(document) != []
            assert slow.names("family") == ("butterworth",), (stray, indent)
            assert filter_of(document, "gearbox-envelope") == filter_of(read(EXAMPLE), "gearbox-envelope")


def test_mended_text_in_several_places_of_one_block() -> None:
    text = with_line(with_line(EXAMPLE, PASS, "      - pass: {to: 20 Hz,\n"), FAMILY, "    family: 'b\n")
    document = read(text)
    assert [fault.form for fault in faults(document)] == ["unclosed-bracket", "unclosed-quote"]
    slow = filter_of(document, "strain-slow")
    assert slow.quantity("bands", 0, "pass", "to") is not None
    assert slow.quantity("bands", 1, "stop", "attenuation") is not None
    assert slow.is_unknown("bands", 0, "pass", "ripple") and slow.is_unknown("family")


@pytest.mark.parametrize("line", range(EXAMPLE.count("\n")))
def test_any_line_cut_short_leaves_the_other_filters_as_they_are(line: int) -> None:
    whole = read(EXAMPLE)
    rows = EXAMPLE.split("\n")
    owner = next((b for b in reversed(whole.blocks[1:]) if b.first_line <= line), whole.blocks[0])
    for end in range(len(rows[line])):
        document = read("\n".join([*rows[:line], rows[line][:end], *rows[line + 1 :]]))
        names = {found.name: found for _, found in document.filters}
        for _, found in whole.filters:
            lost_name = line == owner.first_line and end < len(owner.name) + 2
            if owner.kind == "filter" and owner.name != found.name and not lost_name:
                assert names.get(found.name) == found, rows[line][:end]
