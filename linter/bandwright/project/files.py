"""Write files so that a reader meets the old content or the new, never half of it."""

from __future__ import annotations

import os
from pathlib import Path


def write_atomically(path: Path, content: bytes) -> None:
    """Replace the file's content, or make the file; a link keeps pointing to it, and its mode stays.

    Raises:
        OSError: the folder is missing or may not be written to, or the disk is full; the file is as it was.
    """
    target = path.resolve()
    if target.exists() and not target.is_file():  # a terminal or a pipe, such as /dev/stdout
        target.write_bytes(content)
        return
    partial = target.with_name(f".{target.name}.{os.getpid()}.partial")
    try:
        with partial.open("xb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        if target.exists():
            partial.chmod(target.stat().st_mode)
        partial.replace(target)
    finally:
        partial.unlink(missing_ok=True)
