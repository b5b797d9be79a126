"""Asks the client to ask again for what has changed without an edit: figures that were estimates."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Mapping
from itertools import count
from typing import Any

REST_S = 0.3
"""Answers often come in a row; so long the client is left alone after the first of them."""


class Refresh:
    """Sends the requests of the protocol for this, some time after the first change."""

    def __init__(self, methods: tuple[str, ...], send: Callable[[Mapping[str, Any]], None]) -> None:
        self._methods = methods
        self._send = send
        self._ids = count(1)
        self._is_due = False

    def soon(self) -> None:
        """Something has changed."""
        if self._methods and not self._is_due:
            self._is_due = True
            asyncio.get_running_loop().call_later(REST_S, self._now)

    def _now(self) -> None:
        self._is_due = False
        for method in self._methods:
            self._send({"jsonrpc": "2.0", "id": f"refresh {next(self._ids)}", "method": method})
