"""The page of a finding: where it is, and how it starts."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import bandwright


@cache
def guide_uri(finding: str) -> str | None:
    """The `file:` URI of a finding's page in the installed package; None where there is no page."""
    page = _page(finding)
    return page.as_uri() if page.is_file() else None


@cache
def what_is_asked(finding: str) -> str:
    """The first paragraph of a finding's page: what the band file should be like; empty without a page."""
    page = _page(finding)
    text = page.read_text(encoding="utf-8") if page.is_file() else ""
    asked = text.partition("## What is asked\n")[2].strip()
    return " ".join(asked.partition("\n\n")[0].split())


def _page(finding: str) -> Path:
    return Path(bandwright.__file__).parent / "guide" / "findings" / f"{finding}.md"
