"""Run bandwright from a checkout: `python3 linter [ARGUMENT ...]`.

Makes the environment `.venv` on first use and passes the arguments on to `bandwright`; without any, it
checks the band files of the demo.
"""

from __future__ import annotations

import os
import subprocess
import sys

from environment import ROOT, ready

DEMO = ROOT / "linter" / "bandwright" / "demo"


def main() -> int:
    command = [str(ready(ROOT / ".venv") / "bandwright"), *sys.argv[1:]]
    if sys.argv[1:]:
        return subprocess.call(command)
    status = subprocess.call([*command, "check", os.path.relpath(DEMO)])
    if status > 1:
        return status
    print("\nThat was the demo. Check your own band files with: python3 linter check FILE-OR-FOLDER")
    return 0


if __name__ == "__main__":
    try:
        sys.exit(main())
    except KeyboardInterrupt:
        sys.exit(130)
