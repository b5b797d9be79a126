"""How sentences call families and their filters."""

from __future__ import annotations

TITLES = {
    "butterworth": "Butterworth",
    "chebyshev-1": "Chebyshev I",
    "chebyshev-2": "Chebyshev II",
    "elliptic": "elliptic",
    "equiripple": "equiripple",
    "kaiser-window": "Kaiser window",
}


def title(family: str) -> str:
    """The family in mid-sentence: "Chebyshev II"."""
    return TITLES.get(family, family)


def opening(family: str) -> str:
    """The family at the start of a sentence: "Elliptic"."""
    words = title(family)
    return words[0].upper() + words[1:]


def a_filter(family: str) -> str:
    """A filter of the family in mid-sentence: "an elliptic filter"."""
    words = title(family)
    return f"{'an' if words[0] in 'aeiou' else 'a'} {words} filter"
