"""Run the tests: `python3 tests [PYTEST ARGUMENT ...]`, or the benchmarks: `python3 tests --benchmarks`.

`python3 tests --regenerate` writes the files anew that are generated from the source; look through the
difference before you commit it.

Makes an environment of its own in `.tests/venv`. Without arguments everything runs, the editors too, which
are fetched first; arguments select tests as they do for pytest.
"""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(ROOT / "linter"))

from environment import ready  # noqa: E402 # it lies in the other folder

BANDWRIGHT = ("-c", "from bandwright.faces.command.main import main; raise SystemExit(main())")

GENERATED = {
    "schemas/bandfile.schema.json": (*BANDWRIGHT, "schema", "band-file"),
    "schemas/check.schema.json": (*BANDWRIGHT, "schema", "check"),
    "schemas/forecast.schema.json": (*BANDWRIGHT, "schema", "forecast"),
    "linter/bandwright/guide/band-file.md": (
        "-c",
        "from bandwright.bandfile.reference import reference; print(reference(), end='')",
    ),
    "linter/bandwright/guide/index.md": ("tests/unit/findings/test_guide_index.py",),
    "tests/corpus/expected.txt": ("tests/unit/findings/test_corpus.py",),
    "tests/cold-modules.txt": ("tests/unit/test_cold_modules.py",),
}
"""Each generated file with what prints it."""


def regenerate(python: str) -> int:
    for name, command in GENERATED.items():
        done = subprocess.run([python, *command], cwd=ROOT, stdout=subprocess.PIPE, check=False)
        if done.returncode:
            return done.returncode
        (ROOT / name).write_bytes(done.stdout)
        print(name)
    return 0


def main() -> int:
    python = str(ready(ROOT / ".tests" / "venv", "test") / "python")
    if sys.argv[1:2] == ["--benchmarks"]:
        return subprocess.call([python, "-m", "benchmarks", *sys.argv[2:]], cwd=ROOT / "tests")
    if sys.argv[1:2] == ["--regenerate"]:
        return regenerate(python)
    if sys.argv[1:]:
        return subprocess.call([python, "-m", "pytest", *sys.argv[1:]], cwd=ROOT)
    editors = subprocess.call([python, str(ROOT / "tests" / "editors" / "install.py")], cwd=ROOT)
    if editors:
        print("Not every editor could be fetched, so tests of editors will fail.", file=sys.stderr)
    return subprocess.call([python, "-m", "pytest", "-n", "2", "--dist", "loadgroup"], cwd=ROOT)


if __name__ == "__main__":
    try:
        sys.exit(main())
    except KeyboardInterrupt:
        sys.exit(130)
