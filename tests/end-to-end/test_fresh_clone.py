"""A newcomer's first minute: clone, run, see findings; then run a test."""

from __future__ import annotations

import os
import re
import subprocess
import sys
from pathlib import Path

import pytest


@pytest.fixture(scope="module")
def clone(checkout: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("clone") / "bandwright"
    subprocess.run(["git", "clone", "--quiet", str(checkout), str(folder)], check=True)
    return folder


@pytest.fixture(scope="module")
def newcomer(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    """The environment of somebody whose home folder is empty; only pip's cache is ours, to save downloads."""
    cache = subprocess.run(
        [sys.executable, "-m", "pip", "cache", "dir"], capture_output=True, check=True, text=True
    )
    ours = (
        "VIRTUAL_ENV",
        "PYTHONPATH",
        "PYTHONHOME",
        "PYTEST_ADDOPTS",
        "PYTEST_CURRENT_TEST",
        "PYTEST_XDIST_WORKER",
    )
    plain = {name: value for name, value in os.environ.items() if name not in ours}
    return {**plain, "HOME": str(tmp_path_factory.mktemp("home")), "PIP_CACHE_DIR": cache.stdout.strip()}


def run(clone: Path, newcomer: dict[str, str], *arguments: str) -> subprocess.CompletedProcess[str]:
    system_python = Path(sys.base_prefix, "bin", "python3")
    return subprocess.run(
        [str(system_python), *arguments], cwd=clone, env=newcomer, capture_output=True, check=False, text=True
    )


def test_the_first_run_installs_and_prints_the_findings_of_the_demo(
    clone: Path, newcomer: dict[str, str]
) -> None:
    first = run(clone, newcomer, "linter")
    assert first.returncode == 0, first.stderr
    assert re.search(
        r"^linter/bandwright/demo/.+:\d+:\d+: error: .+ \[order/over-maximum\]$", first.stdout, re.M
    )
    assert "Installing" in first.stderr
    second = run(clone, newcomer, "linter")
    assert second.stdout == first.stdout
    assert second.stderr == ""


def test_arguments_reach_the_program(clone: Path, newcomer: dict[str, str]) -> None:
    version = run(clone, newcomer, "linter", "--version")
    assert re.fullmatch(r"bandwright \d+\.\d+\.\d+\n", version.stdout)


def test_the_tests_run_in_an_environment_of_their_own(clone: Path, newcomer: dict[str, str]) -> None:
    tests = run(clone, newcomer, "tests", "tests/unit/test_house.py")
    assert tests.returncode == 0, tests.stdout + tests.stderr
    assert re.search(r"^\d+ passed in ", tests.stdout.splitlines()[-1])
    assert (clone / ".tests" / "venv").is_dir()
