"""The hooks for pre-commit: a commit that makes a requirement impossible, or has slips in it, is stopped."""

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

SLIPPED = GOOD.replace("family:", "familly:")
"""A key with a slip, which has one remedy, and that keeps the requirement."""


Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture(scope="module")
def run(git_settings: dict[str, str], tmp_path_factory: pytest.TempPathFactory) -> Run:
    """Runs a command in a folder; the hooks are installed once for all tests."""
    installed = tmp_path_factory.mktemp("hooks")

    def run(folder: Path, *command: str) -> subprocess.CompletedProcess[str]:
        settings = {**git_settings, "PRE_COMMIT_HOME": str(installed)}
        return subprocess.run(command, cwd=folder, env=settings, capture_output=True, check=False, text=True)

    return run


@pytest.fixture
def project(checkout: Path, tmp_path: Path, run: Run, request: pytest.FixtureRequest) -> Path:
    """A repository of a user, with the hooks of the test set up from the checkout and already installed."""
    folder = tmp_path / "project"
    folder.mkdir()
    revision = run(checkout, "git", "rev-parse", "HEAD").stdout.strip()
    hooks = "".join(f"  - id: {hook}\n" for hook in request.param)
    config = f"repos:\n- repo: file://{checkout}\n  rev: {revision}\n  hooks:\n{hooks}"
    (folder / ".pre-commit-config.yaml").write_text(config, encoding="utf-8")
    run(folder, "git", "init", "--quiet")
    installed = run(folder, str(PRE_COMMIT), "install", "--install-hooks")
    assert installed.returncode == 0, installed.stdout + installed.stderr
    return folder


Commit = Callable[[str], subprocess.CompletedProcess[str]]


@pytest.fixture
def commit(project: Path, run: Run) -> Commit:
    """Commits a band file with this text."""

    def commit(text: str) -> subprocess.CompletedProcess[str]:
        (project / "hoist.bands.yaml").write_text(text, encoding="utf-8")
        run(project, "git", "add", "--all")
        return run(project, "git", "commit", "--message", "Change the requirement")

    return commit


@pytest.mark.parametrize("project", [["bandwright-check"]], indirect=True, ids=["check"])
def test_a_commit_that_breaks_a_requirement_is_refused_until_it_is_put_right(
    project: Path, run: Run, commit: Commit
) -> None:
    refused = commit(BAD)
    assert refused.returncode != 0
    assert "hoist.bands.yaml:8:13: error: " in refused.stdout + refused.stderr
    assert "[order/over-maximum]" in refused.stdout + refused.stderr
    assert run(project, "git", "rev-parse", "--verify", "HEAD").returncode != 0

    accepted = commit(GOOD)
    assert accepted.returncode == 0, accepted.stdout + accepted.stderr
    assert run(project, "git", "show", "HEAD:hoist.bands.yaml").stdout == GOOD


@pytest.mark.parametrize(
    "project", [["bandwright-fix", "bandwright-check"]], indirect=True, ids=["fix and check"]
)
def test_a_slip_is_put_right_and_the_commit_waits_for_a_look_at_it(
    project: Path, run: Run, commit: Commit
) -> None:
    stopped = commit(SLIPPED)
    assert stopped.returncode != 0
    told = stopped.stdout + stopped.stderr
    assert "- hook id: bandwright-fix\n- exit code: 1\n" in told
    assert "hoist.bands.yaml: strain-slow: Call it `family` [key/unknown-key]" in told
    assert (project / "hoist.bands.yaml").read_text(encoding="utf-8") == GOOD
    assert run(project, "git", "show", ":hoist.bands.yaml").stdout == SLIPPED

    accepted = commit(GOOD)
    assert accepted.returncode == 0, accepted.stdout + accepted.stderr
    assert run(project, "git", "show", "HEAD:hoist.bands.yaml").stdout == GOOD
