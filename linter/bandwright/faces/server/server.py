"""The server: the session, the features that look into it, and the client at the other end."""

from __future__ import annotations

import traceback
from collections.abc import Awaitable, Callable
from importlib.metadata import version
from typing import Any

from lsprotocol import types
from pygls.lsp.server import LanguageServer

from bandwright.analysis.types import Finding
from bandwright.faces.server import code_actions, hover, text_sync
from bandwright.faces.server.client import Client, client_of
from bandwright.faces.server.diagnostics import diagnostics
from bandwright.faces.server.positions import encoding_of
from bandwright.faces.server.protocol import Protocol
from bandwright.faces.server.session import OpenFile, Session

Feature = Callable[[Session, Client, Any], Awaitable[Any]]
"""Answers a request from the session, in the form that the client can take."""

FEATURES: dict[str, tuple[Feature, Any]] = {
    types.TEXT_DOCUMENT_HOVER: (hover.hover, None),
    types.TEXT_DOCUMENT_CODE_ACTION: (code_actions.code_actions, code_actions.OPTIONS),
    types.CODE_ACTION_RESOLVE: (code_actions.resolve, None),
}
"""The requests, each with what answers it and the options that are announced."""

NOTIFICATIONS: dict[str, Callable[[Session, Any], None]] = {
    types.TEXT_DOCUMENT_DID_OPEN: text_sync.did_open,
    types.TEXT_DOCUMENT_DID_CHANGE: text_sync.did_change,
    types.TEXT_DOCUMENT_DID_CLOSE: text_sync.did_close,
}

WARM_UP: tuple[tuple[str, dict[str, Any]], ...] = (
    (types.TEXT_DOCUMENT_DID_OPEN, {"textDocument": {"uri": "", "languageId": "", "version": 0, "text": ""}}),
    (
        types.TEXT_DOCUMENT_DID_CHANGE,
        {"textDocument": {"uri": "", "version": 0}, "contentChanges": [{"text": ""}]},
    ),
)
"""Messages that the user's first keystrokes bring; reading one of a kind for the first time is slow."""


class Server(LanguageServer):
    """The server of pygls with its own protocol, and one session."""

    protocol: Protocol

    def __init__(self, today: Callable[[], str], finish: Callable[[int], None]) -> None:
        """`today` tells the date as YYYY-MM-DD; `finish` ends the process with a status."""
        super().__init__(
            "bandwright",
            version("bandwright"),
            types.TextDocumentSyncKind.Full,
            protocol_cls=Protocol,
        )
        self.client = Client()
        self.session = Session(self._publish, self.failed, today)
        self.initialized = False
        self._finish = finish
        self._register()

    def _register(self) -> None:
        for method, (feature, options) in FEATURES.items():
            self.feature(method, options)(self._guarded(method, feature))
        for method, take in NOTIFICATIONS.items():
            self.feature(method)(self._guarded_notification(method, take))

        @self.feature(types.EXIT)
        def leave(params: object) -> None:
            self.client_left()

        @self.feature(types.INITIALIZE)
        def initialize(params: types.InitializeParams) -> None:
            self.client = client_of(params.capabilities)
            self.session.encoding = encoding_of(self.protocol.workspace.position_encoding)
            self.initialized = True

        @self.feature(types.INITIALIZED)
        def initialized(params: types.InitializedParams) -> None:
            for method, example in WARM_UP:
                self.protocol.structure({"jsonrpc": "2.0", "method": method, "params": example})

    def _guarded(self, method: str, feature: Feature) -> Callable[[Any], Awaitable[Any]]:
        """The feature, answering nothing where it has a defect, which the client's log tells."""

        async def answer(params: Any) -> Any:
            try:
                return await feature(self.session, self.client, params)
            except Exception as error:
                self.failed(method, error)
                return None

        return answer

    def _guarded_notification(
        self, method: str, take: Callable[[Session, Any], None]
    ) -> Callable[[Any], None]:
        def handle(params: Any) -> None:
            try:
                take(self.session, params)
            except Exception as error:
                self.failed(method, error)

        return handle

    def _publish(self, file: OpenFile, findings: tuple[Finding, ...]) -> None:
        params: dict[str, Any] = {
            "uri": file.uri,
            "diagnostics": diagnostics(findings, file.uri, self.session.lines(file), self.client),
        }
        if file.version is not None:
            params["version"] = file.version
        self.protocol.tell(types.TEXT_DOCUMENT_PUBLISH_DIAGNOSTICS, params)

    def failed(self, where: str, error: Exception) -> None:
        """Tell the client's log of a defect, once for each."""
        trace = "".join(traceback.format_exception(error))
        self.protocol.log_once(f"bandwright failed in {where}. Please report this.\n{trace}")

    def loop_failed(self, context: dict[str, Any]) -> None:
        """Tell the client's log of what went wrong outside any feature."""
        error = context.get("exception")
        if isinstance(error, Exception):
            self.failed("the event loop", error)

    def report_server_error(self, error: Exception, source: object) -> None:
        """Log what pygls would pop up."""
        self.failed("the protocol", error)

    def client_left(self) -> None:
        """End the process: with 0 if the client had said `shutdown`, else with 1."""
        self._finish(0 if self.protocol.is_shut_down else 1)
