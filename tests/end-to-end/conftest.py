"""The program as its users start it: a process of its own, in a folder of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PROGRAM = Path(sys.executable).parent / "bandwright"

GIT = {
    "GIT_AUTHOR_NAME": "A. Tester",
    "GIT_AUTHOR_EMAIL": "tester@example.invalid",
    "GIT_COMMITTER_NAME": "A. Tester",
    "GIT_COMMITTER_EMAIL": "tester@example.invalid",
    "GIT_CONFIG_GLOBAL": os.devnull,
    "GIT_CONFIG_NOSYSTEM": "1",
}

Run = Callable[..., subprocess.CompletedProcess[bytes]]


@pytest.fixture(scope="session")
def git_settings() -> dict[str, str]:
    """An environment in which git asks nobody and reads nobody's settings."""
    return {**os.environ, **GIT}


@pytest.fixture
def bandwright(tmp_path: Path) -> Run:
    """Runs the program in the test's folder; what `env` holds is added to the environment."""

    def run(*arguments: str, env: dict[str, str] | None = None, **keywords: object) -> object:
        plain = {
            name: value for name, value in os.environ.items() if name not in ("NO_COLOR", "PYTHONIOENCODING")
        }
        return subprocess.run(
            [str(PROGRAM), *arguments],
            cwd=tmp_path,
            env={**plain, "PYTHONUTF8": "1", **(env or {})},
            check=False,
            timeout=120,
            **{"capture_output": True, **keywords},
        )

    return run


@pytest.fixture(scope="session")
def checkout(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A repository with the files of this checkout, committed, those not committed here included."""
    folder = tmp_path_factory.mktemp("checkout")
    listed = git(ROOT, "ls-files", "-z", "--cached", "--others", "--exclude-standard").split("\0")
    for name in filter(None, listed):
        if (ROOT / name).is_file():
            (folder / name).parent.mkdir(parents=True, exist_ok=True)
            (folder / name).write_bytes((ROOT / name).read_bytes())
            (folder / name).chmod((ROOT / name).stat().st_mode)
    git(folder, "init", "--quiet")
    git(folder, "add", "--all")
    git(folder, "commit", "--quiet", "--message", "As it is")
    return folder


def git(folder: Path, *arguments: str) -> str:
    """What git prints."""
    done = subprocess.run(
        ["git", *arguments], cwd=folder, env={**os.environ, **GIT}, capture_output=True, check=True, text=True
    )
    return done.stdout
