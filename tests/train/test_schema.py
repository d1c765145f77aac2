"""The JSON schema that editors use: shipped as built, complete, and of one mind with the reader."""

from __future__ import annotations

import json
import tomllib
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft202012Validator

from quillshaft.train.duty_rows import DutyTable, StrengthTable, WeakestRow
from quillshaft.train.gear_rows import EpicyclicTeethRow
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.messages import keys_of
from quillshaft.train.overlay import KEYED_TABLES, PLAIN_TABLES
from quillshaft.train.reciprocating_rows import (
    CompressorCylinderRow,
    CompressorEndRow,
    CylinderRow,
    GasRow,
    SimpleCycleRow,
)
from quillshaft.train.rows import RunningGearRow
from quillshaft.train.schema import build_schema, schema_as_text
from quillshaft.train.shaft_rows import EquivalentRow, KeywayRow, PieceRow, SectionRow, SplineRow, ThrowRow
from quillshaft.train.starters import KINDS, schema_text, starter_text
from quillshaft.train.tables import RevisionRow
from quillshaft.train.validate import GEAR_ROWS, PLAIN, ROWS
from train_files import MORE, TEXT, complaint, edited

EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*.toml"))
built = cache(build_schema)
CLASSES = [*ROWS.values(), *PLAIN.values(), *MACHINE_ROWS.values(), *GEAR_ROWS.values()]
INNER = [PieceRow, KeywayRow, SplineRow, SectionRow, ThrowRow, EquivalentRow, RunningGearRow]
INNER += [EpicyclicTeethRow, CylinderRow, RevisionRow]
INNER += [WeakestRow, StrengthTable, DutyTable]
INNER += [GasRow, SimpleCycleRow, CompressorCylinderRow, CompressorEndRow]
SOUND = [TEXT, TEXT + MORE, *(starter_text(kind) for kind in KINDS), *(path.read_text("utf-8") for path in EXAMPLES)]


@pytest.fixture(scope="module")
def validator() -> Draft202012Validator:
    schema = json.loads(schema_text())
    Draft202012Validator.check_schema(schema)
    return Draft202012Validator(schema)


def dated(node: Any) -> Any:
    """The data as an editor hands it over: a TOML date as text."""
    if isinstance(node, dict):
        return {key: dated(value) for key, value in node.items()}
    if isinstance(node, list):
        return [dated(item) for item in node]
    return node.isoformat() if hasattr(node, "isoformat") else node


def test_the_shipped_schema_is_the_one_that_the_rows_give():
    assert schema_text() == schema_as_text()


@pytest.mark.parametrize("text", SOUND)
def test_a_sound_file_keeps_the_schema(validator, text):
    assert [error.message for error in validator.iter_errors(dated(tomllib.loads(text)))] == []


@pytest.mark.parametrize("row", [*CLASSES, *INNER], ids=lambda row: row.__name__)
def test_every_key_of_every_row_stands_in_the_schema_and_no_other(row):
    definitions = built()["$defs"]
    assert set(definitions[row.__name__]["properties"]) == set(keys_of(row))
    assert definitions[row.__name__]["additionalProperties"] is False


@pytest.mark.parametrize("row", CLASSES, ids=lambda row: row.__name__)
def test_in_a_case_nothing_is_required_and_an_element_can_be_left_out(row):
    partial = built()["$defs"][f"case-{row.__name__}"]
    assert "required" not in partial
    omit = {"omit"} if row not in PLAIN.values() else set()
    assert set(partial["properties"]) == set(keys_of(row)) | omit


def test_every_table_stands_in_the_schema_and_in_its_cases():
    schema = built()
    case = schema["properties"]["cases"]["additionalProperties"]["properties"]
    assert set(schema["properties"]) == PLAIN_TABLES | KEYED_TABLES | {"schema", "cases"}
    assert set(case) == PLAIN_TABLES | KEYED_TABLES | {"because"}


BROKEN = [
    ("schema = 1", "schema = 2"),
    ("[couplings]", "[coupling]"),
    ("units =", "unit ="),
    ('units = "SI"', 'units = "metric"'),
    ('title = "Raw-water booster, train B"', "title = 5"),
    ("speed-at", "speed_at"),
    ('rated = "1487 rpm"\n', ""),
    ('rated = "1487 rpm"', "rated = true"),
    ('motor-core = "1120 kW"', "motor-core = []"),
    ('inertia = "0.74 kg m^2"', "inertai = 1"),
    ('inertia = "0.74 kg m^2"', "inertia = [1, 2]"),
    ('motor-hub  = { inertia = "0.74 kg m^2" }', "motor-hub = 0.74"),
    ('status = "stated"', 'status = "state"'),
    ('between = ["motor-core", "motor-hub"], stiff', "stiff"),
    ('["motor-core", "motor-hub"], stiff', '["motor-core"], stiff'),
    ("fillet", "filet"),
    ('length = "60 mm"', "lenght = 60"),
    ('equivalent = { length = "610 mm",', "equivalent = {"),
    ("psi = 1.1", 'psi = "1.1"'),
    ("psi = 1.1", "psi = -1.1"),
    ("teeth = [29, 77]", "teeth = [29]"),
    ("teeth = [29, 77]", "teeth = [29, 2]"),
    ('kind = "induction-motor"', 'kind = "motor"'),
    ("poles = 4", "poles = 3"),
    ("vanes = 6", "blades = 6"),
    ("order = 2", 'order = "2x"'),
    ('"rigid flanges, no misalignment possible"', "true"),
    ('tolerances = "default"', 'tolerances = "non"'),
    ('status = "draft"', 'status = "final"'),
    ('revision = "0", date', "revision = 0, date"),
    ("psi = 0.9 }", 'psi = "0.9" }'),
    ("couplings.flex-block = { stiff", "coupling.flex-block = { stiff"),
    ("couplings.flex-block = { stiff", "couplings.flex-block = { omit = false, stiff"),
]


@pytest.mark.parametrize(("old", "new"), BROKEN, ids=[new[:40] or old[:40] for old, new in BROKEN])
def test_a_broken_file_breaks_the_schema_and_the_reader_refuses_it(validator, old, new):
    text = edited(old, new)
    assert not validator.is_valid(dated(tomllib.loads(text)))
    assert complaint(text) or complaint(text, "new-coupling")


def test_pieces_in_a_case_must_be_whole_since_a_case_replaces_them_together(validator):
    change = "couplings.flex-block = { stiffness"
    whole = edited(change, 'shafts.pinion-shaft = { pieces = [{ od = "1 mm", length = "1 mm" }] }\n' + change)
    assert validator.is_valid(dated(tomllib.loads(whole)))
    assert not validator.is_valid(dated(tomllib.loads(whole.replace(', length = "1 mm"', ""))))
