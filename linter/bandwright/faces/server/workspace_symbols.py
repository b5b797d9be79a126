"""Workspace symbols: devices and filters of the open files by a part of their names."""

from __future__ import annotations

from typing import Any

from lsprotocol import types

from bandwright.faces.server.client import Client
from bandwright.faces.server.outline import KINDS, symbols
from bandwright.faces.server.session import Session


async def workspace_symbols(
    session: Session, client: Client, params: types.WorkspaceSymbolParams
) -> list[dict[str, Any]]:
    """Every device and filter whose name holds the letters of the query in their order, sorted by name."""
    found = [
        {
            "name": one.name,
            "kind": KINDS[one.kind],
            "containerName": file.uri.rpartition("/")[2],
            "location": {"uri": file.uri, "range": session.lines(file).plain_range(one.whole)},
        }
        for file in session.files.values()
        for one in symbols(session.read(file))
        if _holds(one.name.casefold(), params.query.casefold())
    ]
    return sorted(found, key=lambda one: (one["name"], one["location"]["uri"]))


def _holds(name: str, letters: str) -> bool:
    rest = iter(name)
    return all(letter in rest for letter in letters)
