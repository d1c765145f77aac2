"""The map of two links' stiffnesses: where both together are clear, and boxes of it proven as a whole."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise
from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.spread import Box, free_spot
from quillshaft.present.charts.window_axes import LogScale, box, draw_frame, draw_x_axis, draw_y_axis
from quillshaft.present.units import SHOWN
from quillshaft.present.window_words import box_text, range_text
from quillshaft.study.window_map import WindowMap
from quillshaft.study.window_ranges import Range

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM = 16.0
PLOT_MM = 118.0
HIGH_MM = 100.0
AXIS_MM = 8.5
TOP_MM = 3.0
ROW_MM = 3.6
KEY_MM = look.WIDTH_MM - LEFT_MM - PLOT_MM
Quad = tuple[Range, Range, float, float]
"""Stiffnesses of the first link at two heights, and those heights [mm]."""


def window_map_chart(screening: Screening, found: WindowMap) -> Figure:
    """Recommended, allowed and forbidden pairs of stiffness of two links, with nominal values and proven boxes."""
    lines = [f"{index}  {box_text(screening, found, clear)}" for index, clear in enumerate(found.boxes, start=1)]
    notes = look.wrap(_reading(found), look.WIDTH_MM - 2.0)
    foot = len(notes) * look.line_mm() + len(lines) * ROW_MM + 3.0
    plot = foot + AXIS_MM
    total = plot + HIGH_MM + TOP_MM
    across = LogScale(*found.search_nm_rad[0], LEFT_MM, PLOT_MM)
    up = LogScale(*found.search_nm_rad[1], plot, HIGH_MM)
    made = look.frame(map_title(screening, found), total)
    axes = look.millimetre_axes(made, 0.0, total)
    box(axes, (LEFT_MM, plot, PLOT_MM, HIGH_MM), look.PAPER, "////", zorder=0.5)
    _fill(axes, list(_quads(found, across, up, recommended=False)), look.PAPER, 1.0)
    _fill(axes, list(_quads(found, across, up, recommended=True)), look.FAINT, 1.2)
    _draw_nominal(axes, found, across, up)
    _draw_boxes(axes, found, across, up)
    draw_frame(axes, across, up)
    _draw_axes(axes, screening, found, plot)
    _draw_key(axes, plot + HIGH_MM)
    for index, line in enumerate(lines):
        y = foot - 1.5 - (index + 0.5) * ROW_MM
        look.put(axes, 0.0, y, look.shorten(line, look.WIDTH_MM - 2.0), ha="left", gid="key")
    look.notes(axes, foot - 2.0 - len(lines) * ROW_MM, notes)
    return made.figure


def map_title(screening: Screening, found: WindowMap) -> str:
    """The answer in one sentence."""
    first, second = found.links
    if not found.boxes:
        return f"No stiffnesses of {first} and {second} are clear together over a box of both"
    best = found.boxes[0]
    unit = SHOWN[screening.train.units].stiffness
    where = (
        f"{first} at {range_text(screening, best.first_nm_rad, unit=False)} with "
        f"{second} at {range_text(screening, best.second_nm_rad, unit=False)} {unit}"
    )
    home = best.holds(*found.nominal_nm_rad)
    kind = "over the tolerances" if best.recommended else "as fitted, but nothing over the tolerances"
    return f"{where} is clear {kind}; the nominal values are {'inside' if home else 'not'}"


def _reading(found: WindowMap) -> str:
    return (
        "Grey: nominal stiffnesses that stay clear over all tolerances; white: clear only as fitted; hatched: "
        f"forbidden. Exact on {len(found.lines)} lines of {found.links[1]}, joined in between; every pair of values "
        "inside a numbered box is proven by counting modes at its softest and its stiffest corner."
    )


def _quads(found: WindowMap, across: LogScale, up: LogScale, recommended: bool) -> Iterator[Quad]:
    """Clear stretches of neighbouring lines joined where they overlap; lone ones as half a step."""
    rows = [
        (up.at(line.other_nm_rad), [_places(across, r) for r in (line.recommended if recommended else line.allowed)])
        for line in found.lines
    ]
    for (y, own), (next_y, following) in pairwise(rows):
        for low, high in own:
            partners = [(a, b) for a, b in following if a < high and low < b]
            for partner in partners:
                yield (low, high), partner, y, next_y
            if not partners:
                yield (low, high), (low, high), y, (y + next_y) / 2.0
        for low, high in following:
            if not any(a < high and low < b for a, b in own):
                yield (low, high), (low, high), (y + next_y) / 2.0, next_y


def _places(across: LogScale, reach: Range) -> Range:
    return across.at(reach[0]), across.at(reach[1])


def _fill(axes: Axes, quads: Sequence[Quad], face: str, zorder: float) -> None:
    from matplotlib.patches import Polygon

    for (a, b), (c, d), y, next_y in quads:
        corners = [(a, y), (b, y), (d, next_y), (c, next_y)]
        axes.add_patch(Polygon(corners, facecolor=face, edgecolor=face, linewidth=0.3, zorder=zorder))


def _draw_nominal(axes: Axes, found: WindowMap, across: LogScale, up: LogScale) -> None:
    """A dot at the nominal values, and their tolerances as a cross of bars."""
    first, second = found.nominal_nm_rad
    if not (across.shows(first) and up.shows(second)):
        return
    x, y = across.at(first), up.at(second)
    (a, b), (c, d) = found.tolerance
    ends = [across.at(first * (1.0 + side)) for side in (a, b)]
    axes.plot(ends, [y, y], lw=look.HEAVY_PT, color=look.INK, solid_capstyle="butt", zorder=4)
    ends = [up.at(second * (1.0 + side)) for side in (c, d)]
    axes.plot([x, x], ends, lw=look.HEAVY_PT, color=look.INK, solid_capstyle="butt", zorder=4)
    axes.plot(x, y, marker="o", ms=5.0, mfc=look.PAPER, mec=look.INK, mew=look.LINE_PT, ls="none", zorder=4.5)


def _draw_boxes(axes: Axes, found: WindowMap, across: LogScale, up: LogScale) -> None:
    """Outlines of the proven boxes, each with its number beside or inside it."""
    taken: list[Box] = []
    for clear in found.boxes:
        left, right = _places(across, clear.first_nm_rad)
        low, high = _places(up, clear.second_nm_rad)
        taken.append((left, low, right, high))
        box(axes, (left, low, right - left, high - low), "none", edge=look.INK, zorder=3.5)
        axes.patches[-1].set_linewidth(look.LINE_PT)
    if all(scale.shows(value) for scale, value in zip((across, up), found.nominal_nm_rad, strict=True)):
        x, y = (scale.at(value) for scale, value in zip((across, up), found.nominal_nm_rad, strict=True))
        taken.append((x - 2.0, y - 2.0, x + 2.0, y + 2.0))
    for index, (left, low, right, high) in enumerate(list(taken[: len(found.boxes)]), start=1):
        spots = [(x - 1.4, y - 1.6, x + 1.4, y + 1.6) for x, y in _spots(left, low, right, high, across, up)]
        others = taken[: index - 1] + taken[index:]
        spot = spots[free_spot(spots, others)]
        taken.append(spot)
        centre = (spot[0] + spot[2]) / 2, (spot[1] + spot[3]) / 2
        backing = {"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.5, "alpha": 0.85}
        look.put(axes, *centre, str(index), fontweight="bold", zorder=7, gid="box", bbox=backing)


def _spots(
    left: float, low: float, right: float, high: float, across: LogScale, up: LogScale
) -> list[tuple[float, float]]:
    """Places for a box's number: its middle where that is roomy, else around it, inside the plot."""
    x, y, step = (left + right) / 2.0, (low + high) / 2.0, 2.4
    inside = [(x, y)] if right - left > 6.0 and high - low > 6.0 else []
    around = [(x, high + step), (x, low - step), (left - step, y), (right + step, y), (right + step, low)]
    edges = [(scale.start_mm + 2.0, scale.start_mm + scale.length_mm - 2.0) for scale in (across, up)]
    fits = [(a, b) for a, b in around if edges[0][0] <= a <= edges[0][1] and edges[1][0] <= b <= edges[1][1]]
    return [*inside, *fits] or [(x, y)]


