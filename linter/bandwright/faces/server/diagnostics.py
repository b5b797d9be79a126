"""Findings as the client's diagnostics, pushed with the version that they are about."""

from __future__ import annotations

import json
from collections.abc import Iterable
from typing import Any

from bandwright.analysis.types import Finding
from bandwright.faces.server.client import Client
from bandwright.faces.server.guide import guide_uri
from bandwright.faces.server.positions import LineIndex

# Plain, as it is sent: it takes half the time of the protocol's own classes.
Diagnostic = dict[str, Any]

SOURCE = "bandwright"
_SEVERITIES = {"error": 1, "warning": 2, "information": 3, "hint": 4}
_TAGS = {"unnecessary": 1, "deprecated": 2}


class Texts:
    """The diagnostics of one file as JSON, each written once for as long as its finding is the same."""

    def __init__(self) -> None:
        self._kept: dict[int, tuple[Finding, str]] = {}

    def of(self, findings: Iterable[Finding], uri: str, lines: LineIndex, client: Client) -> str:
        """The JSON list of the diagnostics, in the order of the findings."""
        kept: dict[int, tuple[Finding, str]] = {}
        for finding in findings:
            known = self._kept.get(id(finding))
            if known is None:
                text = json.dumps(diagnostic(finding, uri, lines, client), separators=(",", ":"))
                known = finding, text  # which keeps the finding alive, and so its id its own
            kept[id(finding)] = known
        self._kept = kept
        return f"[{','.join(text for _, text in kept.values())}]"


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
