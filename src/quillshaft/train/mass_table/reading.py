"""A grid of cells into the stations, springs and meshes of a chain: what is meant is said, what is odd is refused."""

from __future__ import annotations

import re
from dataclasses import field

from quillshaft.records import dataclass
from quillshaft.train.mass_table.cells import Grid, MassTableError
from quillshaft.train.mass_table.columns import INERTIAS, SPRINGS, columns_of, is_heading
from quillshaft.train.mass_table.headings import MEASURE, Column, Role
from quillshaft.train.quantity import QuantityError, read_quantity

RIGID = frozenset(("rigid", "inf", "infinite", "infinity", "∞", "-", "–", "—", "n/a", "gear", "mesh"))
TOTAL = re.compile(r"(?:total|sum|Σ|∑|subtotal)\b.*", re.IGNORECASE)
_LEADING = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
_PLAIN = re.compile(r"([+-]?)([0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE]([+-]?[0-9]+))?")


@dataclass(frozen=True)
class Entry:
    """A row of the table: a station, with what leads from it to the next one; texts are as the train file takes them.

    row        its number in the file
    key        inertia | wr2 | gd2; `inertia` its quantity
    spring     (stiffness or flexibility, quantity) to the next station; None where the table has none
    speed      number and unit, or a ratio; `pace` the same as rad/s or ratio, `half` its half last digit
    link       name of the connection where the table has one; remark says what kind it is
    """

    row: int
    station: str
    key: str
    inertia: str
    spring: tuple[str, str] | None = None
    speed: str | None = None
    pace: float | None = None
    half: float = 0.0
    teeth: int | None = None
    link: str | None = None
    remark: str = ""


@dataclass(frozen=True)
class MassTable:
    """What a mass-elastic table says: its rows in order, whether paces are ratios, and how it was read."""

    name: str
    entries: tuple[Entry, ...]
    ratios: bool
    said: tuple[str, ...]


@dataclass
class _Row:
    """One row of cells with its columns, and the problems that it meets."""

    grid: Grid
    index: int
    columns: dict[Role, Column]
    problems: list[str] = field(default_factory=list)

    @property
    def number(self) -> int:
        return self.grid.numbers[self.index]

    def text(self, role: Role) -> str:
        column = self.columns.get(role)
        return self.grid.cells[self.index][column.index] if column else ""

    def complain(self, role: Role, message: str) -> None:
        heading, seen = self.columns[role].heading, self.text(role)
        cell = f" {seen!r}" if seen else ""
        self.problems.append(f"{self.grid.name}, row {self.number}, column {heading!r}:{cell} {message}")


def read_mass_table(grids: tuple[Grid, ...]) -> MassTable:
    """The first sheet that has an inertia and a stiffness column.

    Raises MassTableError with every problem found when there is none, or a row of it cannot be used.
    """
    for grid in grids:
        for index in range(len(grid.cells)):
            if is_heading(grid, index):
                return _table(grid, index)
    grid = grids[0]
    seen = " | ".join(cell for cell in grid.cells[0] if cell)
    wanted = (
        "one row of headings with an inertia and a stiffness, such as: station; J [kg m^2]; k [MNm/rad]; speed [rpm]"
    )
    raise MassTableError(
        [f"{grid.name}: no row of headings is recognised; the first row reads: {seen}. Allowed: {wanted}"]
    )


def _table(grid: Grid, head: int) -> MassTable:
    problems: list[str] = []
    said = list(grid.said)
    if head:
        said.append(f"Rows before the headings in row {grid.numbers[head]} are taken as a title and left out.")
    columns, unit_row = columns_of(grid, head, problems, said)
    if problems:
        raise MassTableError(problems)
    entries = _entries(grid, head + 1 + unit_row, columns, problems, said)
    if len(entries) < 2 and not problems:
        problems.append(f"{grid.name}: {len(entries)} station(s) below the headings: a train needs two or more")
    if problems:
        raise MassTableError(problems)
    return MassTable(grid.name, tuple(entries), "ratio" in columns, tuple(said))


def _entries(grid: Grid, first: int, columns: dict[Role, Column], problems: list[str], said: list[str]) -> list[Entry]:
    entries: list[Entry] = []
    names: dict[str, int] = {}
    key = next(role for role in INERTIAS if role in columns)
    for index in range(first, len(grid.cells)):
        row = _Row(grid, index, columns, problems)
        if TOTAL.fullmatch(row.text("station")) or TOTAL.fullmatch(row.text("number")):
            said.append(f"Row {row.number} ({row.text('station') or row.text('number')}) is a total and is left out.")
            continue
        if not row.text(key) and _spring(row) is not None and entries:
            entries[-1] = _with_link(entries[-1], row)
            continue
        entries.append(_entry(row, key, names, said))
    return entries


