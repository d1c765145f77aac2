"""Long text in table cells: cut into paragraphs none of which is taller than a row may be."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from reportlab.lib.styles import ParagraphStyle
from reportlab.platypus import Paragraph

from quillshaft.present.pdf.text import escaped

ROW_HEIGHT_LIMIT_PT = 150.0
_WINDOW_LINES = 200
_USUAL_CHARACTER_EM = 0.55
_WIDEST_CHARACTER_EM = 1.2


def paragraph_pieces(text: str, style: ParagraphStyle, width_pt: float) -> list[Any]:
    """Plain text as one paragraph of this width or, where it is taller than 150 pt, as several."""
    if _greatest_height(text, style, width_pt) <= ROW_HEIGHT_LIMIT_PT:
        return [Paragraph(escaped(text), style)]
    pieces: list[Any] = []
    for window in _windows(text, style, width_pt):
        pieces += _split(Paragraph(escaped(window), style), width_pt)
    return pieces


def _greatest_height(text: str, style: ParagraphStyle, width_pt: float) -> float:
    """Height in points that the text cannot exceed: widest characters, lines half filled."""
    per_line = max(1.0, width_pt / (_WIDEST_CHARACTER_EM * style.fontSize) / 2)
    return float((text.count("\n") + 1 + len(text) / per_line) * style.leading)


def _windows(text: str, style: ParagraphStyle, width_pt: float) -> Iterator[str]:
    """Stretches of about 200 lines each, since splitting a paragraph takes time quadratic in its length."""
    length = int(_WINDOW_LINES * max(1.0, width_pt / (_USUAL_CHARACTER_EM * style.fontSize)))
    start = 0
    while start < len(text):
        window = text[start : start + length]
        lines = window.split("\n", _WINDOW_LINES)
        if len(lines) > _WINDOW_LINES:
            window = window[: len(window) - len(lines[-1])]
        elif start + length < len(text) and " " in window:
            window = window[: window.rindex(" ") + 1]
        start += len(window)
        yield window


def _split(block: Any, width_pt: float) -> list[Any]:
    pieces: list[Any] = []
    while block.wrap(width_pt, 1e6)[1] > ROW_HEIGHT_LIMIT_PT:
        parts = block.split(width_pt, ROW_HEIGHT_LIMIT_PT)
        if len(parts) < 2:
            break
        pieces.append(parts[0])
        block = parts[1]
    return [*pieces, block]
