"""Cases: a partial train file laid over the base, table by table, element by element, key by key."""

from __future__ import annotations

import copy
from typing import Any

from quillshaft.train.document import Document, line_of
from quillshaft.train.problems import Problem, TrainFileError, did_you_mean

PLAIN_TABLES = frozenset(("train", "operation", "power", "excitations-off", "criteria", "assumptions", "sign-off"))
KEYED_TABLES = frozenset(
    ("stations", "shafts", "couplings", "gears", "ties", "machines", "excitations", "dismissals", "materials")
)
ALTERNATIVES = (
    frozenset(("inertia", "wr2", "gd2")),
    frozenset(("stiffness", "flexibility", "equivalent", "pieces")),
    frozenset(("order", "frequency")),
    frozenset(("psi", "loss-factor")),
)

Data = dict[str, Any]
PathParts = tuple[str | int, ...]


def case_names(data: Data) -> tuple[str, ...]:
    """Names of the cases in file order; empty where there are none."""
    cases = data.get("cases")
    return tuple(cases) if isinstance(cases, dict) else ()


def _merge_element(base: Data, over: Data) -> Data:
    replaced = {key for group in ALTERNATIVES if group & set(over) for key in group}
    kept = {key: value for key, value in base.items() if key not in replaced}
    return {**kept, **over}


def _merge_table(name: str, base: Any, over: Any) -> Any:
    if not isinstance(base, dict) or not isinstance(over, dict):
        return over
    if name in PLAIN_TABLES:
        return {**base, **over}
    merged = dict(base)
    for element, row in over.items():
        if isinstance(row, dict) and row.get("omit") is True:
            merged.pop(element, None)
        elif isinstance(row, dict) and isinstance(base.get(element), dict):
            merged[element] = _merge_element(base[element], row)
        else:
            merged[element] = row
    return merged


def _case_problems(document: Document, name: str, case: Any, base: Data) -> list[Problem]:
    path: PathParts = ("cases", name)

    def problem(where: PathParts, seen: str | None, message: str, allowed: str | None) -> Problem:
        return Problem(document.name, line_of(document, where), where, seen, message, allowed)

    if not isinstance(case, dict):
        return [problem(path, repr(case), "a case is a table of changes", "couplings.NAME = { … }")]
    out = []
    for table, rows in case.items():
        if table == "because":
            if not isinstance(rows, str):
                out.append(problem((*path, table), repr(rows), "because is a sentence", "a string"))
        elif table not in PLAIN_TABLES | KEYED_TABLES:
            hint = did_you_mean(table, sorted(PLAIN_TABLES | KEYED_TABLES))
            out.append(problem((*path, table), None, f"a case cannot change a table of this name{hint}", None))
        elif table in KEYED_TABLES and isinstance(rows, dict):
            out += [
                problem((*path, table, element), None, f"there is no {element} to leave out", None)
                for element, row in rows.items()
                if isinstance(row, dict) and row.get("omit") is True and element not in base.get(table, {})
            ]
    return out


def lay_cases(document: Document, names: tuple[str, ...]) -> Data:
    """The file's data with the named cases laid over it in the given order; `cases` itself is kept.

    Raises TrainFileError for an unknown case, one that is no table of changes, or one that changes nothing.
    """
    data: Data = copy.deepcopy(document.data)
    known = case_names(data)
    for name in names:
        if name not in known:
            where: PathParts = ("cases", name)
            allowed = ", ".join(known) or "this file has no cases"
            message = f"there is no case {name!r}{did_you_mean(name, known)}"
            raise TrainFileError((Problem(document.name, line_of(document, where), where, None, message, allowed),))
        case = data["cases"][name]
        problems = _case_problems(document, name, case, data)
        if problems:
            raise TrainFileError(tuple(problems))
        changes = {table: rows for table, rows in case.items() if table != "because"}
        laid = {
            **data,
            **{table: _merge_table(table, data.get(table, {}), rows) for table, rows in changes.items()},
        }
        if laid == data:
            where = ("cases", name)
            raise TrainFileError(
                (
                    Problem(
                        document.name,
                        line_of(document, where),
                        where,
                        None,
                        "this case changes nothing",
                        None,
                    ),
                )
            )
        data = laid
    return data


def written_at(document: Document, cases: tuple[str, ...], path: PathParts) -> PathParts:
    """Where a value of the overlaid data was written: in the last case that states it, or the base.

    Follows the longest part of `path` that a case states below its table.
    """
    for name in reversed(cases):
        node: Any = document.data.get("cases", {}).get(name, {})
        depth = 0
        for part in path:
            if not (isinstance(node, dict) and part in node):
                break
            node, depth = node[part], depth + 1
        base: Any = document.data
        base_depth = 0
        for part in path:
            if not (isinstance(base, dict) and part in base):
                break
            base, base_depth = base[part], base_depth + 1
        if depth > 1 and depth >= min(base_depth, len(path)):
            return ("cases", name, *path)
    return path
