"""Which column of a mass-elastic table holds what, and what a heading may not leave open."""

from __future__ import annotations

import re

from quillshaft.train.mass_table.cells import Grid
from quillshaft.train.mass_table.headings import (
    Column,
    Role,
    column_of,
    is_unit,
    misplaced_power,
    role_of,
    split_heading,
)
from quillshaft.train.quantity import QuantityError

INERTIAS: tuple[Role, ...] = ("inertia", "wr2", "gd2")
SPRINGS: tuple[Role, ...] = ("stiffness", "flexibility")


def is_heading(grid: Grid, index: int) -> bool:
    """Whether a row holds the headings: an inertia and a stiffness among them."""
    roles = {role_of(split_heading(cell)[0]) or role_of(cell) for cell in grid.cells[index] if cell}
    powers = any(misplaced_power(cell) for cell in grid.cells[index])
    return bool(roles & set(INERTIAS)) and (bool(roles & set(SPRINGS)) or powers)


def columns_of(grid: Grid, head: int, problems: list[str], said: list[str]) -> tuple[dict[Role, Column], int]:
    """Columns by what they hold, and whether a row of units follows the headings (1) or not (0)."""
    below = grid.cells[head + 1] if head + 1 < len(grid.cells) else ()
    units = int(_is_unit_row(grid.cells[head], below))
    columns: dict[Role, Column] = {}
    for index, heading in enumerate(grid.cells[head]):
        if not heading:
            continue
        if problem := _bad_heading(heading):
            problems.append(f"{grid.name}, heading {heading!r}: {problem}")
            continue
        try:
            column = column_of(heading, index, below[index] if units else "")
        except QuantityError as error:
            problems.append(f"{grid.name}, heading {heading!r}: {error.message}. Allowed: {error.allowed}")
            continue
        if column is None:
            said.append(f"Column {heading!r} is not known and is left out.")
        elif column.role in columns:
            first = columns[column.role].heading
            problems.append(f"{grid.name}: the columns {first!r} and {heading!r} both hold {column.role}: leave one")
        else:
            columns[column.role] = column
            said.append(f"Column {heading!r}: {_meaning(column)}.")
    _check_columns(grid, columns, problems)
    return columns, units


def _is_unit_row(heads: tuple[str, ...], below: tuple[str, ...]) -> bool:
    pairs = [(role_of(split_heading(head)[0]), cell) for head, cell in zip(heads, below, strict=False) if cell]
    held = [(role, cell) for role, cell in pairs if role in (*INERTIAS, *SPRINGS)]
    return bool(held) and all(is_unit(cell, role) for role, cell in held if role is not None)


def _bad_heading(heading: str) -> str | None:
    power = misplaced_power(heading)
    if power is not None:
        help_text = 'put it into the brackets with the unit, such as "k [10^6 N m/rad]"'
        return f"the power of ten ({power}) stands outside the unit, so that it can multiply or divide: {help_text}"
    if re.search(r"\bref(?:\.|erred|'d)?\b", heading.lower()):
        return "referred values: give the actual ones, each at its own shaft's speed (referred = actual · ratio²)"
    return None


def _meaning(column: Column) -> str:
    words = {"stiffness": "stiffness to the next station", "flexibility": "flexibility to the next station"}
    what = words.get(column.role, {"wr2": "WR²", "gd2": "GD² = 4 J", "number": "number, not used"}.get(column.role))
    what = what or {"link": "name of the connection to the next station"}.get(column.role, column.role)
    unit = f" in {column.unit}" if column.unit else ""
    return f"{what}{unit}" + (f", each times 10^{column.exponent}" if column.exponent else "")


def _check_columns(grid: Grid, columns: dict[Role, Column], problems: list[str]) -> None:
    for group, words in ((INERTIAS, "inertia"), (SPRINGS, "stiffness"), (("speed", "ratio"), "speed")):
        held = [columns[role].heading for role in group if role in columns]
        if len(held) > 1:
            problems.append(f"{grid.name}: {' and '.join(map(repr, held))} both give the {words}: leave one")
        if not held and words != "speed":
            problems.append(f"{grid.name}: no column of {words} is recognised")
