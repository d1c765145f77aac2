"""The look of every chart: few dark colours, line widths, type sizes, marker shapes, sizes in millimetres.

Nothing is told by colour alone: kinds differ by line pattern, shape or hatching as well.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MM_PER_INCH = 25.4
POINT_MM = MM_PER_INCH / 72.0

WIDTH_MM = 161.5
"""Width of every figure: that of the text on a report page, so that its type size is kept."""
TALLEST_MM = 178.0

INK = "#16191c"
QUIET = "#565e66"
FAINT = "#a3abb3"
ACCENT = "#2b3a4a"
SHADE = "#e4e8ec"
PALE = "#f3f5f7"
PAPER = "#ffffff"

TITLE_PT = 9.0
TEXT_PT = 7.5
SMALL_PT = 7.0
LEADING = 1.22

HAIR_PT = 0.4
THIN_PT = 0.7
LINE_PT = 1.1
HEAVY_PT = 1.8

MARKERS: dict[str, tuple[str, str]] = {
    "crossing": ("o", "meets in the running range"),
    "close": ("^", "closer than required"),
    "barred": ("s", "meets only in a barred range"),
    "clear": (".", "clear"),
    "dismissed": ("X", "dismissed by an engineer"),
}
"""Marker shape and meaning for each verdict; filled at nominal values, open only over the tolerances."""

DASHES: dict[str, Any] = {
    "order": "-",
    "fixed": (0, (5.0, 1.6)),
    "mixed": (0, (6.0, 1.6, 1.2, 1.6)),
    "minor": (0, (1.0, 1.8)),
    "natural": (0, (9.0, 2.0, 1.5, 2.0)),
    "required": (0, (2.2, 1.4)),
}
"""Line patterns of the interference diagram by kind of line."""


@dataclass(frozen=True)
class Frame:
    """A figure with its title set; `top_mm` is the height left below the title."""

    figure: Figure
    width_mm: float
    height_mm: float
    top_mm: float


def line_mm(size_pt: float = SMALL_PT) -> float:
    """Height [mm] of one line of text."""
    return size_pt * POINT_MM * LEADING


def width_mm(text: str, size_pt: float = SMALL_PT, bold: bool = False) -> float:
    """Width [mm] of one line of text in the charts' font."""
    from quillshaft.present.pdf.fonts import SANS, SANS_BOLD, text_width_pt

    return text_width_pt(text, SANS_BOLD if bold else SANS, size_pt) * POINT_MM


def wrap(text: str, limit_mm: float, size_pt: float = SMALL_PT, bold: bool = False) -> list[str]:
    """Lines no wider than a limit, broken at spaces but not before a unit; a wider single word stands alone."""
    lines: list[str] = []
    for word in re.findall(r"\S+(?: (?:%|rpm|Hz)(?!\w)\S*)?", text):
        joined = f"{lines[-1]} {word}" if lines else word
        if lines and width_mm(joined, size_pt, bold) <= limit_mm:
            lines[-1] = joined
        else:
            lines.append(word)
    return lines


def wrap_name(name: str, limit_mm: float, size_pt: float = SMALL_PT, bold: bool = False) -> list[str]:
    """A name broken after hyphens, within parts only where it must; at most three lines, the middle left out."""
    lines: list[str] = []
    for part in _chunks(name, limit_mm, size_pt, bold):
        if lines and width_mm(lines[-1] + part, size_pt, bold) <= limit_mm:
            lines[-1] += part
        else:
            lines.append(part)
    if len(lines) <= 3:
        return lines
    return [lines[0], lines[1], shorten_name("".join(lines[2:]), limit_mm, size_pt, bold)]


def breaks_well(name: str, limit_mm: float) -> bool:
    """True where a name fits three lines broken only after its hyphens."""
    return all(width_mm(part + "-") <= limit_mm for part in name.split("-")) and "…" not in "".join(
        wrap_name(name, limit_mm)
    )


def _chunks(name: str, limit_mm: float, size_pt: float, bold: bool) -> list[str]:
    """Parts of a name up to and with each hyphen, the wide ones cut by letters."""
    chunks = []
    parts = name.split("-")
    for index, part in enumerate(parts):
        piece = part + ("-" if index < len(parts) - 1 else "")
        while width_mm(piece, size_pt, bold) > limit_mm and len(piece) > 2:
            cut = len(piece) - 1
            while cut > 1 and width_mm(piece[:cut], size_pt, bold) > limit_mm:
                cut -= 1
            chunks.append(piece[:cut])
            piece = piece[cut:]
        chunks.append(piece)
    return chunks


