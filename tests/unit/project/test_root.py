"""The root of a band file's project."""

from __future__ import annotations

from pathlib import Path

from bandwright.project.root import root_of


def test_the_root_is_the_nearest_folder_upward_with_a_repository(tmp_path: Path) -> None:
    (tmp_path / ".git").mkdir()
    inner = tmp_path / "inner"
    (inner / "deep").mkdir(parents=True)
    assert root_of(inner / "deep" / "a.bands.yaml") == tmp_path
    (inner / ".git").write_text("gitdir: elsewhere", encoding="utf-8")  # as a work tree of git has it
    assert root_of(inner / "deep" / "a.bands.yaml") == inner
