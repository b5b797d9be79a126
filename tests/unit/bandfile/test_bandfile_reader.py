"""What the reader makes of a file: settings, devices, defaults, places, and the fault for each slip."""

from __future__ import annotations

import pytest

from bandwright import limits
from bandwright.bandfile.blocks import address, locate
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Path, Place, Quantity, Setting
from unit.bandfile.example import (
    EXAMPLE,
    ONE,
    faults,
    filter_of,
    ids,
    one_fault,
    pointed_at,
    text_at,
    unknown,
    with_line,
)


def test_the_example_reads_without_a_fault() -> None:
    document = read(EXAMPLE)
    assert ids(document) == []
    assert document.format == "bandwright/1"
    assert [address(block) for block in document.blocks] == [
        "/",
        "devices/hoist-node",
        "filters/strain-slow",
        "filters/gearbox-envelope",
    ]
    assert [(index, found.name) for index, found in document.filters] == [
        (2, "strain-slow"),
        (3, "gearbox-envelope"),
    ]
    assert all(block.whole for block in document.blocks)


def test_settings_of_a_filter_its_device_and_the_defaults() -> None:
    slow = filter_of(read(EXAMPLE), "strain-slow")
    assert slow.get("bands", 0, "pass", "to") == Setting(Quantity(20, "Hz"), "20 Hz")
    assert slow.get("family") == Setting(("butterworth",), "butterworth")
    assert slow.get("sample_rate") == Setting(Quantity(4, "kHz"), "4 kHz", "device")
    assert slow.get("structure") == Setting(("cascade",), "cascade", "device")
    assert slow.get("at_most", "order") == Setting(16, "16", "device")
    assert slow.get("phase") == Setting("any", "any", "default")
    assert slow.get("order") is None
    assert list(slow.band_kinds()) == [(0, "pass"), (1, "stop")]


def test_a_filters_own_keys_win_and_maxima_merge_key_by_key() -> None:
    envelope = filter_of(read(EXAMPLE), "gearbox-envelope")
    assert envelope.get("sample_rate") == Setting(Quantity(16, "kHz"), "16 kHz")
    assert envelope.get("at_most", "multiplications") == Setting(80, "80")
    assert envelope.get("at_most", "delay") == Setting(Quantity(25, "ms"), "25 ms", "device")
    assert envelope.get("structure") == Setting(("symmetric",), "symmetric")
    assert envelope.get("accepted", 0, "up_to") == Setting(Quantity(110, ""), "110")
    assert envelope.get("accepted", 0, "until") == Setting("2027-06-30", "2027-06-30")


def test_without_a_device_the_order_is_12_at_most() -> None:
    assert filter_of(read(ONE)).get("at_most", "order") == Setting(12, "12", "default")


def test_filters_that_say_the_same_are_equal_wherever_they_stand() -> None:
    turned = ONE.replace("    sample_rate: 8 kHz\n", "") + "    # a remark\n\n    sample_rate: 8 kHz\n"
    assert filter_of(read("# a remark\n" + turned)) == filter_of(read(ONE))
    assert filter_of(read(ONE.replace("8 kHz", '"8 kHz"'))) == filter_of(read(ONE))


def test_flow_and_block_style_say_the_same() -> None:
    block = with_line(
        ONE, "pass: {to: 1 kHz, ripple: 1 dB}", "pass:\n          to: 1 kHz\n          ripple: 1 dB"
    )
    assert filter_of(read(block)) == filter_of(read(ONE))
    flow = (
        "{format: bandwright/1, filters: {one: {sample_rate: 8 kHz, bands: [pass: {to: 1 kHz, ripple: 1 dB},"
    )
    flow += "\n stop: {from: 2 kHz, attenuation: 40 dB}]}}}"
    assert ids(read(flow)) == []
    assert filter_of(read(flow)) == filter_of(read(ONE))


