"""Matplotlib's drawing calls carried out as vectors on a reportlab canvas.

The renderer covers paths with clip, dashes, caps, joins, transparency and hatches, markers, and text at any
angle, set as selectable text in the fonts of the page (monospaced text in regular weight only). Limits:
images are refused (draw fields with `pcolormesh` or `contourf`), and mathematical text between dollar signs
is not typeset. Powers of ten on logarithmic axes are the exception: they are written with superscript
digits. Everything else appears as written, so that a user's name holding a dollar sign cannot stop a report.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

import numpy as np
from matplotlib.backend_bases import GraphicsContextBase, RendererBase
from matplotlib.font_manager import FontProperties, weight_dict
from matplotlib.path import Path
from matplotlib.transforms import Transform
from reportlab.pdfgen.canvas import Canvas

from quillshaft.present.pdf import fonts
from quillshaft.present.pdf.hatch import HEAVIEST_LINE_PT, hatch_lines, hatch_marks
from quillshaft.present.pdf.text import printable

_CAPS = {"butt": 0, "round": 1, "projecting": 2}
_JOINS = {"miter": 0, "round": 1, "bevel": 2}
_BOLD_FROM = 600
_NONZERO = 1
_POWER_OF_TEN = re.compile(r"^(-?)\$\\mathdefault\{(.*)\}\$$")
_SUPERSCRIPT = str.maketrans("0123456789-−.", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁻·")


def font_for(prop: FontProperties) -> str:
    """Name of the registered font nearest to matplotlib's font properties (family, weight, slant)."""
    if "monospace" in prop.get_family():
        return fonts.MONO
    weight = prop.get_weight()
    bold = (weight_dict.get(weight, 400) if isinstance(weight, str) else weight) >= _BOLD_FROM
    slanted = prop.get_style() in {"italic", "oblique"}
    if bold:
        return fonts.SANS_BOLD_OBLIQUE if slanted else fonts.SANS_BOLD
    return fonts.SANS_OBLIQUE if slanted else fonts.SANS


def plain_label(text: str) -> str:
    """A logarithmic tick label such as `$\\mathdefault{10^{2}}$` as "10²"; any other text unchanged."""
    found = _POWER_OF_TEN.match(text)
    if not found:
        return text
    body = found[1] + found[2].replace(r"\times", "·").replace(" ", "")
    return re.sub(r"\^\{([^{}]*)\}", lambda power: power[1].translate(_SUPERSCRIPT), body)


