"""A virtual environment with this checkout installed in it, for `python3 linter` and `python3 tests`.

Standard library only, in the syntax of Python 3.8, so that an old Python says what is missing.
"""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
OLDEST = (3, 11)


def ready(folder: Path, extra: str = "") -> Path:
    """The folder of an environment's programs, made on first use and renewed when `pyproject.toml` changes.

    Raises:
        SystemExit: something that it takes is missing; the message says what, and what to do.
    """
    if sys.version_info < OLDEST:
        needed, found = ".".join(map(str, OLDEST)), ".".join(map(str, sys.version_info[:3]))
        raise SystemExit(
            f"bandwright needs Python {needed} or later, and this is Python {found}. "
            f"Install a later one and start this with it, for example `python{needed} {sys.argv[0]}`."
        )
    programs = folder / ("Scripts" if os.name == "nt" else "bin")
    stamp = folder / "installed.txt"
    installed = f"{ROOT}\n{sys.version}\n{extra}\n" + (ROOT / "pyproject.toml").read_text(encoding="utf-8")
    if stamp.is_file() and stamp.read_text(encoding="utf-8") == installed and _runs(programs / "python"):
        return programs
    if not _runs(programs / "python"):
        _say(f"Making the environment {folder.relative_to(ROOT)} (once) ...")
        _make(folder)
    _say("Installing bandwright and what it builds on ...")
    _install(programs / "python", extra)
    stamp.write_text(installed, encoding="utf-8")
    return programs


def _say(words: str) -> None:
    sys.stderr.write(words + "\n")
    sys.stderr.flush()


def _runs(python: Path) -> bool:
    """Whether an environment's Python is there and has pip; an upgrade of the system may break both."""
    try:
        return subprocess.call([str(python), "-c", "import pip"], stderr=subprocess.DEVNULL) == 0
    except OSError:
        return False


def _make(folder: Path) -> None:
    made = _run(sys.executable, "-m", "venv", "--clear", str(folder))
    if made.returncode:
        raise SystemExit(
            f"{_end(made.stdout)}\nThe environment could not be made: Python's module `venv` is missing or "
            "incomplete. On Debian and Ubuntu, `apt-get install python3-venv` brings it."
        )


def _install(python: Path, extra: str) -> None:
    what = f"{ROOT}[{extra}]" if extra else str(ROOT)
    installed = _run(str(python), "-m", "pip", "install", "--quiet", "--editable", what)
    if installed.returncode:
        raise SystemExit(
            f"{_end(installed.stdout)}\nbandwright could not be installed. The lines above are pip's; "
            "most often it can't reach a package index from here."
        )


def _run(*command: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, check=False)


def _end(output: str) -> str:
    return "\n".join(output.strip().splitlines()[-15:])
