"""The nearest known name to one that a person wrote."""

from __future__ import annotations

from collections.abc import Iterable


def suggestion(written: str, known: Iterable[str], otherwise: str = "") -> str:
    """The end of a sentence: "did you mean `elliptic`?", or else `otherwise` or the names that there are."""
    from bandwright.bandfile.grammar import nearest  # only for a slip

    names = sorted(known)
    near = nearest(written, names)
    return f"did you mean `{near}`?" if near else otherwise or f"there are {', '.join(names)}."
