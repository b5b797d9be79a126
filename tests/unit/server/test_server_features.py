"""What the server announces is what it does, and a defect in one feature ends neither it nor the server."""

from __future__ import annotations

import asyncio
import json

import pytest

from bandwright.faces.server import features as features_module
from bandwright.faces.server import server as server_module
from bandwright.faces.server.client import Client
from bandwright.faces.server.features import Features
from bandwright.faces.server.server import Server


class Wire:
    """Collects what the server sends."""

    def __init__(self) -> None:
        self.sent: list[dict[str, object]] = []

    def write(self, data: bytes) -> None:
        self.sent.append(json.loads(data.partition(b"\r\n\r\n")[2]))

    def close(self) -> None:
        raise AssertionError("the server closes nothing of its own accord")


def test_every_announced_message_has_a_feature_and_the_other_way_round() -> None:
    assert set(server_module.REQUESTS) == set(features_module.REQUESTS)
    assert set(server_module.NOTIFICATIONS) == set(features_module.NOTIFICATIONS)


def test_a_defect_is_answered_with_nothing_and_told(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: object) -> None:
        raise ZeroDivisionError

    monkeypatch.setitem(features_module.REQUESTS, "textDocument/hover", broken)
    monkeypatch.setitem(features_module.NOTIFICATIONS, "textDocument/didOpen", broken)
    told: list[str] = []
    features = Features(
        Client(), lambda text: None, lambda where, error: told.append(where), lambda: "2027-01-01"
    )
    assert asyncio.run(features.answer("textDocument/hover", None)) is None
    features.take("textDocument/didOpen", None)
    assert told == ["textDocument/hover", "textDocument/didOpen"]


def test_a_defect_is_told_once() -> None:
    server, wire = Server(lambda: "2027-01-01", lambda status: None), Wire()
    server.protocol.set_writer(wire)
    error = ZeroDivisionError("by nothing")
    for _ in range(3):
        server.failed("textDocument/hover", error)
    server.failed("textDocument/hover", ZeroDivisionError("by another nothing"))
    messages = [message["params"]["message"] for message in wire.sent]  # type: ignore[index,call-overload]
    assert len(messages) == 2
    assert "ZeroDivisionError: by nothing" in messages[0]


def test_what_a_lone_surrogate_is_part_of_can_be_sent() -> None:
    server, wire = Server(lambda: "2027-01-01", lambda status: None), Wire()
    server.protocol.set_writer(wire)
    server.protocol.tell("window/logMessage", {"message": "\ud800 and 漢"})
    assert wire.sent[0]["params"] == {"message": "\ud800 and 漢"}
