"""The environment of a process as after an installation, which compiles every module."""

from __future__ import annotations

import os


def environment(folder: str) -> dict[str, str]:
    """Keeps compiled modules in an empty folder; the first process of a kind that runs in it fills it."""
    env = {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"}
    return env | {"PYTHONPYCACHEPREFIX": folder}
