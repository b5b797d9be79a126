"""What the editor tests share: the demo in a folder of its own, and the finding they look at."""

from __future__ import annotations

import os
import shutil
from pathlib import Path

import pytest

from editors.demo import BANDWRIGHT, DEMO, Trouble, trouble_of


@pytest.fixture(scope="session")
def trouble() -> Trouble:
    return trouble_of(DEMO)


@pytest.fixture
def project(tmp_path: Path) -> Path:
    """A copy of the demo, which an editor may change."""
    folder = tmp_path / "crane"
    shutil.copytree(DEMO, folder)
    (folder / ".git").mkdir()  # marks the root
    return folder


@pytest.fixture
def environment(tmp_path: Path) -> dict[str, str]:
    """A home without anyone's settings, and a PATH on which the server is found first."""
    home = tmp_path / "home"
    home.mkdir()
    kept = {name: value for name, value in os.environ.items() if not name.startswith("XDG_")}
    return kept | {"HOME": str(home), "PATH": os.pathsep.join([str(BANDWRIGHT.parent), os.environ["PATH"]])}
