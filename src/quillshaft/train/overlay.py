"""Cases: a partial train file laid over the base, table by table, element by element, key by key."""

from __future__ import annotations

import copy
from typing import Any

from quillshaft.train.document import Document, line_of
from quillshaft.train.problems import Problem, TrainFileError, did_you_mean, shown

PLAIN_TABLES = frozenset(("train", "operation", "power", "excitations-off", "criteria", "assumptions", "sign-off"))
KEYED_TABLES = frozenset(
    (
        "stations",
        "shafts",
        "couplings",
        "gears",
        "belts",
        "joints",
        "ties",
        "dampers",
        "machines",
        "excitations",
        "dismissals",
        "materials",
        "amplitudes",
    )
)
ALTERNATIVES = (
    frozenset(("inertia", "wr2", "gd2")),
    frozenset(("stiffness", "flexibility", "equivalent", "pieces", "throw")),
    frozenset(("order", "frequency")),
    frozenset(("stiffness", "tuned-frequency")),
    frozenset(("stiffness", "span-stiffness")),
    frozenset(("stiffness", "synchronizing")),
    frozenset(("psi", "loss-factor", "viscous")),
)
RIVALS = (
    frozenset(("permitted-stress", "passing-stress")),
    frozenset(("permitted-torque", "passing-torque")),
)
"""Keys that stand together, and give way to those of the other group."""
PROPULSION = frozenset(("propulsion-kind", "propulsion-form"))
PARTS = {"criteria": ("strength", "duty")}
"""Tables within tables that a case changes key by key."""

OMIT = {"omit": True}
Data = dict[str, Any]
PathParts = tuple[str | int, ...]


def case_names(data: Data) -> tuple[str, ...]:
    """Names of the cases in file order; empty where there are none."""
    cases = data.get("cases")
    return tuple(cases) if isinstance(cases, dict) else ()


def _merge_element(base: Data, over: Data) -> Data:
    replaced = {key for group in ALTERNATIVES if group & set(over) for key in group}
    for group, other in (RIVALS, RIVALS[::-1]):
        replaced |= other if group & set(over) else set()
    if over.get("strength-rule", "propulsion") != "propulsion":
        replaced |= PROPULSION
    kept = {key: value for key, value in base.items() if key not in replaced}
    return {**kept, **over}


def _merge_parts(name: str, base: Data, over: Data) -> Data:
    """What a case says of a plain table, with the parts that it changes laid over those of the base."""
    out = dict(over)
    for key in PARTS.get(name, ()):
        below, above = base.get(key), over.get(key)
        if isinstance(below, dict) and isinstance(above, dict) and above != OMIT:
            out[key] = {**below, **above}
    return out


def _spelled_out(table: str, rows: Any) -> Any:
    """The rows of [amplitudes] as tables: a text alone stands for its torque. Other tables as they are."""
    if table != "amplitudes" or not isinstance(rows, dict):
        return rows
    alone = {name for name, row in rows.items() if isinstance(row, str | int | float) and not isinstance(row, bool)}
    return {name: {"torque": row} if name in alone else row for name, row in rows.items()}


def _merge_table(name: str, base: Any, over: Any) -> Any:
    if not isinstance(base, dict) or not isinstance(over, dict):
        return over
    if name in PLAIN_TABLES:
        laid = {**base, **_merge_parts(name, base, over)}
        return {key: value for key, value in laid.items() if value != OMIT}
    merged = dict(base)
    for element, row in over.items():
        if isinstance(row, dict) and row.get("omit") is True:
            merged.pop(element, None)
        elif isinstance(row, dict) and isinstance(base.get(element), dict):
            merged[element] = _merge_element(base[element], row)
        else:
            merged[element] = row
    return merged


def _problem(
    document: Document, where: PathParts, message: str, seen: Any = None, allowed: str | None = None
) -> Problem:
    text = None if seen is None else shown(seen)
    return Problem(document.name, line_of(document, where), where, text, message, allowed)


