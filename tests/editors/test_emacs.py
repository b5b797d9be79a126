"""The set-up for Emacs, as it stands in its README, in Debian's Emacs with eglot."""

from __future__ import annotations

import json
import shutil
import subprocess
from dataclasses import asdict
from pathlib import Path

from editors.demo import ROOT, Trouble

SET_UP_TEXT = ROOT / "editor-client" / "emacs" / "README.md"
DRIVER = Path(__file__).with_name("drive_emacs.el")


def test_findings_hover_and_remedy(project: Path, environment: dict[str, str], trouble: Trouble) -> None:
    emacs = shutil.which("emacs")
    assert emacs, "Emacs is missing: run `python3 tests/editors/install.py`"
    init = project.parent / "init.el"
    init.write_text(SET_UP_TEXT.read_text(encoding="utf-8").partition("```elisp\n")[2].partition("```")[0])
    job = {
        "file": str(project / trouble.file),
        "count": len(trouble.findings),
        "message": trouble.message,
        "finding": asdict(trouble.finding),
        "name": asdict(trouble.name),
        "family": next(iter(trouble.orders)),
        "remedy": trouble.remedy,
    }
    done = subprocess.run(
        # -q, not -Q: Debian's packages are put on the load path by the site's start file.
        [emacs, "-q", "--batch", "-l", init, "-l", DRIVER],
        env=environment | {"JOB": json.dumps(job)},
        capture_output=True,
        encoding="utf-8",
        check=False,
        timeout=55,
    )
    assert done.returncode == 0, done.stderr
    seen = json.loads(done.stdout)
    assert seen["mode"] == "bands-yaml-mode"
    assert sorted(line for line, _ in seen["findings"]) == [line for line, _ in trouble.findings]
    assert len(trouble.orders_in(seen["hover"])) >= 3, seen["hover"]
    assert trouble.remedy in seen["offered"]
