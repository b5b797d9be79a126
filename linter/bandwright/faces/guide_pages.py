"""The packaged guide: where the page of a finding is, and what it says first."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import bandwright

GUIDE = Path(bandwright.__file__).parent / "guide"


def page(finding: str) -> Path:
    """Where the page of this finding is, if there is one."""
    return GUIDE / "findings" / f"{finding}.md"


@cache
def what_is_asked(finding: str) -> str:
    """The first paragraph of a finding's page: what the band file should be like; empty without a page."""
    file = page(finding)
    text = file.read_text(encoding="utf-8") if file.is_file() else ""
    asked = text.partition("## What is asked\n")[2].strip()
    return " ".join(asked.partition("\n\n")[0].split())
