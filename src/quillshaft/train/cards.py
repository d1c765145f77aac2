"""Indicator cards and tables of pressure harmonics (CSV), read with every problem placed by file and line."""

from __future__ import annotations

import math
import re
from dataclasses import field
from itertools import pairwise
from typing import Any

from quillshaft.records import dataclass
from quillshaft.train.named_files import NamedFile
from quillshaft.train.problems import Problem, shown
from quillshaft.train.quantity import QuantityError, read_quantity
from quillshaft.train.reciprocating_model import PressureCard, PressureOrders
from quillshaft.train.validate import Findings

FEWEST_POINTS = 36
LARGEST_STEP_DEG = 10.0
CLOSES_WITHIN = 0.02
"""A card closes where its ends differ by less than this share of its span of pressure (common practice)."""
EXAMPLE = 'a header such as "crank angle [deg], pressure [bar]" and one point a line'
ORDERS_EXAMPLE = 'a header such as "order, cosine [bar], sine [bar]" and one order a line'
_HEADING = re.compile(r"\s*\"?(.*?)\s*[\[(]\s*([^\])]*)\s*[\])]\s*\"?\s*")


@dataclass
class _Sheet:
    """A file cut into rows, and the means to report a problem on one of its lines."""

    name: str
    findings: Findings
    heads: list[tuple[str, str]] = field(default_factory=list)
    head_line: int = 1
    rows: list[tuple[int, list[float]]] = field(default_factory=list)
    sound: bool = True

    def refuse(self, line: int | None, message: str, seen: str | None = None, allowed: str | None = None) -> None:
        text = None if seen is None else shown(seen)
        self.findings.problems.append(Problem(self.name, line, (), text, message, allowed))
        self.sound = False


def read_card(name: str, path: tuple[Any, ...], turns: int, gauge: bool, findings: Findings) -> PressureCard | None:
    """An indicator card over one working cycle of `turns` turns; None where `findings` got a problem of it.

    Angles count from the firing (of a compressor: the outer) dead centre; the cycle may begin anywhere.
    """
    sheet = _open(name, path, findings, EXAMPLE)
    if sheet is None:
        return None
    angle, pressure = (_column(sheet, word, EXAMPLE) for word in ("angle", "pressure"))
    if angle is None or pressure is None:
        return None
    degree, bar = _unit(sheet, angle, "angle"), _unit(sheet, pressure, "pressure")
    if not sheet.sound:
        return None
    points = [(line, row[angle] * degree, row[pressure] * bar) for line, row in sheet.rows]
    return _closed(sheet, points, turns, gauge)


def _closed(sheet: _Sheet, points: list[tuple[int, float, float]], turns: int, gauge: bool) -> PressureCard | None:
    """The points as one closed cycle, turned so that it begins at 0; problems go to the sheet."""
    cycle, least_step = 360.0 * turns, math.radians(1e-6)
    if len(points) < FEWEST_POINTS:
        sheet.refuse(None, f"the card has {len(points)} points", None, f"at least {FEWEST_POINTS} a working cycle")
        return None
    for (_, before, _), (line, angle, _) in pairwise(points):
        step = math.degrees(angle - before)
        if angle <= before + least_step:
            sheet.refuse(line, "the crank angle does not rise", f"{math.degrees(angle):g} deg", "rising crank angles")
        elif step > LARGEST_STEP_DEG:
            sheet.refuse(line, f"a step of {step:.4g} degrees", None, f"steps of at most {LARGEST_STEP_DEG:g} degrees")
    if not gauge:
        for line, _, pressure in points:
            if pressure < 0:
                message, advice = "an absolute pressure below zero", 'pressure = "gauge" beside the card, if it is so'
                sheet.refuse(line, message, f"{pressure / 1e5:g} bar", advice)
    _check_closing(sheet, points, cycle)
    if not sheet.sound:
        return None
    values = [(angle, pressure) for _, angle, pressure in points]
    if math.degrees(values[-1][0] - values[0][0]) > cycle - 1e-6:
        values[0] = (values[0][0], 0.5 * (values[0][1] + values[-1][1]))
        values.pop()
    period = math.radians(cycle)
    turned = sorted((_within(angle, period), pressure) for angle, pressure in values)
    angles, pressures = (tuple(pair[column] for pair in turned) for column in (0, 1))
    return PressureCard(sheet.name, angles, pressures, period, gauge)


