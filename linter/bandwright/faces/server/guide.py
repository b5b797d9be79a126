"""The page of a finding as a link."""

from __future__ import annotations

from functools import cache

from bandwright.faces.guide_pages import page


@cache
def guide_uri(finding: str) -> str | None:
    """The `file:` URI of a finding's page in the installed package; None where there is no page."""
    file = page(finding)
    return file.as_uri() if file.is_file() else None
