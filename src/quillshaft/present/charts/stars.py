"""Stars of an engine's orders: where each cylinder's part points, and what all of them come to."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.orders import OrderRow, OrderStudy
from quillshaft.present.charts import look
from quillshaft.present.words import hertz

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from quillshaft.graph.network import Floats
    from quillshaft.sources.gas import Complexes

ACROSS = 6
CELL_MM = look.WIDTH_MM / ACROSS
RADIUS_MM = 7.5
STAR_MM = 25.0
HEAD_MM = 5.5
NEAR = 0.4
"""Parts whose directions are nearer than this [rad] share one label between them."""
MOVED = 0.05
"""A mode whose throws all move less than this share of its largest angle gets no stars of its own."""


@dataclass(frozen=True)
class Block:
    """One line of stars: its heading, and the weight of every cylinder."""

    heading: str
    weights: Floats


def star_diagrams(study: OrderStudy) -> Figure:
    """One figure: the stars on a rigid crank, then those of the judged modes that move the throws, while they fit.

    Orders whose parts point the same ways share a star (phase vectors: Den Hartog, Mechanical Vibrations, ch. 5).
    """
    groups = _groups(study.rows)
    rows = math.ceil(len(groups) / ACROSS)
    label_lines = max(len(_order_lines(group)) for group in groups)
    star_mm = STAR_MM + (label_lines + 1) * look.line_mm()
    block_mm = HEAD_MM + rows * star_mm
    note = look.wrap(_note(study), look.WIDTH_MM - 4.0)
    foot = len(note) * look.line_mm() + 2.0
    title = _title(study)
    room = look.TALLEST_MM - look.title_height(title) - foot
    blocks = _blocks(study)[: max(1, int(room / block_mm))]
    made = look.frame(title, len(blocks) * block_mm + foot)
    y = made.top_mm
    for block in blocks:
        _draw_block(made, study, block, groups, y, star_mm)
        y -= block_mm
    look.notes(look.millimetre_axes(made, 0.0, foot), foot - 1.0, note)
    return made.figure


def _title(study: OrderStudy) -> str:
    major = [f"{row.order:g}" for row in study.rows if row.major]
    count = len(study.machine.cylinders)
    acting = "" if study.acting == count else f" ({study.acting} of {count} act)"
    if not major:
        return f"The cylinders of {study.machine.name} add up in no order{acting}"
    listed = ", ".join(major[:-1]) + (" and " if len(major) > 1 else "") + major[-1]
    word = "orders" if len(major) > 1 else "order"
    return f"The cylinders of {study.machine.name} add up in {word} {listed}{acting}"


def _groups(rows: Sequence[OrderRow]) -> list[list[OrderRow]]:
    """Orders whose vectors are the same, each group in rising order."""
    groups: list[list[OrderRow]] = []
    for row in rows:
        home = next((group for group in groups if np.allclose(group[0].vectors, row.vectors, atol=1e-6)), None)
        if home is None:
            groups.append([row])
        else:
            home.append(row)
    return groups


def _blocks(study: OrderStudy) -> list[Block]:
    blocks = [Block("Rigid crank", np.ones(len(study.machine.cylinders)))]
    for mode, shape in zip(study.modes, study.shapes, strict=True):
        if np.max(np.abs(shape)) >= MOVED:
            frequency = hertz(study.screening.mode(mode).frequency_hz)
            blocks.append(Block(f"Mode {mode}, {frequency} Hz", np.asarray(shape)))
    return blocks


def _order_lines(group: list[OrderRow]) -> list[str]:
    orders = ", ".join(f"{row.order:g}" for row in group)
    return look.wrap(f"{'orders' if len(group) > 1 else 'order'} {orders}", CELL_MM - 3.0)


def _draw_block(
    made: look.Frame, study: OrderStudy, block: Block, groups: list[list[OrderRow]], top_mm: float, star_mm: float
) -> None:
    rows = math.ceil(len(groups) / ACROSS)
    height = HEAD_MM + rows * star_mm
    axes = look.millimetre_axes(made, top_mm - height, top_mm)
    look.put(axes, 0.0, height - 2.2, block.heading, ha="left", color=look.ACCENT, fontweight="bold")
    scale = float(np.max(np.abs(block.weights)))
    for index, group in enumerate(groups):
        x = (index % ACROSS + 0.5) * CELL_MM
        y = height - HEAD_MM - (index // ACROSS) * star_mm - STAR_MM / 2.0 + 0.5
        parts = group[0].vectors * block.weights
        _draw_star(axes, (x, y), 1j * parts / scale)
        total = float(abs(np.sum(parts)))
        y -= STAR_MM / 2.0
        for text in _order_lines(group):
            look.put(axes, x, y, text, fontweight="bold" if group[0].major else "normal")
            y -= look.line_mm()
        look.put(axes, x, y, f"sum {total:.2f} of {study.acting}", color=look.QUIET)


def _draw_star(axes: Axes, centre: tuple[float, float], parts: Complexes) -> None:
    """Spokes with beads at the cylinders' parts, their numbers outside, and the mean part as a broad bar."""
    from matplotlib.patches import Circle

    x, y = centre
    axes.add_patch(Circle(centre, RADIUS_MM, facecolor=look.PALE, edgecolor=look.FAINT, linewidth=look.HAIR_PT))
    for part in parts:
        end = (x + RADIUS_MM * part.real, y + RADIUS_MM * part.imag)
        axes.plot([x, end[0]], [y, end[1]], color=look.QUIET, lw=look.THIN_PT, zorder=2)
        axes.plot(*end, marker="o", ms=2.6, color=look.INK, zorder=4)
    for angle, names in _numbers(parts):
        lines = _beside(names) if abs(math.cos(angle)) > 0.6 else [_run(names)]
        reach = RADIUS_MM + 2.3 + 0.5 * max(look.width_mm(text) for text in lines) * abs(math.cos(angle))
        for index, text in enumerate(lines):
            rise = (0.5 * (len(lines) - 1) - index) * look.line_mm()
            look.put(axes, x + reach * math.cos(angle), y + reach * math.sin(angle) + rise, text)
    acting = max(int(np.count_nonzero(np.abs(parts) > 0)), 1)
    mean = complex(np.sum(parts)) / acting
    if abs(mean) < 0.02:
        axes.plot(x, y, marker="o", ms=4.5, mfc=look.PAPER, mec=look.INK, mew=look.THIN_PT, zorder=5)
        return
    tip = (x + RADIUS_MM * mean.real, y + RADIUS_MM * mean.imag)
    axes.plot([x, tip[0]], [y, tip[1]], color=look.ACCENT, lw=3.2, solid_capstyle="butt", zorder=3, gid="mean")


