"""The strip under the interference diagram: running and barred ranges, idle, rated and trip speeds."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import RPM
from quillshaft.present.charts.spread import spread

if TYPE_CHECKING:
    from matplotlib.axes import Axes

BAR_FOOT_MM = 11.5
BAR_TOP_MM = 14.6


def draw_operation(
    made: look.Frame, screening: Screening, box_mm: tuple[float, float, float, float], top_rpm: float
) -> None:
    """Bars and ticks for the operating map, and the speed axis, in a box (left, foot, width, height) [mm]."""
    left, foot, width, height = box_mm
    axes = look.millimetre_axes(made, foot, foot + height)
    operation = screening.train.operation

    def x(speed_rad_s: float) -> float:
        return left + width * speed_rad_s * RPM / top_rpm

    for low, high in operation.ranges_rad_s:
        _bar(axes, x(low), x(high), look.SHADE, None)
    for low, high in operation.barred_rad_s:
        _bar(axes, x(low), x(high), look.PAPER, "//////")
    ticks = [
        (name, speed)
        for name, speed in (
            ("idle", operation.idle_rad_s),
            ("rated", operation.rated_rad_s),
            ("trip", operation.trip_rad_s),
        )
        if speed is not None
    ]
    for _, speed in ticks:
        axes.plot([x(speed)] * 2, [BAR_FOOT_MM - 0.8, height], lw=look.LINE_PT, color=look.INK, zorder=4)
    labels = [(f"{name} {speed * RPM:.0f}", x(speed)) for name, speed in ticks]
    labels += [
        (f"{word} {low * RPM:.0f}–{high * RPM:.0f}", (x(low) + x(high)) / 2)
        for word, ranges in (("range", operation.ranges_rad_s), ("barred", operation.barred_rad_s))
        for low, high in ranges
    ]
    _write_labels(axes, labels, left, left + width)
    _axis(axes, operation.speed_at, left, width, top_rpm)


def _bar(axes: Axes, low: float, high: float, face: str, hatch: str | None) -> None:
    from matplotlib.patches import Rectangle

    axes.add_patch(
        Rectangle(
            (low, BAR_FOOT_MM),
            high - low,
            BAR_TOP_MM - BAR_FOOT_MM,
            facecolor=face,
            edgecolor=look.INK,
            linewidth=look.THIN_PT,
            hatch=hatch,
            zorder=2,
        )
    )


def _write_labels(axes: Axes, labels: list[tuple[str, float]], low: float, high: float) -> None:
    sizes = [look.width_mm(text) + 2.5 for text, _ in labels]
    centres = spread([at for _, at in labels], sizes, low - 10.0, high + 30.0)
    for (text, _), centre in zip(labels, centres, strict=True):
        look.put(axes, centre, BAR_FOOT_MM - 2.4, text, gid="operation")


def _axis(axes: Axes, speed_at: str, left: float, width: float, top_rpm: float) -> None:
    """Ticks at round speeds and the axis' name."""
    step = _round_step(top_rpm / 6.0)
    y = 6.6
    axes.plot([left, left + width], [y, y], lw=look.THIN_PT, color=look.QUIET)
    for index in range(int(top_rpm / step) + 1):
        at = left + width * index * step / top_rpm
        axes.plot([at, at], [y, y - 1.0], lw=look.THIN_PT, color=look.QUIET)
        look.put(axes, at, y - 2.6, f"{index * step:g}")
    name = look.shorten_name(f"rpm of {speed_at}", look.WIDTH_MM - left - width - 4.0)
    look.put(axes, left + width + 3.2, y - 2.6, name, ha="left")


def _round_step(value: float) -> float:
    """The round number (1, 2, 2.5 or 5 times a power of ten) at or above a value."""
    size = 10.0 ** len(str(int(value))) / 10.0
    return next(size * part for part in (1.0, 2.0, 2.5, 5.0, 10.0) if size * part >= value)