def _case_problems(document: Document, name: str, case: Any, base: Data) -> list[Problem]:
    path: PathParts = ("cases", name)
    if not isinstance(case, dict):
        return [_problem(document, path, "a case is a table of changes", case, "couplings.NAME = { … }")]
    out = []
    for table, rows in case.items():
        if table == "because":
            if not isinstance(rows, str):
                out.append(_problem(document, (*path, table), "is not a sentence", rows, "the reason, in quotes"))
        elif table not in PLAIN_TABLES | KEYED_TABLES:
            known = sorted(PLAIN_TABLES | KEYED_TABLES)
            hint = did_you_mean(table, known)
            allowed = None if hint else ", ".join(["because", *known])
            message = f"a case cannot change a table of this name{hint}"
            out.append(_problem(document, (*path, table), message, None, allowed))
        elif table in KEYED_TABLES and isinstance(rows, dict):
            elements = base.get(table) if isinstance(base.get(table), dict) else {}
            for element, row in rows.items():
                if isinstance(row, dict) and "omit" in row:
                    out += _omit_problems(document, (*path, table, element), row, list(elements or {}))
    return out


def _omit_problems(document: Document, path: PathParts, row: Data, known: list[str]) -> list[Problem]:
    if row["omit"] is not True:
        allowed = "omit = true, or no omit at all"
        return [_problem(document, (*path, "omit"), "does not leave the element out", row["omit"], allowed)]
    element = str(path[-1])
    if element not in known:
        hint = did_you_mean(element, known)
        return [_problem(document, path, f"there is no {element} to leave out{hint}", None, ", ".join(known) or None)]
    if len(row) > 1:
        others = ", ".join(key for key in row if key != "omit")
        return [_problem(document, path, f"omit = true leaves the element out, and {others} with it")]
    return []


def lay_cases(document: Document, names: tuple[str, ...]) -> Data:
    """The file's data with the named cases laid over it in the given order; `cases` itself is kept.

    A text alone in [amplitudes] becomes a row with it as `torque`.

    Raises TrainFileError for an unknown case, one that is no table of changes, or one that changes nothing.
    """
    data: Data = copy.deepcopy(document.data)
    data = {table: _spelled_out(table, rows) for table, rows in data.items()}
    known = case_names(data)
    for position, name in enumerate(names):
        if name not in known:
            message = f'there is no case "{name}"{did_you_mean(name, known)}'
            allowed = ", ".join(known) or "this file has no cases"
            raise TrainFileError([Problem(document.name, line_of(document, ("cases",)), (), None, message, allowed)])
        case = data["cases"][name]
        problems = _case_problems(document, name, case, data)
        if problems:
            raise TrainFileError(problems)
        changes = {table: _spelled_out(table, rows) for table, rows in case.items() if table != "because"}
        laid = {
            **data,
            **{table: _merge_table(table, data.get(table, {}), rows) for table, rows in changes.items()},
        }
        if laid == data:
            why = "changes nothing" if position == 0 else "changes nothing after the cases before it"
            twice = "is laid twice" if name in names[:position] else why
            raise TrainFileError([_problem(document, ("cases", name), f"this case {twice}")])
        data = laid
    return data


def added_by(document: Document, cases: tuple[str, ...], table: str, element: str) -> str | None:
    """The case that adds an element which the base does not have; None where the base has it."""
    base = document.data.get(table)
    if isinstance(base, dict) and element in base:
        return None
    for name in cases:
        rows = document.data["cases"][name].get(table)
        if isinstance(rows, dict) and element in rows:
            return name
    return None


def written_at(document: Document, cases: tuple[str, ...], path: PathParts) -> PathParts:
    """Where a value of the overlaid data was written: in the last case that states it, or the base.

    Follows the longest part of `path` that a case states; a table that a case only adds rows to is the base's.
    """
    base_depth, _ = _reach(document.data, path)
    for name in reversed(cases):
        depth, node = _reach(document.data.get("cases", {}).get(name, {}), path)
        stated = depth > 1 or (depth == 1 and (base_depth == 0 or not isinstance(node, dict)))
        if stated and depth >= min(base_depth, len(path)):
            return ("cases", name, *path)
    return path


def _reach(node: Any, path: PathParts) -> tuple[int, Any]:
    """How many parts of the path lead on from a table, and what stands at the last of them."""
    depth = 0
    for part in path:
        if not (isinstance(node, dict) and part in node):
            break
        node, depth = node[part], depth + 1
    return depth, node
