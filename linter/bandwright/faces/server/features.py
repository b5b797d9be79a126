"""What the server does for its client: one function for each message, and the session that they share."""

from __future__ import annotations

import json
from collections.abc import Awaitable, Callable
from typing import Any

from lsprotocol import types

from bandwright.analysis.types import Finding
from bandwright.faces.server import (
    code_actions,
    code_lens,
    completion,
    folding,
    hover,
    inlay_hints,
    navigation,
    outline,
    rename,
    selection_ranges,
    text_sync,
    workspace_symbols,
)
from bandwright.faces.server.client import Client
from bandwright.faces.server.diagnostics import Texts
from bandwright.faces.server.refresh import Refresh
from bandwright.faces.server.refusal import Refusal
from bandwright.faces.server.session import OpenFile, Session

REQUESTS: dict[str, Callable[[Session, Client, Any], Awaitable[Any]]] = {
    types.TEXT_DOCUMENT_HOVER: hover.hover,
    types.TEXT_DOCUMENT_COMPLETION: completion.completion,
    types.TEXT_DOCUMENT_INLAY_HINT: inlay_hints.inlay_hints,
    types.TEXT_DOCUMENT_DOCUMENT_SYMBOL: outline.outline,
    types.WORKSPACE_SYMBOL: workspace_symbols.workspace_symbols,
    types.TEXT_DOCUMENT_FOLDING_RANGE: folding.folding,
    types.TEXT_DOCUMENT_SELECTION_RANGE: selection_ranges.selection_ranges,
    types.TEXT_DOCUMENT_DEFINITION: navigation.definition,
    types.TEXT_DOCUMENT_REFERENCES: navigation.references,
    types.TEXT_DOCUMENT_PREPARE_RENAME: rename.prepare,
    types.TEXT_DOCUMENT_RENAME: rename.rename,
    types.TEXT_DOCUMENT_CODE_LENS: code_lens.code_lens,
    types.TEXT_DOCUMENT_CODE_ACTION: code_actions.code_actions,
    types.CODE_ACTION_RESOLVE: code_actions.resolve,
}

NOTIFICATIONS: dict[str, Callable[[Session, Any], None]] = {
    types.TEXT_DOCUMENT_DID_OPEN: text_sync.did_open,
    types.TEXT_DOCUMENT_DID_CHANGE: text_sync.did_change,
    types.TEXT_DOCUMENT_DID_CLOSE: text_sync.did_close,
}


class Features:
    """Answers and takes messages. One that meets a defect is answered with nothing, and the defect told."""

    def __init__(
        self,
        client: Client,
        send_text: Callable[[str], None],
        failed: Callable[[str, Exception], None],
        today: Callable[[], str],
    ) -> None:
        self._client = client
        self._send_text = send_text
        self._failed = failed
        refresh = Refresh(client.refreshes, lambda request: send_text(json.dumps(request)))
        self._session = Session(client.encoding, self._publish, failed, today, refresh.soon)
        self._texts: dict[str, Texts] = {}

    async def answer(self, method: str, params: Any) -> Any:
        """The result of a request.

        Raises:
            Refusal: the user asked for something that can't be done.
        """
        try:
            return await REQUESTS[method](self._session, self._client, params)
        except Refusal:
            raise
        except Exception as error:
            self._failed(method, error)
            return None

    def take(self, method: str, params: Any) -> None:
        """Do what a notification says."""
        try:
            NOTIFICATIONS[method](self._session, params)
        except Exception as error:
            self._failed(method, error)

    async def leave(self) -> None:
        """Let go of everything, as the process ends."""
        await self._session.leave()

    def _publish(self, file: OpenFile, findings: tuple[Finding, ...]) -> None:
        texts = self._texts.setdefault(file.uri, Texts())
        found = texts.of(findings, file.uri, self._session.lines(file), self._client)
        version = f'"version":{file.version},' if file.version is not None else ""
        self._send_text(
            f'{{"jsonrpc":"2.0","method":"{types.TEXT_DOCUMENT_PUBLISH_DIAGNOSTICS}",'
            f'"params":{{"uri":{json.dumps(file.uri)},{version}"diagnostics":{found}}}}}'
        )
        if file.uri not in self._session.files:
            del self._texts[file.uri]
