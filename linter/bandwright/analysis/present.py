"""From hits to findings as a reader meets them: sentences, spans, acceptance, and one order for all."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from bandwright.analysis import accepting
from bandwright.analysis.places import device_line, span_of
from bandwright.analysis.types import Analysis, Finding, Related
from bandwright.bandfile.values import Document, Fault, Filter, Place
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import SEVERITIES, Hit


def present(document: Document, analyses: Iterable[Analysis], today: str) -> tuple[Finding, ...]:
    """Every finding of the document, sorted by place.

    Args:
        analyses: one for each of `document.filters`, in their order.
        today: the date (UTC) as YYYY-MM-DD; it decides which accepted findings have expired.
    """
    filters = dict(document.filters)
    analysed = dict(zip(filters, analyses, strict=True))
    return in_order(
        finding
        for index in range(len(document.blocks))
        for finding in of_block(document, index, filters.get(index), analysed.get(index), today)
    )


def of_block(
    document: Document, index: int, filter: Filter | None, analysis: Analysis | None, today: str
) -> Iterator[Finding]:
    """The findings of one block; those of its text only where its filter is not analysed."""
    for fault in document.blocks[index].faults:
        yield _finding(document, index, _hit_of(fault), filter, None)
    if filter is not None and analysis is not None:
        for hit, entry in accepting.judge(filter, analysis, today):
            yield _finding(document, index, hit, filter, entry)


def in_order(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """The findings by place, the worst first at each; the order is total."""
    return tuple(sorted(findings, key=_order))


def _hit_of(fault: Fault) -> Hit:
    others = tuple((place, "the other one") for place in fault.related)
    mend = next((mend.text for mend in fault.mends if mend.text is not None), None)
    facts = fault.facts if mend is None else (*fault.facts, ("mend", mend))
    return Hit(fault.id, fault.place, facts, fault.form, others)


def _finding(
    document: Document, index: int, hit: Hit, filter: Filter | None, entry: accepting.Entry | None
) -> Finding:
    rule = RULES[hit.id]
    related = [_related(document, index, place, words, filter) for place, words in hit.related]
    brought = device_line(document, hit.place, filter) if filter is not None else None
    if brought is not None:
        related.append(Related(*brought))
    block = document.blocks[index]
    return Finding(
        hit.id,
        rule.severity,
        rule.message(hit),
        span_of(document, index, hit.place, filter),
        block.name if block.kind == "filter" else None,
        tuple(related),
        entry is not None,
        rule.tag,
        index,
        hit,
        entry.reason if entry is not None else "",
    )


def _related(document: Document, index: int, place: Place, words: str, filter: Filter | None) -> Related:
    """Another place of a finding; where the device brings its value, the device's own line."""
    brought = device_line(document, place, filter) if filter is not None else None
    if brought is not None:
        span, origin = brought
        return Related(span, f"{words}, {origin}")
    return Related(span_of(document, index, place, filter), words)


def _order(finding: Finding) -> tuple[object, ...]:
    return (finding.span, SEVERITIES.index(finding.severity), finding.id, finding.message)