@pytest.mark.parametrize(
    ("old", "new", "id", "at", "facts"),
    [
        ("ripple: 1", "riple: 1", "key/unknown-key", "riple", {"nearest": "ripple", "where": "pass"}),
        (
            "sample_rate",
            "sample-rate",
            "key/unknown-key",
            "sample-rate",
            {"nearest": "sample_rate", "where": "filter"},
        ),
        ("    bands", "    colour: red\n    bands", "key/unknown-key", "colour", {"where": "filter"}),
        (
            "    bands",
            "    ripple: 1 dB\n    bands",
            "key/unknown-key misplaced",
            "ripple",
            {"belongs": "pass"},
        ),
        ("    bands", "    grid: 1\n    bands", "key/reserved-key", "grid", {"where": "filter"}),
        ("filters:", "masks: {}\nfilters:", "key/reserved-key", "masks", {"where": "top"}),
        (
            "    bands",
            "    family: eliptic\n    bands",
            "key/unknown-name",
            "eliptic",
            {"nearest": "elliptic"},
        ),
        (
            "    bands",
            "    family: [butterworth, eliptic]\n    bands",
            "key/unknown-name",
            "eliptic",
            {"nearest": "elliptic"},
        ),
        ("    bands", "    arithmetic: Q15\n    bands", "key/unknown-name", "Q15", {"nearest": "q15"}),
        (
            "    bands",
            "    arithmetic: q0\n    bands",
            "key/wrong-kind bad-word",
            "q0",
            {"key": "arithmetic"},
        ),
        (", ripple: 1 dB", "", "key/missing-key either", "pass", {"key": "ripple", "or": "gain"}),
        (", attenuation: 40 dB", "", "key/missing-key either", "stop", {"key": "attenuation", "or": "gain"}),
        ("    sample_rate: 8 kHz\n", "", "key/missing-key", "one", {"key": "sample_rate"}),
        ("1 kHz", "1", "key/number-without-unit", "1", {"key": "to", "dimension": "frequency"}),
        ("1 kHz", "1 khz", "key/wrong-unit spelling", "1 khz", {"nearest": "kHz", "unit": "khz"}),
        ("1 kHz", "1 dB", "key/wrong-unit dimension", "1 dB", {"found": "level", "dimension": "frequency"}),
        ("1 kHz", "1 mile", "key/wrong-unit unknown", "1 mile", {"unit": "mile"}),
        ("1 kHz", "one kHz", "key/wrong-kind not-a-number", "one kHz", {"wanted": "a frequency"}),
        ("ripple: 1 dB", "ripple: 0,1 dB", "key/decimal-comma", "0,1 dB", {"meant": "0.1 dB"}),
        ("8 kHz", "8,0 kHz", "key/decimal-comma", "8,0 kHz", {"meant": "8.0 kHz"}),
        (
            "8 kHz",
            "8,000 Hz",
            "key/decimal-comma thousands",
            "8,000 Hz",
            {"meant": "8.000 Hz", "or": "8000 Hz"},
        ),
        ("8 kHz", "{a: 1}", "key/wrong-kind text-wanted", "{a: 1}", {"key": "sample_rate"}),
        ("{to: 1 kHz, ripple: 1 dB}", "1 kHz", "key/wrong-kind mapping-wanted", "1 kHz", {"key": "pass"}),
        ("    bands", "    phase:\n    bands", "key/wrong-kind empty", "phase", {"key": "phase"}),
        ("    bands", "    order: 0\n    bands", "key/wrong-kind too-small", "0", {"least": "1"}),
        (
            "    bands",
            "    order: 8.5\n    bands",
            "key/wrong-kind not-a-whole-number",
            "8.5",
            {"key": "order"},
        ),
        (
            ", ripple: 1 dB",
            ", ripple: 1 dB, gain: {min: 0 dB}",
            "key/cannot-apply beside",
            "gain",
            {"beside": "ripple"},
        ),
        ("format: bandwright/1\n", "", "key/format-missing", "filters:", {"known": "bandwright/1"}),
        ("bandwright/1", "bandwright/2", "key/format-unknown", "bandwright/2", {"written": "bandwright/2"}),
        ("    bands", "    device: d\n    bands", "key/unknown-device no-devices", "d", {"written": "d"}),
        (
            "    bands",
            "    accepted: [{finding: a/b}]\n    bands",
            "accepted/no-reason missing",
            "{finding: a/b}",
            {"finding": "a/b"},
        ),
        (
            "    bands",
            "    accepted: [{finding: a/b, reason: ''}]\n    bands",
            "accepted/no-reason empty",
            "''",
            {"finding": "a/b"},
        ),
        (
            "    bands",
            "    accepted: [{finding: ab, reason: r}]\n    bands",
            "key/wrong-kind bad-finding",
            "ab",
            {"key": "finding"},
        ),
        (
            "    bands",
            "    accepted: [{finding: a/b, reason: r, until: 2027-02-30}]\n    bands",
            "key/wrong-kind bad-date",
            "2027-02-30",
            {"key": "until"},
        ),
        (
            "    bands",
            "    ? [x]\n    : 1\n    bands",
            "key/wrong-kind key-not-text",
            "[x]",
            {"where": "filter"},
        ),
    ],
)
def test_slips(old: str, new: str, id: str, at: str, facts: dict[str, str]) -> None:
    document = read(with_line(ONE, old, new))
    assert ids(document) == [id]
    assert pointed_at(document) == [at]
    assert dict(faults(document)[0].facts).items() >= facts.items()


