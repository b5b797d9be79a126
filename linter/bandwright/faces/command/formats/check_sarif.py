"""The output of `check --as sarif`: a log of SARIF 2.1.0 (OASIS, 2020), for programs that gather findings.

Plain mappings, as the standard names their keys; `§` in a comment is a section of it.
"""

from __future__ import annotations

import json
import os
from collections import Counter
from collections.abc import Callable, Iterable, Iterator
from hashlib import sha256
from importlib.metadata import version
from pathlib import Path
from typing import Any
from urllib.parse import quote

from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile.values import Document, Span, TextEdit
from bandwright.faces.guide_pages import page, what_is_asked
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import Rule, Severity

Json = dict[str, Any]

SCHEMA = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
BASE = "WORKING_FOLDER"
"""What the files are relative to: a name that whoever reads the log can give a folder of their own."""

LEVELS: dict[Severity, str] = {"error": "error", "warning": "warning", "information": "note", "hint": "note"}
INDICES = {id: index for index, id in enumerate(RULES)}


def results(
    file: str,
    document: Document,
    findings: Iterable[Finding],
    offers: Callable[[Document, Finding], Iterable[Offer]],
) -> Iterator[Json]:
    """A result for each finding of a file, accepted or not."""
    same: Counter[str] = Counter()
    for finding in findings:
        what = _what(document, finding)
        same[what] += 1
        yield {
            "ruleId": finding.id,
            "ruleIndex": INDICES[finding.id],
            "level": LEVELS[finding.severity],
            "message": _message(finding.message),
            "locations": [_location(file, finding.span) | _logical(finding.filter)],
            "relatedLocations": [
                {"id": number, **_location(file, place.span), "message": _message(place.message)}
                for number, place in enumerate(finding.related, 1)
            ],
            # An empty list says "not suppressed"; §3.27.23 has it on all results or on none.
            "suppressions": [_suppression(finding)] if finding.accepted else [],
            "partialFingerprints": {"finding/v1": f"{what}:{same[what]}"},
            "fixes": [_fix(file, one) for one in offers(document, finding)],
            "properties": {"severity": finding.severity},
        }


def log(files: Iterable[str], found: Iterable[Json], problems: Iterable[str]) -> str:
    """The whole output. Only ASCII, so that no terminal and no pipe spoils it.

    Args:
        files: those that were checked, in order.
        found: the results of all of them.
        problems: a sentence for each file that could not be read.
    """
    artifacts = [{"location": _file(file), "roles": ["analysisTarget"]} for file in dict.fromkeys(files)]
    notices = [{"level": "error", "message": _message(problem)} for problem in problems]
    run = {
        "tool": {
            "driver": {
                "name": "bandwright",
                "version": version("bandwright"),
                "rules": [_rule(rule) for rule in RULES.values()],
            }
        },
        "invocations": [{"executionSuccessful": not notices, "toolExecutionNotifications": notices}],
        "originalUriBaseIds": {BASE: {"description": _message("The folder that the check ran in.")}},
        "columnKind": "unicodeCodePoints",
        "artifacts": artifacts,
        "results": list(found),
    }
    return json.dumps({"version": "2.1.0", "$schema": SCHEMA, "runs": [run]}, indent=2)


def _rule(rule: Rule) -> Json:
    text = page(rule.id).read_text(encoding="utf-8")
    return {
        "id": rule.id,
        "shortDescription": {"text": f"{what_is_asked(rule.id).partition('. ')[0].removesuffix('.')}."},
        "help": {"text": text, "markdown": text},
        "defaultConfiguration": {"level": LEVELS[rule.severity]},
    }


def _what(document: Document, finding: Finding) -> str:
    """What is found and in which filter, free of lines and of the numbers of bands, which change by moves."""
    block, place = document.blocks[finding.block], finding.hit.place
    keys = (key for key in place.path if isinstance(key, str))
    return sha256(
        "\n".join((finding.id, block.kind, block.name, place.block, *keys)).encode("utf-8", "surrogatepass")
    ).hexdigest()[:32]


def _message(text: str) -> Json:
    """A message; in one, braces stand for arguments, so a brace itself is doubled (§3.11.5)."""
    return {"text": text.replace("{", "{{").replace("}", "}}")}


def _location(file: str, span: Span) -> Json:
    return {"physicalLocation": {"artifactLocation": _file(file), "region": _region(span)}}


def _logical(filter: str | None) -> Json:
    return {"logicalLocations": [{"name": filter, "kind": "object"}]} if filter is not None else {}


def _file(file: str) -> Json:
    """Where a file is, relative and percent-encoded (§3.4)."""
    try:
        relative = Path(os.path.relpath(file)).as_posix()
    except ValueError:  # on another drive of Windows
        return {"uri": Path(file).as_uri()}
    return {"uri": quote(os.fsencode(relative)), "uriBaseId": BASE}


def _region(span: Span) -> Json:
    """Lines and columns from 1, the end column exclusive (§3.30)."""
    line, column, end_line, end_column = (number + 1 for number in span)
    return {"startLine": line, "startColumn": column, "endLine": end_line, "endColumn": end_column}


def _suppression(finding: Finding) -> Json:
    return {"kind": "inSource", "status": "accepted", "justification": finding.reason}


def _fix(file: str, offer: Offer) -> Json:
    change = {"artifactLocation": _file(file), "replacements": [_replacement(edit) for edit in offer.edits]}
    return {
        "description": _message(offer.title),
        "artifactChanges": [change],
        "properties": {"kind": offer.kind},
    }


def _replacement(edit: TextEdit) -> Json:
    inserted = {"insertedContent": {"text": edit.text}} if edit.text else {}
    return {"deletedRegion": _region(edit.span), **inserted}
