"""The server as its client sees it: how it starts, what it offers, how it fails and ends."""

from __future__ import annotations

import asyncio
import gc
import traceback
from collections.abc import Awaitable, Callable
from functools import cached_property
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

from lsprotocol import types
from pygls.lsp.server import LanguageServer

from bandwright.faces.server import parent
from bandwright.faces.server.client import Client, client_of
from bandwright.faces.server.protocol import Protocol
from bandwright.faces.server.refusal import Refusal

if TYPE_CHECKING:
    from bandwright.faces.server.features import Features

REQUESTS: dict[str, Any] = {
    types.TEXT_DOCUMENT_HOVER: None,
    # After these a key, a value, a unit or the second half of a finding's id begins.
    types.TEXT_DOCUMENT_COMPLETION: types.CompletionOptions(trigger_characters=[" ", "{", "[", ",", "/"]),
    types.TEXT_DOCUMENT_INLAY_HINT: None,
    types.TEXT_DOCUMENT_DOCUMENT_SYMBOL: None,
    types.WORKSPACE_SYMBOL: None,
    types.TEXT_DOCUMENT_FOLDING_RANGE: None,
    types.TEXT_DOCUMENT_SELECTION_RANGE: None,
    types.TEXT_DOCUMENT_DEFINITION: None,
    types.TEXT_DOCUMENT_REFERENCES: None,
    types.TEXT_DOCUMENT_PREPARE_RENAME: None,
    types.TEXT_DOCUMENT_RENAME: None,
    types.TEXT_DOCUMENT_CODE_LENS: None,
    types.TEXT_DOCUMENT_CODE_ACTION: types.CodeActionOptions(
        code_action_kinds=[types.CodeActionKind.QuickFix, "source.fixAll.bandwright"], resolve_provider=True
    ),
    types.CODE_ACTION_RESOLVE: None,
}
"""The requests that `features` answers, with the options that are announced."""

NOTIFICATIONS = (
    types.TEXT_DOCUMENT_DID_OPEN,
    types.TEXT_DOCUMENT_DID_CHANGE,
    types.TEXT_DOCUMENT_DID_CLOSE,
)

WARM_UP: tuple[tuple[str, dict[str, Any]], ...] = (
    (types.TEXT_DOCUMENT_DID_OPEN, {"textDocument": {"uri": "", "languageId": "", "version": 0, "text": ""}}),
    (
        types.TEXT_DOCUMENT_DID_CHANGE,
        {"textDocument": {"uri": "", "version": 0}, "contentChanges": [{"text": ""}]},
    ),
)
"""Messages that the user's first keystrokes bring; reading one of a kind for the first time is slow."""


class Server(LanguageServer):
    """The server of pygls with its own protocol."""

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
        self._today = today
        self._finish = finish
        for method, options in REQUESTS.items():
            self.feature(method, options)(self._request(method))
        for method in NOTIFICATIONS:
            self.feature(method)(self._notification(method))
        self.feature(types.INITIALIZE)(self._initialize())
        self.feature(types.EXIT)(self._exit())

    @cached_property
    def features(self) -> Features:
        """The features, loaded at the first use: the client need not wait for them to be greeted."""
        from bandwright.faces.server.features import Features

        return Features(self.client, self.protocol.send_text, self.failed, self._today)

    def _request(self, method: str) -> Callable[[Any], Awaitable[Any]]:
        async def handle(params: Any) -> Any:
            return await self.features.answer(method, params)

        return handle

    def _notification(self, method: str) -> Callable[[Any], None]:
        def handle(params: Any) -> None:
            self.features.take(method, params)

        return handle

    def _initialize(self) -> Callable[[types.InitializeParams], None]:
        def handle(params: types.InitializeParams) -> None:
            loop = asyncio.get_running_loop()
            self.client = client_of(params.capabilities, self.protocol.workspace.position_encoding)
            editor = params.process_id
            # An editor in another container names a process that was never here; its input tells its end.
            if editor is not None and parent.is_alive(editor):
                self._watch = loop.create_task(self._leave_with(editor))
            loop.call_soon(self._warm_up)

        return handle

    def _exit(self) -> Callable[[None], None]:
        def handle(params: None) -> None:
            self.client_left()

        return handle

    def _warm_up(self) -> None:
        """Do what takes long the first time, while the client reads the answer to `initialize`."""
        assert self.features
        for method, example in WARM_UP:
            self.protocol.params_of({"jsonrpc": "2.0", "method": method, "params": example})
        # What is loaded stays; going through it in search of garbage would hold up keystrokes.
        gc.freeze()

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
        """Log what pygls would pop up, except what was answered to the user as a refusal."""
        if not isinstance(error, Refusal):
            self.failed("the protocol", error)

    async def _leave_with(self, editor: int) -> None:
        await parent.gone(editor)
        self.client_left()

    def client_left(self) -> None:
        """End the process: with 0 if the client had said `shutdown`, else with 1."""
        self._leaving = asyncio.get_running_loop().create_task(self._leave())

    async def _leave(self) -> None:
        if "features" in self.__dict__:  # and so in use
            await self.features.leave()
        self._finish(0 if self.protocol.is_shut_down else 1)
