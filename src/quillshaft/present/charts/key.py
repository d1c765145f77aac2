"""The key under the interference diagram: what each numbered mark is, and how to read shapes and lines."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from quillshaft.assess.diagram_data import PairMark, SourceLine, meeting_rpm
from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, listed
from quillshaft.present.words import percent

if TYPE_CHECKING:
    from matplotlib.axes import Axes

ROW_MM = 3.6
TEXT_MM = 7.5
"""Where the text of an entry begins, after its shape and number."""
MOST_NAMES = 6
"""So many lines outside the frame are named."""


def entry(screening: Screening, mark: PairMark) -> str:
    """What a mark is: mode, sources, and where they meet or how far they stand apart."""
    pair = mark.pair
    text = f"mode {pair.mode}, {pair.source}"
    if mark.others:
        text += f" + {len(mark.others)} more"
    rpm = meeting_rpm(screening, pair)
    if rpm is not None:
        text += f": at {rpm:.0f} rpm"
    elif pair.verdict in ("crossing", "barred"):
        text += ": throughout the range"
    else:
        text += f": {percent(pair.margin, True)}"
    if pair.worst_verdict != pair.verdict or pair.verdict == "close":
        worst = {"crossing": "meets", "barred": "meets, barred,"}.get(
            pair.worst_verdict, percent(pair.worst_margin, True)
        )
        text += f", {worst} over tolerances"
    if pair.bar_too_narrow:
        text += ", barred range too narrow"
    return text + (", dismissed" if pair.dismissed is not None else "")


def _entries(screening: Screening, marks: Sequence[PairMark]) -> list[list[list[str]]]:
    """One column of wrapped entries up to three marks or where names are long, else two."""
    texts = [entry(screening, mark) for mark in marks]
    half = look.WIDTH_MM / 2.0 - TEXT_MM - 4.0
    long = any(look.width_mm(word) > half for text in texts for word in text.split())
    columns = 1 if long or len(marks) <= 3 else 2
    wide = half if columns == 2 else look.WIDTH_MM - TEXT_MM - 4.0
    wrapped = [look.wrap(text, wide) for text in texts]
    rows = max(1, -(-len(marks) // columns))
    return [wrapped[start : start + rows] for start in range(0, len(wrapped), rows)]


def _entries_height(columns: list[list[list[str]]]) -> float:
    return max((sum(_entry_height(lines) for lines in column) for column in columns), default=0.0)


def _entry_height(lines: list[str]) -> float:
    return ROW_MM + (len(lines) - 1) * look.line_mm()


def key_height(screening: Screening, marks: Sequence[PairMark], numbered: int) -> float:
    """Height [mm] of the key without the lines' note."""
    lines = (len(_shape_rows(marks)) if marks else 0) + (1 if len(marks) > numbered else 0)
    return _entries_height(_entries(screening, marks[:numbered])) + lines * ROW_MM + 3.0


def draw_key(
    made: look.Frame,
    screening: Screening,
    height_mm: float,
    marks: Sequence[PairMark],
    numbered: int,
    note: list[str],
) -> None:
    """Numbered marks in two columns, the shapes in use, the lines in use."""
    axes = look.millimetre_axes(made, 0.0, height_mm)
    y = height_mm - 1.5
    columns = _entries(screening, marks[:numbered])
    first = 0
    for place, column in enumerate(columns):
        _draw_column(axes, list(enumerate(marks, start=1))[first:], column, place * look.WIDTH_MM / 2.0, y)
        first += len(column)
    y -= _entries_height(columns) + ROW_MM / 2.0
    if len(marks) > numbered:
        text = f"Marks without a number: {len(marks) - numbered} more that are not clear; the table lists them."
        look.put(axes, 0.0, y, text, ha="left", color=look.QUIET, gid="key")
        y -= ROW_MM
    for row in _shape_rows(marks):
        _draw_shapes(axes, row, y)
        y -= ROW_MM
    look.notes(axes, y + ROW_MM / 2.0, note)


def _draw_column(
    axes: Axes, numbered: list[tuple[int, PairMark]], column: list[list[str]], x: float, top: float
) -> None:
    for (number, mark), lines in zip(numbered, column, strict=False):
        y = top - ROW_MM / 2.0
        _sample(axes, mark_kind(mark), mark.nominal, x + 1.6, y)
        look.put(axes, x + 5.0, y, str(number), fontweight="bold", gid="key")
        for row, text in enumerate(lines):
            look.put(axes, x + TEXT_MM, y - row * look.line_mm(), text, ha="left", gid="key")
        top -= _entry_height(lines)


def mark_kind(mark: PairMark) -> str:
    """Which marker a pair gets."""
    return "dismissed" if mark.pair.dismissed is not None else mark.shape


def _sample(axes: Axes, kind: str, filled: bool, x: float, y: float) -> None:
    shape = look.MARKERS[kind][0]
    face = look.INK if filled else look.PAPER
    axes.plot(x, y, marker=shape, ms=5.0, mfc=face, mec=look.INK, mew=look.LINE_PT, ls="none")


def _shape_rows(marks: Sequence[PairMark]) -> list[list[tuple[str, str]]]:
    """(marker, meaning) of the shapes in use, in rows that fit the width; "" for words without a marker."""
    kinds = sorted({mark_kind(mark) for mark in marks}, key=list(look.MARKERS).index)
    items = [(kind, look.MARKERS[kind][1]) for kind in kinds]
    if not all(mark.nominal for mark in marks):
        items.append(("", "open: only over the tolerances"))
    rows: list[list[tuple[str, str]]] = []
    x = look.WIDTH_MM
    for item in items:
        wide = look.width_mm(item[1]) + 8.0
        if x + wide > look.WIDTH_MM:
            rows.append([])
            x = 0.0
        rows[-1].append(item)
        x += wide
    return rows


def _draw_shapes(axes: Axes, row: list[tuple[str, str]], y: float) -> None:
    x = 0.0
    for kind, text in row:
        if kind:
            _sample(axes, kind, True, x + 1.6, y)
        look.put(axes, x + (4.0 if kind else 0.0), y, text, ha="left", color=look.QUIET, gid="key")
        x += look.width_mm(text) + 8.0


def line_note(lines: Sequence[SourceLine], elsewhere: dict[str, list[str]]) -> list[str]:
    """How to read the lines that are there; `elsewhere`: where -> names of those outside at running speeds."""
    kinds = {line.kind for line in lines if not line.minor}
    parts = []
    if "order" in kinds:
        parts.append("solid: follows speed")
    if "fixed" in kinds:
        parts.append("dashed: fixed frequency")
    if "mixed" in kinds:
        parts.append("dash-dot: speed and fixed frequency together")
    if any(line.minor for line in lines):
        parts.append("dotted: minor engine orders")
    parts += [
        "grey band and long dash-dot line: natural frequency over tolerances and nominal",
        "short dashes: separation required in the running range (shaded)",
    ]
    if any(line.low_hz != line.high_hz for line in lines):
        parts.append("hairlines beside a source: supply variation")
    text = "; ".join(parts) + "."
    places = [f"{place}: {listed(names, MOST_NAMES)}" for place, names in sorted(elsewhere.items(), reverse=True)]
    if places:
        text += f" Outside the frame at running speeds, {'; '.join(places)}."
    return look.wrap(capital(text), look.WIDTH_MM - 5.0)
