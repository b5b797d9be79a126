"""How long one `bandwright check` takes as a whole process, as a hook or a shell sees it."""

from __future__ import annotations

import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from benchmarks.corpus import band_file
from benchmarks.installed import environment
from benchmarks.rows import Row

PROGRAM = Path(sys.executable).parent / "bandwright"
ROUNDS = 9


def measure() -> list[Row]:
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder, "cold.bands.yaml")
        file.write_text(band_file(filters=4), encoding="utf-8")
        checks, imports = [], []
        env = environment(folder)
        for _ in range(1 + ROUNDS):  # by turns, so that both see the same load; the first one compiles
            checks.append(process(env, str(PROGRAM), "check", str(file)))
            imports.append(process(env, sys.executable, "-c", "import scipy.signal"))
    ours, theirs = statistics.median(checks[1:]), statistics.median(imports[1:])
    length = len(band_file(filters=4).splitlines())
    return [
        Row(
            f"cold `check` of {length} lines / `import scipy.signal`",
            ours / theirs,
            0.25,
            f"{1e3 * ours:.0f} ms / {1e3 * theirs:.0f} ms",
        )
    ]


def process(env: dict[str, str], *command: str) -> float:
    """Seconds that a command takes from start to end, whatever it finds."""
    start = time.perf_counter()
    subprocess.run(command, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE, check=False, env=env)
    return time.perf_counter() - start
