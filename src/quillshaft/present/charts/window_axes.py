"""Logarithmic scales in millimetres, round ticks on them, and bars for ranges of stiffness."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from quillshaft.present.charts import look
from quillshaft.present.words import number

if TYPE_CHECKING:
    from matplotlib.axes import Axes

_SETS = ((1.0, 2.0, 5.0), (1.0, 3.0), (1.0,))
FEWEST_MM = 9.0


@dataclass(frozen=True)
class LogScale:
    """A logarithmic axis from `start_mm` on, `length_mm` long, for values from low to high."""

    low: float
    high: float
    start_mm: float
    length_mm: float

    def at(self, value: float) -> float:
        """Place [mm] of a value, ends included; values outside stand at the ends."""
        inside = min(max(value, self.low), self.high)
        return self.start_mm + self.length_mm * math.log(inside / self.low) / math.log(self.high / self.low)

    def shows(self, value: float) -> bool:
        """True for values on the axis."""
        return self.low <= value <= self.high


def round_ticks(scale: LogScale) -> list[float]:
    """Round values (1, 2 and 5, else 1 and 3, else 1, times powers of ten), as close as there is room for."""
    first, last = math.floor(math.log10(scale.low)), math.ceil(math.log10(scale.high))
    for parts in _SETS:
        ticks = [part * 10.0**power for power in range(first, last + 1) for part in parts]
        ticks = [tick for tick in ticks if scale.shows(tick)]
        places = [scale.at(tick) for tick in ticks]
        if all(b - a >= FEWEST_MM for a, b in pairwise(places)):
            break
    return ticks if len(ticks) > 1 else [scale.low, scale.high]


def tick_text(value: float) -> str:
    """A round number without needless digits."""
    text = number(value, 4)
    return text.rstrip("0").rstrip(".") if "." in text and "e" not in text else text


def draw_x_axis(axes: Axes, scale: LogScale, y_mm: float, name: str) -> None:
    """Ticks and numbers under a height [mm], the name below them."""
    for tick in round_ticks(scale):
        x = scale.at(tick)
        axes.plot([x, x], [y_mm, y_mm - 1.0], lw=look.THIN_PT, color=look.QUIET)
        look.put(axes, x, y_mm - 2.8, tick_text(tick), gid="tick")
    look.put(axes, scale.start_mm + scale.length_mm / 2.0, y_mm - 6.2, name, gid="name")


def draw_y_axis(axes: Axes, scale: LogScale, x_mm: float, name: str) -> None:
    """Ticks and numbers left of a place [mm], the name upright beside them."""
    for tick in round_ticks(scale):
        y = scale.at(tick)
        axes.plot([x_mm, x_mm - 1.0], [y, y], lw=look.THIN_PT, color=look.QUIET)
        look.put(axes, x_mm - 1.6, y, tick_text(tick), ha="right", gid="tick")
    middle = scale.start_mm + scale.length_mm / 2.0
    look.put(axes, x_mm - 10.6, middle, name, rotation=90, gid="name")


def draw_frame(axes: Axes, across: LogScale, up: LogScale) -> None:
    """The box of a plot."""
    box(axes, (across.start_mm, up.start_mm, across.length_mm, up.length_mm), "none", zorder=5)


def box(
    axes: Axes,
    at_mm: tuple[float, float, float, float],
    face: str,
    hatch: str | None = None,
    edge: str | None = look.QUIET,
    zorder: float = 1.0,
) -> None:
    """A rectangle (left, foot, width, height) [mm]; without an edge it is only filled or hatched."""
    from matplotlib.patches import Rectangle

    axes.add_patch(
        Rectangle(
            at_mm[:2],
            at_mm[2],
            at_mm[3],
            facecolor=face,
            edgecolor=edge or look.QUIET,
            linewidth=look.THIN_PT if edge else 0.0,
            hatch=hatch,
            zorder=zorder,
        )
    )