def _with_link(before: Entry, row: _Row) -> Entry:
    """A row with a stiffness and no inertia is the link between the stations above and below it."""
    role = next(role for role in SPRINGS if role in row.columns)
    if before.spring is not None:
        row.complain(role, "a second stiffness after the same station: give the inertia of a station between them")
        return before
    name = row.text("link") or row.text("station") or None
    return Entry(
        before.row, before.station, before.key, before.inertia, _spring(row), before.speed, before.pace, before.half,
        before.teeth, name or before.link, row.text("remark") or before.remark,
    )  # fmt: skip


def _entry(row: _Row, key: Role, names: dict[str, int], said: list[str]) -> Entry:
    inertia = _quantity(row, key)
    if not row.text(key):
        row.complain(key, "is blank. Allowed: a number, 0 for a station without inertia")
    paces: tuple[Role, ...] = ("speed", "ratio")
    pace_role = next((role for role in paces if role in row.columns), None)
    speed, pace, half = _pace(row, pace_role) if pace_role else (None, None, 0.0)
    return Entry(
        row.number,
        _name(row, names, said),
        key,
        inertia or "0",
        _spring(row),
        speed,
        pace,
        half,
        _teeth(row),
        row.text("link") or None,
        row.text("remark"),
    )


def _name(row: _Row, names: dict[str, int], said: list[str]) -> str:
    """The station's name, made unique; a number where it has none."""
    given = row.text("station")[:70] or f"station {row.text('number') or len(names) + 1}"
    given = f"{given} 1" if given in ("fixed", "balance", "law") else given
    count = names[given] = names.get(given, 0) + 1
    if count == 1:
        return given
    fresh = f"{given} {count}"
    names[fresh] = 1
    said.append(f"Row {row.number}: the name {given} stands above already; this station is called {fresh}.")
    return fresh


def _spring(row: _Row) -> tuple[str, str] | None:
    role = next(role for role in SPRINGS if role in row.columns)
    text = row.text(role)
    if not text or text.lower() in RIGID or re.fullmatch(r"0+(?:\.0*)?", text):
        return None
    quantity = _quantity(row, role)
    return None if quantity is None else (role, quantity)


def _quantity(row: _Row, role: Role) -> str | None:
    """A cell as the train file takes it: its own digits, the power of the column, the unit. None where unreadable."""
    text, column = row.text(role), row.columns[role]
    if not text:
        return None
    found = _PLAIN.fullmatch(text)
    if found:
        exponent = int(found[3] or 0) + column.exponent
        number = f"{found[1].replace('+', '')}{found[2]}" + (f"e{exponent}" if exponent else "")
        if column.unit is None:
            row.complain(role, 'has no unit: write it into the heading, such as "J [kg m^2]" or "k [MNm/rad]"')
            return None
        text = f"{number} {column.unit}"
    elif column.exponent:
        row.complain(role, "carries a unit of its own below a heading with a power of ten: leave one of the two")
        return None
    try:
        read_quantity(text, MEASURE[role], "SI")
    except QuantityError as error:
        row.complain(role, f"{error.message}. Allowed: {error.allowed}")
        return None
    return text


def _pace(row: _Row, role: Role) -> tuple[str | None, float | None, float]:
    """(text, value, half of its last digit) of the row's speed or ratio; blank is as in the row above."""
    text = row.text(role)
    if not text:
        return None, None, 0.0
    if role == "ratio":
        found = _PLAIN.fullmatch(text)
        value = abs(float(text)) if found else 0.0
        if not value:
            row.complain(role, "is no ratio. Allowed: speed over the speed of the first row, a number other than 0")
            return None, None, 0.0
        return text, value, 0.5 * _last_digit(text) if "." in text else 0.0
    speed = _quantity(row, "speed")
    if speed is None:
        return None, None, 0.0
    value = read_quantity(speed, "speed", "SI").value
    if value == 0:
        row.complain(role, "stands still: leave what does not turn out of the table")
        return None, None, 0.0
    leading = _LEADING.match(speed)
    number = leading[0] if leading else "1"
    return speed, value, 0.5 * _last_digit(number) * value / float(number)


def _last_digit(number: str) -> float:
    """Worth of the last digit written: 1 of 1487, 0.01 of 560.04."""
    mantissa, _, exponent = number.lower().partition("e")
    decimals = len(mantissa.partition(".")[2])
    return float(10.0 ** (int(exponent or 0) - decimals))


def _teeth(row: _Row) -> int | None:
    text = row.text("teeth")
    if not text or text in RIGID:
        return None
    if not re.fullmatch(r"[0-9]+", text) or not 3 <= int(text) <= 5000:
        row.complain("teeth", "is no number of teeth. Allowed: a whole number from 3 to 5000")
        return None
    return int(text)
