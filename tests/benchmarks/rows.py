"""What a benchmark gives back: a ratio against something that runs on the same machine in the same minute."""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable
from typing import NamedTuple


class Row(NamedTuple):
    """One measured ratio. Smaller is better, and `ratio <= bar` is what is aimed at."""

    what: str
    ratio: float
    bar: float
    measured: str
    """The figures behind the ratio, for orientation."""


def seconds(work: Callable[[], object], least: float = 0.05) -> float:
    """The median time of one call, from five batches that each take `least` seconds or more."""
    calls = 1
    while (taken := _timed(work, calls)) < least:
        calls = max(2 * calls, int(calls * least / max(taken, 1e-9)) + 1)
    return statistics.median(_timed(work, calls) for _ in range(5)) / calls


def _timed(work: Callable[[], object], calls: int) -> float:
    start = time.perf_counter()
    for _ in range(calls):
        work()
    return time.perf_counter() - start
