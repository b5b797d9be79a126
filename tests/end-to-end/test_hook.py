"""The hook for pre-commit: a commit that makes a requirement impossible is refused."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

PRE_COMMIT = Path(sys.executable).parent / "pre-commit"

GOOD = """\
format: bandwright/1
filters:
  strain-slow:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: elliptic
"""

BAD = GOOD.replace("family: elliptic", "family: butterworth")
"""Order 45 where 12 is the maximum."""


Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def run(git_settings: dict[str, str], tmp_path: Path) -> Run:
    """Runs a command in a folder."""

    def run(folder: Path, *command: str) -> subprocess.CompletedProcess[str]:
        settings = {**git_settings, "PRE_COMMIT_HOME": str(tmp_path / "hooks")}
        return subprocess.run(command, cwd=folder, env=settings, capture_output=True, check=False, text=True)

    return run


@pytest.fixture
def project(checkout: Path, tmp_path: Path, run: Run) -> Path:
    """A repository of a user, with the hook set up from the checkout and already installed."""
    folder = tmp_path / "project"
    folder.mkdir()
    revision = run(checkout, "git", "rev-parse", "HEAD").stdout.strip()
    config = f"repos:\n- repo: file://{checkout}\n  rev: {revision}\n  hooks:\n  - id: bandwright-check\n"
    (folder / ".pre-commit-config.yaml").write_text(config, encoding="utf-8")
    run(folder, "git", "init", "--quiet")
    installed = run(folder, str(PRE_COMMIT), "install", "--install-hooks")
    assert installed.returncode == 0, installed.stdout + installed.stderr
    return folder


def test_a_commit_that_breaks_a_requirement_is_refused_until_it_is_put_right(project: Path, run: Run) -> None:
    def commit(text: str) -> subprocess.CompletedProcess[str]:
        (project / "hoist.bands.yaml").write_text(text, encoding="utf-8")
        run(project, "git", "add", "--all")
        return run(project, "git", "commit", "--message", "Change the requirement")

    refused = commit(BAD)
    assert refused.returncode != 0
    assert "hoist.bands.yaml:8:13: error: " in refused.stdout + refused.stderr
    assert "[order/over-maximum]" in refused.stdout + refused.stderr
    assert run(project, "git", "rev-parse", "--verify", "HEAD").returncode != 0

    accepted = commit(GOOD)
    assert accepted.returncode == 0, accepted.stdout + accepted.stderr
    assert run(project, "git", "show", "HEAD:hoist.bands.yaml").stdout == GOOD
