"""A bare client of the language server: a process, its two pipes, and JSON."""

from __future__ import annotations

import itertools
import json
import queue
import subprocess
import sys
import threading
from collections.abc import Mapping, Sequence
from typing import Any

SERVE = (
    sys.executable,
    "-c",
    "from bandwright.faces.command.main import main; raise SystemExit(main())",
    "serve",
)
PATIENCE_S = 60.0


class Client:
    """Starts a server and talks to it; whatever it does not wait for is kept in `received`."""

    def __init__(self, *options: str, command: Sequence[str] = SERVE) -> None:
        self.process = subprocess.Popen(
            [*command, *options], stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.PIPE
        )
        self.received: list[dict[str, Any]] = []
        self._ids = itertools.count(1)
        self._arrived: queue.Queue[dict[str, Any] | None] = queue.Queue()
        threading.Thread(target=self._read, daemon=True).start()

    def _read(self) -> None:
        out = self.process.stdout
        assert out is not None
        while header := out.readline():
            length = int(header.removeprefix(b"Content-Length: "))
            while out.readline().strip():
                pass
            self._arrived.put(json.loads(out.read(length)))
        self._arrived.put(None)

    def send_bytes(self, body: bytes) -> None:
        assert self.process.stdin is not None
        self.process.stdin.write(b"Content-Length: %d\r\n\r\n%b" % (len(body), body))
        self.process.stdin.flush()

    def send(self, **message: Any) -> None:
        self.send_bytes(json.dumps({"jsonrpc": "2.0", **message}).encode())

    def notify(self, method: str, params: object = None) -> None:
        self.send(method=method, params=params)

    def ask(self, method: str, params: object = None) -> int:
        """Send a request and return its id."""
        id = next(self._ids)
        self.send(id=id, method=method, params=params)
        return id

    def wait(self, **wanted: object) -> dict[str, Any]:
        """The next message with these members; others are put into `received`."""
        while True:
            message = self._arrived.get(timeout=PATIENCE_S)
            assert message is not None, f"the server ended, status {self.process.wait()}: {self.errors()}"
            if all(message.get(name) == value for name, value in wanted.items()):
                return message
            self.received.append(message)

    def request(self, method: str, params: object = None) -> Any:
        """The result of a request."""
        answer = self.wait(id=self.ask(method, params))
        assert "error" not in answer, answer
        return answer["result"]

    def initialize(
        self, capabilities: Mapping[str, object] | None = None, **params: object
    ) -> dict[str, Any]:
        """Connect, and return what the server can do."""
        result = self.request(
            "initialize", {"processId": None, "rootUri": None, "capabilities": capabilities or {}, **params}
        )
        self.notify("initialized", {})
        return dict(result)

    def open(self, uri: str, text: str, version: int = 1) -> None:
        self.notify(
            "textDocument/didOpen",
            {"textDocument": {"uri": uri, "languageId": "yaml", "version": version, "text": text}},
        )

    def change(self, uri: str, text: str, version: int) -> None:
        self.notify(
            "textDocument/didChange",
            {"textDocument": {"uri": uri, "version": version}, "contentChanges": [{"text": text}]},
        )

    def diagnostics(self, uri: str, version: int | None) -> list[dict[str, Any]]:
        """What is published next for this version of a file."""
        while True:
            params = self.wait(method="textDocument/publishDiagnostics")["params"]
            assert version is None or params["version"] <= version
            if params["uri"] == uri and params.get("version") == version:
                return list(params["diagnostics"])

    def errors(self) -> str:
        assert self.process.stderr is not None
        return self.process.stderr.read().decode()

    def close_input(self) -> int:
        """End the server's input and return its exit status."""
        assert self.process.stdin is not None
        self.process.stdin.close()
        return self.process.wait(PATIENCE_S)

    def shut_down(self) -> int:
        """End in order and return the exit status."""
        self.request("shutdown")
        self.notify("exit")
        return self.process.wait(PATIENCE_S)
