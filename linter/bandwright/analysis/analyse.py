"""The one place where findings are called: a filter in, its hits and open questions out."""

from __future__ import annotations

from collections import OrderedDict
from collections.abc import Iterator

from bandwright import limits
from bandwright.analysis.types import Analysis
from bandwright.bandfile.values import Document, Filter
from bandwright.findings.case import Case, Waiting
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import Hit
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answers, Question


class Memo:
    """Analyses kept by the filter's value. One is good until a question that it left open has an answer."""

    def __init__(self, most: int | None = None) -> None:
        """`most`: how many are kept, where that is not `limits.MAX_ANALYSES_KEPT`."""
        self._most = limits.MAX_ANALYSES_KEPT if most is None else most
        self._kept: OrderedDict[Filter, Analysis] = OrderedDict()

    def look_up(self, filter: Filter, answers: Answers) -> Analysis | None:
        """The analysis of an equal filter, unless answers have come that would change it."""
        analysis = self._kept.get(filter)
        if analysis is None or any(question in answers for question, _ in analysis.open):
            return None
        self._kept.move_to_end(filter)
        return analysis

    def keep(self, analysis: Analysis) -> None:
        """Keep an analysis, dropping the one that was used longest ago where there are too many."""
        self._kept[analysis.filter] = analysis
        if len(self._kept) > self._most:
            self._kept.popitem(last=False)


def analyse(document: Document, answers: Answers, memo: Memo) -> Iterator[Analysis]:
    """The analysis of each filter, in the order of `document.filters`, one at a time."""
    for _, filter in document.filters:
        yield analyse_filter(filter, answers, memo)


def analyse_filter(filter: Filter, answers: Answers, memo: Memo) -> Analysis:
    """All hits of one filter, and what is still open; from the memo where it is known."""
    known = memo.look_up(filter, answers)
    if known is not None:
        return known
    case = Case(filter, Forecast(filter, answers))
    hits: list[Hit] = []
    waiting: dict[Question, list[str]] = {}
    unknown = filter.is_unknown()
    for rule in RULES.values():
        if rule.find is None or (unknown and any(filter.is_unknown(*key.split(".")) for key in rule.needs)):
            continue
        try:
            hits += list(rule.find(case))
        except Waiting as wait:
            waiting.setdefault(wait.question, []).append(rule.id)
    open_questions = tuple((question, tuple(ids)) for question, ids in waiting.items())
    analysis = Analysis(filter, case.forecast, tuple(hits), open_questions)
    memo.keep(analysis)
    return analysis
