"""Raw data of the file into validated rows, collecting every problem on the way."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from pydantic import BaseModel, ValidationError

from quillshaft.train.document import Document, line_of
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.overlay import KEYED_TABLES, PLAIN_TABLES, PathParts, written_at
from quillshaft.train.problems import Problem, did_you_mean
from quillshaft.train.rows import (
    CouplingRow,
    DismissalRow,
    EpicyclicRow,
    ExcitationRow,
    GearRow,
    MaterialRow,
    ShaftRow,
    StationRow,
    TieRow,
)
from quillshaft.train.tables import AssumptionsTable, CriteriaTable, OperationTable, SignOffTable, TrainTable

ROWS: dict[str, type[BaseModel]] = {
    "stations": StationRow,
    "shafts": ShaftRow,
    "couplings": CouplingRow,
    "ties": TieRow,
    "excitations": ExcitationRow,
    "dismissals": DismissalRow,
    "materials": MaterialRow,
}
PLAIN: dict[str, type[BaseModel]] = {
    "train": TrainTable,
    "operation": OperationTable,
    "criteria": CriteriaTable,
    "assumptions": AssumptionsTable,
    "sign-off": SignOffTable,
}
GEAR_ROWS: dict[str, type[BaseModel]] = {"mesh": GearRow, "epicyclic": EpicyclicRow}
TOP_LEVEL = sorted(PLAIN_TABLES | KEYED_TABLES | {"schema", "cases"})
MOST_PROBLEMS = 200


@dataclass
class Findings:
    """The problems met so far in one file, and the means to place them."""

    document: Document
    cases: tuple[str, ...]
    problems: list[Problem] = field(default_factory=list)

    def add(self, path: PathParts, message: str, seen: Any = None, allowed: str | None = None) -> None:
        """Note a problem at `path` of the overlaid data; it is reported where its value was written."""
        if len(self.problems) >= MOST_PROBLEMS:
            return
        where = written_at(self.document, self.cases, path)
        text = None if seen is None else shown(seen)
        line = line_of(self.document, where)
        self.problems.append(Problem(self.document.name, line, where, text, message, allowed))


@dataclass(frozen=True)
class Rows:
    """The validated rows: by table and name, the plain tables by name; broken ones are absent."""

    keyed: dict[str, dict[str, Any]]
    plain: dict[str, Any]
    declared: dict[str, tuple[str, ...]]
    notes: tuple[tuple[str, str, str], ...]


def shown(value: Any) -> str:
    """A value as the file would spell it, cut to a readable length."""
    if isinstance(value, bool):
        text = "true" if value else "false"
    elif isinstance(value, str):
        text = f'"{value}"'
    elif isinstance(value, dict):
        text = "{ " + ", ".join(f"{key} = …" for key in list(value)[:4]) + " }"
    else:
        text = str(value) if not isinstance(value, int) or abs(value) < 10**30 else "a number of over 30 digits"
    return text if len(text) <= 80 else text[:77] + "…"


def _message(error: Any, row: type[BaseModel]) -> tuple[str, str | None]:
    kind, context = error["type"], error.get("ctx", {})
    if kind == "train_file":
        return context["message"], context["allowed"]
    if kind == "missing":
        return "is missing", None
    if kind == "extra_forbidden":
        known = [item.alias or name for name, item in row.model_fields.items()]
        key = str(error["loc"][-1])
        hint = did_you_mean(key, known) if len(error["loc"]) == 1 else ""
        return f"is not a key of this table{hint}", ", ".join(known) if len(error["loc"]) == 1 else None
    if kind == "literal_error":
        word = error["input"]
        options = [item.strip(" '") for item in context["expected"].replace(" or ", ", ").split(",")]
        hint = did_you_mean(word, options) if isinstance(word, str) else ""
        return f"is not one of the words allowed here{hint}", " | ".join(options)
    text = error["msg"]
    return text[0].lower() + text[1:], None


def _validate(row: type[BaseModel], data: Any, path: PathParts, findings: Findings, context: Any) -> Any:
    try:
        return row.model_validate(data, context=context)
    except ValidationError as errors:
        for error in errors.errors(include_url=False):
            loc = tuple(part for part in error["loc"] if isinstance(part, (str, int)))
            message, allowed = _message(error, row)
            seen = None if error["type"] in ("missing", "extra_forbidden") or not loc else error["input"]
            findings.add((*path, *loc), message, seen, allowed)
        return None


def _row_class(table: str, name: str, data: Any, findings: Findings) -> type[BaseModel] | None:
    if table not in ("machines", "gears"):
        return ROWS[table]
    classes: dict[str, Any] = MACHINE_ROWS if table == "machines" else GEAR_ROWS
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
        findings.add((table,), "is not a table of named rows", data, f"[{table}] with one row for each name")
        return rows, notes
    for name, row in data.items():
        if not isinstance(row, dict):
            findings.add((table, name), "is not a row", row, f"{name} = {{ key = value, … }}")
            continue
        if not 1 <= len(name) <= 80 or any(ord(letter) < 32 for letter in name):
            findings.add((table, name), "this name is empty, too long or holds control characters", name)
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
            findings.add((table,), f"there is no table of this name{did_you_mean(table, TOP_LEVEL)}", None)
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
