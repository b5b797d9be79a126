"""Edits of text: they do what they say, and nothing else."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bandwright.bandfile.edits import accept, apply, as_yaml, edits, mend_edits, rename
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document, Path, Span, TextEdit
from unit.bandfile.example import EXAMPLE, ONE, faults, filter_of, ids, with_line


def changed(text: str, changes: dict[Path, str | None], name: str = "one") -> str:
    document = read(text)
    return apply(text, edits(document, index_of(document, name), changes))


def index_of(document: Document, name: str) -> int:
    return next(index for index, block in enumerate(document.blocks) if block.name == name)


def difference(before: str, after: str) -> tuple[list[str], list[str]]:
    """The lines that went and the lines that came."""
    old, new = before.splitlines(keepends=True), after.splitlines(keepends=True)
    return [line for line in old if line not in new], [line for line in new if line not in old]


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("mark", ["", "\ufeff"])
@pytest.mark.parametrize("name", ["strain-slow", "gearbox-envelope"])
def test_every_value_can_be_set_alone(end: str, mark: str, name: str) -> None:
    text = mark + EXAMPLE.replace("\n", end)
    document = read(text)
    block = document.blocks[index_of(document, name)]
    for path, setting in block.own:
        new = "21 mHz" if setting.written[0].isdigit() else "chebyshev-1"
        after = changed(text, {path: new}, name)
        settings = dict(read(after).blocks[index_of(document, name)].own)
        assert settings[path].written in (new, ""), path
        others = {other: said for other, said in block.own if other != path}
        assert {other: said for other, said in settings.items() if other != path} == others
        assert len(after) == len(text) + len(new) - len(setting.written)


@pytest.mark.parametrize("name", ["strain-slow", "gearbox-envelope"])
def test_every_entry_can_be_removed_alone(name: str) -> None:
    document = read(EXAMPLE)
    block = document.blocks[index_of(document, name)]
    for path in block.marks:
        if not path or isinstance(path[-1], int):
            continue
        after = changed(EXAMPLE, {path: None}, name)
        left = dict(read(after).blocks[index_of(document, name)].own)
        expected = {other: said for other, said in block.own if other[: len(path)] != path}
        if len(path) > 1 and len([m for m in block.marks if m[:-1] == path[:-1]]) == 1:
            continue  # what it leaves empty goes too
        assert left == expected, path
        assert len(after) < len(EXAMPLE)


@pytest.mark.parametrize(
    ("changes", "gone", "come"),
    [
        # A value keeps the text around it; quotes come only where they are needed.
        ({("sample_rate",): "16 kHz"}, "    sample_rate: 8 kHz # why\n", "    sample_rate: 16 kHz # why\n"),
        ({("purpose",): "a: b"}, '    purpose: "it\'s"\n', "    purpose: 'a: b'\n"),
        ({("purpose",): "plain"}, '    purpose: "it\'s"\n', "    purpose: plain\n"),
        ({("bands", 0, "pass", "to"): "1.1 kHz"}, "{to: 1 kHz, ", "{to: 1.1 kHz, "),
        (
            {("structure",): "symmetric"},
            "    structure:\n      - cascade\n      - symmetric\n",
            "    structure: symmetric\n",
        ),
        ({("phase",): "linear"}, "    phase:\n", "    phase: linear\n"),
        # Removing takes the line, or the comma, or what would be left empty.
        ({("sample_rate",): None}, "    sample_rate: 8 kHz # why\n", ""),
        ({("bands", 0, "pass", "to"): None}, "{to: 1 kHz, ripple", "{ripple"),
        ({("bands", 0, "pass", "ripple"): None}, "1 kHz, ripple: 1 dB}", "1 kHz}"),
        ({("bands", 1): None}, "      - stop:\n          from: 2 kHz\n          attenuation: 40 dB\n", ""),
        ({("bands", 1, "stop", "from"): None}, "          from: 2 kHz\n", ""),
        ({("at_most", "order"): None}, "    at_most: {order: 3}\n", ""),
        ({("structure", 0): None}, "      - cascade\n", ""),
        ({("accepted", 0, "finding"): None}, "- finding: a/b\n        reason", "- reason"),
        (
            {("accepted", 0, "finding"): None, ("accepted", 0, "reason"): None},
            "    accepted:\n      - finding: a/b\n        reason: r\n",
            "",
        ),
        # Adding goes to its place by the grammar, in the style that is there.
        ({("phase",): None, ("family",): "bessel"}, "    phase:\n", "    family: bessel\n"),
        ({("order",): "3"}, "    structure:\n", "    order: 3\n    structure:\n"),
        ({("device",): "d"}, "    sample_rate", "    device: d\n    sample_rate"),
        ({("at_most", "delay"): "3 ms"}, "{order: 3}", "{order: 3, delay: 3 ms}"),
        ({("bands", 0, "pass", "from"): "0 Hz"}, "{to: 1", "{from: 0 Hz, to: 1"),
        ({("bands", 1, "stop", "to"): "3 kHz"}, "2 kHz\n", "2 kHz\n          to: 3 kHz\n"),
        (
            {("bands", 2): "stop: {from: 3 kHz, attenuation: 9 dB}"},
            "40 dB\n",
            "40 dB\n      - stop: {from: 3 kHz, attenuation: 9 dB}\n",
        ),
        (
            {("signal", "peak"): "1", ("signal", "allowed_noise"): "-90 dBFS"},
            "    at_most",
            "    signal: {peak: 1, allowed_noise: -90 dBFS}\n    at_most",
        ),
        (
            {("arithmetic",): "{coefficients: q31}"},
            "    at_most",
            "    arithmetic: {coefficients: q31}\n    at_most",
        ),
        ({("accepted", 0, "until"): "2027-01-01"}, "reason: r\n", "reason: r\n        until: 2027-01-01\n"),
        ({("at_most", "order"): None, ("at_most", "taps"): "9"}, "{order: 3}", "{taps: 9}"),
    ],
)
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_changes(changes: dict[Path, str | None], gone: str, come: str, end: str) -> None:
    text = """\