class CanvasRenderer(RendererBase):
    """Draws what a figure asks for on a reportlab canvas; one display unit is one point."""

    def __init__(self, canvas: Canvas, width_pt: float, height_pt: float) -> None:
        super().__init__()
        self.canvas = canvas
        self.width = width_pt
        self.height = height_pt
        self.dpi = 72.0

    def get_canvas_width_height(self) -> tuple[float, float]:
        """Width and height of the figure in points."""
        return self.width, self.height

    def flipy(self) -> bool:
        """Ordinates grow upward."""
        return False

    def get_text_width_height_descent(self, s: str, prop: FontProperties, ismath: Any) -> tuple[float, float, float]:
        """Width, height and depth below the baseline, in points, in the font that will be drawn."""
        font, size = font_for(prop), prop.get_size_in_points()
        width = fonts.text_width_pt(self._label(s, font, ismath), font, size)
        return width, (fonts.ASCENT_EM + fonts.DESCENT_EM) * size, fonts.DESCENT_EM * size

    def draw_text(
        self,
        gc: GraphicsContextBase,
        x: float,
        y: float,
        s: str,
        prop: FontProperties,
        angle: float,
        ismath: Any = False,
        mtext: Any = None,  # noqa: ARG002
    ) -> None:
        """Text with its baseline starting at (x, y), turned by `angle` degrees, as selectable text."""
        font, size = font_for(prop), prop.get_size_in_points()
        with self._state(gc):
            red, green, blue, alpha = _rgba(gc.get_rgb(), gc)
            self.canvas.setFillColorRGB(red, green, blue)
            if alpha < 1:
                self.canvas.setFillAlpha(alpha)
            self.canvas.translate(round(x, 3), round(y, 3))
            if angle:
                self.canvas.rotate(round(angle, 3))
            self.canvas.setFont(font, round(size, 3))
            self.canvas.drawString(0, 0, self._label(s, font, ismath))

    def draw_path(self, gc: GraphicsContextBase, path: Path, transform: Transform, rgbFace: Any = None) -> None:
        """Stroke, fill and hatch one path. `rgbFace` is None or a colour of three or four parts."""
        window = None if rgbFace is not None or gc.get_hatch() else (0.0, 0.0, self.width, self.height)
        segments = list(path.iter_segments(transform, clip=window, simplify=path.should_simplify and rgbFace is None))
        if not segments:
            return
        face = None if rgbFace is None else _rgba(rgbFace, gc)
        edge = _rgba(gc.get_rgb(), gc)
        filled = face is not None and face[3] > 0
        stroked = gc.get_linewidth() > 0 and edge[3] > 0
        with self._state(gc):
            if filled and face is not None:
                self._set_fill(face)
            if filled and gc.get_hatch():
                self.canvas.drawPath(self._trace(segments), stroke=0, fill=1, fillMode=_NONZERO)
                filled = False
            if gc.get_hatch():
                self._draw_hatch(gc, path.get_extents(transform).extents, segments)
            if stroked:
                self._set_stroke(gc, edge)
            if filled or stroked:
                self.canvas.drawPath(self._trace(segments), stroke=int(stroked), fill=int(filled), fillMode=_NONZERO)

    def draw_image(self, gc: Any, x: float, y: float, im: Any, transform: Any = None) -> None:
        """Refuse rasters. Raises NotImplementedError always."""
        raise NotImplementedError(f"an image of shape {im.shape} was drawn: use pcolormesh")

    def _label(self, text: str, font: str, ismath: Any) -> str:
        return printable(plain_label(text) if ismath else text, font)

    @contextmanager
    def _state(self, gc: GraphicsContextBase) -> Iterator[None]:
        """A saved graphics state with the clip of `gc` in force."""
        self.canvas.saveState()
        box = gc.get_clip_rectangle()
        if box is not None:
            outline = self.canvas.beginPath()
            outline.rect(*(round(float(part), 3) for part in box.bounds))
            self.canvas.clipPath(outline, stroke=0, fill=0)
        clip: Any = gc.get_clip_path()  # matplotlib declares a TransformedPath and returns a Path
        path, transform = clip
        if path is not None:
            self._clip(list(path.iter_segments(transform, simplify=False)))
        try:
            yield
        finally:
            self.canvas.restoreState()

    def _clip(self, segments: list[Any]) -> None:
        self.canvas.clipPath(self._trace(segments), stroke=0, fill=0, fillMode=_NONZERO)

    def _trace(self, segments: list[Any]) -> Any:
        outline = self.canvas.beginPath()
        trace_segments(outline, segments)
        return outline

    def _set_fill(self, face: tuple[float, float, float, float]) -> None:
        self.canvas.setFillColorRGB(*face[:3])
        if face[3] < 1:
            self.canvas.setFillAlpha(face[3])

    def _set_stroke(self, gc: GraphicsContextBase, edge: tuple[float, float, float, float]) -> None:
        self.canvas.setStrokeColorRGB(*edge[:3])
        if edge[3] < 1:
            self.canvas.setStrokeAlpha(edge[3])
        self.canvas.setLineWidth(round(float(gc.get_linewidth()), 3))
        self.canvas.setLineCap(_CAPS[gc.get_capstyle()])
        self.canvas.setLineJoin(_JOINS[gc.get_joinstyle()])
        dash: Any = gc.get_dashes()
        offset, dashes = dash
        if dashes is not None:
            self.canvas.setDash([round(float(part), 3) for part in dashes], round(float(offset), 3))

    def _draw_hatch(self, gc: GraphicsContextBase, extents: Any, segments: list[Any]) -> None:
        """Lines and marks of the hatch, clipped to the path; never heavier than half a point."""
        pattern, box = gc.get_hatch(), self._on_page(extents)
        if not pattern or box is None:
            return
        red, green, blue, alpha = _rgba(gc.get_hatch_color(), gc)
        canvas = self.canvas
        canvas.saveState()
        self._clip(segments)
        canvas.setStrokeColorRGB(red, green, blue)
        canvas.setFillColorRGB(red, green, blue)
        canvas.setStrokeAlpha(alpha)
        canvas.setFillAlpha(alpha)
        canvas.setLineWidth(min(float(gc.get_hatch_linewidth()), HEAVIEST_LINE_PT))
        canvas.setLineCap(0)
        canvas.lines([tuple(round(part, 3) for part in line) for line in hatch_lines(pattern, box)])
        for mark in hatch_marks(pattern, box):
            x, y = round(mark.x_pt, 3), round(mark.y_pt, 3)
            canvas.circle(x, y, mark.radius_pt, stroke=int(not mark.filled), fill=int(mark.filled))
        canvas.restoreState()

    def _on_page(self, extents: Any) -> tuple[float, float, float, float] | None:
        """The part of a box that lies on the figure, None where there is none."""
        if not np.all(np.isfinite(extents)):
            return None
        x0, y0, x1, y1 = (float(part) for part in extents)
        x0, y0, x1, y1 = max(x0, 0.0), max(y0, 0.0), min(x1, self.width), min(y1, self.height)
        return (x0, y0, x1, y1) if x0 < x1 and y0 < y1 else None


def trace_segments(outline: Any, segments: list[Any]) -> None:
    """Append matplotlib path segments (points, code), in points, to a reportlab path object."""
    at = (0.0, 0.0)
    for points, code in segments:
        xy = [round(float(part), 3) for part in points]
        if code == Path.MOVETO:
            outline.moveTo(*xy)
        elif code == Path.LINETO:
            outline.lineTo(*xy)
        elif code == Path.CURVE3:
            outline.curveTo(*_as_cubic(at, xy))
        elif code == Path.CURVE4:
            outline.curveTo(*xy)
        elif code == Path.CLOSEPOLY:
            outline.close()
            continue
        at = (xy[-2], xy[-1])


def _as_cubic(at: tuple[float, float], xy: list[float]) -> list[float]:
    """Control points of the cubic curve that equals a quadratic one (degree elevation)."""
    x0, y0 = at
    x1, y1, x2, y2 = xy
    third = [(x0 + 2 * x1) / 3, (y0 + 2 * y1) / 3, (x2 + 2 * x1) / 3, (y2 + 2 * y1) / 3]
    return [*(round(part, 3) for part in third), x2, y2]


def _rgba(colour: Any, gc: GraphicsContextBase) -> tuple[float, float, float, float]:
    alpha = colour[3] if len(colour) == 4 and not gc.get_forced_alpha() else gc.get_alpha()
    red, green, blue = (round(float(part), 4) for part in colour[:3])
    return red, green, blue, round(float(alpha), 4)
