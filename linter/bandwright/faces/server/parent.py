"""The end of the editor's process, which ends the server even if somebody else holds its input open."""

from __future__ import annotations

import asyncio
import os

LOOKED_FOR_EVERY_S = 1.0


async def gone(process: int) -> None:
    """Return when the process has ended."""
    while is_alive(process):
        await asyncio.sleep(LOOKED_FOR_EVERY_S)


def is_alive(process: int) -> bool:
    """Whether the process is there, as far as can be told here."""
    if os.name != "posix" or process <= 0:  # signal 0 asks a question on POSIX only
        return True
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    except (PermissionError, OverflowError):
        return True
    return True
