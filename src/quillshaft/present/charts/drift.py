"""Drift chart: natural frequencies as one number changes, the sources they come near, and where they do."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.spread import spread
from quillshaft.present.drift_words import appearances, drift_title, first_sentence, unit_text
from quillshaft.present.words import hertz, number
from quillshaft.study.drift import Drift, FirstInterference

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM, RIGHT_MM = 12.0, 46.0
PLOT_MM = 84.0
FOOT_MM = 12.0
WIDE_SPAN = 8.0
MOST_MARKS = 7


def drift_chart(drift: Drift) -> Figure:
    """Frequencies over the datum, from its start at the left; first appearances numbered, with a key."""
    marks = appearances(drift)[:MOST_MARKS]
    key = _key(drift, marks)
    made = look.frame(drift_title(drift), PLOT_MM + FOOT_MM + len(key) * look.line_mm() + 3.0)
    foot = made.top_mm - PLOT_MM
    width = made.width_mm - LEFT_MM - RIGHT_MM
    axes = look.plot_axes(made, (LEFT_MM, foot, width, PLOT_MM - 3.0))
    shown = _shown_modes(drift)
    low, high = _span(drift, shown)
    if high > WIDE_SPAN * low > 0:
        axes.set_yscale("log")
        _plain_ticks(axes, low, high)
    _value_ticks(axes)
    axes.set_xlim(float(drift.values[0]), float(drift.values[-1]))
    axes.set_ylim(low, high)
    named = _draw_bands(axes, drift, low, high)
    ends: list[tuple[float, str]] = []
    for mode in shown:
        along = drift.frequency_hz[:, mode]
        axes.plot(drift.values, along, lw=look.HEAVY_PT, color=look.INK, zorder=4)
        ends.append((float(along[-1]), f"mode {mode + 1}: {hertz(float(along[0]))} to {hertz(float(along[-1]))} Hz"))
    for place, (item, _) in enumerate(marks, start=1):
        _mark(axes, item, place)
    _end_labels(made, axes, [*ends, *named], foot, (low, high))
    unit = unit_text(drift.unit)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    label = f"{drift.datum}, {unit}" if unit else drift.datum
    look.put(page, LEFT_MM + width / 2.0, foot - 6.5, label)
    look.put(page, 0.0, made.top_mm - 1.5, "Hz", ha="left")
    look.notes(page, foot - FOOT_MM, key)
    return made.figure


def _shown_modes(drift: Drift) -> list[int]:
    """Positions of the modes up to the next above those that come near a source on the way; at least three."""
    highest = max((item.mode for item in drift.first), default=0)
    return list(range(min(max(highest + 1, 3), drift.frequency_hz.shape[1])))


def _span(drift: Drift, shown: list[int]) -> tuple[float, float]:
    """Frequencies [Hz] from below the lowest mode shown to above the highest."""
    values = drift.frequency_hz[:, shown]
    values = values[np.isfinite(values)]
    if not len(values):
        return 0.0, 1.0
    low, high = float(values.min()), float(values.max())
    return (0.8 * low, 1.12 * high)


def _value_ticks(axes: Axes) -> None:
    """Few ticks along the datum, written in full."""
    from matplotlib.ticker import FuncFormatter, MaxNLocator

    axes.xaxis.set_major_locator(MaxNLocator(6))
    axes.xaxis.set_major_formatter(FuncFormatter(lambda value, _: number(value, 6).replace("-", "−")))
    for label in axes.get_xticklabels():
        label.set_fontfamily("DejaVu Sans")


def _plain_ticks(axes: Axes, low: float, high: float) -> None:
    from matplotlib.ticker import FixedFormatter, FixedLocator, NullLocator

    steps = [10.0**power * part for power in range(-2, 6) for part in (1, 2, 5)]
    ticks = [step for step in steps if low <= step <= high]
    axes.yaxis.set_major_locator(FixedLocator(ticks))
    axes.yaxis.set_major_formatter(FixedFormatter([f"{tick:g}" for tick in ticks]))
    axes.yaxis.set_minor_locator(NullLocator())
    for label in axes.get_yticklabels():
        label.set_fontfamily("DejaVu Sans")


def _draw_bands(axes: Axes, drift: Drift, low: float, high: float) -> list[tuple[float, str]]:
    """The sources that come into it: hatched where they excite, shaded with the separation; their labels."""
    involved = {item.source for item in drift.first} | {item.source for item in drift.at_start}
    drawn: dict[tuple[float, ...], tuple[float, list[str]]] = {}
    for column, name in enumerate(drift.sources):
        if name not in involved:
            continue
        for stretch in range(len(drift.bands[0][column])):
            edges = _edges(drift, column, stretch)
            key = tuple(np.round(edges[:2, -1], 6).tolist())
            middle = float((edges[0, -1] + edges[1, -1]) / 2.0)
            if key in drawn:
                drawn[key][1].append(name)
                continue
            drawn[key] = (middle, [name])
            axes.fill_between(drift.values, edges[2], edges[3], facecolor=look.SHADE, linewidth=0.0, zorder=1)
            axes.fill_between(
                drift.values,
                edges[0],
                edges[1],
                facecolor="none",
                edgecolor=look.QUIET,
                hatch="//////",
                linewidth=look.HAIR_PT,
                zorder=2,
            )
    return [(middle, " = ".join(dict.fromkeys(names))) for middle, names in drawn.values() if low < middle < high]


def _edges(drift: Drift, column: int, stretch: int) -> Floats:
    """(4, steps) low and high edge of a source's band along the way, then both with the separation."""
    rows = []
    for bands in drift.bands:
        band = bands[column][min(stretch, len(bands[column]) - 1)]
        rows.append((*band.meets, *band.not_clear))
    return np.array(rows).T


