"""A bare client of the language server: a process, its two pipes, and JSON."""

from __future__ import annotations

import itertools
import json
import queue
import re
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
PATIENCE_S = 20.0


class Client:
    """Starts a server and talks to it; whatever it does not wait for is kept in `received`."""

    def __init__(
        self, *options: str, command: Sequence[str] = SERVE, env: Mapping[str, str] | None = None
    ) -> None:
        pipe = subprocess.PIPE
        self.process = subprocess.Popen([*command, *options], stdin=pipe, stdout=pipe, stderr=pipe, env=env)
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
        """The first message with these members, of those kept so far or to come."""

        def fits(message: dict[str, Any]) -> bool:
            return all(message.get(name) == value for name, value in wanted.items())

        kept = next((at for at, message in enumerate(self.received) if fits(message)), None)
        if kept is not None:
            return self.received.pop(kept)
        while True:
            message = self._arrived.get(timeout=PATIENCE_S)
            assert message is not None, f"the server ended, status {self.process.wait()}: {self.errors()}"
            if fits(message):
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

    def all_diagnostics(self, uri: str) -> list[dict[str, Any]]:
        """What is on show for a file once everything has been analysed that needs no exact answer."""
        here = {"start": {"line": 0, "character": 0}, "end": {"line": 0, "character": 0}}
        context: dict[str, object] = {"diagnostics": []}
        self.request(
            "textDocument/codeAction", {"textDocument": {"uri": uri}, "range": here, "context": context}
        )
        published = [
            message["params"]
            for message in self.received
            if message.get("method") == "textDocument/publishDiagnostics" and message["params"]["uri"] == uri
        ]
        return list(published[-1]["diagnostics"])

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


CODECS = {"utf-8": "utf-8", "utf-16": "utf-16-le", "utf-32": "utf-32-le"}
UNIT_BYTES = {"utf-8": 1, "utf-16": 2, "utf-32": 4}


def offset(text: str, position: Mapping[str, int], encoding: str = "utf-16") -> int:
    """Where in the text a position is."""
    starts = [0, *(match.end() for match in re.finditer(r"\r\n|\n|\r", text))]
    start = starts[position["line"]]
    units = text[start:].encode(CODECS[encoding])[: position["character"] * UNIT_BYTES[encoding]]
    return start + len(units.decode(CODECS[encoding]))


def cut_out(text: str, wanted: Mapping[str, Mapping[str, int]], encoding: str = "utf-16") -> str:
    """The text within a range."""
    return text[offset(text, wanted["start"], encoding) : offset(text, wanted["end"], encoding)]


def position(text: str, place: int, encoding: str = "utf-16") -> dict[str, int]:
    """The position of an offset."""
    lines = re.split(r"\r\n|\n|\r", text[:place])
    return {
        "line": len(lines) - 1,
        "character": len(lines[-1].encode(CODECS[encoding])) // UNIT_BYTES[encoding],
    }


def applied(text: str, edits: Sequence[Mapping[str, Any]], encoding: str = "utf-16") -> str:
    """The text after edits that do not overlap."""
    places = [
        (offset(text, edit["range"]["start"], encoding), offset(text, edit["range"]["end"], encoding), edit)
        for edit in edits
    ]
    for start, end, edit in sorted(places, key=lambda place: place[0], reverse=True):
        text = text[:start] + str(edit["newText"]) + text[end:]
    return text
