"""Remedies tried before they are shown: applied to the text, read afresh, analysed, and only then titled."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from bandwright.analysis import accepting
from bandwright.analysis.analyse import Memo, analyse_filter
from bandwright.analysis.quotes import Quotes, UntoldError
from bandwright.analysis.types import Analysis, Finding, Offer
from bandwright.bandfile import edits as text_edits
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document, Fault, Mend, Path, TextEdit
from bandwright.findings.case import Waiting
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import SEVERITIES, Hit
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.questions import Answer, Question
from bandwright.remedies.change import Kind

Ask = Callable[[Question], Answer]

Found = Counter[tuple[str, Path]]
"""How often each finding is at each path."""


def offer(
    document: Document, finding: Finding, answers: dict[Question, Answer], answer: Ask | None, memo: Memo
) -> tuple[Offer, ...]:
    """The remedies of a finding that hold what they promise, best first.

    Each is applied to the text and read again; it is left out where the finding stays, or where another
    one as bad comes.

    Args:
        answers: added to where `answer` is given.
        answer: answers the questions that a title or an effect depends on. None: a remedy that would
            have to wait for an answer is left out.
    """
    bench = _Bench(document, finding, answers, answer, memo)
    found: list[Offer] = []
    for proposal in bench.proposals():
        tried = bench.tried(proposal)
        if tried is not None and all(tried.edits != other.edits for other in found):
            found.append(tried)
    return tuple(found)


@dataclass(frozen=True, slots=True)
class _Proposal:
    title: str
    kind: Kind
    edits: tuple[TextEdit, ...]
    figures: bool = True
    """Whether the title has figures to fill in."""
    reveals: bool = False
    """Corrects a slip that hid what the filter asks, so that findings may come to light."""


@dataclass(frozen=True, slots=True)
class _Bench:
    """One finding with all that trying a remedy on it takes."""

    document: Document
    finding: Finding
    answers: dict[Question, Answer]
    answer: Ask | None
    memo: Memo

    def proposals(self) -> Iterator[_Proposal]:
        """The reader's own corrections, then the remedies that the rule names."""
        document, block = self.document, self.finding.block
        for fault in document.blocks[block].faults:
            if fault.id == self.finding.id and fault.place == self.finding.hit.place:
                # A correction that has no rival is safe; of several readings only a person can choose.
                sole = len(fault.mends) == 1
                kind: Kind = "keeps-requirement" if sole else "changes-requirement"
                for mend in fault.mends:
                    edits = text_edits.mend_edits(document, block, mend)
                    yield _Proposal(_mend_title(mend), kind, edits, figures=False, reveals=sole)
        before = self.analysis(document)
        if before is not None:
            for remedy in RULES[self.finding.id].remedies:
                for change in remedy(before.forecast, self.finding.hit.place):
                    edits = text_edits.edits(document, block, dict(change.settings))
                    yield _Proposal(change.title, change.kind, edits)

    def analysis(self, document: Document) -> Analysis | None:
        """The settled analysis of the finding's filter in a document; None where it has no filter."""
        filter = dict(document.filters).get(self.finding.block)
        if filter is None:
            return None
        while True:
            analysis = analyse_filter(filter, self.answers, self.memo)
            if not analysis.open or self.answer is None:
                return analysis
            for question, _ in analysis.open:
                self.answers[question] = self.answer(question)

    def tried(self, proposal: _Proposal) -> Offer | None:
        """The proposal applied, read and analysed; None where it does not hold what it promises."""
        if not proposal.edits:
            return None
        changed = read(text_edits.apply(self.document.text, proposal.edits), self.document)
        before, after = self.analysis(self.document), self.analysis(changed)
        if after is not None and after.open:
            return None
        old, new = self._found(self.document, before), self._found(changed, after)
        if not self._holds(old, new, proposal.reveals):
            return None
        if before is None or after is None or not proposal.figures:
            return Offer(proposal.title, proposal.kind, proposal.edits)
        title = self._titled(proposal.title, before.forecast, after.forecast)
        return Offer(title, proposal.kind, proposal.edits) if title is not None else None

    def _found(self, document: Document, analysis: Analysis | None) -> Found:
        """Over all faults of a document, and the hits of the filter in question."""
        found = Counter((fault.id, _path(fault)) for block in document.blocks for fault in block.faults)
        if analysis is not None:
            # An entry has expired on every late day, and on none of the early ones.
            day = "9999-12-31" if self.finding.id == "accepted/expired" else ""
            judged = accepting.judge(analysis.filter, analysis, day)
            found.update((hit.id, _path(hit)) for hit, _ in judged)
        return found

    def _holds(self, old: Found, new: Found, reveals: bool) -> bool:
        """Whether the finding is gone and nothing as bad has come."""
        mine = (self.finding.id, _path(self.finding.hit))
        # Of what comes, information and hints do no harm, unless it is the same finding at another place.
        rank = min(SEVERITIES.index(self.finding.severity), SEVERITIES.index("warning"))
        came = [RULES[id] for id, _ in new - old]
        bad = [rule for rule in came if rule.id == self.finding.id or SEVERITIES.index(rule.severity) <= rank]
        return new[mine] < old[mine] and all(reveals and rule.find is not None for rule in bad)

    def _titled(self, title: str, before: Forecast, after: Forecast) -> str | None:
        """The title with its figures, which are asked for where need be; None where one can't be told."""
        while True:
            try:
                return title.format(before=Quotes(before), after=Quotes(after))
            except Waiting as wait:
                if self.answer is None:
                    return None
                self.answers[wait.question] = self.answer(wait.question)
                before, after = Forecast(before.filter, self.answers), Forecast(after.filter, self.answers)
            except UntoldError:
                return None


def _path(one: Fault | Hit) -> Path:
    """Where a finding is, by which it is known again: entries of `accepted` count as one, as they move up."""
    return one.place.path[:1] if one.place.path[:1] == ("accepted",) else one.place.path


def _mend_title(mend: Mend) -> str:
    if mend.text is None:
        return f"Remove one entry: {mend.reading}" if mend.reading else "Remove this entry"
    if not mend.text:
        return "Remove it"
    if "\n" in mend.text:
        return mend.reading or "Correct these lines"
    title = f"Call it `{mend.text}`" if mend.part == "key" else f"Write `{mend.text}`"
    return f"{title}: {mend.reading}" if mend.reading else title
