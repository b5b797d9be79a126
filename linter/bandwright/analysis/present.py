"""From hits to findings as a reader meets them: sentences, spans, acceptance, and one order for all."""

from __future__ import annotations

from collections.abc import Iterable

from bandwright.analysis import accepting
from bandwright.analysis.places import device_line, span_of
from bandwright.analysis.types import Analysis, Finding, Related
from bandwright.bandfile.values import Document, Fault, Filter
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import SEVERITIES, Hit


def present(document: Document, analyses: Iterable[Analysis], today: str) -> tuple[Finding, ...]:
    """Every finding of the document, sorted by place.

    Args:
        analyses: one for each of `document.filters`, in their order.
        today: the date (UTC) as YYYY-MM-DD; it decides which accepted findings have expired.
    """
    findings: list[Finding] = []
    of_block = {index: filter for index, filter in document.filters}
    for index, block in enumerate(document.blocks):
        for fault in block.faults:
            findings.append(_finding(document, index, _hit_of(fault), of_block.get(index), accepted=False))
    for (index, filter), analysis in zip(document.filters, analyses, strict=True):
        for hit, accepted in accepting.judge(filter, analysis, today):
            findings.append(_finding(document, index, hit, filter, accepted))
    return tuple(sorted(findings, key=_order))


def _hit_of(fault: Fault) -> Hit:
    others = tuple((place, "the other one") for place in fault.related)
    mend = next((mend.text for mend in fault.mends if mend.text is not None), None)
    facts = fault.facts if mend is None else (*fault.facts, ("mend", mend))
    return Hit(fault.id, fault.place, facts, fault.form, others)


def _finding(document: Document, index: int, hit: Hit, filter: Filter | None, accepted: bool) -> Finding:
    rule = RULES[hit.id]
    related = [Related(span_of(document, index, place, filter), words) for place, words in hit.related]
    if filter is not None:
        brought = [
            device_line(document, place, filter) for place in (hit.place, *(p for p, _ in hit.related))
        ]
        related += [Related(span, words) for line in brought if line for span, words in (line,)]
    block = document.blocks[index]
    return Finding(
        hit.id,
        rule.severity,
        rule.message(hit),
        span_of(document, index, hit.place, filter),
        block.name if block.kind == "filter" else None,
        tuple(related),
        accepted,
        rule.tag,
        index,
        hit,
    )


def _order(finding: Finding) -> tuple[object, ...]:
    return (finding.span, SEVERITIES.index(finding.severity), finding.id, finding.message)
