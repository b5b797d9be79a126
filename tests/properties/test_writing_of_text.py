"""How a file is written (line ends, a byte-order mark, other scripts) moves findings and changes none."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from bandwright.analysis.types import Finding
from bandwright.bandfile.values import Span
from properties.whole_path import DEMO, examine

FILES = ["hoist.bands.yaml", "hoist-troubled.bands.yaml"]
NAME = "strain-slow"
PURPOSE = "Static load"


def plain(name: str) -> str:
    return (DEMO / name).read_text(encoding="utf-8")


def shape(findings: tuple[Finding, ...]) -> list[tuple[str, str, bool]]:
    return [(one.id, one.message, one.accepted) for one in findings]


def text_at(text: str, span: Span) -> str:
    """What stands in a span of one line; lines as editors count them."""
    line = text.removeprefix("\ufeff").replace("\r\n", "\n").replace("\r", "\n").split("\n")[span.line]
    return line[span.column : span.end_column] if span.line == span.end_line else line[span.column :]


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize(
    "written",
    [
        lambda text: text.replace("\n", "\r\n").encode(),
        lambda text: text.replace("\n", "\r").encode(),
        lambda text: text.encode("utf-8-sig"),
        lambda text: text.replace("\n", "\r\n").encode("utf-8-sig"),
        lambda text: text.removesuffix("\n").encode(),
        lambda text: (text + "\n\n# the end\n").encode(),
    ],
    ids=["CRLF", "CR", "mark", "mark and CRLF", "no last line end", "a last remark"],
)
def test_line_ends_and_marks_leave_findings_where_they_are(
    name: str, written: Callable[[str], bytes]
) -> None:
    text = plain(name)
    before, after = examine(text), examine(written(text))
    assert shape(after) == shape(before)
    assert [one.span for one in after] == [one.span for one in before]


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize(
    "word", ["🏗️-µ", "строительный", "é", "e\u0301", "吊车", "a\u200bb", "𝛺mega", "ﬁlter"]
)
def test_words_of_other_scripts_only_move_findings(name: str, word: str) -> None:
    """The name of a filter and a remark ahead of a value, in one line with what is found."""
    text = plain(name)
    changed = text.replace(f"  {NAME}:", f"  {word}:").replace(PURPOSE, word).replace("{to: ", "{to:  ")
    before, after = examine(text), examine(changed)
    assert shape(after) == shape(before)
    assert [one.span.line for one in after] == [one.span.line for one in before]
    for old, new in zip(before, after, strict=True):
        assert text_at(changed, new.span) == text_at(text, old.span).replace("{to: ", "{to:  ")
    assert {one.filter for one in after} == {word if one.filter == NAME else one.filter for one in before}


@pytest.mark.parametrize("name", FILES)
def test_other_signs_for_the_same_units_are_the_same_numbers(name: str) -> None:
    text = plain(name)
    changed = (
        text.replace(" pi,", "π,").replace("±", "+-").replace(" kHz", "\u202fkHz").replace(" Hz", "\u00a0Hz")
    )
    assert changed != text
    assert [one.id for one in examine(changed)] == [one.id for one in examine(text)]


def test_a_finding_after_wide_characters_stands_at_code_points() -> None:
    text = (
        "format: bandwright/1\nfilters:\n  kran:\n    sample_rate: 4 kHz\n    bands:\n"
        "      - pass: {to: 20 Hz, ripple: 0.1 dB}\n"
        '      - {"stop": {"from": 30 Hz, attenuation: -70 dB}}\n    purpose: x\n'
    )
    changed = text.replace("purpose: x", "purpose: 🏗️ é").replace("kran", "k🏗️")
    (old,) = [one for one in examine(text) if one.id == "level/negative-attenuation"]
    (new,) = [one for one in examine(changed) if one.id == "level/negative-attenuation"]
    assert old.span == new.span
    assert text_at(changed, new.span) == "-70 dB"
