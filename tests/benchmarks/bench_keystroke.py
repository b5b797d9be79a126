"""From a keystroke to the findings that the editor shows, and the start of the server."""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Iterator
from pathlib import Path

from benchmarks.corpus import band_file
from benchmarks.rows import Row
from lsp_client import SERVE, Client

URI = "file:///bench/bench.bands.yaml"
KEYSTROKES = 300
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
    ours, canned = keystrokes(SERVE, small, few), keystrokes((*CANNED, str(few)), small, few)
    long = keystrokes(SERVE, large, many)
    start, bare_start = starts()
    return [
        Row(
            f"keystroke to {few} findings, {lines(small)} lines / as many canned ones",
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


def findings_of(text: str) -> int:
    client = connected(SERVE)
    client.open(URI, text)
    found = len(client.diagnostics(URI, 1))
    client.shut_down()
    return found


def connected(command: tuple[str, ...]) -> Client:
    client = Client(command=command)
    client.initialize({"textDocument": {"publishDiagnostics": {"relatedInformation": True}}})
    return client


def keystrokes(command: tuple[str, ...], text: str, findings: int) -> list[float]:
    """Seconds from the sending of each edit to what is published for it."""
    client = connected(command)
    client.open(URI, text)
    client.diagnostics(URI, 1)
    taken = []
    for version, edited in enumerate(edits(text), 2):
        start = time.perf_counter()
        client.change(URI, edited, version)
        shown = client.diagnostics(URI, version)
        taken.append(time.perf_counter() - start)
        assert abs(len(shown) - findings) <= 2, f"{len(shown)} findings, {findings} at first"
    client.shut_down()
    return taken[20:]  # the first ones warm up


def starts() -> tuple[float, float]:
    """Median seconds from the start of a process to its answer, ours and a bare server's, by turns."""
    ours, bare = [], []
    for _ in range(STARTS):
        ours.append(_start(SERVE))
        bare.append(_start(BARE))
    return statistics.median(ours), statistics.median(bare)


def _start(command: tuple[str, ...]) -> float:
    begin = time.perf_counter()
    client = connected(command)
    taken = time.perf_counter() - begin
    client.shut_down()
    return taken


def percentile(taken: list[float]) -> float:
    return statistics.quantiles(taken, n=20)[-1]


def shown(taken: list[float]) -> str:
    return f"{1e3 * statistics.median(taken):.2f} ms (p95 {1e3 * percentile(taken):.2f})"
