"""Share files among processes, one for each core."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import ProcessPoolExecutor
from functools import partial
from typing import TypeVar

Settings = TypeVar("Settings")
Outcome = TypeVar("Outcome")
Work = Callable[[list[str], Settings], Iterable[Outcome]]


def spread(
    work: Work[Settings, Outcome], files: list[str], settings: Settings, chunk: int
) -> Iterator[Outcome]:
    """What `work` yields for all the files, in their order, a chunk of them at a time in one process."""
    chunks = [files[start : start + chunk] for start in range(0, len(files), chunk)]
    with ProcessPoolExecutor() as pool:
        for outcomes in pool.map(partial(_whole, work, settings), chunks):
            yield from outcomes


def _whole(work: Work[Settings, Outcome], settings: Settings, files: list[str]) -> list[Outcome]:
    return list(work(files, settings))