def _within(angle: float, period: float) -> float:
    """The angle brought into one period from 0; what is a rounding below the period is 0."""
    inside = angle % period
    return 0.0 if period - inside < 1e-9 else inside


def _check_closing(sheet: _Sheet, points: list[tuple[int, float, float]], cycle: float) -> None:
    """One working cycle, no more and no less, whose end meets its beginning."""
    line = points[-1][0]
    covered = math.degrees(points[-1][1] - points[0][1])
    steps = [math.degrees(b[1] - a[1]) for a, b in pairwise(points)]
    if covered > cycle + 1e-6:
        sheet.refuse(line, f"the card runs over {covered:.6g} degrees", None, f"one working cycle, {cycle:g} degrees")
        return
    if cycle - covered > 1.5 * max(steps):
        message = f"the card does not close: it covers {covered:.6g} of {cycle:g} degrees"
        sheet.refuse(line, message, None, f"one whole working cycle of {cycle:g} degrees")
        return
    pressures = [pressure for _, _, pressure in points]
    span = max(pressures) - min(pressures)
    gap = abs(pressures[-1] - pressures[0])
    repeated = cycle - covered < 1e-6
    jumps = max(abs(b - a) for a, b in pairwise(pressures))
    if gap > (CLOSES_WITHIN * span if repeated else max(2.0 * jumps, CLOSES_WITHIN * span)):
        message = f"the card does not close: its ends differ by {gap / 1e5:.4g} bar"
        sheet.refuse(line, message, None, f"ends within {CLOSES_WITHIN:.0%} of the card's {span / 1e5:.4g} bar")


def read_orders(name: str, path: tuple[Any, ...], turns: int, findings: Findings) -> PressureOrders | None:
    """Harmonics of tangential pressure: order, cosine, sine, optional dead-cosine and dead-sine; None as above."""
    sheet = _open(name, path, findings, ORDERS_EXAMPLE)
    if sheet is None:
        return None
    columns = [_column(sheet, word, ORDERS_EXAMPLE) for word in ("order", "cosine", "sine")]
    if None in columns:
        return None
    order, cosine, sine = (column or 0 for column in columns)
    dead = [index for word in ("dead-cosine", "dead-sine") for index in (_find(sheet, word),) if index is not None]
    factors = {index: _unit(sheet, index, "pressure") for index in (cosine, sine, *dead)}
    seen: set[float] = set()
    for line, row in sheet.rows:
        held = abs(row[order] * turns - round(row[order] * turns)) < 1e-9
        if row[order] < 0 or not held or row[order] in seen:
            what = "an order given twice" if row[order] in seen else "not an order of this working cycle"
            sheet.refuse(line, what, f"{row[order]:g}", "0.5, 1, 1.5 …" if turns == 2 else "1, 2, 3 …")
        seen.add(row[order])
    if len(dead) == 1:
        sheet.refuse(sheet.head_line, "dead-cosine and dead-sine belong together")
    if not sheet.sound:
        return None

    def rows(a: int, b: int) -> tuple[tuple[float, float, float], ...]:
        return tuple((row[order], row[a] * factors[a], row[b] * factors[b]) for _, row in sheet.rows)

    return PressureOrders(name, rows(cosine, sine), rows(dead[0], dead[1]) if dead else ())


