"""From a keystroke to the findings that the editor shows, and the start of the server."""

from __future__ import annotations

import gc
import statistics
import sys
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

from benchmarks.corpus import band_file
from benchmarks.installed import environment
from benchmarks.rows import Row
from lsp_client import SERVE, Client

URI = "file:///bench/bench.bands.yaml"
KEYSTROKES = 300
WARM_UP = 20
STARTS = 9

HERE = Path(__file__).parent
CANNED = (sys.executable, str(HERE / "canned_server.py"))
BARE = (
    sys.executable,
    "-c",
    "from pygls.lsp.server import LanguageServer; LanguageServer('bare', '1').start_io()",
)


def measure() -> list[Row]:
    small, large = troubled(40), troubled(400)
    few, many = findings_of(small), findings_of(large)
    ours, canned, long = keystrokes((SERVE, small), ((*CANNED, str(few)), small), (SERVE, large))
    start, bare_start = starts()
    return [
        Row(
            f"keystroke to {few} findings, {lines(small)} lines / as many canned ones of a plain server",
            statistics.median(ours) / statistics.median(canned),
            2.0,
            f"{shown(ours)} / {shown(canned)}",
        ),
        Row(
            f"keystroke, 95th percentile, {lines(large)} lines ({many} findings) / {lines(small)} lines",
            percentile(long) / percentile(ours),
            4.0,
            f"{shown(long)} / {shown(ours)}",
        ),
        Row(
            "server start to `initialize` answered / a bare pygls server",
            start / bare_start,
            1.3,
            f"{1e3 * start:.0f} ms / {1e3 * bare_start:.0f} ms",
        ),
    ]


def troubled(filters: int) -> str:
    """A band file whose filters are mostly over their maximum, so that there is something to show."""
    return band_file(filters).replace("order: 16", "order: 4")


def lines(text: str) -> int:
    return text.count("\n") + 1


def edits(text: str) -> Iterator[str]:
    """The text after each keystroke of somebody who tries stop edges in a filter in its middle."""
    before, edge, after = _around_edge(text)
    for number in range(KEYSTROKES):
        yield f"{before}{float(edge) + number / 100:.2f}{after}"


def _around_edge(text: str) -> tuple[str, str, str]:
    middle = text.index("stop: {from: ", len(text) // 2) + len("stop: {from: ")
    end = text.index(" Hz", middle)
    return text[:middle], text[middle:end], text[end:]


def connected(command: tuple[str, ...], env: dict[str, str] | None = None) -> Client:
    client = Client(command=command, env=env)
    actions = {"codeActionLiteralSupport": {"codeActionKind": {"valueSet": ["quickfix"]}}}
    client.initialize(
        {"textDocument": {"publishDiagnostics": {"relatedInformation": True}, "codeAction": actions}}
    )
    return client


def findings_of(text: str) -> int:
    client = connected(SERVE)
    client.open(URI, text)
    found = len(client.all_diagnostics(URI))
    client.shut_down()
    return found


def keystrokes(*sessions: tuple[tuple[str, ...], str]) -> list[list[float]]:
    """For each server and text: seconds from the sending of each edit to what is published for it.

    The servers take turns at every keystroke, so that all of them see the same load.
    """
    clients = [connected(command) for command, _ in sessions]
    for client, (_, text) in zip(clients, sessions, strict=True):
        client.open(URI, text)
    taken: list[list[float]] = [[] for _ in sessions]
    gc.disable()  # or this process would pause for its own garbage
    for version, texts in enumerate(zip(*(edits(text) for _, text in sessions), strict=True), 2):
        for client, text, times in zip(clients, texts, taken, strict=True):
            start = time.perf_counter()
            client.change(URI, text, version)
            client.diagnostics(URI, version)
            times.append(time.perf_counter() - start)
    gc.enable()
    for client in clients:
        client.shut_down()
    return [times[WARM_UP:] for times in taken]


def starts() -> tuple[float, float]:
    """Median seconds from the start of a process to its answer, ours and a bare server's, by turns."""
    ours, bare = [], []
    with tempfile.TemporaryDirectory() as folder:
        env = environment(folder)
        for _ in range(1 + STARTS):
            ours.append(_start(SERVE, env))
            bare.append(_start(BARE, env))
    return statistics.median(ours[1:]), statistics.median(bare[1:])


def _start(command: tuple[str, ...], env: dict[str, str]) -> float:
    begin = time.perf_counter()
    client = connected(command, env)
    taken = time.perf_counter() - begin
    client.shut_down()
    return taken


def percentile(taken: list[float]) -> float:
    return statistics.quantiles(taken, n=20)[-1]


def shown(taken: list[float]) -> str:
    return f"{1e3 * statistics.median(taken):.2f} ms (p95 {1e3 * percentile(taken):.2f})"
