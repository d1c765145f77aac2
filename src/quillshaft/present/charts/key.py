"""The key under the interference diagram: what each numbered mark is, and how to read shapes and lines."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from quillshaft.assess.diagram_data import PairMark, SourceLine
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, listed
from quillshaft.present.words import percent

if TYPE_CHECKING:
    from matplotlib.axes import Axes

ROW_MM = 3.6


def entry(mark: PairMark, number: int) -> str:
    """One line of the key: mode, sources, and where they meet or how far they stand apart."""
    pair = mark.pair
    text = f"{number}  mode {pair.mode}, {pair.source}"
    if mark.others:
        text += f" + {len(mark.others)} more"
    if pair.critical_speed_rpm is not None and pair.verdict in ("crossing", "barred"):
        text += f": at {pair.critical_speed_rpm:.0f} rpm"
    elif pair.verdict == "crossing":
        text += ": throughout the range"
    else:
        text += f": {percent(pair.margin, True)}".replace("-", "−")
    if pair.worst_verdict != pair.verdict:
        text += ", " + {"crossing": "meets", "barred": "meets, barred,"}.get(
            pair.worst_verdict, percent(pair.worst_margin, True).replace("-", "−")
        )
        text += " over tolerances"
    return text + (", dismissed" if pair.dismissed is not None else "")


def key_height(marks: Sequence[PairMark], numbered: int) -> float:
    """Height [mm] of the key without the lines' note."""
    lines = _rows(marks[:numbered]) + (1 if marks else 0) + (1 if len(marks) > numbered else 0)
    return lines * ROW_MM + 3.0


def _rows(marks: Sequence[PairMark]) -> int:
    """Lines of the key: one column up to three marks, two beyond."""
    return len(marks) if len(marks) <= 3 else -(-len(marks) // 2)


def draw_key(made: look.Frame, height_mm: float, marks: Sequence[PairMark], numbered: int, note: list[str]) -> None:
    """Numbered marks in two columns, the shapes in use, the lines in use."""
    axes = look.millimetre_axes(made, 0.0, height_mm)
    y = height_mm - 1.5 - ROW_MM / 2
    keyed = marks[:numbered]
    rows, half = _rows(keyed), look.WIDTH_MM / 2
    wide = half if rows < len(keyed) else look.WIDTH_MM
    for index, mark in enumerate(keyed):
        x = 0.0 if index < rows else half
        row_y = y - (index % rows) * ROW_MM
        _sample(axes, mark_kind(mark), mark.nominal, x + 1.6, row_y)
        look.put(axes, x + 4.0, row_y, look.shorten(entry(mark, index + 1), wide - 6.0), ha="left", gid="key")
    y -= rows * ROW_MM
    if len(marks) > numbered:
        text = f"Marks without a number: {len(marks) - numbered} more that are not clear; the table lists them."
        look.put(axes, 0.0, y, text, ha="left", color=look.QUIET)
        y -= ROW_MM
    if marks:
        _draw_shapes(axes, marks, y)
        y -= ROW_MM
    look.notes(axes, y + ROW_MM / 2, note)


def mark_kind(mark: PairMark) -> str:
    """Which marker a pair gets."""
    return "dismissed" if mark.pair.dismissed is not None else mark.shape


def _sample(axes: Axes, kind: str, filled: bool, x: float, y: float) -> None:
    shape = look.MARKERS[kind][0]
    face = look.INK if filled else look.PAPER
    axes.plot(x, y, marker=shape, ms=5.0, mfc=face, mec=look.INK, mew=look.LINE_PT, ls="none")


def _draw_shapes(axes: Axes, marks: Sequence[PairMark], y: float) -> None:
    x = 0.0
    for kind in sorted({mark_kind(mark) for mark in marks}, key=list(look.MARKERS).index):
        _sample(axes, kind, True, x + 1.6, y)
        text = look.MARKERS[kind][1]
        look.put(axes, x + 4.0, y, text, ha="left", color=look.QUIET)
        x += look.width_mm(text) + 8.0
    if not all(mark.nominal for mark in marks):
        look.put(axes, x, y, "open: only over the tolerances", ha="left", color=look.QUIET)


def line_note(lines: Sequence[SourceLine], unlabelled: Sequence[str]) -> list[str]:
    """How to read the lines that are there."""
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
    if unlabelled:
        text += f" Lines without a name leave the frame far below running speed: {listed(unlabelled, 6)}."
    return look.wrap(capital(text), look.WIDTH_MM - 5.0)
