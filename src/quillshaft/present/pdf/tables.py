"""Data tables: wrapped cells, a head that repeats on every page, thin rules."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from typing import Any, TypeAlias

from reportlab.lib.styles import ParagraphStyle
from reportlab.platypus import Flowable, Table

from quillshaft.present.pdf.fonts import SANS, SANS_BOLD, text_width_pt
from quillshaft.present.pdf.pieces import paragraph_pieces
from quillshaft.present.pdf.style import ACCENT, RULE, TABLE_PT, TEXT_WIDTH_PT, styles
from quillshaft.present.pdf.text import cut, printable

Cell: TypeAlias = str | Flowable

_PADDING_PT = 5.0
_NARROWEST_PT = 20.0
_WIDEST_WISH_PT = 220.0
_HEAD_LENGTH = 120


def data_table(
    head: Sequence[str],
    rows: Sequence[Sequence[Cell]],
    column_widths: Sequence[float] | None = None,
    align: str = "",
    bold_rows: Collection[int] = (),
) -> Table:
    """A table over the full text width.

    `column_widths` are shares of the width in any unit, by default from the contents. `align` holds one
    letter per column, l, c or r (default: l throughout). Cells are plain text, or a flowable. `bold_rows`
    are the indices of rows to set in bold. A row too tall for a page runs on in further rows.
    Raises ValueError when a row, the widths or `align` do not match the number of columns.
    """
    align = align or "l" * len(head)
    _check_columns(head, rows, column_widths, align)
    texts = [[printable(cell) if isinstance(cell, str) else cell for cell in row] for row in rows]
    head = [cut(printable(text), _HEAD_LENGTH) for text in head]
    if column_widths is None:
        widths = _fitted_widths(head, texts)
    else:
        widths = _scaled([float(share) for share in column_widths])
    data: list[list[Any]] = [_head_row(head, align, widths)]
    rules = []
    for index, row in enumerate(texts):
        data += _body_rows(row, align, widths, index in bold_rows)
        rules.append(("LINEBELOW", (0, len(data) - 1), (-1, len(data) - 1), 0.25, RULE, 0))
    return Table(
        data,
        colWidths=widths,
        hAlign="LEFT",
        repeatRows=1,
        spaceBefore=4,
        spaceAfter=8,
        style=[*_base_style(align), *rules, ("LINEBELOW", (0, -1), (-1, -1), 0.6, ACCENT, 0)],
    )


def _check_columns(
    head: Sequence[str], rows: Sequence[Sequence[Cell]], shares: Sequence[float] | None, align: str
) -> None:
    columns = len(head)
    if columns == 0:
        raise ValueError("a table without columns: the head is empty")
    for index, row in enumerate(rows):
        if len(row) != columns:
            raise ValueError(f"table row {index} has {len(row)} cells: {columns} are wanted, as in the head")
    if shares is not None and (len(shares) != columns or min(shares) <= 0):
        raise ValueError(f"column widths {list(shares)}: {columns} positive shares are wanted")
    if len(align) != columns or set(align) - set("lcr"):
        raise ValueError(f"alignment {align!r}: {columns} letters out of l, c and r are wanted")


def _base_style(align: str) -> list[tuple[Any, ...]]:
    sides = {"l": "LEFT", "c": "CENTER", "r": "RIGHT"}
    return [
        ("FONT", (0, 0), (-1, -1), SANS, TABLE_PT, 10.4),
        ("VALIGN", (0, 0), (-1, -1), "TOP"),
        ("VALIGN", (0, 0), (-1, 0), "BOTTOM"),
        ("LEFTPADDING", (0, 0), (-1, -1), _PADDING_PT),
        ("RIGHTPADDING", (0, 0), (-1, -1), _PADDING_PT),
        ("TOPPADDING", (0, 0), (-1, -1), 2.2),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 2.8),
        ("LINEABOVE", (0, 0), (-1, 0), 0.6, ACCENT, 0),
        ("LINEBELOW", (0, 0), (-1, 0), 0.8, ACCENT, 0),
        *(("ALIGN", (column, 0), (column, -1), sides[side]) for column, side in enumerate(align)),
    ]


def _head_row(head: Sequence[str], align: str, widths: Sequence[float]) -> list[Any]:
    wrapped = styles().head_cells
    pieces = (_cell_pieces(text, wrapped[side], w) for text, side, w in zip(head, align, widths, strict=True))
    return [column[0] for column in pieces]


def _body_rows(row: Sequence[Cell], align: str, widths: Sequence[float], bold: bool) -> list[list[Any]]:
    wrapped = styles().bold_cells if bold else styles().cells
    columns = [_cell_pieces(cell, wrapped[side], width) for cell, side, width in zip(row, align, widths, strict=True)]
    count = max(len(pieces) for pieces in columns)
    return [[pieces[i] if i < len(pieces) else "" for pieces in columns] for i in range(count)]


def _cell_pieces(cell: Cell, style: ParagraphStyle, width: float) -> list[Any]:
    return paragraph_pieces(cell, style, width - 2 * _PADDING_PT) if isinstance(cell, str) else [cell]


def _fitted_widths(head: Sequence[str], rows: Sequence[Sequence[Cell]]) -> list[float]:
    """Column widths in points, as the contents wish; at least the longest word where there is room."""
    needs, wishes = [], []
    for column, title in enumerate(head):
        cells = [row[column] for row in rows]
        lines = {line for cell in cells if isinstance(cell, str) for line in cell.split("\n")}
        wish = max((_width(line, SANS) for line in _longest(lines)), default=0.0)
        words = {word for line in lines for word in line.split()}
        need = max((_width(word, SANS) for word in _longest(words)), default=0.0)
        need = max([need, *(_width(word, SANS_BOLD) for word in title.split())])
        needs.append(min(max(need, _NARROWEST_PT), _WIDEST_WISH_PT))
        wish = max([wish, *(_width(line, SANS_BOLD) for line in title.split("\n"))])
        wishes.append(min(max(wish, need, _NARROWEST_PT), _WIDEST_WISH_PT))
    spare = TEXT_WIDTH_PT - sum(needs)
    if spare <= 0:
        return _scaled(needs)
    extra = [wish - need for wish, need in zip(wishes, needs, strict=True)]
    grown = min(1.0, spare / sum(extra)) if sum(extra) > 0 else 0.0
    return _scaled([need + grown * more for need, more in zip(needs, extra, strict=True)])


def _longest(texts: Collection[str]) -> list[str]:
    """The few texts with most characters, in a fixed order: candidates for the widest."""
    return sorted(texts, key=lambda text: (-len(text), text))[:8]


def _width(text: str, font: str) -> float:
    return text_width_pt(text[:200], font, TABLE_PT) + 2 * _PADDING_PT + 0.5


def _scaled(shares: list[float]) -> list[float]:
    """Widths in these proportions that fill the text width, none narrower than a few characters."""
    floor = min(_NARROWEST_PT, TEXT_WIDTH_PT / (2 * len(shares)))
    total = sum(shares)
    raised = [max(share / total * TEXT_WIDTH_PT, floor) for share in shares]
    over = sum(raised) - TEXT_WIDTH_PT
    give = sum(width - floor for width in raised)
    if over > 0 and give > 0:
        raised = [width - over * (width - floor) / give for width in raised]
    return [round(width, 3) for width in raised]
