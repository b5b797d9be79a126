"""The JSON Schema (draft-07) of band files, for editors that know YAML and not bandwright.

Made of the table of keys, so that it says the same; what a schema can't say (frequencies in order, a
rate that a device may give) is left to the findings.
"""

from __future__ import annotations

import json
from typing import Final

from bandwright.bandfile import grammar
from bandwright.bandfile.grammar import Key, Where
from bandwright.bandfile.quantities import FITS

Schema = dict[str, object]

_NUMBER: Final = r"([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][-+]?[0-9]+)?"
_SPELT: Final = {
    "pi": "(pi|π)",
    "x": "(x|×)",
    "us": "(us|\N{MICRO SIGN}s|\N{GREEK SMALL LETTER MU}s)",
    "samples": "samples?",
}


def schema() -> Schema:
    """The schema as a JSON value."""
    return {
        "$schema": "http://json-schema.org/draft-07/schema#",
        "title": "Band file",
        "description": "Requirements of digital filters, as bandwright reads them.",
        **_mapping("top", ()),
    }


def schema_text() -> str:
    """The schema as the text of a file."""
    return json.dumps(schema(), indent=2, ensure_ascii=False) + "\n"


def _mapping(where: Where, path: tuple[str, ...]) -> Schema:
    """The schema of a mapping with known keys."""
    rows = grammar.INSIDE[where][path]
    found: Schema = {
        "type": "object",
        "properties": {name: _value(where, row) for name, row in rows.items()},
        "additionalProperties": False,
    }
    if required := [name for name, row in rows.items() if row.required]:
        found["required"] = required
    if path == ("bands", "*"):
        found |= {"minProperties": 1, "maxProperties": 1}
    elif path == ("accepted", "*"):
        found["required"] = ["finding", "reason"]
    elif path[:-1] == ("bands", "*"):
        either = {"pass": ("ripple", "gain"), "stop": ("attenuation", "gain")}.get(path[-1])
        if either:
            found["oneOf"] = [{"required": [name]} for name in either]
    return found


def _value(where: Where, row: Key) -> Schema:
    """The schema of one key's value, with what hover says of it."""
    kinds = _kinds(where, row)
    found: Schema = {"description": row.doc, **(kinds[0] if len(kinds) == 1 else {"anyOf": kinds})}
    if row.default is not None:
        found["default"] = row.default
    return found


def _kinds(where: Where, row: Key) -> list[Schema]:
    """The schemas that a value may follow, by the kind of its key."""
    kind = row.kind
    named: list[Schema] = [{"enum": list(row.names)}] if row.names else []
    if row.path in (("devices",), ("filters",)) and where == "top":
        inner: Where = "device" if row.path == ("devices",) else "filter"
        return [{"type": ["object", "null"], "additionalProperties": _mapping(inner, ())}]
    if kind == "mapping":
        return [_mapping(where, row.path)]
    if kind == "list":
        return [
            {"type": "array", "minItems": 1, "items": _value(where, grammar.ROWS[where][(*row.path, "*")])}
        ]
    if kind == "names":
        return [*named, {"type": "array", "minItems": 1, "items": named[0]}]
    if kind == "quantity":
        return [*named, *_quantity(row)]
    if kind == "count":
        return [*named, {"type": "integer", "minimum": row.least}]
    if kind == "arithmetic":
        word: Schema = {"type": "string", "pattern": r"^(float(64|32|16)|q([0-9]{1,3}\.)?[0-9]{1,3})$"}
        return [word, _mapping(where, row.path)] if grammar.INSIDE[where][row.path] else [word]
    return named or [_PLAIN[kind]]


_PLAIN: Final[dict[str, Schema]] = {
    "text": {"type": "string", "minLength": 1},
    "reference": {"type": "string", "minLength": 1},
    "date": {"type": "string", "pattern": "^[0-9]{4}-[0-9]{2}-[0-9]{2}$"},
    "finding": {"type": "string", "pattern": "^[a-z]+(-[a-z]+)*/[a-z0-9]+(-[a-z0-9]+)*$"},
    "figure": {"type": ["string", "number"]},
    "number": {"type": ["string", "number"]},
    "numbers": {"type": "array", "minItems": 1, "items": {"type": ["string", "number"]}},
}


def _quantity(row: Key) -> list[Schema]:
    """A number with one of the units of its dimension."""
    sign = r"(±|\+-|[-+−]?)" if row.symmetric else "[-+−]?"
    units = "|".join(_SPELT.get(name, name) for name in FITS[row.dimension])
    with_unit: Schema = {
        "type": "string",
        "pattern": f"^{sign} *{_NUMBER} *({units})$",
        "examples": [row.example],
    }
    return [with_unit, {"enum": [0, 1]}] if row.dimension in ("gain", "peak") else [with_unit]
