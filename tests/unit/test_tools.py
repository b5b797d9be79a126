"""The source is linted, formatted and typed, as the tools' settings in `pyproject.toml` say."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
TOOLS = {
    "lint": ("ruff", "check", "."),
    "format": ("ruff", "format", "--check", "."),
    "types": ("mypy",),
}


@pytest.mark.parametrize("tool", TOOLS)
def test_the_tool_has_nothing_to_say(tool: str) -> None:
    done = subprocess.run(
        [sys.executable, "-m", *TOOLS[tool]], cwd=ROOT, capture_output=True, check=False, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr
