"""A key of the grammar: what it means, and how it is written."""

from __future__ import annotations

from bandwright.bandfile.grammar import Key
from bandwright.faces.markdown import Part


def parts(key: Key) -> list[Part]:
    """The key's own sentence, what it may say, and an example."""
    facts = []
    if key.default is not None:
        facts.append(f"Default: `{key.default}`.")
    if not key.judged:
        facts.append("This release reads it and judges nothing by it.")
    if key.names:
        facts.append(f"One of {', '.join(f'`{name}`' for name in key.names)}.")
    elif key.kind not in ("mapping", "list"):
        facts.append(f"Example: `{key.path[-1]}: {key.example}`")
    return [key.doc, " ".join(facts)] if facts else [key.doc]
