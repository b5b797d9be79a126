"""The demo's troubled band file, and what bandwright itself says of it: what every editor has to show."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from dataclasses import dataclass
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[2]
DEMO = ROOT / "linter" / "bandwright" / "demo"
SCREENSHOTS = ROOT / ".tests" / "screenshots"
BANDWRIGHT = Path(sys.executable).with_name("bandwright")


@dataclass(frozen=True, slots=True)
class Place:
    """A place as an editor counts it: line and column from 1."""

    line: int
    column: int


@dataclass(frozen=True, slots=True)
class Trouble:
    """A band file with findings, and one finding with a remedy that keeps the requirement."""

    file: str
    findings: list[tuple[int, str]]
    """(line, id) of every finding that is not accepted, sorted."""
    finding: Place
    message: str
    remedy: str
    """The remedy's title."""
    name: Place
    """Where the finding's filter is named."""
    orders: dict[str, int]
    """Family -> least order, of that filter's candidates."""

    def orders_in(self, hover: str) -> list[str]:
        """The families that a text shows with their least order, on a line of their own."""
        return [
            family for family, order in self.orders.items() if re.search(rf"{family}\b.*?\b{order}\b", hover)
        ]


def ask(*arguments: str | Path) -> Any:
    """What `bandwright ... --as json` answers."""
    done = subprocess.run(
        [BANDWRIGHT, *arguments, "--as", "json"],
        capture_output=True,
        encoding="utf-8",
        check=False,
        timeout=60,
    )
    assert done.returncode in (0, 1), done.stderr
    return json.loads(done.stdout)


def trouble_of(folder: Path) -> Trouble:
    """The folder's band file with the most findings."""
    by_file: dict[str, list[dict[str, Any]]] = {}
    for finding in ask("check", folder)["findings"]:
        if not finding["accepted"]:
            by_file.setdefault(finding["file"], []).append(finding)
    assert by_file, "the demo has no findings to show"
    file = max(by_file, key=lambda name: (len(by_file[name]), name))
    path = folder / Path(file).name
    finding, remedy = next(
        (finding, remedy)
        for finding in by_file[file]
        for remedy in finding["remedies"]
        if finding["severity"] == "error" and remedy["kind"] == "keeps-requirement"
    )
    name = finding["filter"]
    lines = path.read_text(encoding="utf-8").splitlines()
    line = next(number for number, text in enumerate(lines, 1) if text.strip().startswith(f"{name}:"))
    (forecast,) = ask("forecast", path, name)["filters"]
    return Trouble(
        file=path.name,
        findings=sorted((finding["line"], finding["id"]) for finding in by_file[file]),
        finding=Place(finding["line"], finding["column"]),
        message=finding["message"],
        remedy=remedy["title"],
        name=Place(line, lines[line - 1].index(name) + 1),
        orders={row["family"]: row["order"] for row in forecast["candidates"] if row["order"] is not None},
    )