def shorten(text: str, limit_mm: float, size_pt: float = SMALL_PT, bold: bool = False) -> str:
    """The text, or as much of its beginning as fits beside an ellipsis."""
    if width_mm(text, size_pt, bold) <= limit_mm:
        return text
    shorts = (text[:length].rstrip() + "…" for length in range(len(text) - 1, 0, -1))
    return next((short for short in shorts if width_mm(short, size_pt, bold) <= limit_mm), "…")


def shorten_name(name: str, limit_mm: float, size_pt: float = SMALL_PT, bold: bool = False) -> str:
    """The name, or its two ends about an ellipsis: names of one family often differ only at the end."""
    if width_mm(name, size_pt, bold) <= limit_mm:
        return name
    for kept in range(len(name) - 1, 1, -1):
        head = kept * 2 // 5
        short = f"{name[:head]}…{name[head - kept :]}"
        if width_mm(short, size_pt, bold) <= limit_mm:
            return short
    return "…"


def put(axes: Axes, x: float, y: float, text: str, size_pt: float = SMALL_PT, **style: Any) -> Any:
    """Text on axes exactly as written: a dollar sign in a name does not start a formula."""
    style = {"color": INK, "ha": "center", "va": "center", "fontfamily": "DejaVu Sans", **style}
    return axes.text(x, y, text, fontsize=size_pt, parse_math=False, **style)


def title_lines(title: str) -> list[str]:
    """A title in lines that fit the page width."""
    return wrap(title, WIDTH_MM - 4.0, TITLE_PT, bold=True)


def title_height(title: str) -> float:
    """Height [mm] that a title takes over the body of a figure."""
    return len(title_lines(title)) * line_mm(TITLE_PT) + 2.5


def frame(title: str, body_mm: float) -> Frame:
    """A figure of the page width whose title stands above a body of the given height [mm]."""
    from matplotlib.figure import Figure

    lines = title_lines(title)
    height_mm = body_mm + title_height(title)
    figure = Figure(figsize=(WIDTH_MM / MM_PER_INCH, height_mm / MM_PER_INCH), facecolor=PAPER)
    figure.set_label(title)
    made = Frame(figure, WIDTH_MM, height_mm, body_mm)
    heading(made, height_mm - 0.6, lines)
    return made


def heading(made: Frame, top_mm: float, lines: list[str]) -> None:
    """Bold lines downward from a height [mm] above the figure's foot."""
    for index, line in enumerate(lines):
        made.figure.text(
            0.0,
            (top_mm - index * line_mm(TITLE_PT)) / made.height_mm,
            line,
            fontsize=TITLE_PT,
            fontweight="bold",
            fontfamily="DejaVu Sans",
            color=ACCENT,
            ha="left",
            va="top",
            parse_math=False,
        )


def title_of(figure: Figure) -> str:
    """The title of a chart as one line."""
    return str(figure.get_label())


def millimetre_axes(made: Frame, low_mm: float, high_mm: float) -> Axes:
    """Bare axes over the whole width between two heights [mm] from the figure's foot, in millimetres."""
    axes = made.figure.add_axes((0.0, low_mm / made.height_mm, 1.0, (high_mm - low_mm) / made.height_mm))
    axes.set_xlim(0.0, made.width_mm)
    axes.set_ylim(0.0, high_mm - low_mm)
    axes.axis("off")
    return axes


def plot_axes(made: Frame, box_mm: tuple[float, float, float, float]) -> Axes:
    """Axes in a box (left, foot, width, height) [mm], with quiet spines and small type."""
    left, foot, width, height = box_mm
    axes = made.figure.add_axes(
        (left / made.width_mm, foot / made.height_mm, width / made.width_mm, height / made.height_mm)
    )
    for spine in axes.spines.values():
        spine.set_linewidth(THIN_PT)
        spine.set_color(QUIET)
    axes.tick_params(labelsize=SMALL_PT, width=THIN_PT, length=2.5, color=QUIET, labelcolor=INK, pad=2.0)
    for label in [*axes.get_xticklabels(), *axes.get_yticklabels()]:
        label.set_fontfamily("DejaVu Sans")
    return axes


def notes(axes: Axes, top_mm: float, lines: list[str]) -> None:
    """Small quiet lines of explanation, downward from a height [mm] of millimetre axes."""
    for index, line in enumerate(lines):
        y = top_mm - index * line_mm()
        put(axes, 0.0, y, line, color=QUIET, ha="left", va="top")