def _numbers(parts: Complexes) -> list[tuple[float, list[str]]]:
    """(direction [rad], numbers of the cylinders that point about there); those that do not act are left out."""
    found: list[tuple[complex, list[str]]] = []
    for number, part in enumerate(parts, start=1):
        if abs(part) == 0.0:
            continue
        unit = complex(part / abs(part))
        place = next((at for at, (direction, _) in enumerate(found) if abs(direction - unit) < NEAR), None)
        if place is None:
            found.append((unit, [str(number)]))
        else:
            direction, names = found[place]
            between = direction * len(names) + unit
            found[place] = (between / abs(between), [*names, str(number)])
    return [(math.atan2(unit.imag, unit.real), names) for unit, names in found]


def _run(names: list[str]) -> str:
    return "·".join(names) if len(names) <= 8 else f"{names[0]}·…·{names[-1]}"


def _beside(names: list[str]) -> list[str]:
    """Numbers in lines one below the other, for where there is little room to the side."""
    return names if len(names) <= 4 else [names[0], "…", names[-1]]


def _note(study: OrderStudy) -> str:
    dead = [str(number) for number, item in enumerate(study.machine.cylinders, start=1) if item.dead]
    text = (
        "Beads: the parts of the cylinders, by number, that of a dead centre at 0° upward; the largest reaches the "
        "rim. Broad bar: their mean; ring: they cancel. Bold: major order. In a mode a part is as long as the throw's "
        "referred angle."
    )
    return text + (f" Not shown: dead cylinder{'s' if len(dead) > 1 else ''} {', '.join(dead)}." if dead else "")
