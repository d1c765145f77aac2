"""Where the teeth of a gear separate: alternating over mean torque against speed and load."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.response_results import Response, SeparationMap
from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, link_words
from quillshaft.present.charts.response_axes import (
    STRIP_MM,
    Scale,
    barred_rpm,
    draw_speeds,
    draw_values,
    judged_rpm,
    panel_axes,
    speed_scale,
    write_ends,
)
from quillshaft.present.charts.response_common import share_text, speeds_rpm
from quillshaft.present.charts.spread import Box, free_spot

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from numpy.typing import NDArray

LEFT_MM, RIGHT_MM = 15.0, 34.0
HIGH_MM = 84.0
LEVELS = (0.3, 0.5, 1.0)
PATTERNS = ((0, (1.6, 1.2)), (0, (5.0, 1.6)), "-")
BACKING = {"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.5, "alpha": 0.9}
CEILING = 1e3
"""Ratios without bound, as at no load, are drawn as this one."""


def separation_map_chart(response: Response, gear: str) -> Figure:
    """Speed against share of load, hatched where alternating torque exceeds the mean, with contours below that.

    Raises KeyError where the response holds no map of the gear.
    """
    found = next((item for item in response.maps if item.gear == gear), None)
    if found is None:
        raise KeyError(gear)
    ratio = _ratios(found)
    note = look.wrap(_note(ratio), look.WIDTH_MM - 4.0)
    foot = len(note) * look.line_mm() + 2.0
    made = look.frame(separation_title(response, found), HIGH_MM + STRIP_MM + foot + 3.0)
    across = speed_scale(response, LEFT_MM, look.WIDTH_MM - LEFT_MM - RIGHT_MM)
    load = np.asarray(found.load_share, dtype=float)
    low, high = float(load.min()), float(load.max())
    room = 0.05 if high == low else 0.0
    y = made.top_mm - 2.0 - HIGH_MM
    up = Scale(low - room, high + room, y, HIGH_MM)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    page.set_zorder(1.0)
    axes = panel_axes(made, across, up)
    _draw_ranges(axes, response)
    if min(ratio.shape) < 2:
        _draw_points(axes, response, load, ratio)
    else:
        _draw_map(page, axes, speeds_rpm(response), load, ratio, (across, up))
    draw_values(page, up.times(100.0), LEFT_MM, ["load, % of full load"], 12.5)
    draw_speeds(page, response, across, y)
    look.notes(page, foot - 1.0, note)
    return made.figure


def separation_title(response: Response, found: SeparationMap) -> str:
    """Up to which load the teeth separate in the judged ranges, or else at all other speeds."""
    name = link_words(response.screening, response.screening.graph.link(found.gear))
    if not np.isfinite(np.asarray(found.ratio, dtype=float)).any():
        return f"The mean torque of {name} is not known: whether its teeth separate cannot be said"
    load = np.asarray(found.load_share, dtype=float)
    ends = _separating_loads(load, _ratios(found))
    rpm, inside = speeds_rpm(response), np.asarray(response.continuous, dtype=bool)
    judged, elsewhere = np.where(inside, ends, -1.0), np.where(inside, -1.0, ends)
    if judged.max() >= 0.0:
        text = f"up to {share_text(float(judged.max()))} load, at {rpm[int(np.argmax(judged))]:.0f} rpm"
        return f"Teeth of {name} separate in the judged range {text}"
    text = f"Teeth of {name} stay in contact in the judged range down to {share_text(float(load.min()))} load"
    if elsewhere.max() < 0.0:
        return text if inside.all() else f"{text}, and at all other speeds"
    at = int(np.argmax(elsewhere))
    return f"{text}; they separate outside it up to {share_text(float(ends[at]))} load, at {rpm[at]:.0f} rpm"


def is_blank(found: SeparationMap) -> bool:
    """True where the map of a gear would show nothing: the ratio stays below the lowest contour throughout."""
    return not bool((_ratios(found) >= LEVELS[0]).any())


def gear_lines(response: Response) -> list[str]:
    """What needs no map: gears whose teeth stay in contact at every load, and gears without a mean torque."""
    lines = [separation_title(response, item) for item in response.maps if is_blank(item)]
    names = [link.name for link in response.screening.graph.links]
    for gear in response.screening.train.gears:
        mean = response.normal.mean_torque_nm[names.index(gear.name)]
        if np.isfinite(mean).all() and not mean.any():
            name = link_words(response.screening, response.screening.graph.link(gear.name))
            lines.append(f"No mean torque passes {name}: any alternating torque separates its teeth")
    return lines


def _separating_loads(load: Floats, ratio: Floats) -> Floats:
    """(S,) highest load at which the ratio reaches 1, between loads by its logarithm; -1 where it does not."""
    ends: Floats = np.full(ratio.shape[1], -1.0)
    height = np.log(np.maximum(ratio, 1e-6))
    for column in range(ratio.shape[1]):
        rows = np.flatnonzero(height[:, column] >= 0.0)
        if not len(rows):
            continue
        row = int(rows[-1])
        ends[column] = load[row]
        if row + 1 < len(load):
            here, after = height[row, column], height[row + 1, column]
            ends[column] += (load[row + 1] - load[row]) * here / (here - after)
    return ends


def _ratios(found: SeparationMap) -> Floats:
    """(loads, S) ratios with those without bound at the ceiling; unknown ones 0."""
    rows = np.nan_to_num(np.asarray(found.ratio, dtype=float), nan=0.0, posinf=CEILING)
    held: Floats = np.minimum(rows, CEILING)
    return held


def _draw_ranges(axes: Axes, response: Response) -> None:
    """Judged ranges shaded between lines; barred spans between dotted lines, as the map itself is hatched."""
    for low, high in judged_rpm(response):
        axes.axvspan(low, high, facecolor=look.SHADE, edgecolor="none", zorder=0, gid="judged")
        for edge in (low, high):
            axes.axvline(edge, lw=look.THIN_PT, color=look.INK, zorder=5)
    for low, high in barred_rpm(response):
        for edge in (low, high):
            axes.axvline(edge, lw=look.LINE_PT, color=look.QUIET, ls=(0, (1.0, 1.4)), zorder=5, gid="barred")


def _draw_points(axes: Axes, response: Response, load: Floats, ratio: Floats) -> None:
    """One mark a calculated pair, filled where the teeth separate: too few of them for contours."""
    for row, share in enumerate(load.tolist()):
        for rpm, value in zip(speeds_rpm(response).tolist(), ratio[row].tolist(), strict=True):
            face = look.INK if value >= 1.0 else look.PAPER
            axes.plot(rpm, share, marker="o", ms=4.5, mfc=face, mec=look.INK, mew=look.THIN_PT, ls="none", zorder=4)


def _draw_map(page: Axes, axes: Axes, rpm: Floats, load: Floats, ratio: Floats, scales: tuple[Scale, Scale]) -> None:
    """The hatched field of separation, and the contours with their labels."""
    height = np.log(np.maximum(ratio, 1e-6))
    if (ratio >= 1.0).any():
        axes.contourf(rpm, load, height, [0.0, 1e3], colors=[look.FAINT], alpha=0.45, zorder=1)
        axes.contourf(rpm, load, height, [0.0, 1e3], colors="none", hatches=["//////"], zorder=1.5)
    taken: list[Box] = []
    for level, pattern in zip(LEVELS, PATTERNS, strict=True):
        if not (ratio.min() < level < ratio.max()):
            continue
        width = look.HEAVY_PT if level == 1.0 else look.LINE_PT
        lines = axes.contour(
            rpm,
            load,
            height,
            [float(np.log(level))],
            colors=[look.INK],
            linestyles=[pattern],
            linewidths=[width],
            zorder=3,
        )
        paths = [segment for segment in lines.allsegs[0] if len(segment) > 1]
        if paths:
            _label(page, max(paths, key=len), f"{level:g}", scales, taken)
    if (ratio >= 1.0).any():
        _name_field(page, rpm, load, ratio, scales, taken)


def _label(page: Axes, path: Floats, text: str, scales: tuple[Scale, Scale], taken: list[Box]) -> None:
    """The level of a contour on its line, where no other label stands."""
    points = [path[int(share * (len(path) - 1))] for share in (0.5, 0.35, 0.65, 0.2, 0.8, 0.1, 0.9)]
    box = _free(points, look.width_mm(text, bold=True), scales, taken)
    x, y = (box[0] + box[2]) / 2.0, (box[1] + box[3]) / 2.0
    look.put(page, x, y, text, fontweight="bold", zorder=7, gid="contour", bbox=BACKING)


def _name_field(
    page: Axes, rpm: Floats, load: Floats, ratio: Floats, scales: tuple[Scale, Scale], taken: list[Box]
) -> None:
    """ "teeth separate" inside the hatched field if there is room, else right of the plot with a line to it."""
    across, up = scales
    text = "teeth separate"
    rows, columns = np.nonzero(ratio >= 1.0)
    places = np.array([[across.at(rpm[column]), up.at(load[row])] for row, column in zip(rows, columns, strict=True)])
    order = np.argsort(np.sum((places - places.mean(axis=0)) ** 2, axis=1))
    points = [(rpm[columns[at]], load[rows[at]]) for at in order.tolist()]
    box = _free(points, look.width_mm(text, bold=True), scales, taken, ratio=(rpm, load, ratio))
    x, y = (box[0] + box[2]) / 2.0, (box[1] + box[3]) / 2.0
    if _inside_field(np.array([box]), scales, (rpm, load, ratio))[0]:
        look.put(page, x, y, text, fontweight="bold", zorder=7, gid="contour", bbox=BACKING)
        return
    at = up.at(float(load[rows].mean()))
    write_ends(page, [(at, text)], across.start_mm + across.length_mm, (up.start_mm, up.start_mm + HIGH_MM), RIGHT_MM)


def _free(
    points: Sequence[Sequence[float]],
    wide: float,
    scales: tuple[Scale, Scale],
    taken: list[Box],
    ratio: tuple[Floats, Floats, Floats] | None = None,
) -> Box:
    """The first place inside the plot that overlaps no label (and lies in the field), which is then taken."""
    across, up = scales
    half = wide / 2.0 + 1.0
    boxes = []
    for value, share in points:
        x = min(max(across.at(float(value)), LEFT_MM + half + 0.5), LEFT_MM + across.length_mm - half - 0.5)
        y = min(max(up.at(float(share)), up.start_mm + 2.2), up.start_mm + up.length_mm - 2.2)
        boxes.append((x - half, y - 1.7, x + half, y + 1.7))
    if ratio is not None:
        inside = _inside_field(np.array(boxes), scales, ratio)
        boxes = [boxes[at] for at in np.argsort(~inside, kind="stable").tolist()]
    box = boxes[free_spot(boxes, taken)]
    taken.append(box)
    return box


def _inside_field(
    boxes: Floats, scales: tuple[Scale, Scale], field: tuple[Floats, Floats, Floats]
) -> NDArray[np.bool_]:
    """(boxes,) True where the teeth separate at all corners of a box; boxes (boxes, 4) left, low, right, high [mm]."""
    rpm, load, ratio = field
    across, up = scales
    values = across.low + (boxes[:, (0, 2)] - across.start_mm) / across.length_mm * (across.high - across.low)
    shares = up.low + (boxes[:, (1, 3)] - up.start_mm) / up.length_mm * (up.high - up.low)
    columns = np.argmin(np.abs(rpm - values[..., None]), axis=-1)
    rows = np.argmin(np.abs(load - shares[..., None]), axis=-1)
    inside: NDArray[np.bool_] = np.all(ratio[rows[:, :, None], columns[:, None, :]] >= 1.0, axis=(1, 2))
    return inside


def _note(ratio: Floats) -> str:
    text = "Contours: alternating over mean torque; at 1 and above the torque reverses and teeth separate"
    text += " (hatched)." if (ratio >= 1.0).any() else "."
    return capital(f"{text} Shaded between lines: judged ranges; between dotted lines: barred.")