def _open(name: str, path: tuple[Any, ...], findings: Findings, example: str) -> _Sheet | None:
    """The sheet of a file that the train file names at `path`; None where it cannot be read."""
    file = next((item for item in findings.document.files if item.name == name), None)
    if file is None or file.text is None:
        why = (file.why if file is not None else None) or "the file was not read"
        findings.add(path, why, name, "a file name relative to the train file, such as card.csv")
        return None
    sheet = _Sheet(name, findings)
    _cut(sheet, file, example)
    return sheet if sheet.sound else None


def _cut(sheet: _Sheet, file: NamedFile, example: str) -> None:
    lines = (file.text or "").splitlines()
    numbered = [(n, line) for n, line in enumerate(lines, start=1) if line.strip() and not line.startswith("#")]
    if not numbered:
        sheet.refuse(None, "the file is empty", None, example)
        return
    first, head = numbered[0]
    mark = next((sign for sign in ("\t", ";", ",") if sign in head), ",")
    if all(_number(cell, mark) is not None for cell in head.split(mark)):
        sheet.refuse(first, "the header row is missing", head[:60], example)
        return
    sheet.head_line = first
    sheet.heads = [_heading(cell) for cell in head.split(mark)]
    for line, text in numbered[1:]:
        cells = text.split(mark)
        while len(cells) > len(sheet.heads) and not cells[-1].strip():
            cells.pop()
        values = [_number(cell, mark) for cell in cells]
        if len(values) != len(sheet.heads):
            wanted = f"{len(sheet.heads)} numbers, as the header has columns"
            sheet.refuse(line, f"has {len(values)} columns", text[:60], wanted)
        elif None in values:
            sheet.refuse(line, "is not a number", cells[values.index(None)].strip()[:40], "a finite number")
        else:
            sheet.rows.append((line, [value or 0.0 for value in values]))
        if len(sheet.findings.problems) > 20:
            return
    if not sheet.rows and sheet.sound:
        sheet.refuse(first, "no line follows the header", None, example)


def _number(cell: str, mark: str) -> float | None:
    """A cell as a number; a decimal comma counts only where commas do not part the columns."""
    text = cell.strip().strip('"')
    if mark != "," and re.fullmatch(r"[+-]?[0-9]*,[0-9]+(?:[eE][+-]?[0-9]+)?", text):
        text = text.replace(",", ".")
    try:
        value = float(text)
    except ValueError:
        return None
    return value if math.isfinite(value) else None


def _heading(cell: str) -> tuple[str, str]:
    """(word in small letters with hyphens, unit) of a column's heading."""
    match = _HEADING.fullmatch(cell)
    word, unit = (match[1], match[2]) if match else (cell.strip().strip('"'), "")
    return re.sub(r"[\s_-]+", "-", word.strip().lower()), unit.strip()


def _find(sheet: _Sheet, word: str) -> int | None:
    """The column whose heading is the word, or ends in it as a word of its own ("crank-angle")."""
    heads = [head for head, _ in sheet.heads]
    if word in heads:
        return heads.index(word)
    others = ("cosine", "sine")
    ends = [] if word in others else [index for index, head in enumerate(heads) if head.endswith("-" + word)]
    return ends[0] if len(ends) == 1 else None


def _column(sheet: _Sheet, word: str, example: str) -> int | None:
    found = _find(sheet, word)
    if found is None:
        sheet.refuse(
            sheet.head_line, f'no column is headed "{word}"', ", ".join(head for head, _ in sheet.heads)[:60], example
        )
    return found


def _unit(sheet: _Sheet, column: int, measure: str) -> float:
    """SI per unit of a column."""
    word, unit = sheet.heads[column]
    if not unit:
        sheet.refuse(
            sheet.head_line, f'the column "{word}" has no unit', None, "[deg]" if measure == "angle" else "[bar]"
        )
        return 1.0
    try:
        return float(read_quantity(f"1 {unit}", measure, "SI").value)
    except QuantityError as error:
        sheet.refuse(
            sheet.head_line, f'the column "{word}": {error.message}', unit, "[deg]" if measure == "angle" else "[bar]"
        )
        return 1.0
