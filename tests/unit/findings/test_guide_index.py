"""The guide's index lists every finding.

It is made from the catalogue and the pages: `python3 tests/unit/findings/test_guide_index.py >
linter/bandwright/guide/index.md`.
"""

from __future__ import annotations

import sys
from itertools import groupby
from pathlib import Path

if __name__ == "__main__":
    sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from bandwright.findings.catalogue import RULES  # the path has to be set first
from bandwright.findings.rules import SEVERITIES
from unit.findings.pages import FOLDER, PAGES

INDEX = FOLDER.parent / "index.md"

AREAS = {
    "syntax": "The text can't be taken as YAML.",
    "key": "A key, a name or a unit can't be taken.",
    "edge": "A frequency can't be met, or can't be meant.",
    "level": "A ripple, an attenuation or a gain can't be met, or can't be meant.",
    "order": "Orders and lengths against their maxima, and the least changes that save some.",
    "coefficient": "What rounding does to the coefficients.",
    "cost": "Delay, multiplications and memory against their maxima.",
    "accepted": "Entries of `accepted` that are not in order.",
}


def index() -> str:
    """The text of the index."""
    lines = ["# Findings", "", "Severities, from worst to mildest: " + ", ".join(SEVERITIES) + "."]
    for area, rules in groupby(RULES.values(), key=lambda rule: rule.id.partition("/")[0]):
        table = ["| finding | severity | what is asked |", "| --- | --- | --- |"]
        for rule in rules:
            asked = " ".join(PAGES[rule.id].asked.partition("\n\n")[0].split())
            table.append(f"| [{rule.id}](findings/{rule.id}.md) | {rule.severity} | {asked} |")
        lines += ["", f"## {area}", "", AREAS[area], "", *table]
    return "\n".join(lines) + "\n"


def test_the_index_is_what_the_catalogue_and_the_pages_say() -> None:
    assert INDEX.read_text(encoding="utf-8") == index()


if __name__ == "__main__":
    sys.stdout.write(index())