format: bandwright/1
filters:
  one:
    purpose: "it's"
    sample_rate: 8 kHz # why
    bands:
      - pass: {to: 1 kHz, ripple: 1 dB}
      - stop:
          from: 2 kHz
          attenuation: 40 dB
    phase:
    structure:
      - cascade
      - symmetric
    at_most: {order: 3}
    accepted:
      - finding: a/b
        reason: r
  two: {bands: []}
""".replace("\n", end)
    assert changed(text, changes) == with_line(text, gone.replace("\n", end), come.replace("\n", end))


def test_the_last_line_without_a_line_end() -> None:
    text = ONE.rstrip("\n")
    assert changed(text, {("order",): "3"}) == text + "\n    order: 3"
    assert changed(text + "\n    order: 3", {("order",): None}) == text
    assert changed("format: bandwright/1\nfilters:\n  one:", {("order",): "3"}).endswith(
        "  one:\n    order: 3"
    )
    assert changed("format: bandwright/1\nfilters: {one: {}}", {("order",): "3"}).endswith(
        "{one: {order: 3}}"
    )


def test_a_block_can_be_removed() -> None:
    document = read(EXAMPLE)
    slow = apply(EXAMPLE, edits(document, 2, {(): None}))
    assert ids(read(slow)) == []
    assert [found.name for _, found in read(slow).filters] == ["gearbox-envelope"]
    last = apply(EXAMPLE, edits(document, 3, {(): None}))
    assert last == EXAMPLE[: EXAMPLE.index("  gearbox-envelope")]
    flow = "format: bandwright/1\nfilters: {a: {order: 1}, b: {order: 2}}\n"
    assert apply(flow, edits(read(flow), 1, {(): None})) == "format: bandwright/1\nfilters: {b: {order: 2}}\n"
    assert apply(flow, edits(read(flow), 2, {(): None})) == "format: bandwright/1\nfilters: {a: {order: 1}}\n"


def test_the_format_can_be_added() -> None:
    for text in ("filters: {}\n", "# a remark\n\ndevices:\nfilters: {}\n", ""):
        fault = next(fault for fault in faults(read(text)) if fault.id == "key/format-missing")
        after = apply(text, mend_edits(read(text), 0, fault.mends[0]))
        assert read(after).format == "bandwright/1"
        assert after.replace("format: bandwright/1\n", "") == text


def test_keys_are_renamed_and_quoted_where_they_must_be() -> None:
    text = with_line(ONE, "ripple", "riple")
    assert apply(text, rename(read(text), 1, ("bands", 0, "pass", "riple"), "ripple")) == ONE
    assert apply(ONE, rename(read(ONE), 1, (), "a: b")) == with_line(ONE, "one:", "'a: b':")


def test_behind_an_alias_nothing_is_edited() -> None:
    text = (
        ONE.replace("bands:", "bands: &b")
        + "  two:\n    sample_rate: 1 kHz\n    bands: *b\n    <<: {order: 3}\n"
    )
    document = read(text)
    two = index_of(document, "two")
    assert edits(document, two, {("bands", 0, "pass", "to"): "1 Hz"}) == ()
    assert edits(document, two, {("bands", 2): "x"}) == ()
    assert apply(text, edits(document, two, {("bands",): "[]"})) == with_line(text, "*b", "[]")
    assert apply(text, edits(document, 1, {("bands", 0, "pass", "to"): "1 Hz"})) == with_line(
        text, "1 kHz", "1 Hz"
    )


def test_an_anchor_stays_when_its_value_changes() -> None:
    text = with_line(ONE, "8 kHz", "&rate 8 kHz") + "  two: {sample_rate: *rate, bands: []}\n"
    assert changed(text, {("sample_rate",): "9 kHz"}) == with_line(text, "8 kHz", "9 kHz")


@pytest.mark.parametrize(
    "accepted",
    [
        "",
        "    accepted:\n    - finding: c/d\n      reason: r\n",
        "    accepted: [{finding: c/d, reason: r}]\n",
    ],
)
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_a_finding_is_accepted(accepted: str, end: str) -> None:
    text = (ONE + accepted + "  two:\n    order: 3\n").replace("\n", end)
    document = read(text)
    after = apply(text, accept(document, 1, "a/b", "Because: it is so.", "30 ms", "2027-01-01"))
    found = filter_of(read(after))
    last = 1 if accepted else 0
    assert found.text("accepted", last, "finding") == "a/b"
    assert found.text("accepted", last, "reason") == "Because: it is so."
    assert found.text("accepted", last, "until") == "2027-01-01"
    assert found.get("accepted", last, "up_to") is not None
    assert ids(read(after)) == ids(document)
    assert after.count("\n") == after.count(end)
    assert len(difference(text, after)[0]) == (1 if "[" in accepted else 0)


def test_the_shape_of_a_new_list_of_accepted_findings() -> None:
    after = apply(ONE, accept(read(ONE), 1, "a/b", "r", "3"))
    assert after == ONE + "    accepted:\n      - finding: a/b\n        up_to: 3\n        reason: r\n"


MENDED = [
    ("ripple: 1", "riple: 1"),
    ("to: 1 kHz", "to: 1"),
    ("to: 1 kHz", "to: 1 khz"),
    ("to: 1 kHz", "to: 1,0 kHz"),
    ("ripple: 1 dB", "ripple: 1,0 dB"),
    ("{to: 1 kHz", "{to:1 kHz"),
    ("1 kHz, ripple", "1 kHz ripple"),
    ("1 dB}", "1 dB}}"),
    ("    bands", "\t\tbands"),
    ("    bands", "    order: 8.0\n    bands"),
    ("    bands", "    phase: minimum\n    bands"),
    ("    bands", "    phase: any\n    phase: any\n    bands"),
    ("    bands", "    purpose: a: b\n    bands"),
    ("    bands", "    purpose: @b\n    bands"),
    ("    bands", "    purpose: \x07\n    bands"),
    ("    bands", "    family: Bessel\n    bands"),
    ("    bands", "    device: d\n    bands"),
    ("    bands", "    colour: red\n    bands"),
    ("filters", "devices:\n  d: {}\nfilters"),
    ("format: bandwright/1\n", ""),
    ("bandwright/1", "bandwright/0"),
]


@pytest.mark.parametrize(("old", "new"), MENDED)
def test_a_mend_of_the_reader_clears_its_fault(old: str, new: str) -> None:
    text = with_line(ONE, old, new)
    document = read(text)
    index, fault = next((i, fault) for i, block in enumerate(document.blocks) for fault in block.faults)
    assert fault.mends
    for mend in fault.mends:
        after = read(apply(text, mend_edits(document, index, mend)))
        assert fault.id not in [other.id for other in faults(after)], mend


@given(
    st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\ufffd\ufffe\uffff"), max_size=20),
    st.booleans(),
)
def test_any_text_can_be_written(text: str, flow: bool) -> None:
    written = as_yaml(text, flow)
    whole = (
        f"{{filters: {{one: {{purpose: {written}, order: 3}}}}}}"
        if flow
        else f"filters:\n  one:\n    purpose: {written}\n    order: 3\n"
    )
    document = read(whole)
    assert filter_of(document).count("order") == 3
    said = filter_of(document).get("purpose")
    assert said is not None
    if text.strip() and said.known:
        assert said.value == text
    else:
        assert not text.strip() or "syntax/not-text" in str(ids(document))


def test_edits_that_overlap_are_refused() -> None:
    with pytest.raises(ValueError, match="overlap"):
        apply("abc", [TextEdit(Span(0, 0, 0, 2), ""), TextEdit(Span(0, 1, 0, 3), "")])