def _draw_axes(axes: Axes, screening: Screening, found: WindowMap, foot_mm: float) -> None:
    units = SHOWN[screening.train.units]
    scales = []
    for (low, high), start, length in zip(found.search_nm_rad, (LEFT_MM, foot_mm), (PLOT_MM, HIGH_MM), strict=True):
        scales.append(LogScale(low * units.per_nm_rad, high * units.per_nm_rad, start, length))
    draw_x_axis(axes, scales[0], foot_mm, f"stiffness of {found.links[0]}, {units.stiffness}")
    draw_y_axis(axes, scales[1], LEFT_MM, f"stiffness of {found.links[1]}, {units.stiffness}")


def _draw_key(axes: Axes, top_mm: float) -> None:
    """What the fills mean, right of the plot."""
    x = LEFT_MM + PLOT_MM + 3.0
    rows: list[tuple[str, str, str | None]] = [
        ("recommended", look.FAINT, None),
        ("as fitted only", look.PAPER, None),
        ("forbidden", look.PAPER, "////"),
    ]
    y = top_mm - 4.0
    for text, face, hatch in rows:
        box(axes, (x, y, 5.0, 3.6), face, hatch)
        look.put(axes, x + 6.2, y + 1.8, look.shorten(text, KEY_MM - 9.5), ha="left", gid="key")
        y -= 5.2
    axes.plot(x + 2.5, y + 1.8, marker="o", ms=5.0, mfc=look.PAPER, mec=look.INK, mew=look.LINE_PT, ls="none")
    axes.plot([x, x + 5.0], [y + 1.8] * 2, lw=look.HEAVY_PT, color=look.INK, zorder=0.9)
    look.put(axes, x + 6.2, y + 1.8, "nominal and", ha="left", gid="key")
    look.put(axes, x + 6.2, y - 1.4, "tolerances", ha="left", gid="key")
