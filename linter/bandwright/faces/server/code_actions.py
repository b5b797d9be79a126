"""Quick fixes: the remedies of the findings at a place, and all safe ones of a file at once.

What to offer is worked out from the document and the range that is asked about. The diagnostics that a
client sends along are not relied on: they may be of an older version.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from lsprotocol import types

from bandwright.analysis.offer import offer
from bandwright.analysis.types import Finding, Offer
from bandwright.bandfile.values import Document, Span, TextEdit
from bandwright.faces.server.client import Client
from bandwright.faces.server.diagnostics import diagnostic
from bandwright.faces.server.fix_all import safe_edits
from bandwright.faces.server.session import OpenFile, Session, UnansweredError, unanswered

QUICK_FIX = types.CodeActionKind.QuickFix.value
FIX_ALL = "source.fixAll.bandwright"

_ANNOTATION = "changes-requirement"

Action = dict[str, Any]


async def code_actions(
    session: Session, client: Client, params: types.CodeActionParams
) -> list[Action] | None:
    """The quick fixes within a range, best first; the bulk fix only where it is asked for."""
    file = session.files.get(params.text_document.uri)
    if file is None or not client.literal_actions:
        return None
    actions: list[Action] = []
    if _asked(params.context.only, QUICK_FIX):
        actions += await _quick_fixes(session, client, file, params)
    if params.context.only is not None and _asked(params.context.only, FIX_ALL):
        action: Action = {"title": "Apply every remedy that keeps the requirement", "kind": FIX_ALL}
        if client.resolves_edits:
            actions.append({**action, "data": {"uri": file.uri}})
        elif edits := await safe_edits(session, file):
            actions.append({**action, "edit": workspace_edit(session, client, file, edits)})
    return actions


async def resolve(session: Session, client: Client, action: types.CodeAction) -> types.CodeAction | Action:
    """The bulk fix with its edit."""
    data = action.data if isinstance(action.data, dict) else {}
    file = session.files.get(data.get("uri", ""))
    if action.kind != FIX_ALL or file is None:
        return action
    edits = await safe_edits(session, file)
    return {
        "title": action.title,
        "kind": FIX_ALL,
        "edit": workspace_edit(session, client, file, edits),
    }


def _asked(only: Iterable[str] | None, kind: str) -> bool:
    """Whether a client that wants `only` these kinds wants this one; each includes the kinds below it."""
    return only is None or any(wanted == "" or f"{kind}.".startswith(f"{wanted}.") for wanted in only)


async def _quick_fixes(
    session: Session, client: Client, file: OpenFile, params: types.CodeActionParams
) -> list[Action]:
    """None where the file is edited before they are found: they would be of a text that is gone."""
    findings, document = await session.findings(file), session.read(file)
    wanted = session.lines(file).span(params.range)
    automatic = params.context.trigger_kind == types.CodeActionTriggerKind.Automatic
    actions: list[Action] = []
    seen: set[tuple[TextEdit, ...]] = set()
    for finding in findings:
        if finding.accepted or not _touch(finding.span, wanted):
            continue
        offers = await _offers(session, document, finding, wait=not automatic)
        if file.document is not document:
            return []
        for each in offers:
            if each.edits not in seen:
                seen.add(each.edits)
                actions.append(_quick_fix(session, client, file, finding, each))
    best = next((action for action in actions if "isPreferred" in action), None)
    for action in actions:
        if action is not best:
            action.pop("isPreferred", None)
    return actions


async def _offers(session: Session, document: Document, finding: Finding, *, wait: bool) -> tuple[Offer, ...]:
    """The remedies of a finding.

    Where the user asked for them, the questions that they ask are waited for. A light bulb that comes by
    itself shows what is known already.
    """
    ask = unanswered if wait else None
    while True:
        try:
            return offer(document, finding, session.answers.kept, ask, session.memo)
        except UnansweredError as missing:
            if not await session.answer(missing.question):
                ask = None


def _quick_fix(session: Session, client: Client, file: OpenFile, finding: Finding, each: Offer) -> Action:
    action: Action = {
        "title": each.title,
        "kind": QUICK_FIX,
        "diagnostics": [diagnostic(finding, file.uri, session.lines(file), client)],
        "edit": workspace_edit(session, client, file, each.edits, asks=each),
    }
    if each.kind == "keeps-requirement":
        # Whoever applies the preferred fix without looking must not change what is required.
        action["isPreferred"] = True
    return action


def workspace_edit(
    session: Session, client: Client, file: OpenFile, edits: Iterable[TextEdit], asks: Offer | None = None
) -> dict[str, Any]:
    """Edits of one file in the form that the client takes; one that changes the requirement asks first."""
    lines = session.lines(file)
    shown: list[dict[str, Any]] = [
        {"range": lines.plain_range(one.span), "newText": one.text} for one in edits
    ]
    if not client.versioned_edits:
        return {"changes": {file.uri: shown}}
    changes = {"textDocument": {"uri": file.uri, "version": file.version}, "edits": shown}
    if asks is None or asks.kind != "changes-requirement" or not client.annotated_edits:
        return {"documentChanges": [changes]}
    for edit in shown:
        edit["annotationId"] = _ANNOTATION
    label = {"label": "Changes the requirement", "description": asks.title, "needsConfirmation": True}
    return {"documentChanges": [changes], "changeAnnotations": {_ANNOTATION: label}}


def _touch(one: Span, other: Span) -> bool:
    return one[:2] <= other[2:] and other[:2] <= one[2:]
