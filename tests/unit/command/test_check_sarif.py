"""How the SARIF log names files."""

from __future__ import annotations

import json
import os

import pytest

from bandwright.faces.command.formats import check_sarif


def test_a_file_on_another_drive_has_no_relative_name(monkeypatch: pytest.MonkeyPatch) -> None:
    """As `os.path.relpath` of Windows does: "path is on mount 'D:', start on mount 'C:'"."""

    def relpath(path: str) -> str:
        raise ValueError(path)

    monkeypatch.setattr(os.path, "relpath", relpath)
    [run] = json.loads(check_sarif.log(["/else/a b.bands.yaml"], [], []))["runs"]
    assert [artifact["location"] for artifact in run["artifacts"]] == [
        {"uri": "file:///else/a%20b.bands.yaml"}
    ]
