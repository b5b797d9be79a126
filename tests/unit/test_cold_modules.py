"""What a `check` that asks nothing loads: the modules listed in `tests/cold-modules.txt` and no others.

Names are compared, not times. To renew the list after a change that is meant:
`python3 tests/unit/test_cold_modules.py > tests/cold-modules.txt`.
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
from pathlib import Path

LIST = Path(__file__).resolve().parents[1] / "cold-modules.txt"

BAND_FILE = """\
format: bandwright/1
filters:
  channel:
    sample_rate: 8 kHz
    arithmetic: float64
    bands:
      - pass: {to: 1 kHz, ripple: 1 dB}
      - stop: {from: 2 kHz, attenuation: 40 dB}
    family: elliptic
    structure: cascade
"""

PROGRAM = """\
import sys
before = set(sys.modules)
from bandwright.faces.command.main import main
status = main(["check", sys.argv[1]])
print(*(set(sys.modules) - before), file=sys.stderr)
sys.exit(status)
"""


def loaded() -> set[str]:
    """The modules that a check loads, without the private ones of the standard library."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder, "cold.bands.yaml")
        file.write_text(BAND_FILE, encoding="utf-8")
        command = [sys.executable, "-c", PROGRAM, str(file)]
        done = subprocess.run(command, capture_output=True, check=False, text=True)
    assert done.returncode == 0, done.stdout + done.stderr
    names = {name if is_ours(name) else name.partition(".")[0] for name in done.stderr.split()}
    return {name for name in names if not name.startswith(("_", "encodings", "importlib"))}


def is_ours(name: str) -> bool:
    """Ours or a library's: of the standard library's packages, only the outermost name is compared."""
    return name.partition(".")[0] not in sys.stdlib_module_names


def test_a_check_that_asks_nothing_loads_the_listed_modules_and_no_others() -> None:
    found, listed = loaded(), set(LIST.read_text(encoding="utf-8").split())
    assert found - listed == set()
    assert {name for name in listed - found if is_ours(name)} == set(), (
        "the list names modules that are not loaded"
    )


def test_the_list_holds_none_of_the_costly_ones() -> None:
    costly = {"numpy", "scipy", "pydantic", "pygls", "lsprotocol", "asyncio", "logging", "json", "difflib"}
    assert not {name.partition(".")[0] for name in LIST.read_text(encoding="utf-8").split()} & costly


if __name__ == "__main__":
    sys.stdout.write("\n".join(sorted(loaded())) + "\n")
