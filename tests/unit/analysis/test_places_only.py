"""Text put in above every block changes places only: no filter is analysed again."""

from __future__ import annotations

from pathlib import Path

import pytest

import bandwright
from bandwright.analysis import analyse as analysing
from bandwright.analysis.analyse import Memo
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Analysis
from bandwright.bandfile.reader import read
from bandwright.exact.answer import answer
from bandwright.forecast.questions import Answer, Question

DEMO = sorted((Path(bandwright.__file__).parent / "demo").glob("*.bands.yaml"))
TODAY = "2026-01-01"


class CountingMemo(Memo):
    """Counts the analyses that had to be made."""

    def __init__(self) -> None:
        super().__init__()
        self.made = 0

    def keep(self, analysis: Analysis) -> None:
        self.made += 1
        super().keep(analysis)


@pytest.mark.parametrize("inserted", ["", "# a comment", "# 🏗 emoji, µ and e\u0301"])
@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.name)
def test_inserted_lines_change_places_only(path: Path, inserted: str) -> None:
    text = path.read_text(encoding="utf-8")
    before, memo, answers = read(text), CountingMemo(), dict[Question, Answer]()
    old = present(before, settle(before, answers, answer, memo), TODAY)
    made = memo.made
    assert made >= len(before.filters)

    starts = {block.first_line for block in before.blocks if block.kind != "top"}
    lines, moved_by, above = [], [], 0
    for number, line in enumerate(text.split("\n")):
        if number in starts:
            lines.append(inserted)
            above += 1
        lines.append(line)
        moved_by.append(above)
    after = read("\n".join(lines), before)
    new = present(after, settle(after, answers, answer, memo), TODAY)

    assert memo.made == made
    assert [(one.id, one.message, one.filter, one.accepted) for one in new] == [
        (one.id, one.message, one.filter, one.accepted) for one in old
    ]
    for was, now in zip(old, new, strict=True):
        assert now.span.line == was.span.line + moved_by[was.span.line]
        assert (now.span.column, now.span.end_column) == (was.span.column, was.span.end_column)


def test_the_memo_forgets_the_analysis_used_longest_ago(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(analysing.limits, "MAX_ANALYSES_KEPT", 1)
    document = read(DEMO[0].read_text(encoding="utf-8"))
    memo = CountingMemo()
    first = [analysing.analyse_filter(one, {}, memo) for _, one in document.filters]
    made = memo.made
    analysing.analyse_filter(first[-1].filter, {}, memo)
    assert memo.made == made
    analysing.analyse_filter(first[0].filter, {}, memo)
    assert memo.made == made + 1
