"""Hatching as plain geometry: families of parallel lines and lattices of small marks over a box.

Matplotlib's own hatch is a tile whose lines run over the tile's edge; laid side by side the tiles draw
every line twice and the hatch comes out heavy. Here each line is drawn once, from edge to edge of the box.
The lattice is anchored at the figure's origin, so that neighbouring areas line up.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from math import ceil, cos, floor, radians, sin

HEAVIEST_LINE_PT = 0.5
LINE_SPACING_PT = 13.0
MARK_SPACING_PT = 13.0

_DIRECTIONS_DEG = {"-": (0,), "|": (90,), "/": (45,), "\\": (135,), "+": (0, 90), "x": (45, 135)}
_MARKS = {".": (0.9, True), "o": (1.6, False), "O": (2.8, False), "*": (1.8, True)}

Box = tuple[float, float, float, float]
Segment = tuple[float, float, float, float]


@dataclass(frozen=True)
class HatchMark:
    """A small round mark of a hatch: centre and radius in points, filled or open."""

    x_pt: float
    y_pt: float
    radius_pt: float
    filled: bool


def hatch_lines(pattern: str, box: Box) -> list[Segment]:
    """Segments (x0, y0, x1, y1) in points that cover the box (x0, y0, x1, y1) with the pattern's lines.

    A repeated symbol makes its family denser: spacing is 13 pt over the number of repeats.
    """
    families: Counter[int] = Counter()
    for symbol in pattern:
        families.update(_DIRECTIONS_DEG.get(symbol, ()))
    return [line for angle, count in families.items() for line in _family(angle, LINE_SPACING_PT / count, box)]


def _family(angle_deg: int, spacing: float, box: Box) -> Iterator[Segment]:
    along_x, along_y = cos(radians(angle_deg)), sin(radians(angle_deg))
    corners = [(box[i], box[j]) for i in (0, 2) for j in (1, 3)]
    along = [x * along_x + y * along_y for x, y in corners]
    across = [y * along_x - x * along_y for x, y in corners]
    for step in range(ceil(min(across) / spacing), floor(max(across) / spacing) + 1):
        x, y = -along_y * step * spacing, along_x * step * spacing
        start, end = min(along), max(along)
        yield (x + start * along_x, y + start * along_y, x + end * along_x, y + end * along_y)


def hatch_marks(pattern: str, box: Box) -> list[HatchMark]:
    """Marks of the pattern's dots, circles and stars (drawn as heavy dots) on a staggered lattice."""
    counts = Counter(symbol for symbol in pattern if symbol in _MARKS)
    return [mark for symbol, count in counts.items() for mark in _lattice(symbol, count, box)]


def _lattice(symbol: str, count: int, box: Box) -> Iterator[HatchMark]:
    radius, filled = _MARKS[symbol]
    spacing = MARK_SPACING_PT / count
    for row in range(floor(box[1] / spacing), ceil(box[3] / spacing) + 1):
        shift = 0.5 * (row % 2)
        for column in range(floor(box[0] / spacing) - 1, ceil(box[2] / spacing) + 1):
            yield HatchMark((column + shift) * spacing, row * spacing, radius, filled)
