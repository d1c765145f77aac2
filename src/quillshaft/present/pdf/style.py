"""Measures, colours and paragraph styles of a report page.

One accent, a dark blue-grey that prints as dark grey; everything else is black, grey and white, and no
meaning is carried by colour alone.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from reportlab.lib.colors import Color, HexColor
from reportlab.lib.enums import TA_CENTER, TA_LEFT, TA_RIGHT
from reportlab.lib.pagesizes import A4, LETTER
from reportlab.lib.styles import ParagraphStyle

from quillshaft.present.pdf.fonts import SANS, SANS_BOLD, SANS_OBLIQUE, register_fonts

PRODUCT = "Quillshaft"
PAGE_SIZES_PT: dict[str, tuple[float, float]] = {"A4": A4, "letter": LETTER}

TEXT_WIDTH_PT = 459.0
"""Width of the text on both page sizes; a figure made this wide keeps its type size."""
TOP_MARGIN_PT = 82.0
BOTTOM_MARGIN_PT = 70.0
FIGURE_HEIGHT_LIMIT_PT = 600.0

ACCENT: Color = HexColor(0x2B3A4A)
TEXT: Color = HexColor(0x16191C)
QUIET: Color = HexColor(0x5B636B)
RULE: Color = HexColor(0xB4BBC2)
TINT: Color = HexColor(0xF1F3F5)
DRAFT_MARK: Color = HexColor(0xEFF1F3)

BODY_PT = 9.5
TABLE_PT = 8.0
VERBATIM_PT = 7.0


@dataclass(frozen=True)
class Styles:
    """The paragraph styles in use."""

    body: ParagraphStyle
    headings: tuple[ParagraphStyle, ...]
    caption: ParagraphStyle
    note: ParagraphStyle
    bullet: ParagraphStyle
    cells: dict[str, ParagraphStyle]
    head_cells: dict[str, ParagraphStyle]
    bold_cells: dict[str, ParagraphStyle]
    stamp: ParagraphStyle
    stamp_detail: ParagraphStyle


@cache
def styles() -> Styles:
    """The paragraph styles, made once after the fonts are registered."""
    register_fonts()
    body = ParagraphStyle(
        "body", fontName=SANS, fontSize=BODY_PT, leading=13.2, textColor=TEXT, spaceAfter=5, splitLongWords=1
    )
    return Styles(
        body=body,
        headings=tuple(_heading_style(body, level) for level in (1, 2, 3)),
        caption=ParagraphStyle(
            "caption", body, fontName=SANS_OBLIQUE, fontSize=8, leading=10.5, textColor=QUIET, spaceAfter=8
        ),
        note=ParagraphStyle("note", body, fontSize=8, leading=10.8, spaceAfter=3),
        bullet=ParagraphStyle(
            "bullet",
            body,
            leftIndent=14,
            bulletIndent=3,
            bulletFontName=SANS,
            bulletFontSize=BODY_PT,
            bulletColor=ACCENT,
            spaceAfter=2.5,
        ),
        cells=_cell_styles(body, SANS, TEXT),
        head_cells=_cell_styles(body, SANS_BOLD, ACCENT),
        bold_cells=_cell_styles(body, SANS_BOLD, TEXT),
        stamp=ParagraphStyle(
            "stamp", body, fontName=SANS_BOLD, fontSize=17, leading=21, textColor=ACCENT, spaceAfter=0
        ),
        stamp_detail=ParagraphStyle("stamp-detail", body, spaceAfter=0),
    )


def _heading_style(body: ParagraphStyle, level: int) -> ParagraphStyle:
    size, before, after = {1: (15.0, 16.0, 7.0), 2: (11.5, 12.0, 5.0), 3: (9.5, 9.0, 3.0)}[level]
    return ParagraphStyle(
        f"heading-{level}",
        body,
        fontName=SANS_BOLD,
        fontSize=size,
        leading=1.25 * size,
        textColor=ACCENT,
        spaceBefore=before,
        spaceAfter=after,
    )


def _cell_styles(body: ParagraphStyle, font: str, colour: Color) -> dict[str, ParagraphStyle]:
    sides = {"l": TA_LEFT, "c": TA_CENTER, "r": TA_RIGHT}
    return {
        side: ParagraphStyle(
            f"cell-{font}-{side}",
            body,
            fontName=font,
            fontSize=TABLE_PT,
            leading=10.4,
            textColor=colour,
            alignment=alignment,
            spaceAfter=0,
        )
        for side, alignment in sides.items()
    }
