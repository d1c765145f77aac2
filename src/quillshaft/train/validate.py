"""Raw data of the file into validated rows, collecting every problem on the way."""

from __future__ import annotations

from dataclasses import field
from typing import Any

from pydantic import BaseModel, ValidationError

from quillshaft.records import dataclass
from quillshaft.train.coupling_rows import FluidCouplingRow
from quillshaft.train.damper_rows import DAMPER_ROWS
from quillshaft.train.document import Document, line_of
from quillshaft.train.duty_rows import AmplitudeRow
from quillshaft.train.gear_rows import BeltRow, BevelRow, EpicyclicRow, GearRow, JointRow
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.messages import refusal
from quillshaft.train.overlay import KEYED_TABLES, PLAIN_TABLES, PathParts, written_at
from quillshaft.train.problems import Problem, did_you_mean, shown
from quillshaft.train.rows import (
    CouplingRow,
    DismissalRow,
    ExcitationRow,
    MaterialRow,
    StationRow,
    TieRow,
)
from quillshaft.train.shaft_rows import ShaftRow
from quillshaft.train.tables import AssumptionsTable, CriteriaTable, OperationTable, SignOffTable, TrainTable

ROWS: dict[str, type[BaseModel]] = {
    "stations": StationRow,
    "shafts": ShaftRow,
    "couplings": CouplingRow,
    "ties": TieRow,
    "excitations": ExcitationRow,
    "dismissals": DismissalRow,
    "materials": MaterialRow,
    "belts": BeltRow,
    "joints": JointRow,
    "amplitudes": AmplitudeRow,
}
PLAIN: dict[str, type[BaseModel]] = {
    "train": TrainTable,
    "operation": OperationTable,
    "criteria": CriteriaTable,
    "assumptions": AssumptionsTable,
    "sign-off": SignOffTable,
}
GEAR_ROWS: dict[str, type[BaseModel]] = {"mesh": GearRow, "epicyclic": EpicyclicRow, "bevel": BevelRow}
TOP_LEVEL = sorted(PLAIN_TABLES | KEYED_TABLES | {"schema", "cases"})
MOST_PROBLEMS = 200
AMPLITUDE = '"1.5 %" of mean torque, "40 N m", or { torque = "1.5 %", source = "…" }'


@dataclass
class Findings:
    """The problems met so far in one file, and the means to place them."""

    document: Document
    cases: tuple[str, ...]
    problems: list[Problem] = field(default_factory=list)

    def add(self, path: PathParts, message: str, seen: Any = None, allowed: str | None = None) -> None:
        """Note a problem at `path` of the overlaid data; it is reported where its value was written."""
        if len(self.problems) >= MOST_PROBLEMS:
            if len(self.problems) == MOST_PROBLEMS:
                more = f"there are more than {MOST_PROBLEMS} problems; the others are not listed"
                self.problems.append(Problem(self.document.name, None, (), None, more, None))
            return
        where = written_at(self.document, self.cases, path)
        if path[0] == "amplitudes" and path[-1] == "torque" and not _holds(self.document.data, where):
            where = where[:-1]
        text = None if seen is None else _shown(seen)
        line = line_of(self.document, where)
        self.problems.append(Problem(self.document.name, line, where, text, message, allowed))


def _holds(data: Any, path: PathParts) -> bool:
    """Whether the file itself has the last key of a path in a table: a row written as one text does not."""
    for part in path[:-1]:
        data = data.get(part) if isinstance(data, dict) else None
    return isinstance(data, dict)


@dataclass(frozen=True)
class Rows:
    """The validated rows: by table and name, the plain tables by name; broken ones are absent."""

    keyed: dict[str, dict[str, Any]]
    plain: dict[str, Any]
    declared: dict[str, tuple[str, ...]]
    notes: tuple[tuple[str, str, str], ...]


def _shown(value: Any) -> str:
    """A value as the file would spell it; of a table, its first keys."""
    if isinstance(value, dict) and value:
        return "{ " + ", ".join(f"{str(key)[:30]} = …" for key in list(value)[:4]) + " }"
    return shown(value)


