"""The output of `check --as junit`: a test report in the XML that build servers read, without times.

There is no standard of it. What is written here is what all of its readers take: a `testsuite` for each file,
a `testcase` for each filter with at most one `failure`. From memory.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Collection, Iterable
from xml.etree import ElementTree as ET

from bandwright.analysis.types import Finding
from bandwright.bandfile.values import Document
from bandwright.faces.command.formats import check_text
from bandwright.findings.rules import SEVERITIES, Severity

NO_FILTER = "the file itself"
"""The case of what is found outside of filters: in devices, at the top level, in text that can't be read."""

NOT_XML = re.compile("[^\t\n\r -\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
"""What XML 1.0 has no way to write, not even as a reference (production 2, `Char`)."""

DECLARATION = '<?xml version="1.0" encoding="UTF-8"?>'


def suite(
    file: str, document: Document, findings: Iterable[Finding], failing: Collection[Severity]
) -> ET.Element:
    """The suite of a file; `failing` are the severities that fail a case."""
    blocks: defaultdict[int | None, list[Finding]] = defaultdict(list)
    for finding in findings:
        if not finding.accepted:
            blocks[finding.block if finding.filter is not None else None].append(finding)
    cases = [_case(file, NO_FILTER, blocks[None], failing)]
    for index, block in enumerate(document.blocks):
        if block.kind == "filter":
            cases.append(_case(file, block.name, blocks[index], failing))
    return _with_counts("testsuite", file, cases)


def report(suites: Iterable[ET.Element], problems: Iterable[str]) -> str:
    """The whole output. Only ASCII, so that no terminal and no pipe spoils it.

    Args:
        suites: those of the files that were checked, in order.
        problems: a sentence for each file that could not be read.
    """
    errors = [_error(problem) for problem in problems]
    not_read = [_with_counts("testsuite", "not read", errors)] if errors else []
    root = _with_counts("testsuites", "bandwright", [*suites, *not_read])
    ET.indent(root)
    return f"{DECLARATION}\n{ET.tostring(root, encoding='us-ascii').decode('ascii')}"


def _with_counts(tag: str, name: str, inner: list[ET.Element]) -> ET.Element:
    """An element around others, with the counts of what is inside."""
    element = ET.Element(tag, name=_text(name))
    element.extend(inner)
    for count, tags in (("tests", "testcase"), ("failures", "failure"), ("errors", "error")):
        element.set(count, str(sum(1 for _ in element.iter(tags))))
    return element


def _case(file: str, name: str, findings: list[Finding], failing: Collection[Severity]) -> ET.Element:
    """A case fails for its worst finding and lists all that fail it; what is milder it only tells."""
    case = ET.Element("testcase", classname=_text(file), name=_text(name))
    severe = [finding for finding in findings if finding.severity in failing]
    if severe:
        worst = min(severe, key=lambda finding: SEVERITIES.index(finding.severity))
        failure = ET.SubElement(case, "failure", type=worst.id, message=_text(worst.message))
        failure.text = _lines(file, severe)
    mild = [finding for finding in findings if finding.severity not in failing]
    if mild:
        ET.SubElement(case, "system-out").text = _lines(file, mild)
    return case


def _error(problem: str) -> ET.Element:
    case = ET.Element("testcase", classname="bandwright", name=_text(problem))
    ET.SubElement(case, "error", type="not-read", message=_text(problem))
    return case


def _lines(file: str, findings: list[Finding]) -> str:
    return _text("\n".join(check_text.line(file, finding, colour=False) for finding in findings))


def _text(text: str) -> str:
    return NOT_XML.sub("", text)