@pytest.mark.parametrize(
    ("old", "new", "lost"),
    [
        ("1 kHz", "1", [("bands", 0, "pass", "to")]),
        ("ripple", "riple", [("bands", 0, "pass", "ripple")]),
        ("sample_rate", "sample-rate", [("sample_rate",)]),
        ("- pass: {to: 1 kHz, ripple: 1 dB}", "-", [("bands", 0)]),
        ("- pass: {to: 1 kHz, ripple: 1 dB}", "- pass", [("bands", 0)]),
        ("- pass: {to: 1 kHz, ripple: 1 dB}", "- pass:", [("bands", 0, "pass")]),
        ("pass: {", "pas: {", [("bands", 0, "pass")]),
        ("      - stop", "        stop", [("bands", 0)]),
        ("    bands", "    at_mots: {order: 40}\n    bands", [("at_most",)]),
        ("    bands", "    at_most: 40\n    bands", [("at_most",)]),
        ("    bands", "    family: [butterworth, eliptic]\n    bands", [("family",)]),
        ("    bands", "    phase: linear\n    phase: any\n    bands", [("phase",)]),
    ],
)
def test_what_cannot_be_read_is_unknown_never_absent(old: str, new: str, lost: list[Path]) -> None:
    document = read(with_line(ONE, old, new))
    assert ids(document) != []
    assert unknown(filter_of(document)) == lost


def test_a_key_twice_points_at_the_second_and_names_the_first() -> None:
    document = read(with_line(ONE, "    bands", "    phase: any\n    phase: linear\n    bands"))
    (fault,) = faults(document)
    assert fault.id == "syntax/duplicate-key"
    assert locate(document, 1, fault.place).line == 5
    assert locate(document, 1, fault.related[0]).line == 4


def test_an_unknown_device_leaves_everything_it_might_bring_unknown() -> None:
    document = read(with_line(EXAMPLE, "device: hoist-node\n    bands", "device: hoist-nod\n    bands"))
    assert ids(document) == ["key/unknown-device"]
    slow = filter_of(document, "strain-slow")
    assert {("device",), ("sample_rate",), ("arithmetic",), ("at_most", "order"), ("signal", "peak")} <= set(
        unknown(slow)
    )
    assert slow.get("phase") == Setting("any", "any", "default"), "a device brings no phase"
    assert slow.names("family") == ("butterworth",)


@pytest.mark.parametrize("name", ["", "[hoist-node]", "'x"])
def test_an_unreadable_device_does_so_too(name: str) -> None:
    document = read(with_line(EXAMPLE, "device: hoist-node\n    bands", f"device: {name}\n    bands"))
    slow = filter_of(document, "strain-slow")
    assert slow.is_unknown("sample_rate") and slow.is_unknown("at_most", "order")
    assert "key/unused-device" not in ids(document)


