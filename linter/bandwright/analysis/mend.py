"""Apply every remedy that keeps the requirement, round after round."""

from __future__ import annotations

from collections.abc import Iterator

from bandwright import limits
from bandwright.analysis.analyse import Memo
from bandwright.analysis.offer import Ask, offer
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile.edits import apply
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document
from bandwright.forecast.questions import Answer, Question


def mend(
    document: Document, answers: dict[Question, Answer], answer: Ask, memo: Memo, today: str
) -> Iterator[tuple[Document, tuple[tuple[Finding, Offer], ...]]]:
    """Yield after each round the mended document, and the remedies that were applied to get there.

    A round takes of each block the first finding that has a remedy which keeps the requirement, and its
    best such remedy. Only one, because a remedy is tried on the text as it is: what it does to the next
    finding of the same filter shows in the next round.
    """
    for _ in range(limits.MAX_FIX_ROUNDS):
        applied: dict[int, tuple[Finding, Offer]] = {}
        for finding in present(document, settle(document, answers, answer, memo), today):
            if finding.accepted or finding.block in applied:
                continue
            for each in offer(document, finding, answers, answer, memo):
                if each.kind == "keeps-requirement":
                    applied[finding.block] = finding, each
                    break
        if not applied:
            return
        edits = [edit for _, each in applied.values() for edit in each.edits]
        document = read(apply(document.text, edits), document)
        yield document, tuple(applied.values())
