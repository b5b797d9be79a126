"""Columns and lines are right in any text, and what is no text is named."""

from __future__ import annotations

import pytest

from bandwright.bandfile.blocks import locate
from bandwright.bandfile.reader import decode, read
from bandwright.bandfile.values import Place, Quantity, Span
from unit.bandfile.example import (
    EXAMPLE,
    ONE,
    faults,
    filter_of,
    ids,
    lines,
    one_fault,
    pointed_at,
    span_of,
    text_at,
    with_line,
)

STRANGE = "Kran 🏗️ e\u0301 µ ± 漢字 \u200b"


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("mark", ["", "\ufeff"])
def test_every_value_is_where_its_marks_say(end: str, mark: str) -> None:
    text = mark + with_line(EXAMPLE, "Static load, ahead", f"{STRANGE} load, ahead").replace("\n", end)
    text = text.replace("ripple: 0.1 dB", '"ripple": "0.1 dB"')
    document = read(text)
    assert ids(document) == []
    for index, found in document.filters:
        for path, setting in found.settings:
            if setting.origin == "own" and setting.known and not isinstance(setting.value, tuple):
                assert text_at(document, locate(document, index, Place(path))).strip('"') == setting.written
                name = next(part for part in reversed(path) if isinstance(part, str))
                assert text_at(document, locate(document, index, Place(path, "key"))).strip('"') == name


def test_columns_count_code_points() -> None:
    text = with_line(ONE, "{to: 1 kHz,", "{# 🏗️\n          to: 1,")
    assert span_of(read(text), faults(read(text))[0]) == Span(6, 14, 6, 15)
    flow = f'format: bandwright/1\nfilters: {{"{STRANGE}": {{sample_rate: 8}}}}\n'
    document = read(flow)
    assert pointed_at(document)[0] == "8"


def test_a_byte_order_mark_counts_as_the_first_column_of_a_text_that_holds_it() -> None:
    document = read("\ufeff" + ONE.replace("bandwright/1", "bandwright/2"))
    assert ids(document) == ["key/format-unknown"]
    assert span_of(document, faults(document)[0]) == Span(0, 9, 0, 21)


@pytest.mark.parametrize("odd", ["\u2028", "\u2029", "\x85", "\ufeff", "\u00a0"])
def test_marks_that_only_some_programs_take_for_line_ends_move_nothing(odd: str) -> None:
    text = with_line(ONE, "    sample_rate: 8 kHz\n", f"    purpose: a{odd}b # c{odd}d\n    sample_rate: 8\n")
    document = read(text)
    assert ids(document) == ["key/number-without-unit"]
    assert span_of(document, faults(document)[0]) == Span(4, 17, 4, 18)


@pytest.mark.parametrize(
    ("character", "form", "code"),
    [
        ("\x00", "control", "U+0000"),
        ("\x07", "control", "U+0007"),
        ("\x0b", "control", "U+000B"),
        ("\x0c", "control", "U+000C"),
        ("\x1c", "control", "U+001C"),
        ("\x7f", "control", "U+007F"),
        ("\x9f", "control", "U+009F"),
        ("\ud800", "surrogate", "U+D800"),
        ("\udfff", "surrogate", "U+DFFF"),
        ("\ufffd", "replacement", "U+FFFD"),
        ("\uffff", "control", "U+FFFF"),
    ],
)
def test_what_is_not_text(character: str, form: str, code: str) -> None:
    text = with_line(ONE, "8 kHz", f"8 k{character}Hz # {character}")
    fault = one_fault(text)
    assert (fault.id, fault.form, dict(fault.facts)) == (
        "syntax/not-text",
        form,
        {"character": code, "count": "2"},
    )
    document = read(text)
    assert pointed_at(document) == [character]
    assert filter_of(document).is_unknown("sample_rate")
    assert filter_of(document).quantity("bands", 0, "pass", "to") == Quantity(1, "kHz")


def test_lines_are_those_of_the_editor_not_of_python() -> None:
    text = with_line(ONE, "    sample_rate: 8 kHz\n", "    # \x0c \x1e \u2028\n    sample_rate: 8\n")
    document = read(text)
    assert ids(document) == ["syntax/not-text control", "key/number-without-unit"]
    assert lines(text)[span_of(document, faults(document)[1]).line] == "    sample_rate: 8"


def test_decoding() -> None:
    assert decode(ONE.encode()) == (ONE, False, None)
    assert decode(b"\xef\xbb\xbf" + ONE.encode()) == (ONE, True, None)


@pytest.mark.parametrize("bom", [b"", b"\xef\xbb\xbf"])
def test_bytes_that_are_not_utf_8(bom: bytes) -> None:
    data = bom + with_line(ONE, "8 kHz", "8 kHz # µ µ").encode().replace("# µ µ".encode(), b"# \xc2\xb5 \xb5")
    text, _, fault = decode(data)
    assert fault is not None and fault.id == "syntax/not-utf-8"
    assert dict(fault.facts) == {"byte": "0xB5", "offset": str(data.index(b" \xb5") + 1)}
    assert fault.place.span == Span(3, 27, 3, 28)
    document = read(text, fault=fault)
    assert ids(document) == ["syntax/not-utf-8 byte", "syntax/not-text replacement"]
    assert filter_of(document).quantity("sample_rate") == Quantity(8, "kHz")


@pytest.mark.parametrize("encoding", ["utf-16", "utf-32"])
def test_other_encodings_are_named_and_read(encoding: str) -> None:
    text, bom, fault = decode(ONE.encode(encoding))
    assert (text, bom) == (ONE, True)
    assert fault is not None and (fault.id, fault.form) == ("syntax/not-utf-8", encoding)