def test_a_slip_in_a_device_reaches_only_what_leans_on_it() -> None:
    document = read(with_line(EXAMPLE, "sample_rate: 4 kHz", "sample_rate: 4"))
    assert unknown(filter_of(document, "strain-slow")) == [("sample_rate",)]
    assert unknown(filter_of(document, "gearbox-envelope")) == []
    document = read(with_line(EXAMPLE, "at_most: {order: 16,", "at_most: {order: many,"))
    assert unknown(filter_of(document, "strain-slow")) == [("at_most", "order")]


def test_names_across_blocks() -> None:
    twice = EXAMPLE + "  strain-slow:\n    device: hoist-node\n    bands: [pass: {ripple: 1 dB}]\n"
    document = read(twice)
    assert ids(document) == ["key/duplicate-name"]
    assert pointed_at(document) == ["strain-slow"]
    assert locate(document, 4, faults(document)[0].related[0]).line == 10
    assert ids(read(EXAMPLE.replace("    device: hoist-node\n", "    sample_rate: 4 kHz\n", 1))) == []
    unused = read(with_line(EXAMPLE, "devices:\n", "devices:\n  spare: {sample_rate: 1 kHz}\n"))
    assert ids(unused) == ["key/unused-device"]
    assert pointed_at(unused) == ["spare"]


def test_a_filters_key_on_a_device() -> None:
    fault = one_fault(
        with_line(EXAMPLE, "    structure: cascade", "    phase: linear\n    structure: cascade")
    )
    assert (fault.id, fault.form) == ("key/cannot-apply", "device")


def test_normalised_edges_need_no_rate() -> None:
    text = ONE.replace("    sample_rate: 8 kHz\n", "").replace("1 kHz", "0.2 pi").replace("2 kHz", "0.3 pi")
    assert ids(read(text)) == []


def test_scalars_are_read_from_their_own_text() -> None:
    text = with_line(ONE, "    bands", "    purpose: 012\n    at_most: {taps: 1_000, order: 0x10}\n    bands")
    assert ids(read(text)) == ["key/wrong-kind not-a-whole-number"] * 2
    assert filter_of(read(text)).text("purpose") == "012"
    assert (
        filter_of(read(with_line(ONE, "    bands", "    purpose: yes\n    bands"))).text("purpose") == "yes"
    )
    assert filter_of(read(with_line(ONE, "    bands", "    order: 010\n    bands"))).count("order") == 10


def test_anchors_aliases_and_merge_keys() -> None:
    text = """\
format: bandwright/1
devices:
  d: &d {sample_rate: 8 kHz, at_most: &most {order: 3}}
  e: {<<: *d, arithmetic: q31}
filters:
  a:
    device: e
    bands: &bands
      - pass: {to: 1 kHz, ripple: 1 dB}
      - stop: {from: 2 kHz, attenuation: 40 dB}
  b:
    device: d
    bands: *bands
    at_most: *most
"""
    document = read(text)
    assert ids(document) == []
    first, second = filter_of(document, "a"), filter_of(document, "b")
    assert first.get("sample_rate") == second.get("sample_rate")
    assert second.get("bands", 1, "stop", "from") == first.get("bands", 1, "stop", "from")
    index = next(i for i, block in enumerate(document.blocks) if block.name == "b")
    assert text_at(document, locate(document, index, Place(("bands", 1, "stop", "from")))) == "*bands"
    assert document.blocks[index].marks["bands", 1, "stop", "from"].shared


def test_a_merge_key_does_not_override() -> None:
    text = (
        "format: bandwright/1\ndevices:\n  d: &d {sample_rate: 8 kHz}\n  e: {sample_rate: 4 kHz, <<: [*d]}\n"
    )
    text += "filters:\n  a: {device: e, bands: [pass: {ripple: 1 dB}]}\n"
    assert filter_of(read(text), "a").quantity("sample_rate") == Quantity(4, "kHz")


