"""Rename: a device with every filter that names it, or a filter."""

from __future__ import annotations

import re
from typing import Any

from lsprotocol import types

from bandwright.bandfile import edits, grammar
from bandwright.bandfile.values import Document, TextEdit
from bandwright.faces.server.client import Client
from bandwright.faces.server.code_actions import workspace_edit
from bandwright.faces.server.navigation import DEVICE, Named, declarations, found_at, uses
from bandwright.faces.server.refusal import Refusal
from bandwright.faces.server.session import Session

_PLAIN = re.compile(r"[^\W_][\w.-]*")


async def prepare(
    session: Session, client: Client, params: types.PrepareRenameParams
) -> dict[str, Any] | None:
    """The name at a place that can be changed; None where there is none."""
    found = found_at(session, params.text_document.uri, params.position)
    if found is None:
        return None
    file, _, named = found
    return {"range": session.lines(file).plain_range(named.span), "placeholder": named.name}


async def rename(session: Session, client: Client, params: types.RenameParams) -> dict[str, Any] | None:
    """The edits that give the device or filter at a place another name.

    Raises:
        Refusal: the new name is no plain one, or is taken; or the old one does not tell which is meant.
    """
    found = found_at(session, params.text_document.uri, params.position)
    if found is None:
        return None
    file, document, named = found
    name = params.new_name.strip()
    if name == named.name:
        return None
    if reason := _why_not(document, named, name):
        raise Refusal(reason)
    return workspace_edit(session, client, file, renamed(document, named, name))


def _why_not(document: Document, named: Named, name: str) -> str:
    """Why the name won't do, as a sentence; empty where it does."""
    if not _PLAIN.fullmatch(name):
        return (
            f"`{name}` is no plain name: use letters, digits, `-`, `_` and `.`, with a letter or digit first."
        )
    if name in grammar.INSIDE[named.kind][()] or name in grammar.INSIDE["top"][()]:
        return f"`{name}` is a key of the band file; choose another name."
    if any(block.kind == named.kind and block.name == name for block in document.blocks):
        return f"A {named.kind} is called `{name}` already; choose another name."
    count = len(declarations(document, named))
    if not named.declared and count != 1:
        many = f"{count} devices are" if count else "No device is"
        return (
            f"{many} called `{named.name}`, so it can't be told which to rename; rename it where it stands."
        )
    return ""


def renamed(document: Document, named: Named, name: str) -> tuple[TextEdit, ...]:
    """The edits. Of several that share a name, only the one at the place gets the new one, and no filter."""
    declared = [index for index, _ in declarations(document, named)]
    alone = len(declared) == 1
    found = [edits.rename(document, index, (), name) for index in (declared if alone else [named.block])]
    if alone:
        found += [edits.edits(document, index, {DEVICE: name}) for index, _ in uses(document, named)]
    return tuple(edit for each in found for edit in each)
