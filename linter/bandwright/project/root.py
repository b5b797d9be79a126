"""The root of the project that a band file belongs to."""

from __future__ import annotations

from pathlib import Path


def root_of(band_file: Path) -> Path:
    """The nearest folder upward that holds `.git`, or else the folder of the file itself."""
    folder = band_file.absolute().parent
    return next((upward for upward in (folder, *folder.parents) if (upward / ".git").exists()), folder)