def _mark(axes: Axes, item: FirstInterference, place: int) -> None:
    """A numbered circle where an interference first appears."""
    if not np.isfinite(item.frequency_hz):
        return
    axes.plot([item.at_value] * 2, [axes.get_ylim()[0], item.frequency_hz], lw=look.HAIR_PT, color=look.QUIET, zorder=3)
    axes.plot(
        [item.at_value],
        [item.frequency_hz],
        marker="o",
        markersize=9.0,
        markerfacecolor=look.PAPER,
        markeredgecolor=look.INK,
        markeredgewidth=look.THIN_PT,
        linestyle="none",
        zorder=5,
    )
    look.put(axes, item.at_value, item.frequency_hz, f"{place}", zorder=6)


def _end_labels(
    made: look.Frame, axes: Axes, ends: list[tuple[float, str]], foot: float, span: tuple[float, float]
) -> None:
    """What each line and band is, right of the plot, moved apart."""
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    height = PLOT_MM - 3.0
    logarithmic = axes.get_yscale() == "log"

    def y(value: float) -> float:
        low, high, at = (np.log(v) if logarithmic else v for v in (span[0], span[1], max(value, span[0])))
        return foot + height * float(min(max((at - low) / (high - low), 0.0), 1.0))

    found = [(y(value), text) for value, text in ends if np.isfinite(value)]
    centres = spread([at for at, _ in found], [look.line_mm() + 0.4] * len(found), foot, foot + height)
    right = made.width_mm - RIGHT_MM
    for (at, text), centre in zip(found, centres, strict=True):
        page.plot([right + 0.6, right + 3.4], [at, centre], lw=look.HAIR_PT, color=look.QUIET)
        look.put(page, right + 4.0, centre, look.shorten(text, RIGHT_MM - 4.5), ha="left")


def _key(drift: Drift, marks: list[tuple[FirstInterference, str]]) -> list[str]:
    lines = []
    for place, found in enumerate(marks, start=1):
        lines += look.wrap(f"{place}  {first_sentence(drift, *found)}", look.WIDTH_MM)
    later = len(appearances(drift)) - len(marks)
    if later:
        lines.append(f"{later} more appear later.")
    what = "Hatched: a source over the running range; shaded: with the separation required at nominal values."
    already = ", ".join(f"mode {item.mode} with {item.source}" for item in drift.at_start)
    lines += look.wrap(f"{what}" + (f" Not clear at the start: {already}." if already else ""), look.WIDTH_MM)
    return lines
