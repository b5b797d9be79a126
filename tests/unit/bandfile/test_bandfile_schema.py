"""The JSON Schema of band files: fresh, valid draft-07, and of one mind with the reader."""

from __future__ import annotations

import json
from pathlib import Path

import jsonschema
import pytest
from ruamel.yaml import YAML

from bandwright.bandfile import grammar
from bandwright.bandfile.reader import read
from bandwright.bandfile.schema import schema, schema_text
from unit.bandfile.example import EXAMPLE, ONE, ids, with_line

COMMITTED = Path(__file__).resolve().parents[3] / "schemas" / "bandfile.schema.json"


def errors(text: str) -> list[str]:
    value = json.loads(json.dumps(YAML(typ="safe", pure=True).load(text), default=str))
    return [error.message for error in jsonschema.Draft7Validator(schema()).iter_errors(value)]


def test_the_file_in_the_checkout_is_fresh() -> None:
    assert COMMITTED.read_text(encoding="utf-8") == schema_text()


def test_it_is_a_valid_draft_07_schema() -> None:
    jsonschema.Draft7Validator.check_schema(schema())
    assert schema()["$schema"] == "http://json-schema.org/draft-07/schema#"


@pytest.mark.parametrize(
    "text", [EXAMPLE, ONE, ONE + "    accepted: [{finding: a/b, reason: r, up_to: 30 ms}]\n"]
)
def test_good_files_validate(text: str) -> None:
    assert errors(text) == []
    assert ids(read(text)) == []


@pytest.mark.parametrize(
    "row",
    [row for row in grammar.KEYS if row.where == ("filter",) and len(row.path) == 1],
    ids=lambda row: row.path[0],
)
def test_the_example_of_a_key_validates(row: grammar.Key) -> None:
    text = with_line(ONE, "    bands:", f"    {row.path[0]}: {row.example}\n    bands:")
    assert row.path == ("bands",) or errors(text) == []


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("ripple", "riple"),
        ("1 kHz", "1"),
        ("1 kHz", "1 khz"),
        ("1 kHz", "0,1 kHz"),
        ("8 kHz", "0.2 pi"),
        ("    bands", "    family: eliptic\n    bands"),
        ("    bands", "    order: 0\n    bands"),
        (", ripple: 1 dB", ""),
        (", ripple: 1 dB", ", ripple: 1 dB, gain: {min: 0}"),
        ("bandwright/1", "bandwright/2"),
        ("      - stop", "        stop"),
        ("    bands", "    accepted: [{finding: a/b}]\n    bands"),
        ("    bands", "    arithmetic: int16\n    bands"),
    ],
)
def test_the_schema_and_the_reader_refuse_alike(old: str, new: str) -> None:
    text = with_line(ONE, old, new)
    assert ids(read(text)) != []
    assert errors(text) != []