def _validate(row: type[BaseModel], data: Any, path: PathParts, findings: Findings, context: Any) -> Any:
    try:
        return row.model_validate(data, context=context)
    except ValidationError as errors:
        for error in errors.errors(include_url=False):
            found = refusal(error, row, context["system"])
            findings.add((*path, *found.loc), found.message, found.seen, found.allowed)
        return None


def _bad_name(name: str) -> str | None:
    if not name.strip():
        return "an empty name"
    if len(name) > 80:
        return f"a name of {len(name)} characters"
    return None if name.isprintable() else "a name with characters that do not print"


def _row_class(table: str, name: str, data: Any, findings: Findings) -> type[BaseModel] | None:
    if table == "couplings" and data.get("kind") == "fluid":
        return FluidCouplingRow
    classes: Any = {"machines": MACHINE_ROWS, "gears": GEAR_ROWS, "dampers": DAMPER_ROWS}.get(table)
    if classes is None:
        return ROWS[table]
    kind = data.get("kind", "mesh" if table == "gears" else None)
    found = classes.get(kind) if isinstance(kind, str) else None
    if found is None:
        hint = did_you_mean(kind, list(classes)) if isinstance(kind, str) else ""
        what = "is missing" if kind is None else f"is not a kind that is known{hint}"
        findings.add((table, name, "kind"), what, kind, " | ".join(classes))
    return found


def _keyed_table(table: str, data: Any, system: str, findings: Findings) -> tuple[dict[str, Any], list[Any]]:
    rows: dict[str, Any] = {}
    notes: list[tuple[str, str, str]] = []
    if not isinstance(data, dict):
        doubled = isinstance(data, list) and data and isinstance(data[0], dict)
        advice = f"[{table}] in single brackets" if doubled else f"[{table}] with one row for each name"
        findings.add((table,), "is not a table of named rows", None if doubled else data, advice)
        return rows, notes
    for name, row in data.items():
        if not isinstance(row, dict):
            allowed = AMPLITUDE if table == "amplitudes" else "{ key = value, … }"
            findings.add((table, name), "is not a row of keys and values", row, allowed)
            continue
        if reason := _bad_name(name):
            findings.add((table, name), reason, None, "1 to 80 characters that print")
            continue
        row_class = _row_class(table, name, row, findings)
        if row_class is None:
            continue
        said: list[tuple[str, str]] = []
        value = _validate(row_class, row, (table, name), findings, {"system": system, "notes": said})
        notes += [(f"{table}.{name}", key, note) for key, note in said]
        if value is not None:
            rows[name] = value
    return rows, notes


def validate(data: dict[str, Any], findings: Findings) -> Rows:
    """Every table of the overlaid data as rows; what is wrong goes to `findings`."""
    for table in data:
        if table not in TOP_LEVEL:
            hint = did_you_mean(table, TOP_LEVEL)
            allowed = None if hint else ", ".join(TOP_LEVEL)
            findings.add((table,), f"there is no table of this name{hint}", None, allowed)
    schema = data.get("schema")
    if schema != 1 or isinstance(schema, bool):
        findings.add(("schema",), "is missing" if schema is None else "is not a schema this version reads", schema, "1")
    train = data.get("train")
    units = train.get("units") if isinstance(train, dict) else None
    system = units if units in ("SI", "US") else "SI"
    plain: dict[str, Any] = {}
    for table, row_class in PLAIN.items():
        if table not in data and table in ("train", "operation"):
            findings.add((table,), "this table is missing", None, f"[{table}] with {_needed(row_class)}")
            continue
        plain[table] = _validate(row_class, data.get(table, {}), (table,), findings, {"system": system, "notes": []})
    keyed: dict[str, dict[str, Any]] = {}
    notes: list[tuple[str, str, str]] = []
    for table in sorted(KEYED_TABLES):
        keyed[table], said = _keyed_table(table, data.get(table, {}), system, findings)
        notes += said
    declared = {table: tuple(data[table]) if isinstance(data.get(table), dict) else () for table in KEYED_TABLES}
    return Rows(keyed, plain, declared, tuple(notes))


def _needed(row: type[BaseModel]) -> str:
    return ", ".join(item.alias or name for name, item in row.model_fields.items() if item.is_required())
