"""The dialogue with the client: which messages are taken, in which order, and how bad ones are answered."""

from __future__ import annotations

import asyncio
import contextvars
import json
from collections import deque
from collections.abc import Mapping
from typing import Any

from cattrs import Converter
from lsprotocol import types
from pygls.exceptions import (
    JsonRpcException,
    JsonRpcInvalidParams,
    JsonRpcInvalidRequest,
    JsonRpcMethodNotFound,
    JsonRpcParseError,
    JsonRpcRequestCancelled,
    JsonRpcServerNotInitialized,
)
from pygls.lsp.server import LanguageServer
from pygls.protocol import LanguageServerProtocol

Message = Mapping[str, Any]

MOST_LOGGED = 100
"""Different texts that the client's log is told; whatever goes on after so many says nothing new."""


class Protocol(LanguageServerProtocol):
    """The protocol of pygls, with its own entry for messages, and strict about them.

    Messages that arrive together are taken together, so that a request is dropped whose cancellation is
    there already.
    """

    def __init__(self, server: LanguageServer, converter: Converter) -> None:
        super().__init__(server, converter)
        self._inbox: deque[Message] = deque()
        self._cancelled: set[int | str] = set()
        self._is_initialized = False
        self._logged: set[str] = set()
        # The session keeps the documents, where pygls would keep them a second time; and a process that
        # ends has an exit status.
        for method in (
            types.TEXT_DOCUMENT_DID_OPEN,
            types.TEXT_DOCUMENT_DID_CHANGE,
            types.TEXT_DOCUMENT_DID_CLOSE,
            types.EXIT,
        ):
            del self.fm.builtin_features[method]

    @property
    def is_shut_down(self) -> bool:
        """Whether the client has said `shutdown`."""
        return self._shutdown

    def receive(self, body: bytes) -> None:
        """Take the body of one message; it is handled in the loop's next turn."""
        try:
            message = json.loads(body)
        except (ValueError, RecursionError):
            self._refuse(None, JsonRpcParseError("the message is not JSON"))
            return
        if not isinstance(message, dict) or message.get("jsonrpc") != self.VERSION:
            self._refuse(None, JsonRpcInvalidRequest("the message is not a JSON-RPC 2.0 object"))
            return
        method, id = message.get("method"), message.get("id")
        if method is None:  # an answer, and this server asks nothing
            return
        if not isinstance(method, str) or ("id" in message and not _is_id(id)):
            self._refuse(None, JsonRpcInvalidRequest("`method` and `id` must be of their kinds"))
            return
        if method == types.CANCEL_REQUEST:
            self._cancel(message)
            return
        if not self._inbox:
            asyncio.get_running_loop().call_soon(self._handle_inbox)
        self._inbox.append(message)

    def _handle_inbox(self) -> None:
        while self._inbox:
            message = self._inbox.popleft()
            # Each handler runs in its own context, where it finds the id of its request.
            contextvars.copy_context().run(self._handle, message)
        self._cancelled.clear()

    def _handle(self, message: Message) -> None:
        method: str = message["method"]
        id: int | str | None = message.get("id")
        if "id" not in message:
            if self._is_initialized or method == types.EXIT:
                self._take_notification(method, message)
            return
        try:
            if id in self._cancelled:
                raise JsonRpcRequestCancelled("cancelled before it was looked at")
            if self._shutdown:
                raise JsonRpcInvalidRequest("the server is shutting down")
            if self._is_initialized == (method == types.INITIALIZE):
                raise _out_of_turn(self._is_initialized)
            params = self._params(method, message)
            self._is_initialized = True
        except JsonRpcException as refusal:
            self._refuse(id, refusal)
            return
        assert id is not None
        self._handle_request(id, method, params)

    def _take_notification(self, method: str, message: Message) -> None:
        if self._shutdown and method != types.EXIT:
            return
        try:
            params = self._params(method, message)
        except JsonRpcMethodNotFound:
            return
        except JsonRpcInvalidParams as error:
            self.log_once(f"`{method}`: {error.message}")
            return
        self._handle_notification(method, params)

    def _params(self, method: str, message: Message) -> Any:
        """The parameters as the protocol's own types.

        Raises:
            JsonRpcMethodNotFound: nothing answers the method.
            JsonRpcInvalidParams: the parameters are not what the method takes.
        """
        if method not in self.fm.builtin_features and method not in self.fm.features:
            raise JsonRpcMethodNotFound.of(method)
        try:
            return self.params_of(message)
        except Exception as error:  # cattrs raises whatever the wrong kind of value provokes
            raise JsonRpcInvalidParams(f"the parameters of `{method}` can't be read") from error

    def params_of(self, message: Message) -> Any:
        """The parameters of a message as the protocol's own types; plain where the method is none of it."""
        kind = self.get_message_type(message["method"])
        return message.get("params") if kind is None else self._converter.structure(message, kind).params

    def _cancel(self, message: Message) -> None:
        params = message.get("params")
        id = params.get("id") if isinstance(params, dict) else None
        if not isinstance(id, int | str):
            return
        if any(waiting.get("id") == id for waiting in self._inbox):
            self._cancelled.add(id)
        elif (running := self._request_futures.pop(id, None)) is not None:
            running.cancel()

    def _refuse(self, id: int | str | None, error: JsonRpcException) -> None:
        answer = {"code": error.code, "message": error.message}
        self.send({"jsonrpc": self.VERSION, "id": id, "error": answer})

    def send(self, message: Message) -> None:
        """Send a message that is plain JSON already."""
        self.send_text(json.dumps(message, separators=(",", ":")))

    def send_text(self, text: str) -> None:
        """Send a message that is JSON text already, in ASCII."""
        if self.writer is not None:
            self.writer.write(b"Content-Length: %d\r\n\r\n%b" % (len(text), text.encode("ascii")))

    def tell(self, method: str, params: Message) -> None:
        """Send a notification that is plain JSON already."""
        self.send({"jsonrpc": self.VERSION, "method": method, "params": params})

    def log_once(self, text: str) -> None:
        """Tell the client's log, the first time that this text comes up."""
        if text not in self._logged and len(self._logged) < MOST_LOGGED:
            self._logged.add(text)
            self.tell(types.WINDOW_LOG_MESSAGE, {"type": types.MessageType.Error.value, "message": text})


def _out_of_turn(is_initialized: bool) -> JsonRpcException:
    if is_initialized:
        return JsonRpcInvalidRequest("already initialized")
    return JsonRpcServerNotInitialized("the first request must be `initialize`")


def _is_id(value: object) -> bool:
    return isinstance(value, int | str) and not isinstance(value, bool)
