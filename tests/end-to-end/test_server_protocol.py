"""The server's manners: how it starts and ends, and what it answers to messages that it can't use."""

from __future__ import annotations

import socket
import subprocess
import sys
import time
from collections.abc import Iterator
from typing import Any

import pytest

from lsp_client import PATIENCE_S, SERVE, Client

URI = "file:///crane/hoist.bands.yaml"

# From the specifications of JSON-RPC 2.0 (section 5.1) and of LSP 3.17 ("ErrorCodes").
PARSE_ERROR, INVALID_REQUEST, METHOD_NOT_FOUND, INVALID_PARAMS = -32700, -32600, -32601, -32602
NOT_INITIALIZED, REQUEST_CANCELLED = -32002, -32800


@pytest.fixture
def client() -> Iterator[Client]:
    client = Client()
    yield client
    client.process.kill()
    client.process.wait()


@pytest.fixture
def connected(client: Client) -> Client:
    client.initialize()
    return client


def error_of(answer: dict[str, Any]) -> int:
    return int(answer["error"]["code"])


def hover_at(line: object) -> dict[str, object]:
    return {"textDocument": {"uri": URI}, "position": {"line": line, "character": 0}}


def test_it_ends_with_0_after_shutdown_and_exit(connected: Client) -> None:
    assert connected.shut_down() == 0
    assert connected.errors() == ""


def test_it_ends_with_1_on_exit_without_shutdown(connected: Client) -> None:
    connected.notify("exit")
    assert connected.process.wait(PATIENCE_S) == 1


def test_it_ends_with_1_on_exit_before_initialize(client: Client) -> None:
    client.notify("exit")
    assert client.process.wait(PATIENCE_S) == 1


def test_it_ends_when_its_input_ends(connected: Client) -> None:
    connected.open(URI, "format: bandwright/1\n")
    assert connected.close_input() == 1
    assert connected.errors() == ""


def test_it_ends_when_input_ends_inside_a_message(client: Client) -> None:
    assert client.process.stdin is not None
    client.process.stdin.write(b"Content-Length: 100\r\n\r\n{")
    assert client.close_input() == 1


def test_it_ends_with_the_process_that_it_serves() -> None:
    editor = subprocess.Popen([sys.executable, "-c", "input()"], stdin=subprocess.PIPE)
    client = Client()
    client.initialize(processId=editor.pid)
    editor.kill()
    editor.wait()
    assert client.process.wait(PATIENCE_S) == 1


def test_a_process_that_was_never_there_does_not_end_it() -> None:
    gone = subprocess.Popen([sys.executable, "-c", ""])
    gone.wait()
    client = Client()
    client.initialize(processId=gone.pid)
    time.sleep(2.5)  # longer than it waits between two looks
    assert client.shut_down() == 0


def test_it_takes_the_flags_that_editors_add() -> None:
    client = Client("--stdio", "--clientProcessId=1", "--node-ipc")
    client.initialize()
    assert client.shut_down() == 0


def test_it_says_what_it_is(client: Client) -> None:
    said = client.initialize()
    assert said["serverInfo"]["name"] == "bandwright"
    capabilities = said["capabilities"]
    assert capabilities["textDocumentSync"] == {"openClose": True, "change": 1, "save": False}
    assert capabilities["hoverProvider"] is True
    assert "diagnosticProvider" not in capabilities, "diagnostics are pushed, and never pulled as well"


@pytest.mark.parametrize(
    ("offered", "chosen"),
    [
        (None, "utf-16"),
        (["utf-8", "utf-16"], "utf-8"),
        (["utf-32", "utf-8"], "utf-32"),
        (["utf-16", "utf-8"], "utf-16"),
        (["utf-7"], "utf-16"),
    ],
)
def test_it_takes_the_encoding_that_the_client_prefers(
    client: Client, offered: list[str] | None, chosen: str
) -> None:
    general = {} if offered is None else {"general": {"positionEncodings": offered}}
    assert client.initialize(general)["capabilities"]["positionEncoding"] == chosen


def test_an_unknown_request_is_refused_and_an_unknown_notification_ignored(connected: Client) -> None:
    connected.notify("$/noSuchThing", {})
    connected.notify("noSuchThing", {"deep": [1, 2]})
    assert error_of(connected.wait(id=connected.ask("noSuchThing", {}))) == METHOD_NOT_FOUND


@pytest.mark.parametrize(
    ("method", "params"),
    [
        ("textDocument/hover", None),
        ("textDocument/hover", []),
        ("textDocument/hover", {"textDocument": {"uri": URI}}),
        ("textDocument/hover", hover_at("three")),
        ("textDocument/hover", hover_at({})),
        ("textDocument/hover", hover_at(-1)),
        ("textDocument/codeAction", {"textDocument": {"uri": URI}, "range": 7, "context": {}}),
    ],
)
def test_parameters_that_are_wrong_are_refused(connected: Client, method: str, params: object) -> None:
    assert error_of(connected.wait(id=connected.ask(method, params))) == INVALID_PARAMS


def test_a_wrong_initialize_is_refused_and_a_right_one_taken_after_it(client: Client) -> None:
    assert error_of(client.wait(id=client.ask("initialize", {"capabilities": 3}))) == INVALID_PARAMS
    assert client.initialize()["capabilities"]