def test_an_unknown_alias_and_one_that_holds_itself() -> None:
    text = with_line(ONE, "8 kHz", "*rate")
    fault = one_fault(text)
    assert (fault.id, fault.form, fault.facts) == ("syntax/not-yaml", "unknown-alias", (("name", "rate"),))
    assert unknown(filter_of(read(text))) == [("sample_rate",)]
    assert "syntax/not-yaml unknown-alias" in ids(read(ONE + "    accepted: &a [*a]\n"))


def test_an_alias_bomb_is_refused() -> None:
    levels = ["x0: &x0 [a, a, a, a, a, a, a, a, a, a]"]
    levels += [f"x{n}: &x{n} [{', '.join([f'*x{n - 1}'] * 10)}]" for n in range(1, 9)]
    document = read(ONE + "    accepted: *x8\n" + "\n".join(levels) + "\n")
    assert "syntax/alias-bomb" in ids(document)


def test_deep_nesting_is_refused() -> None:
    for deep in ("[" * 100_000, "{a: " * 5000, "\n      " + "- " * 5000 + "x", "[" * 65 + "]" * 65):
        document = read(ONE + f"    accepted: {deep}\n")
        assert "syntax/too-deep" in ids(document)
        assert filter_of(document).quantity("sample_rate") == Quantity(8, "kHz")
    assert "syntax/too-deep" in ids(read("".join(" " * n + "a:\n" for n in range(300))))


def test_a_large_file_is_refused() -> None:
    text = ONE + "#" * limits.MAX_FILE_BYTES
    document = read(text)
    assert ids(document) == ["syntax/too-large"]
    assert document.filters == ()
    assert ids(read(ONE + "#" * (limits.MAX_FILE_BYTES - len(ONE)))) == []
    assert ids(read(ONE + "µ" * (limits.MAX_FILE_BYTES // 2))) == ["syntax/too-large"], (
        "bytes count, not characters"
    )


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("", ["key/format-missing", "key/missing-key"]),
        ("# nothing\n", ["key/format-missing", "key/missing-key"]),
        ("- a\n- b\n", ["syntax/not-yaml not-a-mapping"]),
        ("only words\n", ["syntax/not-yaml not-a-mapping"]),
        ("format: bandwright/1\nfilters:\n  - a\n", ["key/wrong-kind mapping-wanted"]),
        ("format: bandwright/1\nfilters: a\n", ["key/wrong-kind mapping-wanted"]),
        ("format: [1]\nfilters:\n", ["key/wrong-kind text-wanted"]),
        ("format:\nfilters:\n", ["key/wrong-kind empty"]),
        (
            ONE + "---\n" + ONE,
            [
                "syntax/not-yaml several-documents",
                "syntax/duplicate-key",
                "syntax/duplicate-key",
                "key/duplicate-name",
            ],
        ),
        ("---\n" + ONE, []),
        ("%YAML 1.1\n---\n" + ONE, []),
    ],
)
def test_what_the_top_level_can_be(text: str, found: list[str]) -> None:
    assert ids(read(text)) == found


def test_a_filter_without_keys_lacks_its_bands() -> None:
    fault = one_fault("format: bandwright/1\nfilters:\n  a:\n")
    assert (fault.id, fault.facts) == ("key/missing-key", (("key", "bands"), ("where", "filter")))


@pytest.mark.parametrize("keys", ["b: [1], a: [1, 0.5]", "sections: [{b: [1], a: [1]}]"])
def test_feedback_has_no_default(keys: str) -> None:
    document = read(ONE + f"    coefficients: {{{keys}}}\n")
    assert ids(document) == ["key/not-judged-yet", "key/missing-key feedback"]
    assert [mend.text for mend in faults(document)[1].mends] == ["subtracted", "added"]
    assert filter_of(document).is_unknown("coefficients") is False


def test_places_without_text_are_where_their_container_is() -> None:
    document = read(EXAMPLE)
    assert text_at(document, locate(document, 2, Place(("sample_rate",)))) == "strain-slow"
    assert (
        text_at(document, locate(document, 2, Place(("sample_rate",), block="devices/hoist-node"))) == "4 kHz"
    )
    assert text_at(document, locate(document, 2, Place(("bands", 1, "stop", "to")))) == "stop"
