"""The extension's own checks, and what is packed."""

from __future__ import annotations

import json
import zipfile

import pytest

from editors.install import EXTENSION
from editors.vscode import build_extension, npm_run


@pytest.mark.parametrize("script", ["check", "lint", "test"])
def test_types_style_and_functions(script: str) -> None:
    npm_run(script)


def test_the_package_is_the_same_bytes_each_time() -> None:
    first = build_extension().read_bytes()
    assert build_extension().read_bytes() == first


def test_everything_that_the_manifest_names_is_packed() -> None:
    with zipfile.ZipFile(build_extension()) as vsix:
        names = set(vsix.namelist())
        manifest = json.loads(vsix.read("extension/package.json"))
    contributes = manifest["contributes"]
    named = [manifest["main"], manifest["icon"], "README.md", "LICENSE.txt"]
    named += [language["configuration"] for language in contributes["languages"]]
    named += [grammar["path"] for grammar in contributes["grammars"]]
    assert {f"extension/{name.removeprefix('./')}" for name in named} <= names


def test_every_command_of_the_manifest_is_registered() -> None:
    commands = json.loads((EXTENSION / "package.json").read_text(encoding="utf-8"))["contributes"]["commands"]
    source = (EXTENSION / "src" / "extension.ts").read_text(encoding="utf-8")
    for command in commands:
        assert f"registerCommand('{command['command']}'" in source


def test_the_lock_file_names_no_registry() -> None:
    packages = json.loads((EXTENSION / "package-lock.json").read_text(encoding="utf-8"))["packages"]
    assert len(packages) > 1
    assert not [name for name, package in packages.items() if "resolved" in package]
