"""A table file as a grid of texts: the separator, the decimal mark and the encoding are found and said."""

from __future__ import annotations

import csv
import io
import re
from itertools import islice
from pathlib import Path

from quillshaft.records import dataclass

SEPARATORS = {";": "semicolon", "\t": "tab", ",": "comma", "|": "bar"}
MOST_ROWS = 5000
_COMMA_NUMBER = re.compile(r"[+-]?[0-9]+,[0-9]+(?:[eE][+-]?[0-9]+)?")
_POINT_NUMBER = re.compile(r"[+-]?[0-9]*\.[0-9]+(?:[eE][+-]?[0-9]+)?")


class MassTableError(ValueError):
    """A table that cannot be used: every problem found, one on a line."""

    def __init__(self, problems: list[str]) -> None:
        super().__init__("\n".join(problems))
        self.problems = tuple(problems)


@dataclass(frozen=True)
class Grid:
    """The cells of a table as texts with a decimal point, by row; `first_row` counts as the file does, from 1.

    name       of the file
    numbers    the row number in the file of each row of `cells`
    said       how the file was read, in sentences
    """

    name: str
    cells: tuple[tuple[str, ...], ...]
    numbers: tuple[int, ...]
    said: tuple[str, ...]


def read_grids(path: Path) -> tuple[Grid, ...]:
    """The sheets of a spreadsheet (.xlsx), or the one table of a text file (any other ending).

    Raises MassTableError when the file cannot be read, holds nothing, or is a spreadsheet and openpyxl is missing.
    """
    try:
        grids = _sheets(path) if path.suffix.lower() in (".xlsx", ".xlsm") else (_text_table(path),)
    except OSError as error:
        raise MassTableError([f"{path}: cannot be read: {error.strerror or error}"]) from None
    filled = tuple(grid for grid in grids if grid.cells)
    if not filled:
        raise MassTableError([f"{path}: the table is empty"])
    return filled


def _text_table(path: Path) -> Grid:
    data, said = path.read_bytes(), []
    if b"\0" in data:
        raise MassTableError([f"{path}: this is no text: save it as CSV in UTF-8, or as .xlsx"])
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = data.decode("cp1252", errors="replace")
        said.append("The file is not UTF-8; it was read as Windows-1252: look at letters with accents.")
    lines = text.splitlines()
    mark = re.fullmatch(r'"?sep=(.)"?', lines[0]) if lines else None
    separator = mark[1] if mark else _separator(lines)
    text = "\n".join(["", *lines[1:]] if mark else lines)
    try:
        rows = list(csv.reader(io.StringIO(text, newline=""), delimiter=separator))
    except csv.Error as error:
        raise MassTableError([f"{path}: cannot be read as CSV: {error}"]) from None
    said.append(f"Columns are separated by a {SEPARATORS.get(separator, separator)}.")
    rows, comma = _decimal_point(path, rows, separator)
    if comma:
        said.append("Numbers have a decimal comma: 1,5 was read as 1.5.")
    return _grid(path.name, rows, said)


def _separator(lines: list[str]) -> str:
    """The separator that gives most columns in the most lines; a comma where none is found."""
    counts = {mark: sum(1 for line in lines if line.count(mark) >= 1) for mark in SEPARATORS}
    strong = [mark for mark in (";", "\t", "|") if counts[mark] and 2 * counts[mark] >= counts[","]]
    return max(strong, key=lambda mark: counts[mark]) if strong else ","


def _decimal_point(path: Path, rows: list[list[str]], separator: str) -> tuple[list[list[str]], bool]:
    """The rows with a decimal point in every number, and whether they had a comma."""
    cells = [cell.strip() for row in rows for cell in row]
    commas = [cell for cell in cells if _COMMA_NUMBER.fullmatch(cell)]
    points = [cell for cell in cells if _POINT_NUMBER.fullmatch(cell)]
    if not commas:
        return rows, False
    if separator == "," or points:
        other = f" and {points[0]} has a point" if points else " in a file separated by commas"
        message = f"{path}: {commas[0]} has a comma{other}: a decimal mark or a mark between thousands?"
        raise MassTableError([f"{message} Write every number with one decimal mark and no other."])
    swap = [[cell.replace(",", ".") if _COMMA_NUMBER.fullmatch(cell.strip()) else cell for cell in row] for row in rows]
    return swap, True


def _sheets(path: Path) -> tuple[Grid, ...]:
    try:
        from openpyxl import load_workbook  # type: ignore[import-untyped,unused-ignore]
    except ImportError:
        advice = 'install it with: pip install "quillshaft[xlsx]", or save the table as CSV'
        raise MassTableError([f"{path}: reading a spreadsheet needs the library openpyxl; {advice}"]) from None
    try:
        book = load_workbook(path, data_only=True)
    except OSError:
        raise
    except Exception as error:  # a damaged archive fails in many ways
        raise MassTableError([f"{path}: cannot be read as a spreadsheet: {error or type(error).__name__}"]) from None
    grids = []
    for sheet in book.worksheets:
        first = islice(sheet.iter_rows(values_only=True), MOST_ROWS + 1)
        rows = [[_cell(value) for value in row] for row in first]
        grids.append(_grid(f"{path.name}, sheet {sheet.title}", rows, [f"The sheet read is {sheet.title}."]))
    book.close()
    return tuple(grids)


def _cell(value: object) -> str:
    """A spreadsheet's value as text: whole numbers without a point, others with every digit that they hold."""
    if value is None:
        return ""
    if isinstance(value, float):
        return str(int(value)) if value.is_integer() and abs(value) < 1e15 else repr(value)
    return str(value)


def _grid(name: str, rows: list[list[str]], said: list[str]) -> Grid:
    if len(rows) > MOST_ROWS:
        raise MassTableError([f"{name}: more than {MOST_ROWS} rows: is this a mass-elastic table?"])
    kept = [(number, [" ".join(cell.split()) for cell in row]) for number, row in enumerate(rows, start=1)]
    kept = [(number, row) for number, row in kept if any(row)]
    width = max((len(row) for _, row in kept), default=0)
    cells = tuple(tuple(row + [""] * (width - len(row))) for _, row in kept)
    return Grid(name, cells, tuple(number for number, _ in kept), tuple(said))
