"""VS Code in a browser: code-server with our extension, and a script that drives its window."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from editors.demo import SCREENSHOTS
from editors.install import BROWSER, CODE_SERVER, EXTENSION, NODE, npm
from editors.waiting import until

DRIVER = Path(__file__).with_name("drive_vscode.mjs")

SETTINGS = {
    "telemetry.telemetryLevel": "off",
    "update.mode": "none",
    "extensions.autoUpdate": False,
    "extensions.autoCheckUpdates": False,
    "workbench.startupEditor": "none",
    "workbench.enableExperiments": False,
    "workbench.tips.enabled": False,
    "workbench.quickOpen.closeOnFocusLost": False,
    "workbench.colorTheme": "Default Light Modern",
    "workbench.secondarySideBar.defaultVisibility": "hidden",
    "chat.disableAIFeatures": True,
    "window.commandCenter": False,
    "git.enabled": False,
    "files.autoSave": "off",
    "breadcrumbs.enabled": False,
    "editor.minimap.enabled": False,
    "editor.stickyScroll.enabled": False,
    "editor.accessibilitySupport": "off",
    "editor.fontSize": 14,
}
"""A quiet window: nothing that moves, asks or fetches."""

KEYS = [
    {"key": "ctrl+alt+f9", "command": "editor.action.showHover", "args": {"focus": "noAutoFocus"}},
    {"key": "ctrl+alt+f10", "command": "workbench.actions.view.problems"},
]
"""One key each for what has a chord, or a menu, by default."""


def npm_run(script: str) -> None:
    """Run one of the extension's own scripts."""
    done = subprocess.run([npm(), "run", script], cwd=EXTENSION, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


def build_extension() -> Path:
    npm_run("package")
    return EXTENSION / "bandwright.vsix"


@contextmanager
def code_server(home: Path, vsix: Path, environment: dict[str, str]) -> Iterator[str]:
    """A server with a fresh profile and our extension; gives its address, and ends with the block."""
    assert NODE.is_file(), "VS Code is missing: run `python3 tests/editors/install.py`"
    data, extensions, config = home / "data", home / "extensions", home / "config.yaml"
    profile = data / "User"
    profile.mkdir(parents=True)
    (profile / "settings.json").write_text(json.dumps(SETTINGS), encoding="utf-8")
    (profile / "keybindings.json").write_text(json.dumps(KEYS), encoding="utf-8")
    config.write_text("auth: none\n", encoding="utf-8")
    command: list[str | Path] = [NODE, CODE_SERVER / "out" / "node" / "entry.js", "--config", config]
    command += ["--user-data-dir", data, "--extensions-dir", extensions]
    installed = subprocess.run(
        [*command, "--install-extension", vsix], env=environment, capture_output=True, text=True, check=False
    )
    assert installed.returncode == 0, installed.stdout + installed.stderr
    quiet = ["--disable-telemetry", "--disable-update-check", "--disable-workspace-trust"]
    quiet += ["--disable-getting-started-override", "--disable-proxy"]
    log = home / "code-server.log"
    with log.open("w", encoding="utf-8") as out:
        server = subprocess.Popen(
            [*command, *quiet, "--bind-addr", "127.0.0.1:0"],
            env=environment,
            stdout=out,
            stderr=subprocess.STDOUT,
        )
    try:
        yield until("code-server's address", lambda: _address(log))
    finally:
        server.terminate()
        server.wait(timeout=20)


def _address(log: Path) -> str | None:
    found = re.search(r"listening on (http://127\.0\.0\.1:\d+)", log.read_text(encoding="utf-8"))
    return found and found[1]


def drive(scenario: str, **job: Any) -> Any:
    """Run a scenario of the driver; gives what a person would have seen."""
    chromium = shutil.which("chromium")
    assert chromium, "Chromium is missing: run `python3 tests/editors/install.py`"
    SCREENSHOTS.mkdir(parents=True, exist_ok=True)
    job |= {"chromium": chromium, "modules": str(BROWSER / "package.json"), "screenshots": str(SCREENSHOTS)}
    done = subprocess.run(
        [NODE, DRIVER, scenario, json.dumps(job)],
        capture_output=True,
        encoding="utf-8",
        check=False,
        timeout=55,
    )
    window = SCREENSHOTS / f"vscode-{scenario}-failed.png"
    assert done.returncode == 0, f"{done.stderr}\nThe window then: {window}"
    return json.loads(done.stdout)
