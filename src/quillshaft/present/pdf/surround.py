"""What stands around the text of every page: header, status, footer, and the mark of a draft."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal, get_args

from matplotlib.font_manager import FontProperties
from matplotlib.textpath import TextPath
from reportlab.platypus import Paragraph

from quillshaft.present.pdf.fonts import SANS, SANS_BOLD, text_width_pt
from quillshaft.present.pdf.renderer import trace_segments
from quillshaft.present.pdf.style import (
    ACCENT,
    BOTTOM_MARGIN_PT,
    DRAFT_MARK,
    PAGE_SIZES_PT,
    QUIET,
    RULE,
    TEXT_WIDTH_PT,
    styles,
)
from quillshaft.present.pdf.text import escaped, fitted, one_line

Status = Literal["draft", "checked", "issued"]
PageSize = Literal["A4", "letter"]

_CAUTION_LENGTH = 600
_TAG_WIDTH_PT = 62.0
FOLIO_WIDTH_PT = 84.0


@dataclass(frozen=True)
class PageFrame:
    """What stands around every page, and the document's metadata.

    `date` is the date of the document as it should be printed; an ISO date also becomes the date in the
    metadata. `caution` is the small print at the foot of every page, at most 600 characters.
    Raises ValueError when status, page size or caution are not allowed.
    """

    document: str
    revision: str
    status: Status
    title: str
    date: str
    caution: str = ""
    author: str = ""
    page_size: PageSize = "A4"

    def __post_init__(self) -> None:
        if self.status not in get_args(Status):
            raise ValueError(f"status {self.status!r}: allowed are {', '.join(get_args(Status))}")
        if self.page_size not in PAGE_SIZES_PT:
            raise ValueError(f"page size {self.page_size!r}: allowed are {', '.join(PAGE_SIZES_PT)}")
        if len(self.caution) > _CAUTION_LENGTH:
            raise ValueError(f"a caution of {len(self.caution)} characters: at most {_CAUTION_LENGTH} fit")


def folio_name(number: int) -> str:
    """Name of the form that holds "Page n of m" for page `number`."""
    return f"folio-{number}"


def identity(frame: PageFrame) -> str:
    """Document number, revision and status on one line."""
    return one_line(f"Document {frame.document} · Revision {frame.revision} · {frame.status}")


def bottom_margin_pt(caution: Paragraph) -> float:
    """Height in points kept below the text; grows where the caution takes more than two lines."""
    height = float(caution.wrap(TEXT_WIDTH_PT - FOLIO_WIDTH_PT - 16, 1e4)[1])
    return BOTTOM_MARGIN_PT + max(0.0, height - 17.2)


def footer_caution(frame: PageFrame) -> Paragraph:
    """The small print at the foot of the page."""
    style = styles().note.clone("page-caution", fontSize=6.6, leading=8.6, textColor=QUIET, spaceAfter=0)
    return Paragraph(escaped(one_line(frame.caution)), style)


def draw_surround(canvas: Any, frame: PageFrame, caution: Paragraph, left: float, bottom: float) -> None:
    """Header, footer and, on a draft, a mark behind the text, which `left` and `bottom` bound, in points."""
    canvas.saveState()
    if frame.status == "draft":
        _draw_draft_mark(canvas)
    _draw_header(canvas, frame, left)
    _draw_footer(canvas, caution, left, bottom)
    canvas.restoreState()


def _draw_header(canvas: Any, frame: PageFrame, left: float) -> None:
    top = canvas._pagesize[1]
    room = TEXT_WIDTH_PT - _TAG_WIDTH_PT - 14
    canvas.setFillColor(ACCENT)
    canvas.setFont(SANS_BOLD, 8.5)
    canvas.drawString(left, top - 43, fitted(frame.title, SANS_BOLD, 8.5, room))
    canvas.setFillColor(QUIET)
    canvas.setFont(SANS, 7.5)
    parts = (f"Document {frame.document}", f"Revision {frame.revision}", frame.date)
    canvas.drawString(left, top - 54.5, fitted("   ·   ".join(parts), SANS, 7.5, room))
    _draw_status(canvas, frame.status, left + TEXT_WIDTH_PT - _TAG_WIDTH_PT, top - 54.5)
    canvas.setStrokeColor(ACCENT)
    canvas.setLineWidth(0.8)
    canvas.line(left, top - 62, left + TEXT_WIDTH_PT, top - 62)


def _draw_status(canvas: Any, status: Status, x: float, y: float) -> None:
    """The status in a small frame: dashed for a draft, plain when checked, filled when issued."""
    canvas.saveState()
    canvas.setStrokeColor(ACCENT)
    canvas.setFillColor(ACCENT)
    canvas.setLineWidth(0.8)
    if status == "draft":
        canvas.setDash([3, 2])
    canvas.rect(x, y, _TAG_WIDTH_PT, 15, stroke=1, fill=int(status == "issued"))
    canvas.setFillColorRGB(1, 1, 1) if status == "issued" else canvas.setFillColor(ACCENT)
    canvas.setFont(SANS_BOLD, 8)
    canvas.drawCentredString(x + _TAG_WIDTH_PT / 2, y + 4.6, status.upper())
    canvas.restoreState()


def _draw_footer(canvas: Any, caution: Paragraph, left: float, bottom: float) -> None:
    y = bottom - 18
    canvas.setStrokeColor(RULE)
    canvas.setLineWidth(0.5)
    canvas.line(left, y, left + TEXT_WIDTH_PT, y)
    _, height = caution.wrap(TEXT_WIDTH_PT - FOLIO_WIDTH_PT - 16, 1e4)
    caution.drawOn(canvas, left, y - 4 - height)
    canvas.saveState()
    canvas.translate(left + TEXT_WIDTH_PT - FOLIO_WIDTH_PT, y - 15)
    canvas.doForm(folio_name(canvas.getPageNumber()))
    canvas.restoreState()


def _draw_draft_mark(canvas: Any) -> None:
    """DRAFT in outline letters across the page: no text, so that it never enters a selection."""
    width, height = canvas._pagesize
    size = 165.0
    letters = TextPath((0, 0), "DRAFT", size=size, prop=FontProperties(family="DejaVu Sans"))
    canvas.saveState()
    canvas.translate(width / 2, height / 2)
    canvas.rotate(54)
    canvas.translate(-text_width_pt("DRAFT", SANS, size) / 2, -0.36 * size)
    outline = canvas.beginPath()
    trace_segments(outline, list(letters.iter_segments(simplify=False)))
    canvas.setFillColor(DRAFT_MARK)
    canvas.drawPath(outline, stroke=0, fill=1, fillMode=1)
    canvas.restoreState()
