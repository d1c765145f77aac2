"""Symbols of the train diagram, in millimetres: discs, shafts, couplings, gears, ties and ground."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.present.charts import look

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Point = tuple[float, float]
DISC_WIDTH_MM = 3.0
TALLEST_DISC_MM = 11.0


def disc_height(inertia_kgm2: float, largest_kgm2: float) -> float:
    """Height [mm] of a station's disc: fourth root of inertia, as a solid disc of one thickness has it.

    Source: J = π ρ b r⁴ / 2 of a solid disc (common practice).
    """
    if inertia_kgm2 <= 0 or largest_kgm2 <= 0:
        return 0.0
    return max(2.2, TALLEST_DISC_MM * float((inertia_kgm2 / largest_kgm2) ** 0.25))


def line(axes: Axes, points: list[Point], width_pt: float = look.LINE_PT, color: str = look.INK) -> None:
    """A solid line through points."""
    axes.plot(*zip(*points, strict=True), lw=width_pt, color=color, solid_capstyle="butt", zorder=2)


def box(axes: Axes, centre: Point, size: Point, face: str, width_pt: float = look.THIN_PT, z: float = 3) -> None:
    """A rectangle around its centre."""
    from matplotlib.patches import Rectangle

    corner = (centre[0] - size[0] / 2, centre[1] - size[1] / 2)
    axes.add_patch(Rectangle(corner, *size, facecolor=face, edgecolor=look.INK, linewidth=width_pt, zorder=z))


def disc(axes: Axes, at: Point, height_mm: float, geared: bool) -> None:
    """A station: a disc seen from the side, dark where it carries teeth; a small ring where it has no inertia."""
    if height_mm <= 0:
        axes.plot(*at, marker="o", ms=3.5, mfc=look.PAPER, mec=look.INK, mew=look.THIN_PT, zorder=4)
        return
    box(axes, at, (DISC_WIDTH_MM, height_mm), look.ACCENT if geared else look.SHADE, look.THIN_PT, 4)


def shaft(axes: Axes, start: Point, end: Point) -> None:
    """A shaft: two parallel lines."""
    across = 0.55
    level = start[1] == end[1]
    for side in (across, -across):
        dx, dy = (0.0, side) if level else (side, 0.0)
        line(axes, [(start[0] + dx, start[1] + dy), (end[0] + dx, end[1] + dy)], look.THIN_PT)


def coupling(axes: Axes, start: Point, end: Point) -> None:
    """A coupling: a shaft with a crossed box in the middle."""
    shaft(axes, start, end)
    x, y = (start[0] + end[0]) / 2, (start[1] + end[1]) / 2
    half = 1.9
    box(axes, (x, y), (2 * half, 2 * half), look.PAPER)
    for sign in (1, -1):
        axes.plot([x - half, x + half], [y - sign * half, y + sign * half], lw=look.THIN_PT, color=look.INK, zorder=4)


def spring(axes: Axes, start: Point, end: Point) -> None:
    """A tie: a zigzag between two points."""
    steps = 9
    points = [start]
    length = ((end[0] - start[0]) ** 2 + (end[1] - start[1]) ** 2) ** 0.5 or 1.0
    normal = ((start[1] - end[1]) / length, (end[0] - start[0]) / length)
    for step in range(2, steps - 1):
        side = 1.1 if step % 2 else -1.1
        share = step / steps
        points.append(
            (
                start[0] + share * (end[0] - start[0]) + side * normal[0],
                start[1] + share * (end[1] - start[1]) + side * normal[1],
            )
        )
    line(axes, [*points, end], look.THIN_PT)


def ground(axes: Axes, at: Point, level: bool) -> None:
    """Ground: a bar with short strokes, lying `level` where the tie comes from above or below."""
    x, y = at
    strokes = [((0.0, -2.6), (0.0, 2.6))]
    strokes += [((0.0, -2.2 + 1.2 * step), (1.2, -3.1 + 1.2 * step)) for step in range(5)]
    for number, stroke in enumerate(strokes):
        points = [(x + dy, y - dx) if level else (x + dx, y + dy) for dx, dy in stroke]
        line(axes, points, look.HAIR_PT if number else look.LINE_PT)


def teeth(axes: Axes, start: Point, end: Point) -> None:
    """A gear mesh: a ladder of short strokes between two discs."""
    low, high = sorted((start[1], end[1]))
    strokes = max(2, int((high - low) / 1.1))
    for step in range(strokes):
        y = low + (step + 0.5) * (high - low) / strokes
        line(axes, [(start[0] - 0.9, y), (start[0] + 0.9, y)], look.LINE_PT, look.ACCENT)


def planets(axes: Axes, start: Point, end: Point) -> None:
    """An epicyclic stage: the ladder with three small rings on it."""
    teeth(axes, start, end)
    middle = (start[1] + end[1]) / 2
    for offset in (-2.0, 0.0, 2.0):
        axes.plot(
            start[0], middle + offset, marker="o", ms=4.6, mfc=look.PAPER, mec=look.ACCENT, mew=look.LINE_PT, zorder=3
        )


def belt(axes: Axes, start: Point, end: Point) -> None:
    """A belt or chain: two thin strands between two discs."""
    for side in (-1.1, 1.1):
        line(axes, [(start[0] + side, start[1]), (end[0] + side, end[1])], look.THIN_PT, look.ACCENT)


def letter(axes: Axes, at: Point, text: str) -> None:
    """A letter in a ring: the same letter stands at the other end of the joint."""
    axes.plot(*at, marker="o", ms=8.5, mfc=look.PAPER, mec=look.INK, mew=look.THIN_PT, zorder=6)
    look.put(axes, at[0], at[1], text, 6.5, zorder=7, fontweight="bold", va="center_baseline", gid="letter")
