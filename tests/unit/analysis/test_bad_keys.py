"""One bad key never removes a filter: every finding that does not need the broken key is still there."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from pathlib import Path

import pytest

import bandwright
from bandwright.analysis.analyse import Memo
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding
from bandwright.bandfile.blocks import address
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document, Filter, Span
from bandwright.exact.answer import answer
from bandwright.findings.catalogue import RULES
from bandwright.forecast.questions import Answer, Question

DEMO = sorted((Path(bandwright.__file__).parent / "demo").glob("*.bands.yaml"))
TODAY = "2026-01-01"
WAYS = {
    "garbage": "???",
    "emptied": "",
    "open quote": '"{written}',
    "open bracket": "[{written}",
    "open brace": "{{{written}",
}

answers: dict[Question, Answer] = {}
memo = Memo()


def findings(document: Document) -> tuple[Finding, ...]:
    return present(document, settle(document, answers, answer, memo), TODAY)


def values(document: Document) -> Iterator[tuple[int, str, Span]]:
    """Every scalar of the document: its block, its path as text, and where its value stands."""
    for index, block in enumerate(document.blocks):
        for path, marks in block.marks.items():
            inner = any(other[: len(path)] == path and len(other) > len(path) for other in block.marks)
            # Without its `filters` a file has none.
            container = block.kind == "top" and path in (("devices",), ("filters",))
            if path and not inner and not container and marks.value.line == marks.value.end_line:
                span = Span(
                    marks.value.line + block.first_line,
                    marks.value.column,
                    marks.value.end_line + block.first_line,
                    marks.value.end_column,
                )
                yield index, "/".join(map(str, path)), span


def broken(text: str, span: Span, way: str) -> str:
    lines = text.split("\n")
    line = lines[span.line]
    written = line[span.column : span.end_column]
    lines[span.line] = line[: span.column] + WAYS[way].format(written=written) + line[span.end_column :]
    return "\n".join(lines)


def key_of(finding: Finding, document: Document) -> tuple[str, str, str]:
    return address(document.blocks[finding.block]), finding.id, "/".join(map(str, finding.hit.place.path))


def filter_of(finding: Finding, document: Document) -> Filter | None:
    name = document.blocks[finding.block].name
    return next((one for _, one in document.filters if one.name == name), None)


NEEDS_OF_ANY_FILTER = {"key/unused-device": "device"}
"""Findings of the reader that look at one key of every filter: an unreadable one could be what they miss."""


def needs(finding: Finding) -> tuple[str, ...]:
    """The keys that a finding reads; of one about an entry of `accepted`, also those of what it accepts."""
    accepts = dict(finding.hit.facts).get("finding") if finding.id.startswith("accepted/") else None
    return RULES[finding.id].needs + (RULES[str(accepts)].needs if accepts in RULES else ())


def is_excused(finding: Finding, line: int, after: Document) -> bool:
    """A finding may go that points at the broken line, or that needs a key which is unknown now."""
    places = [finding.span, *(related.span for related in finding.related)]
    if any(span.line <= line <= span.end_line for span in places):
        return True
    everywhere = NEEDS_OF_ANY_FILTER.get(finding.id)
    if everywhere is not None and any(one.is_unknown(everywhere) for _, one in after.filters):
        return True
    one = filter_of(finding, after)
    return one is not None and any(one.is_unknown(*key.split(".")) for key in needs(finding))


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.name)
def test_every_finding_that_does_not_need_the_broken_key_stays(path: Path, way: str) -> None:
    text = path.read_text(encoding="utf-8")
    before = read(text)
    sound = findings(before)
    names = [one.name for _, one in before.filters]
    count = 0
    for index, name, span in values(before):
        after = read(broken(text, span, way), before)
        assert [one.name for _, one in after.filters] == names, (name, "a filter is lost")
        # What the break makes unknown stays within the line that was broken.
        if before.blocks[index].kind == "filter":
            _assert_only_this_line_is_unknown(before, after, index, span.line, name)
        left = Counter(key_of(finding, after) for finding in findings(after))
        for finding in sound:
            if not is_excused(finding, span.line, after):
                assert left[key_of(finding, before)] > 0, (name, finding.id, finding.message)
        count += 1
    assert count > 20


def _assert_only_this_line_is_unknown(
    before: Document, after: Document, index: int, line: int, name: str
) -> None:
    block = before.blocks[index]
    one = next(one for _, one in after.filters if one.name == block.name)
    was = next(one for _, one in before.filters if one.name == block.name)
    on_line = [path for path, marks in block.marks.items() if marks.key.line + block.first_line == line]
    if any(path[0] == "device" for path in on_line if path):
        return
    for path, setting in one.settings:
        if not setting.known and not was.is_unknown(*path):
            own = any(path[: len(place)] == place or place[: len(path)] == path for place in on_line)
            assert own, (name, path, "is unknown, though its line is sound")
