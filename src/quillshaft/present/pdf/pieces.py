"""Long text in table cells: cut into paragraphs none of which is taller than a row may be."""

from __future__ import annotations

from typing import Any

from reportlab.lib.styles import ParagraphStyle
from reportlab.platypus import Paragraph

from quillshaft.present.pdf.text import escaped

ROW_HEIGHT_LIMIT_PT = 260.0


def paragraph_pieces(text: str, style: ParagraphStyle, width_pt: float) -> list[Any]:
    """Plain text as one paragraph of this width or, where it is taller than 260 pt, as several."""
    rest: Any = Paragraph(escaped(text), style)
    if _greatest_height(text, style, width_pt) <= ROW_HEIGHT_LIMIT_PT:
        return [rest]
    pieces: list[Any] = []
    while rest.wrap(width_pt, 1e6)[1] > ROW_HEIGHT_LIMIT_PT:
        parts = rest.split(width_pt, ROW_HEIGHT_LIMIT_PT)
        if len(parts) < 2:
            break
        pieces.append(parts[0])
        rest = parts[1]
    return [*pieces, rest]


def _greatest_height(text: str, style: ParagraphStyle, width_pt: float) -> float:
    """Height in points that the text cannot exceed: every character as wide as 1.2 em, lines half filled."""
    per_line = max(1.0, width_pt / (1.2 * style.fontSize) / 2)
    return float((text.count("\n") + 1 + len(text) / per_line) * style.leading)
