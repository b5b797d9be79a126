"""Which files a path stands for."""

from __future__ import annotations

from pathlib import Path

import pytest

from bandwright.project.walk import band_files


def plant(folder: Path, *names: str) -> None:
    for name in names:
        file = folder / name
        file.parent.mkdir(parents=True, exist_ok=True)
        file.write_text("", encoding="utf-8")


@pytest.fixture(autouse=True)
def here(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    return tmp_path


def test_a_folder_stands_for_the_band_files_inside_it_in_order(here: Path) -> None:
    plant(here, "b.bands.yaml", "deep/er/a.bands.yml", "notes.yaml", "bands.yaml", "a.bands.yaml")
    assert band_files(["."]) == (["a.bands.yaml", "b.bands.yaml", "deep/er/a.bands.yml"], [])


def test_hidden_folders_packages_and_environments_are_passed_over(here: Path) -> None:
    plant(here, ".git/a.bands.yaml", ".venv/a.bands.yaml", "node_modules/x/a.bands.yaml")
    plant(here, "env/pyvenv.cfg", "env/lib/a.bands.yaml", "kept/a.bands.yaml")
    assert band_files(["."]) == (["kept/a.bands.yaml"], [])


def test_a_folder_that_is_named_is_searched_even_if_it_is_hidden(here: Path) -> None:
    plant(here, ".hidden/a.bands.yaml")
    assert band_files([".hidden"]) == ([".hidden/a.bands.yaml"], [])


def test_a_file_that_is_named_is_taken_whatever_its_ending(here: Path) -> None:
    plant(here, "requirements.yaml")
    assert band_files(["requirements.yaml"]) == (["requirements.yaml"], [])


def test_a_file_that_is_named_twice_is_taken_once(here: Path) -> None:
    plant(here, "a.bands.yaml")
    assert band_files(["a.bands.yaml", "./a.bands.yaml", "."]) == (["a.bands.yaml"], [])


def test_a_path_that_is_not_there_is_told_apart(here: Path) -> None:
    plant(here, "a.bands.yaml")
    assert band_files(["gone", "a.bands.yaml"]) == (["a.bands.yaml"], ["gone"])


def test_a_link_to_a_folder_above_does_not_go_round_in_circles(here: Path) -> None:
    plant(here, "deep/a.bands.yaml")
    (here / "deep" / "up").symlink_to(here, target_is_directory=True)
    assert band_files(["."]) == (["deep/a.bands.yaml"], [])
