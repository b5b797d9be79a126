"""JSON Schemas of the command's outputs, made from their records. Only `schema` loads this, never `check`."""

from __future__ import annotations

from typing import Any

from pydantic import TypeAdapter
from pydantic.json_schema import GenerateJsonSchema, JsonSchemaMode

from bandwright.faces.command.formats.check_json import CheckRecord
from bandwright.faces.command.formats.forecast_json import ForecastRecord

RECORDS: dict[str, type] = {"check": CheckRecord, "forecast": ForecastRecord}
"""Name of the command -> what its `--as json` prints."""


class _Draft7(GenerateJsonSchema):
    """Names the draft that the YAML tools of editors read, and leaves out titles that repeat the key."""

    def generate(self, schema: Any, mode: JsonSchemaMode = "validation") -> dict[str, Any]:
        return {"$schema": "http://json-schema.org/draft-07/schema#", **super().generate(schema, mode)}

    def field_title_should_be_set(self, schema: Any) -> bool:
        return False


def schema(name: str) -> dict[str, Any]:
    """The schema of what the command of this name prints with `--as json`."""
    return TypeAdapter(RECORDS[name]).json_schema(mode="serialization", schema_generator=_Draft7)
