"""Findings as the client's diagnostics, pushed with the version that they are about."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from bandwright.analysis.types import Finding
from bandwright.faces.server.client import Client
from bandwright.faces.server.guide import guide_uri
from bandwright.faces.server.positions import LineIndex

# Plain dictionaries, as they are sent: half the time of the protocol's own classes, on every keystroke.
Diagnostic = dict[str, Any]

SOURCE = "bandwright"
_SEVERITIES = {"error": 1, "warning": 2, "information": 3, "hint": 4}
_TAGS = {"unnecessary": 1, "deprecated": 2}


def diagnostics(findings: Iterable[Finding], uri: str, lines: LineIndex, client: Client) -> list[Diagnostic]:
    """The diagnostics of the findings; what was accepted on purpose is no problem and has none."""
    return [diagnostic(finding, uri, lines, client) for finding in findings if not finding.accepted]


def diagnostic(finding: Finding, uri: str, lines: LineIndex, client: Client) -> Diagnostic:
    """One finding as a diagnostic."""
    shown: Diagnostic = {
        "range": lines.plain_range(finding.span),
        "severity": _SEVERITIES[finding.severity],
        "code": finding.id,
        "source": SOURCE,
        "message": finding.message,
    }
    page = guide_uri(finding.id)
    if page is not None:
        shown["codeDescription"] = {"href": page}
    if finding.tag is not None and _TAGS[finding.tag] in client.tags:
        shown["tags"] = [_TAGS[finding.tag]]
    if finding.related and client.related_places:
        shown["relatedInformation"] = [
            {"location": {"uri": uri, "range": lines.plain_range(place.span)}, "message": place.message}
            for place in finding.related
        ]
    if finding.filter is not None:
        shown["data"] = {"filter": finding.filter}
    return shown
