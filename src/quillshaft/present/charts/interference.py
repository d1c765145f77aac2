"""The interference diagram: frequency against speed, source lines against natural frequencies."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.diagram_data import (
    RPM,
    ModeBand,
    PairMark,
    SourceLine,
    mode_bands,
    pair_marks,
    source_lines,
    top_speed_rpm,
)
from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.content import (
    LABEL_MM,
    LEFT_MM,
    NUMBERED,
    PLOT_MM,
    Content,
    Exit,
    exits_of,
    not_in_frame,
)
from quillshaft.present.charts.key import draw_key, key_height, line_note
from quillshaft.present.charts.operating import draw_operation
from quillshaft.present.charts.panels import Panel, panels, shrunk
from quillshaft.present.charts.spread import Box, free_spot, spread
from quillshaft.present.charts.verdict_titles import interference_title
from quillshaft.present.words import number

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

STRIP_MM = 15.0
FARTHEST_MM = 14.0


def interference_diagram(screening: Screening) -> Figure:
    """Sources and natural frequencies over the speed of `speed-at`, with everything that is not clear marked."""
    top = top_speed_rpm(screening)
    content = Content(screening, source_lines(screening, top), mode_bands(screening, top), pair_marks(screening), top)
    plots = panels(content.bands, content.lines, content.marks)
    note = line_note(content.lines, not_in_frame(content, plots))
    foot = key_height(content.screening, content.marks, NUMBERED) + len(note) * look.line_mm()
    heads = [_head_mm(content, exits_of(content, plots, index, True)) for index in range(len(plots))]
    title = interference_title(screening)
    room = look.TALLEST_MM - look.title_height(title) - foot - STRIP_MM - sum(heads)
    plots = shrunk(plots, room)
    exits = [exits_of(content, plots, index, True) for index in range(len(plots))]
    heads = [_head_mm(content, found) for found in exits]
    total = foot + STRIP_MM + sum(panel.height_mm for panel in plots) + sum(heads)
    made = look.frame(title, total)
    draw_key(made, screening, foot, content.marks, NUMBERED, note)
    draw_operation(made, screening, (LEFT_MM, foot, PLOT_MM, STRIP_MM), top)
    y = foot + STRIP_MM
    for index, (panel, head, found) in enumerate(zip(plots, heads, exits, strict=True)):
        axes = look.plot_axes(made, (LEFT_MM, y, PLOT_MM, panel.height_mm))
        _draw_panel(axes, content, panel)
        _write_top_exits(made, content, found, y + panel.height_mm, head)
        _write_right_exits(made, panel, exits_of(content, plots, index, False), y)
        y += panel.height_mm + head
    return made.figure


def _x(content: Content, rpm: float) -> float:
    return LEFT_MM + PLOT_MM * rpm / content.top_rpm


def _y(panel: Panel, frequency_hz: float, foot_mm: float) -> float:
    return foot_mm + panel.height_mm * (frequency_hz - panel.low_hz) / (panel.high_hz - panel.low_hz)


def _level_centres(content: Content, found: list[Exit]) -> list[float] | None:
    """Centres [mm] of labels set level over a panel; None where they would move too far from their lines."""
    wanted = [_x(content, rpm) for rpm, *_ in found]
    sizes = [look.width_mm(text) + 3.0 for *_, text in found]
    centres = spread(wanted, sizes, LEFT_MM, look.WIDTH_MM)
    far = max((abs(centre - at) for centre, at in zip(centres, wanted, strict=True)), default=0.0)
    return centres if far <= FARTHEST_MM and sum(sizes) <= look.WIDTH_MM - LEFT_MM else None


def _head_mm(content: Content, found: list[Exit]) -> float:
    """Height [mm] over a panel for the labels of the lines that leave it by its top."""
    if not found:
        return 3.0
    if _level_centres(content, found) is not None:
        return 2.4 + look.line_mm() + 1.0
    return max(look.width_mm(text) for *_, text in found) + 4.0


def _write_top_exits(
    made: look.Frame,
    content: Content,
    found: list[Exit],
    foot_mm: float,
    head_mm: float,
) -> None:
    """Labels over a panel, moved apart, level or upright, each joined to the end of its line."""
    axes = look.millimetre_axes(made, foot_mm, foot_mm + head_mm)
    wanted = [_x(content, rpm) for rpm, *_ in found]
    level = _level_centres(content, found)
    centres = level or spread(wanted, [LABEL_MM] * len(found), LEFT_MM, look.WIDTH_MM)
    for (*_, text), at, centre in zip(found, wanted, centres, strict=True):
        axes.plot([at, centre], [0.0, 2.0], lw=look.HAIR_PT, color=look.QUIET)
        turn = 90 if level is None else 0
        look.put(axes, centre, 2.4, text, rotation=turn, va="bottom", gid="source")


def _write_right_exits(made: look.Frame, panel: Panel, found: list[Exit], foot_mm: float) -> None:
    """Labels right of a panel, moved apart, each joined to the end of its line."""
    ends = [_y(panel, frequency, 0.0) for _, frequency, _ in found]
    axes = look.millimetre_axes(made, foot_mm - 3.0, foot_mm + panel.height_mm + 3.0)
    centres = spread(ends, [LABEL_MM] * len(found), -0.3, panel.height_mm + 0.3)
    edge = LEFT_MM + PLOT_MM
    for y, (*_, text), centre in zip(ends, found, centres, strict=True):
        axes.plot([edge, edge + 2.6], [y + 3.0, centre + 3.0], lw=look.HAIR_PT, color=look.QUIET)
        look.put(axes, edge + 3.2, centre + 3.0, text, ha="left", gid="source")


def _draw_panel(axes: Axes, content: Content, panel: Panel) -> None:
    axes.set_xlim(0.0, content.top_rpm)
    axes.set_ylim(panel.low_hz, panel.high_hz)
    axes.set_xticks([])
    axes.set_ylabel("frequency, Hz", fontsize=look.SMALL_PT, color=look.INK, labelpad=2.0)
    _shade_ranges(axes, content.screening)
    for band in content.bands:
        _draw_band(axes, band)
    for line in content.lines:
        _draw_line(axes, line)
    taken = _write_modes(axes, content, panel)
    _draw_marks(axes, content, panel, taken)


def _shade_ranges(axes: Axes, screening: Screening) -> None:
    operation = screening.train.operation
    for low, high in operation.ranges_rad_s:
        axes.axvspan(low * RPM, high * RPM, facecolor=look.SHADE, edgecolor="none", zorder=0)
    for low, high in operation.barred_rad_s:
        axes.axvspan(
            low * RPM, high * RPM, facecolor=look.PAPER, edgecolor=look.FAINT, hatch="////", lw=0.0, zorder=0.5
        )
    for speed in (operation.idle_rad_s, operation.trip_rad_s):
        if speed is not None:
            axes.axvline(speed * RPM, lw=look.THIN_PT, color=look.QUIET, ls=(0, (1.0, 1.0)), zorder=0.6)


def _draw_band(axes: Axes, band: ModeBand) -> None:
    """A natural frequency: its range over tolerances, its nominal line, and what to keep free in the range."""
    axes.fill_between(
        band.rpm, band.low_hz, band.high_hz, facecolor=look.FAINT, edgecolor="none", lw=0.0, alpha=0.45, zorder=1
    )
    axes.plot(band.rpm, band.along_hz, lw=look.LINE_PT, color=look.INK, ls=look.DASHES["natural"], zorder=3)
    if band.required <= 0:
        return
    dashes = look.DASHES["required"]
    for rows in band.free:
        rpm, low, high = zip(*rows, strict=True)
        for edge in (low, high):
            axes.plot(rpm, edge, lw=look.THIN_PT, color=look.INK, ls=dashes, zorder=2)
        for end in (0, -1):
            axes.plot([rpm[end]] * 2, [low[end], high[end]], lw=look.HAIR_PT, color=look.INK, zorder=2)


def _draw_line(axes: Axes, line: SourceLine) -> None:
    pattern = look.DASHES["minor" if line.minor else line.kind]
    width = look.THIN_PT if line.minor or line.starting else look.LINE_PT
    colour = look.QUIET if line.minor or line.starting else look.ACCENT
    axes.plot(line.rpm, line.nominal_hz, lw=width, color=colour, ls=pattern, zorder=2.5)
    if line.low_hz != line.high_hz:
        for edge in (line.low_hz, line.high_hz):
            axes.plot(line.rpm, edge, lw=look.HAIR_PT, color=look.QUIET, zorder=2.4)


def _scales(content: Content, panel: Panel) -> tuple[float, float]:
    """Rpm and Hz of one millimetre."""
    return content.top_rpm / PLOT_MM, (panel.high_hz - panel.low_hz) / panel.height_mm


def _write_modes(axes: Axes, content: Content, panel: Panel) -> list[Box]:
    """Names of the modes at the left edge, over their lines, moved apart; their boxes [mm] from the corner."""
    per_x, per_y = _scales(content, panel)
    heights = [(band.along_hz[0] - panel.low_hz) / per_y + 0.65 * LABEL_MM for band in panel.bands]
    centres = spread(heights, [1.15 * LABEL_MM] * len(heights), 0.3, panel.height_mm - 0.3)
    boxes = []
    for band, at in zip(panel.bands, centres, strict=True):
        text = f"mode {band.mode}  {number(band.nominal_hz, 3)} Hz"
        look.put(
            axes,
            1.2 * per_x,
            panel.low_hz + at * per_y,
            text,
            ha="left",
            va="center_baseline",
            fontweight="bold",
            zorder=6,
            gid="mode",
            bbox={"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.6, "alpha": 0.85},
        )
        boxes.append((0.5, at - 1.6, 2.5 + look.width_mm(text, bold=True), at + 1.6))
    return boxes


def _draw_marks(axes: Axes, content: Content, panel: Panel, taken: list[Box]) -> None:
    per_x, per_y = _scales(content, panel)
    numbers = {band.mode for band in panel.bands}
    marks = [mark for mark in content.marks if mark.pair.mode in numbers]
    spots = [(mark.rpm / per_x, (mark.frequency_hz - panel.low_hz) / per_y) for mark in marks]
    boxes = [*taken, *((x - 1.3, y - 1.3, x + 1.3, y + 1.3) for x, y in spots)]
    for mark, (x, y) in reversed(list(zip(marks, spots, strict=True))):
        draw_mark(axes, mark, x * per_x, panel.low_hz + y * per_y)
    for mark, (x, y) in zip(marks, spots, strict=True):
        name = content.numbered(mark)
        if name is None:
            continue
        around = [spot for spot in _around(x, y) if _inside(spot, panel)]
        box = around[free_spot(around, boxes)]
        boxes.append(box)
        look.put(
            axes,
            (box[0] + box[2]) / 2 * per_x,
            panel.low_hz + (box[1] + box[3]) / 2 * per_y,
            str(name),
            fontweight="bold",
            zorder=9,
            gid="mark",
            bbox={"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.5, "alpha": 0.8},
        )


def _inside(spot: Box, panel: Panel) -> bool:
    return spot[0] >= 0.0 and spot[1] >= 0.0 and spot[2] <= PLOT_MM and spot[3] <= panel.height_mm


def _around(x: float, y: float) -> list[Box]:
    """Places [mm] for the number of a mark, the best first."""
    return [
        (x + dx - 1.3, y + dy - 1.5, x + dx + 1.3, y + dy + 1.5)
        for reach in (3.2, 4.7, 6.2)
        for dx, dy in ((reach, 0.8), (-reach, 0.8), (0.7, reach), (0.7, -reach), (reach, -reach), (-reach, -reach))
    ]


def draw_mark(axes: Axes, mark: PairMark, x: float, y: float) -> None:
    """The shape tells the verdict over the tolerances; filled where it is as bad at nominal values."""
    kind = "dismissed" if mark.pair.dismissed is not None else mark.shape
    shape = look.MARKERS[kind][0]
    face = look.INK if mark.nominal else look.PAPER
    axes.plot(x, y, marker=shape, ms=6.0, mfc=face, mec=look.INK, mew=look.LINE_PT, ls="none", zorder=8)
