"""The extension in a real VS Code, driven through its window."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator
from dataclasses import asdict
from pathlib import Path

import pytest

from editors.demo import BANDWRIGHT, Trouble
from editors.vscode import build_extension, code_server, drive


@pytest.fixture(scope="module")
def vsix() -> Path:
    return build_extension()


@pytest.fixture
def url(tmp_path: Path, vsix: Path, environment: dict[str, str]) -> Iterator[str]:
    with code_server(tmp_path / "code-server", vsix, environment) as address:
        yield address


@pytest.fixture(autouse=True)
def starts(project: Path) -> Path:
    """The project's own environment, where the extension finds the server; it notes how that was started."""
    scripts = project / ".venv" / "bin"
    scripts.mkdir(parents=True)
    note = project.parent / "starts.txt"
    server = scripts / "bandwright"
    server.write_text(f'#!/bin/sh\necho "$@" >> "{note}"\nexec "{BANDWRIGHT}" "$@"\n', encoding="utf-8")
    server.chmod(0o755)
    return note


def test_finding_hover_and_remedy(url: str, project: Path, trouble: Trouble) -> None:
    seen = drive(
        "trouble",
        url=url,
        folder=str(project),
        file=trouble.file,
        message=trouble.message,
        finding=asdict(trouble.finding),
        name=asdict(trouble.name),
        family=next(iter(trouble.orders)),
        remedy=trouble.remedy,
    )
    assert re.search(r"bandwright \d+\.\d+", seen["status"])
    assert trouble.message in seen["problem"]
    assert "bandwright" in seen["problem"]  # its source
    assert len(trouble.orders_in(seen["hover"])) >= 3, seen["hover"]
    assert trouble.message in seen["findingHover"]
    assert any(trouble.remedy in title for title in seen["offered"])


def test_without_a_server_it_says_what_to_do(url: str, project: Path, trouble: Trouble, starts: Path) -> None:
    settings = project / ".vscode" / "settings.json"
    settings.parent.mkdir()
    wrong = {"bandwright.server.command": ["/nowhere/bandwright", "serve"]}
    settings.write_text(json.dumps(wrong), encoding="utf-8")
    seen = drive(
        "missing",
        url=url,
        folder=str(project),
        file=trouble.file,
        settings=str(settings),
        starts=str(starts),
    )
    assert "/nowhere/bandwright" in seen["message"]
    assert seen["buttons"] == ["Open the Settings", "How to Set Up"]
    assert "not found" in seen["status"]
    # Without the wrong setting the project's own environment counts; then the server was told to restart.
    assert starts.read_text(encoding="utf-8").splitlines() == ["serve", "serve"]
