"""A file that is written holds the old content or the new."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from bandwright.project.files import write_atomically


def test_the_content_is_replaced_and_nothing_is_left_behind(tmp_path: Path) -> None:
    file = tmp_path / "a.bands.yaml"
    file.write_bytes(b"old")
    write_atomically(file, b"new\r\n")
    assert file.read_bytes() == b"new\r\n"
    assert list(tmp_path.iterdir()) == [file]


def test_the_mode_stays(tmp_path: Path) -> None:
    file = tmp_path / "a.bands.yaml"
    file.write_bytes(b"old")
    file.chmod(0o640)
    write_atomically(file, b"new")
    assert file.stat().st_mode & 0o777 == 0o640


def test_a_link_stays_a_link(tmp_path: Path) -> None:
    file, link = tmp_path / "a.bands.yaml", tmp_path / "link.bands.yaml"
    file.write_bytes(b"old")
    link.symlink_to(file)
    write_atomically(link, b"new")
    assert link.is_symlink()
    assert file.read_bytes() == b"new"


def test_what_fails_midway_leaves_the_old_content(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(descriptor: int) -> None:
        raise OSError(28, "No space left on device")

    file = tmp_path / "a.bands.yaml"
    file.write_bytes(b"old")
    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(OSError, match="No space left"):
        write_atomically(file, b"new")
    assert file.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [file]


def test_a_pipe_is_written_to_and_not_replaced(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    reader = os.open(pipe, os.O_RDONLY | os.O_NONBLOCK)
    try:
        write_atomically(pipe, b"new")
        assert os.read(reader, 10) == b"new"
    finally:
        os.close(reader)
    assert pipe.is_fifo()
