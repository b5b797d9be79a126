"""The end of the editor's process, which ends the server even if somebody else holds its input open."""

from __future__ import annotations

import asyncio
import os

LOOKED_FOR_EVERY_S = 1.0


async def gone(process: int | None) -> None:
    """Return when the process has ended; never where there is none to watch.

    An editor in another container names a process that was never here, and only its input tells its end.
    """
    if process is None or not _is_alive(process):
        await asyncio.Event().wait()
        return
    while _is_alive(process):
        await asyncio.sleep(LOOKED_FOR_EVERY_S)


def _is_alive(process: int) -> bool:
    if os.name != "posix" or process <= 0:  # signal 0 asks a question on POSIX only
        return True
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    except (PermissionError, OverflowError):
        return True
    return True
