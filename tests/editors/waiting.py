"""Waiting for what an editor shows."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import TypeVar

T = TypeVar("T")

PATIENCE_S = 20.0


def until(what: str, look: Callable[[], T | None]) -> T:
    """Look again and again until there is something; fail with what was seen last."""
    end = time.monotonic() + PATIENCE_S
    while not (seen := look()):
        assert time.monotonic() < end, f"{what}: not within {PATIENCE_S:g} s, last seen {seen!r}"
        time.sleep(0.02)
    return seen
