"""The reference of the band file, made of the table of keys, for the guide."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping

from bandwright.bandfile import grammar
from bandwright.bandfile.grammar import Key
from bandwright.bandfile.quantities import FITS, UNITS

OPENING = """\
# The band file

A band file is plain YAML, named `*.bands.yaml` or `*.bands.yml`. Every key that bandwright knows is listed
here. A key marked "not judged yet" is read and checked, and the finding `key/not-judged-yet` says that
nothing more is done with it.
"""

NAMES: tuple[tuple[str, Mapping[str, str]], ...] = (
    ("Families", grammar.FAMILIES),
    ("Structures", grammar.STRUCTURES),
    ("Number formats", grammar.COMMON_FORMATS),
    ("Rounding", grammar.ROUNDINGS),
    ("Overflow", grammar.OVERFLOWS),
)


def reference() -> str:
    """The reference as Markdown: a table of keys for each mapping, then names and units."""
    return "\n\n".join((OPENING.rstrip("\n"), *_mappings(), *_names(), _units())) + "\n"


def _mappings() -> Iterator[str]:
    """The keys inside each mapping; those of a device, which a filter has too, by name only."""
    yield _section("Top level", grammar.children("top", ()))
    shared = ", ".join(f"`{row.path[-1]}`" for row in grammar.children("device", ()))
    yield f"## A device\n\nA device takes these keys of a filter, as defaults for its filters: {shared}."
    yield _section("A filter", grammar.children("filter", ()))
    for path in grammar.INSIDE["filter"]:
        rows = grammar.children("filter", path)
        if path and rows and rows[0].path[-1] != "*":
            yield _section(" › ".join(part for part in path if part != "*"), rows)


def _section(title: str, rows: Iterable[Key]) -> str:
    named = ((row.path[-1], row) for row in rows if row.path[-1] != "*")
    table = (f"| `{name}` | {_value(row)} | {_meaning(row)} |" for name, row in named)
    return "\n".join((f"## {title}\n", "| key | value | meaning |", "| --- | --- | --- |", *table))


def _value(row: Key) -> str:
    if row.names and len(row.names) <= 4 and row.kind != "quantity":
        return ", ".join(f"`{name}`" for name in row.names)
    kind = "name or list of names" if row.kind == "names" else row.kind
    words = row.dimension if row.kind == "quantity" else kind
    return f"{words}, such as `{row.example}`" if row.example and row.kind != "mapping" else words


def _meaning(row: Key) -> str:
    notes = [row.doc.replace("|", "\\|")]
    if row.required:
        notes.append("Required.")
    if row.default is not None:
        notes.append(f"Default: `{row.default}`.")
    if not row.judged:
        notes.append("Not judged yet.")
    if row.unjudged_names:
        notes.append("Not judged yet: " + ", ".join(f"`{name}`" for name in row.unjudged_names) + ".")
    return " ".join(notes)


def _names() -> Iterator[str]:
    for title, names in NAMES:
        table = (f"| `{name}` | {doc} |" for name, doc in names.items())
        yield "\n".join((f"## {title}\n", "| name | what it is |", "| --- | --- |", *table))


def _units() -> str:
    table = ["| for | units |", "| --- | --- |"]
    for dimension, units in FITS.items():
        if dimension != "figure":
            named = ", ".join(f"`{unit}` ({UNITS[unit].doc})" for unit in units)
            table.append(f"| {dimension} | {named} |")
    return "## Units\n\n" + "\n".join(table)
