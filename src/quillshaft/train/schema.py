"""The JSON schema of the train file, made from the rows that read it."""

from __future__ import annotations

import json
from typing import Any

from pydantic import BaseModel
from pydantic.json_schema import models_json_schema

from quillshaft.train.coupling_rows import FluidCouplingRow
from quillshaft.train.damper_rows import DAMPER_ROWS
from quillshaft.train.fields import NUMBER_OR_TEXT
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.overlay import KEYED_TABLES
from quillshaft.train.validate import AMPLITUDE, GEAR_ROWS, PLAIN, ROWS

Schema = dict[str, Any]


def _reference(row: type[BaseModel]) -> Schema:
    return {"$ref": f"#/$defs/{row.__name__}"}


def _keyed(table: str) -> Schema:
    kinds: dict[str, list[type[BaseModel]]] = {
        "machines": [*MACHINE_ROWS.values()],
        "gears": [*GEAR_ROWS.values()],
        "couplings": [ROWS["couplings"], FluidCouplingRow],
        "dampers": [*DAMPER_ROWS.values()],
    }
    row = {"anyOf": [_reference(item) for item in kinds[table]]} if table in kinds else _reference(ROWS[table])
    if table == "amplitudes":
        row = {"anyOf": [{"type": "string", "description": AMPLITUDE}, row]}
    return {"type": "object", "additionalProperties": row}


def _power() -> Schema:
    law = {"description": "square | constant-torque | constant-power, or shares of rated power by speed"}
    described = {**NUMBER_OR_TEXT, "description": 'mean power at rated speed, + drives, - absorbs; or "balance"'}
    return {"type": "object", "properties": {"law": law}, "additionalProperties": described}


def _tables() -> Schema:
    tables: Schema = {table: _reference(row) for table, row in PLAIN.items()}
    tables["power"] = _power()
    tables["excitations-off"] = {"type": "object", "additionalProperties": {"type": "string"}}
    tables.update({table: _keyed(table) for table in sorted(KEYED_TABLES)})
    return tables


def _partial(row: Schema, omit: bool) -> Schema:
    """A row's schema as a case takes it: nothing required, and the row itself can be left out."""
    out = {key: value for key, value in row.items() if key != "required"}
    if omit:
        out["properties"] = {**out.get("properties", {}), "omit": {"const": True}}
    return out


def _for_cases(node: Any) -> Any:
    """The same tables with their references led to the partial rows."""
    if isinstance(node, list):
        return [_for_cases(item) for item in node]
    if not isinstance(node, dict):
        return node
    out = {key: _for_cases(value) for key, value in node.items()}
    if "$ref" in out:
        out["$ref"] = out["$ref"].replace("#/$defs/", "#/$defs/case-")
    return out


def build_schema() -> Schema:
    """The schema as data: every table and key, cases as partial tables."""
    elements: list[type[BaseModel]] = [*ROWS.values(), *MACHINE_ROWS.values(), *GEAR_ROWS.values()]
    elements += [*DAMPER_ROWS.values(), FluidCouplingRow]
    _, made = models_json_schema([(row, "validation") for row in [*PLAIN.values(), *elements]], by_alias=True)
    definitions: Schema = made["$defs"]
    partial = {
        f"case-{row.__name__}": _partial(definitions[row.__name__], row in elements)
        for row in [*PLAIN.values(), *elements]
    }
    tables = _tables()
    case = {
        "type": "object",
        "properties": {"because": {"type": "string"}, **_for_cases(tables)},
        "additionalProperties": False,
    }
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Quillshaft train file",
        "type": "object",
        "required": ["schema", "train", "operation", "stations"],
        "properties": {"schema": {"const": 1}, **tables, "cases": {"type": "object", "additionalProperties": case}},
        "additionalProperties": False,
        "$defs": {**definitions, **partial},
    }


def schema_as_text() -> str:
    """The schema as the shipped file holds it."""
    return json.dumps(build_schema(), indent=1, ensure_ascii=False) + "\n"


if __name__ == "__main__":
    from pathlib import Path

    Path(__file__).with_name("train-file.schema.json").write_text(schema_as_text(), encoding="utf-8")
