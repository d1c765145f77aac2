"""A report as PDF bytes: page frame, outline, page n of m, metadata; the same story gives the same bytes.

The helpers that make a story's blocks are offered from here as well, so that one import serves a report.
"""

from __future__ import annotations

import io
import re
from collections.abc import Sequence
from typing import Any

from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import BaseDocTemplate, Flowable, Frame, PageTemplate, Spacer
from reportlab.platypus.doctemplate import LayoutError

from quillshaft.present.pdf.blocks import (
    ROOM_BELOW_HEADING_PT,
    ROOM_LIMIT_PT,
    Heading,
    KeptTogether,
    SignatureRow,
    Tone,
    bullets,
    captioned,
    caution_box,
    heading,
    key_values,
    note,
    paragraph,
    signature_block,
    stamp,
)
from quillshaft.present.pdf.figure import FigureFlowable
from quillshaft.present.pdf.fonts import SANS, register_fonts
from quillshaft.present.pdf.style import PAGE_SIZES_PT, PRODUCT, QUIET, TEXT_WIDTH_PT, TOP_MARGIN_PT
from quillshaft.present.pdf.surround import (
    FOLIO_WIDTH_PT,
    PageFrame,
    PageSize,
    Status,
    bottom_margin_pt,
    draw_surround,
    folio_name,
    footer_caution,
    identity,
)
from quillshaft.present.pdf.tables import data_table
from quillshaft.present.pdf.text import escaped, one_line
from quillshaft.present.pdf.verbatim import verbatim

__all__ = [
    "FigureFlowable",
    "LayoutError",
    "PageFrame",
    "PageSize",
    "SignatureRow",
    "Status",
    "Tone",
    "build_pdf",
    "bullets",
    "captioned",
    "caution_box",
    "data_table",
    "escaped",
    "heading",
    "key_values",
    "note",
    "paragraph",
    "signature_block",
    "stamp",
    "verbatim",
]


class ReportCanvas(Canvas):  # type: ignore[misc]
    """A canvas that keeps the outline and writes "Page n of m" once the number of pages is known."""

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.pages_shown = 0
        self.marks = 0
        self.heading_level = -1
        self.outline_level = -1

    def mark(self, title: str, level: int | None, height_pt: float) -> None:
        """Enter a place `height_pt` above the origin in the outline, at `level` (0 outermost) or, where that
        is None, below the last heading.
        """
        wanted = self.heading_level + 1 if level is None else level
        placed = max(0, min(wanted, self.outline_level + 1))
        self.marks += 1
        key = f"place-{self.marks}"
        self.bookmarkHorizontal(key, 0, height_pt + 12)
        self.addOutlineEntry(title, key, placed, closed=int(placed >= 1))
        self.outline_level = placed
        if level is not None:
            self.heading_level = placed

    def showPage(self) -> None:  # noqa: N802
        """Finish a page."""
        super().showPage()
        self.pages_shown += 1

    def save(self) -> None:
        """Write the page numbers and finish the document."""
        for number in range(1, self.pages_shown + 1):
            self.beginForm(folio_name(number), 0, 0, FOLIO_WIDTH_PT, 14)
            self.setFillColor(QUIET)
            self.setFont(SANS, 7.5)
            self.drawRightString(FOLIO_WIDTH_PT, 4, f"Page {number} of {self.pages_shown}")
            self.endForm()
        super().save()


def build_pdf(story: Sequence[Flowable | Sequence[Flowable]], frame: PageFrame) -> bytes:
    """Lay out the blocks of `story`, singly or in lists, on pages within `frame`; A4 or letter portrait.

    The bytes depend on the arguments and the library versions alone: no clock, time zone or hash seed
    enters. Raises reportlab's LayoutError when a block of the caller's own making fits on no page.
    """
    register_fonts()
    width, height = PAGE_SIZES_PT[frame.page_size]
    left = (width - TEXT_WIDTH_PT) / 2
    caution = footer_caution(frame)
    bottom = bottom_margin_pt(caution)
    area = Frame(left, bottom, TEXT_WIDTH_PT, height - TOP_MARGIN_PT - bottom, 0, 0, 0, 0, id="text")

    def surround(canvas: ReportCanvas, _document: Any) -> None:
        draw_surround(canvas, frame, caution, left, bottom)

    buffer = io.BytesIO()
    document = BaseDocTemplate(
        buffer,
        pagesize=(width, height),
        pageTemplates=[PageTemplate(id="page", frames=[area], onPage=surround)],
        invariant=1,
        pageCompression=1,
        initialFontName=SANS,
        lang="en",
        title=one_line(frame.title),
        author=one_line(frame.author),
        subject=identity(frame),
        creator=PRODUCT,
        displayDocTitle=1,
    )
    blocks = [part for block in story for part in _parts(block)] or [Spacer(1, 1)]
    _reserve_room(blocks)
    document.build(blocks, canvasmaker=_canvas_maker(frame))
    return buffer.getvalue()


def _parts(block: Flowable | Sequence[Flowable]) -> list[Flowable]:
    return list(block) if isinstance(block, (list, tuple)) else [block]


def _canvas_maker(frame: PageFrame) -> Any:
    """A function that makes the canvas, its metadata dated by the frame where that date is ISO."""
    stamped = re.fullmatch(r"(\d{4})-(\d{2})-(\d{2})", frame.date.strip())

    def make(*args: Any, **kwargs: Any) -> ReportCanvas:
        canvas = ReportCanvas(*args, **kwargs)
        canvas.showOutline()
        if stamped:
            canvas.setDateFormatter(lambda *_clock: f"D:{''.join(stamped.groups())}000000Z")
        return canvas

    return make


def _reserve_room(blocks: list[Flowable]) -> None:
    """Let each heading know how much room the block below it needs to begin on the same page."""
    room = 0.0
    for block in reversed(blocks):
        if isinstance(block, Heading):
            block.room_below = room
            room += block.wrap(TEXT_WIDTH_PT, 1e4)[1] + 12
        else:
            room = max(ROOM_BELOW_HEADING_PT, _unbroken_height(block))
        room = min(room, ROOM_LIMIT_PT)


def _unbroken_height(block: Flowable) -> float:
    """Height in points of a figure or a group kept together, 0 for what may run over pages."""
    if isinstance(block, FigureFlowable):
        return float(block.wrap(TEXT_WIDTH_PT, 1e4)[1]) + 12
    if isinstance(block, KeptTogether):
        return sum(float(part.wrap(TEXT_WIDTH_PT, 1e4)[1]) + 12 for part in block.parts)
    return 0.0


def _identity(frame: PageFrame) -> str:
    return one_line(f"Document {frame.document} · Revision {frame.revision} · {frame.status}")
