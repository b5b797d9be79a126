"""The reference in the guide is what the table of keys says: `python3 tests --regenerate` renews it."""

from __future__ import annotations

from pathlib import Path

import bandwright
from bandwright.bandfile import grammar
from bandwright.bandfile.reference import reference

PAGE = Path(bandwright.__file__).parent / "guide" / "band-file.md"


def test_the_page_in_the_guide_is_fresh() -> None:
    assert PAGE.read_text(encoding="utf-8") == reference()


def test_every_key_and_every_name_is_in_it() -> None:
    text = reference()
    keys = {row.path[-1] for row in grammar.KEYS} - {"*"}
    names = {name for table in (grammar.FAMILIES, grammar.STRUCTURES, grammar.ROUNDINGS) for name in table}
    assert [word for word in sorted(keys | names) if f"`{word}`" not in text] == []
    assert "Not judged yet." in text
