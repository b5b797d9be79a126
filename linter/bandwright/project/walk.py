"""Find the band files under the paths that a user names."""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from pathlib import Path

ENDINGS = (".bands.yaml", ".bands.yml")


def is_band_file(name: str) -> bool:
    """Whether a file of this name is a band file. A file that is named by hand is taken as one anyway."""
    return name.endswith(ENDINGS)


def band_files(paths: Sequence[str]) -> tuple[list[str], list[str]]:
    """The band files that the paths name or hold, each once, in order; and the paths that do not exist."""
    found: set[str] = set()
    missing = []
    for path in map(os.path.normpath, paths):
        if Path(path).is_dir():
            found.update(_inside(path))
        elif Path(path).exists():
            found.add(path)
        else:
            missing.append(path)
    return sorted(found), missing


def _inside(folder: str) -> Iterator[str]:
    for here, folders, files in os.walk(folder):
        folders[:] = [name for name in folders if not _skipped(here, name)]
        for name in files:
            if is_band_file(name):
                yield os.path.normpath(Path(here, name))


def _skipped(parent: str, name: str) -> bool:
    """Hidden folders, installed packages and virtual environments hold other people's files."""
    return name.startswith(".") or name == "node_modules" or Path(parent, name, "pyvenv.cfg").exists()
