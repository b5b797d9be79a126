"""Exact work is done beside the server, which answers meanwhile; its workers end with it, however it ends."""

from __future__ import annotations

import os
import subprocess
import time
from collections.abc import Callable

import pytest

from lsp_client import PATIENCE_S, Client, position

URI = "file:///crane/hoist.bands.yaml"

# A transition of 0.25 % of the rate: the exact search for the length of a linear-phase filter takes seconds.
SLOW = """\
format: bandwright/1
filters:
  narrow:
    sample_rate: 16 kHz
    bands:
      - pass: {to: 2 kHz, ripple: 0.01 dB}
      - stop: {from: 2.04 kHz, attenuation: 90 dB}
    phase: linear
    structure: symmetric
    arithmetic: float64
    at_most: {taps: 1500}
"""


def running() -> dict[int, int]:
    """Every process that has not ended, with its parent."""
    ps = subprocess.run(["ps", "-A", "-o", "pid=,ppid=,stat="], capture_output=True, text=True, check=True)
    rows = [line.split() for line in ps.stdout.splitlines()]
    return {int(pid): int(parent) for pid, parent, state in rows if state[0] != "Z"}


def children(process: int) -> set[int]:
    return {pid for pid, parent in running().items() if parent == process}


def until(condition: Callable[[], bool], what: str) -> None:
    deadline = time.monotonic() + PATIENCE_S * 2
    while not condition():
        assert time.monotonic() < deadline, what
        time.sleep(0.02)


def at_work() -> Client:
    """A server that has a worker, and a spare one, for a question that takes seconds."""
    client = Client()
    client.initialize({"textDocument": {"hover": {"contentFormat": ["plaintext"]}}})
    client.open(URI, SLOW)
    until(lambda: len(children(client.process.pid)) == 2, "a worker and its spare")
    return client


@pytest.mark.parametrize(
    "end",
    [
        pytest.param(lambda client: client.shut_down(), id="in order"),
        pytest.param(lambda client: client.close_input(), id="end of input"),
        pytest.param(lambda client: os.kill(client.process.pid, 9), id="killed"),
    ],
)
def test_workers_end_with_the_server(end: Callable[[Client], object]) -> None:
    client = at_work()
    workers = children(client.process.pid)
    end(client)
    client.process.wait(PATIENCE_S)
    until(lambda: not workers & running().keys(), "the workers end")


def test_the_server_answers_while_a_worker_is_busy() -> None:
    client = at_work()
    place = position(SLOW, SLOW.index("2.04 kHz") + 1)
    waits = []
    for _ in range(20):
        start = time.monotonic()
        assert client.request("textDocument/hover", {"textDocument": {"uri": URI}, "position": place})
        waits.append(time.monotonic() - start)
    assert sorted(waits)[10] < 0.5, "half a second is far more than a hover takes, and less than the work"
    assert client.shut_down() == 0
    assert client.errors() == ""


def test_edits_are_shown_while_a_worker_is_busy() -> None:
    client = at_work()
    for version, attenuation in enumerate(range(60, 80), 2):
        start = time.monotonic()
        client.change(URI, SLOW.replace("90 dB", f"-{attenuation} dB"), version)
        assert [each["code"] for each in client.diagnostics(URI, version)] == ["level/negative-attenuation"]
        assert time.monotonic() - start < 1.0, (
            "a second is far more than an edit takes, and less than the work"
        )
    assert client.shut_down() == 0
    assert client.errors() == ""
