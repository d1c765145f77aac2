"""Matplotlib figures as vectors: in the flow of a report, or alone on a page of their own size.

What the drawing covers, and its limits, stand in the renderer's module.
"""

from __future__ import annotations

import io
from pathlib import Path
from typing import BinaryIO

from matplotlib.backend_bases import FigureCanvasBase
from matplotlib.figure import Figure
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Flowable

from quillshaft.present.pdf import fonts
from quillshaft.present.pdf.renderer import CanvasRenderer
from quillshaft.present.pdf.style import FIGURE_HEIGHT_LIMIT_PT, PRODUCT
from quillshaft.present.pdf.text import one_line


class _Surface(FigureCanvasBase):
    """The figure's canvas while it is drawn, so that layout measures text with the renderer in use."""

    def __init__(self, figure: Figure, renderer: CanvasRenderer) -> None:
        super().__init__(figure)
        self._renderer = renderer

    def get_renderer(self) -> CanvasRenderer:
        """The renderer that draws the figure."""
        return self._renderer


def figure_size_pt(figure: Figure) -> tuple[float, float]:
    """Width and height of a figure in points."""
    width_in, height_in = figure.get_size_inches()
    return round(72.0 * float(width_in), 3), round(72.0 * float(height_in), 3)


def draw_figure(canvas: Canvas, figure: Figure) -> None:
    """Draw the figure with its lower left corner at the canvas origin, full size, leaving it as it was.

    Raises NotImplementedError when the figure holds an image.
    """
    fonts.register_fonts()
    dpi, surface = figure.dpi, figure.canvas
    renderer = CanvasRenderer(canvas, *figure_size_pt(figure))
    _Surface(figure, renderer)
    figure.dpi = 72.0
    try:
        figure.draw(renderer)
    finally:
        figure.dpi = dpi
        figure.set_canvas(surface)


class FigureFlowable(Flowable):  # type: ignore[misc]
    """A matplotlib figure in the flow of a report, drawn as vectors, scaled down where the page is smaller.

    `width` is the width on the page in points (default: the figure's own). `bookmark_alt` says in words what
    the figure shows: it becomes an outline entry under the current heading and the alternative text that
    a screen reader speaks.
    """

    def __init__(self, figure: Figure, width: float | None = None, bookmark_alt: str = "") -> None:
        super().__init__()
        self.figure = figure
        self.wanted_width = width
        self.bookmark_alt = one_line(bookmark_alt)
        self.hAlign = "LEFT"
        self.spaceBefore = self.spaceAfter = 6
        self.scale = 1.0

    def wrap(self, avail_width: float, avail_height: float) -> tuple[float, float]:  # noqa: ARG002
        """Width and height in points that the figure takes."""
        width, height = figure_size_pt(self.figure)
        wanted = min(self.wanted_width or width, avail_width)
        self.scale = min(wanted / width, FIGURE_HEIGHT_LIMIT_PT / height)
        self.width, self.height = self.scale * width, self.scale * height
        return self.width, self.height

    def draw(self) -> None:
        """Place the figure, marked with its alternative text."""
        canvas = self.canv
        if self.bookmark_alt and hasattr(canvas, "mark"):
            canvas.mark(self.bookmark_alt, None, self.height)
        if self.bookmark_alt:
            alt = self.bookmark_alt.encode("utf-16-be").hex().upper()
            canvas.addLiteral(f"/Span <</Alt <FEFF{alt}>>> BDC")
        canvas.saveState()
        if self.scale != 1.0:
            canvas.scale(self.scale, self.scale)
        draw_figure(canvas, self.figure)
        canvas.restoreState()
        if self.bookmark_alt:
            canvas.addLiteral("EMC")


def write_figure_pdf(figure: Figure, path_or_stream: str | Path | BinaryIO, title: str) -> None:
    """Write one figure as a PDF of one page of the figure's size; the same figure gives the same bytes.

    A file is written whole or not at all. Raises NotImplementedError when the figure
    holds an image, OSError when the file cannot be written.
    """
    fonts.register_fonts()
    buffer = io.BytesIO()
    canvas = Canvas(buffer, pagesize=figure_size_pt(figure), invariant=1, pageCompression=1, initialFontName=fonts.SANS)
    canvas.setTitle(one_line(title))
    canvas.setAuthor("")
    canvas.setSubject("")
    canvas.setCreator(PRODUCT)
    draw_figure(canvas, figure)
    canvas.showPage()
    canvas.save()
    if isinstance(path_or_stream, (str, Path)):
        target = Path(path_or_stream)
        part = target.with_name(f"{target.name}.part")
        part.write_bytes(buffer.getvalue())
        part.replace(target)
    else:
        path_or_stream.write(buffer.getvalue())
