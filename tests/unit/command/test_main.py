"""What becomes of a command that can't do its work."""

from __future__ import annotations

from pathlib import Path

import pytest

from bandwright.bandfile import reader
from bandwright.faces.command.main import main


@pytest.fixture
def file(tmp_path: Path) -> str:
    path = tmp_path / "hoist.bands.yaml"
    path.write_text("format: bandwright/1\n", encoding="utf-8")
    return str(path)


def test_a_defect_is_no_finding(
    file: str, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Status 1 would tell a hook that the band file is at fault."""

    def broken(*_: object, **__: object) -> None:
        raise ZeroDivisionError

    monkeypatch.setattr(reader, "read", broken)
    assert main(["check", file]) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert "ZeroDivisionError" in printed.err
    assert printed.err.splitlines()[-1].startswith("This is a defect of bandwright.")


def test_a_command_that_is_interrupted_says_so_by_its_status(
    file: str, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """130, as shells report a program that Ctrl-C ended."""

    def interrupted(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(reader, "read", interrupted)
    assert main(["check", file]) == 130
    assert capsys.readouterr() == ("", "")
