"""Where the page of a finding is."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import bandwright


@cache
def guide_uri(finding: str) -> str | None:
    """The `file:` URI of a finding's page in the installed package; None where there is no page."""
    page = Path(bandwright.__file__).parent / "guide" / "findings" / f"{finding}.md"
    return page.as_uri() if page.is_file() else None