def test_notifications_that_are_wrong_are_logged_and_passed_over(connected: Client) -> None:
    connected.notify("textDocument/didOpen", {"textDocument": 1})
    assert "didOpen" in connected.wait(method="window/logMessage")["params"]["message"]
    assert connected.request("textDocument/hover", hover_at(0)) is None


@pytest.mark.parametrize("body", [b"{", b"\xff\xfe\x00", b"[" * 100_000, b""])
def test_what_is_not_json_is_refused(connected: Client, body: bytes) -> None:
    connected.send_bytes(body)
    assert error_of(connected.wait(id=None)) == PARSE_ERROR
    assert connected.shut_down() == 0


@pytest.mark.parametrize(
    "body",
    [
        b"null",
        b"[]",
        b"{}",
        b'{"jsonrpc": "1.0", "id": 1, "method": "shutdown"}',
        b'{"jsonrpc":"2.0","method":3}',
    ],
)
def test_what_is_no_message_is_refused(connected: Client, body: bytes) -> None:
    connected.send_bytes(body)
    assert error_of(connected.wait(id=None)) == INVALID_REQUEST
    assert connected.shut_down() == 0


@pytest.mark.parametrize("id", [b"{}", b"1.5", b"true", b"null"])
def test_an_id_that_can_be_none_is_refused(connected: Client, id: bytes) -> None:
    connected.send_bytes(b'{"jsonrpc": "2.0", "method": "shutdown", "id": %b}' % id)
    assert error_of(connected.wait(id=None)) == INVALID_REQUEST


def test_answers_to_questions_that_nobody_asked_are_ignored(connected: Client) -> None:
    connected.send(id=99, result=None)
    connected.send(id="x", error={"code": 1, "message": ""})
    assert connected.shut_down() == 0


def test_nothing_is_answered_before_initialize(client: Client) -> None:
    client.open(URI, "filters: 3\n")
    assert error_of(client.wait(id=client.ask("textDocument/hover", hover_at(0)))) == NOT_INITIALIZED
    client.initialize()
    assert client.request("textDocument/hover", hover_at(0)) is None


def test_initialize_is_taken_once_and_nothing_after_shutdown(connected: Client) -> None:
    again = connected.ask("initialize", {"processId": None, "rootUri": None, "capabilities": {}})
    assert error_of(connected.wait(id=again)) == INVALID_REQUEST
    connected.request("shutdown")
    assert error_of(connected.wait(id=connected.ask("textDocument/hover", hover_at(0)))) == INVALID_REQUEST
    connected.notify("exit")
    assert connected.process.wait(PATIENCE_S) == 0


def test_a_request_that_is_cancelled_at_once_is_answered_as_cancelled(connected: Client) -> None:
    cancelled = connected.ask("textDocument/hover", hover_at(0))
    assert connected.process.stdin is not None
    # Both in one write, so that they arrive together.
    bodies = [
        b'{"jsonrpc":"2.0","id":77,"method":"textDocument/hover","params":'
        b'{"textDocument":{"uri":"file:///x.bands.yaml"},"position":{"line":0,"character":0}}}',
        b'{"jsonrpc":"2.0","method":"$/cancelRequest","params":{"id":77}}',
    ]
    connected.process.stdin.write(b"".join(b"Content-Length: %d\r\n\r\n%b" % (len(b), b) for b in bodies))
    connected.process.stdin.flush()
    assert connected.wait(id=cancelled)["result"] is None
    assert error_of(connected.wait(id=77)) == REQUEST_CANCELLED


def test_a_storm_of_cancellations_is_survived(connected: Client) -> None:
    connected.notify("$/cancelRequest", {"id": {}})
    connected.notify("$/cancelRequest", None)
    asked = []
    for _ in range(200):
        asked.append(connected.ask("textDocument/hover", hover_at(0)))
        connected.notify("$/cancelRequest", {"id": asked[-1]})
    for id in asked:
        answer = connected.wait(id=id)
        assert "result" in answer or error_of(answer) == REQUEST_CANCELLED
    assert connected.shut_down() == 0


def test_trace_can_be_set(connected: Client) -> None:
    connected.notify("$/setTrace", {"value": "verbose"})
    assert connected.shut_down() == 0


def test_it_does_not_listen_beyond_this_machine() -> None:
    done = subprocess.run([*SERVE, "--tcp", "0.0.0.0:0"], capture_output=True, timeout=PATIENCE_S)
    assert done.returncode == 2
    assert b"loopback" in done.stderr


def test_one_client_is_served_over_tcp_and_a_second_turned_away() -> None:
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port = free.getsockname()[1]
    process = subprocess.Popen([*SERVE, "--tcp", f"127.0.0.1:{port}"], stdin=subprocess.DEVNULL)
    first = connect(port)
    body = b'{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"processId":null,"capabilities":{}}}'
    first.sendall(b"Content-Length: %d\r\n\r\n%b" % (len(body), body))
    assert b"bandwright" in first.recv(100_000)
    with connect(port) as second:
        assert second.recv(1) == b""
    first.close()
    assert process.wait(PATIENCE_S) == 1


def connect(port: int) -> socket.socket:
    for _ in range(int(PATIENCE_S * 10)):
        try:
            return socket.create_connection(("127.0.0.1", port), PATIENCE_S)
        except ConnectionRefusedError:
            time.sleep(0.1)
    raise AssertionError("the server does not listen")
