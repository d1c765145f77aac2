"""The chart of stiffness windows: natural frequencies against a link's stiffness, and what that may be."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import listed
from quillshaft.present.charts.spread import spread
from quillshaft.present.charts.window_axes import LogScale, box, draw_frame, draw_x_axis, draw_y_axis
from quillshaft.present.units import SHOWN
from quillshaft.present.window_words import dismissed_sentence, narrowed_text, pairs_text, range_text, shown_stiffness
from quillshaft.study.window_bands import Band
from quillshaft.study.window_curves import WindowCurves, window_curves
from quillshaft.study.window_tally import Blocked
from quillshaft.study.windows import Windows

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM = 14.0
RIGHT_MM = 38.0
PLOT_MM = look.WIDTH_MM - LEFT_MM - RIGHT_MM
PLOT_HIGH_MM = 96.0
TOP_MM = 9.0
AXIS_MM = 8.0
BAR_MM = 4.2
LABEL_MM = look.SMALL_PT * look.POINT_MM * 1.15
HATCH = "////"
BACKING = {"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.3, "alpha": 0.85}
RANGE = {"fontweight": "bold", "gid": "range", "zorder": 6, "bbox": BACKING}
READING = (
    "Horizontal grey bands: what each source closes over the running range, required separation included; names in "
    "bold forbid some stiffness. Lines: natural frequencies with all else nominal, heavy where they stand in a band. "
    "Grey fields: forbidden as fitted. Dark bar: nominal stiffness that stays clear with its own and all other "
    "tolerances at their worst."
)


@dataclass(frozen=True)
class Drawing:
    """What the chart shows, and its scales [mm]: stiffness across, frequency up."""

    screening: Screening
    windows: Windows
    curves: WindowCurves
    across: LogScale
    up: LogScale


def windows_chart(screening: Screening, windows: Windows) -> Figure:
    """Natural frequencies against the stiffness of one link, source bands, forbidden and recommended ranges."""
    curves = window_curves(screening, windows)
    dismissed = dismissed_sentence(windows)
    reading = READING if dismissed is None else f"{READING} {dismissed}"
    notes = look.wrap(reading, look.WIDTH_MM - 2.0)
    foot = len(notes) * look.line_mm() + 2.0
    bars = foot + AXIS_MM
    plot = bars + 2 * BAR_MM + LABEL_MM + 4.5
    across = LogScale(*windows.search_nm_rad, LEFT_MM, PLOT_MM)
    drawing = Drawing(screening, windows, curves, across, LogScale(*_limits(windows, curves), plot, PLOT_HIGH_MM))
    total = plot + PLOT_HIGH_MM + TOP_MM
    made = look.frame(windows_title(screening, windows), total)
    axes = look.millimetre_axes(made, 0.0, total)
    look.notes(axes, foot - 1.0, notes)
    _draw_forbidden(axes, drawing, bars)
    _draw_bands(axes, drawing)
    _draw_modes(axes, drawing)
    _draw_bars(axes, drawing, bars)
    _draw_nominal(axes, drawing, bars)
    draw_frame(axes, across, drawing.up)
    draw_y_axis(axes, drawing.up, LEFT_MM, "natural frequency, Hz")
    factor = SHOWN[screening.train.units].per_nm_rad
    low, high = windows.search_nm_rad
    shown = LogScale(low * factor, high * factor, LEFT_MM, PLOT_MM)
    draw_x_axis(axes, shown, bars, f"stiffness of {windows.link}, {SHOWN[screening.train.units].stiffness}")
    return made.figure


def windows_title(screening: Screening, windows: Windows) -> str:
    """The answer in one sentence."""
    nominal = shown_stiffness(screening, windows.nominal_nm_rad)
    left_out = narrowed_text(windows)
    if windows.recommended:
        inside = any(low <= windows.nominal_nm_rad <= high for low, high in windows.recommended)
        texts = [range_text(screening, reach, unit=False) for reach in windows.recommended]
        unit = SHOWN[screening.train.units].stiffness
        return (
            f"With {windows.link} at {listed(texts)} {unit} everything stays clear over the tolerances; "
            f"the nominal {nominal} is {'inside' if inside else 'not'}{left_out}"
        )
    if windows.cannot_clear:
        return f"No stiffness of {windows.link} clears {pairs_text(windows.cannot_clear)}{left_out}"
    if windows.allowed:
        inside = windows.nominal_verdict == "clear"
        tail = f"the nominal {nominal} is {'clear as fitted' if inside else 'not clear'}"
        return f"No stiffness of {windows.link} is clear of every source over the tolerances; {tail}{left_out}"
    return f"No stiffness of {windows.link} clears every source at once{left_out}"


def _limits(windows: Windows, curves: WindowCurves) -> tuple[float, float]:
    """Frequencies [Hz] at the ends of the axis: all bands, and the first mode at nominal stiffness."""
    first = [float(row[0]) for row in curves.frequency_hz if len(row)]
    nominal = np.searchsorted(curves.stiffness_nm_rad, windows.nominal_nm_rad)
    at_nominal = first[min(int(nominal), len(first) - 1)] if first else 1.0
    lows = [band.nominal_hz[0] for band in curves.bands if band.nominal_hz[0] > 0]
    highs = [band.nominal_hz[1] for band in curves.bands]
    low = min([*lows, at_nominal]) / 1.35
    return low, max([*highs, at_nominal]) * 1.25


def _draw_forbidden(axes: Axes, drawing: Drawing, bars_mm: float) -> None:
    """Forbidden ranges: a pale field with edges over the plot, down to the bar that hatches them."""
    across, up = drawing.across, drawing.up
    top = up.start_mm + up.length_mm
    for one in drawing.windows.forbidden:
        left, right = across.at(max(one.from_nm_rad, across.low)), across.at(one.to_nm_rad)
        box(axes, (left, up.start_mm, right - left, up.length_mm), look.SHADE, edge=None, zorder=0.4)
        for end, place in ((one.from_nm_rad, left), (one.to_nm_rad, right)):
            if across.shows(end):
                axes.plot(
                    [place] * 2, [bars_mm, top], lw=look.THIN_PT, color=look.QUIET, ls=(0, (2.0, 1.4)), zorder=1.5
                )


def _groups(curves: WindowCurves) -> list[tuple[Band, list[str]]]:
    """Bands of equal edges in one, with the names of their sources."""
    groups: dict[tuple[float, float], tuple[Band, list[str]]] = {}
    for band in curves.bands:
        key = (round(band.nominal_hz[0], 6), round(band.nominal_hz[1], 6))
        groups.setdefault(key, (band, []))[1].append(band.source)
    return list(groups.values())


def _draw_bands(axes: Axes, drawing: Drawing) -> None:
    """Source bands as outlined strips, named at the right edge; those that forbid something come first."""
    up = drawing.up
    groups = [(band, names) for band, names in _groups(drawing.curves) if band.nominal_hz[1] > band.nominal_hz[0]]
    for band, _ in groups:
        low, high = (up.at(max(edge, up.low)) for edge in band.nominal_hz)
        box(axes, (LEFT_MM, low, PLOT_MM, high - low), look.FAINT, edge=None, zorder=0.8)
        axes.patches[-1].set_alpha(0.45)
        for edge in (low, high):
            axes.plot([LEFT_MM, LEFT_MM + PLOT_MM], [edge] * 2, lw=look.HAIR_PT, color=look.QUIET, zorder=1.0)
    guilty = {cause.source for one in drawing.windows.forbidden for cause in one.because}
    ranked = sorted(groups, key=lambda group: not guilty.intersection(group[1]))
    named = ranked[: int((up.length_mm + TOP_MM) / LABEL_MM)]
    middles = [sum(up.at(max(edge, up.low)) for edge in band.nominal_hz) / 2.0 for band, _ in named]
    centres = spread(middles, [LABEL_MM] * len(named), up.start_mm - 1.5, up.start_mm + up.length_mm + TOP_MM)
    edge = LEFT_MM + PLOT_MM
    for (_, names), middle, centre in zip(named, middles, centres, strict=True):
        axes.plot([edge, edge + 2.6], [middle, centre], lw=look.HAIR_PT, color=look.QUIET)
        weight = "bold" if guilty.intersection(names) else "normal"
        look.put(
            axes, edge + 3.2, centre, _band_label(names, weight == "bold"), ha="left", fontweight=weight, gid="source"
        )


def _band_label(names: list[str], bold: bool) -> str:
    """Names of the sources of one band, shortened to what the margin holds."""
    room, text = RIGHT_MM - 4.0, ", ".join(names)
    if look.width_mm(text, bold=bold) <= room or len(names) == 1:
        return look.shorten_name(text, room, bold=bold)
    tail = f" +{len(names) - 1}"
    return look.shorten_name(names[0], room - look.width_mm(tail, bold=bold), bold=bold) + tail


def _draw_modes(axes: Axes, drawing: Drawing) -> None:
    """Natural frequencies as lines, heavy where a mode stands in a band that counts."""
    curves, up = drawing.curves, drawing.up
    causes = [cause for one in drawing.windows.forbidden for cause in one.because]
    left: list[tuple[float, str]] = []
    right: list[tuple[float, str]] = []
    for column in range(curves.frequency_hz.shape[1]):
        hz = curves.frequency_hz[:, column]
        if hz.min() > up.high or hz.max() < up.low:
            continue
        _plot_curve(axes, drawing, hz, (0.0, math.inf), look.LINE_PT)
        for cause in _joined(causes, column + 1):
            _plot_curve(axes, drawing, hz, cause, 2.6)
        if up.shows(float(hz[0])):
            left.append((up.at(float(hz[0])), f"mode {column + 1}"))
        elif up.shows(float(hz[-1])):
            right.append((up.at(float(hz[-1])), f"mode {column + 1}"))
    _write_modes(axes, up, left, LEFT_MM + 1.2, "left")
    _write_modes(axes, up, right, LEFT_MM + PLOT_MM - 1.2, "right")


def _write_modes(axes: Axes, up: LogScale, labels: list[tuple[float, str]], x_mm: float, side: str) -> None:
    """Names of modes just above their lines, moved apart, as many as there is room for."""
    size = 1.1 * LABEL_MM
    kept = labels[: int(up.length_mm / size)]
    places = [place + 0.8 * LABEL_MM for place, _ in kept]
    centres = spread(places, [size] * len(kept), up.start_mm + 0.4, up.start_mm + up.length_mm - 0.4)
    for (_, text), centre in zip(kept, centres, strict=True):
        look.put(axes, x_mm, centre, text, ha=side, fontweight="bold", zorder=7, gid="mode", bbox=BACKING)


def _joined(causes: list[Blocked], mode: int) -> list[tuple[float, float]]:
    return sorted({(cause.from_nm_rad, cause.to_nm_rad) for cause in causes if cause.mode == mode})


def _plot_curve(axes: Axes, drawing: Drawing, hz: np.ndarray, reach: tuple[float, float], width_pt: float) -> None:
    """A mode's line over a range of stiffness, cut at the edges of the frequency axis."""
    across, up = drawing.across, drawing.up
    low, high = max(reach[0], across.low), min(reach[1], across.high)
    if low >= high:
        return
    grid = np.log(drawing.curves.stiffness_nm_rad)
    inside = grid[(grid > math.log(low)) & (grid < math.log(high))]
    stiffness = np.concatenate([[math.log(low)], inside, [math.log(high)]])
    values = np.exp(np.interp(stiffness, grid, np.log(hz)))
    x = [across.at(math.exp(at)) for at in stiffness.tolist()]
    y = [up.at(float(value)) if up.shows(float(value)) else math.nan for value in values]
    axes.plot(x, y, lw=width_pt, color=look.INK, solid_capstyle="butt", zorder=3.0)


def _draw_bars(axes: Axes, drawing: Drawing, foot_mm: float) -> None:
    """Two bars: forbidden as fitted (hatched), and recommended over the tolerances (filled, with numbers)."""
    windows, across = drawing.windows, drawing.across
    fitted, safe = foot_mm, foot_mm + BAR_MM
    box(axes, (LEFT_MM, fitted, PLOT_MM, BAR_MM), look.PAPER, zorder=1.0)
    box(axes, (LEFT_MM, safe, PLOT_MM, BAR_MM), look.PAPER, zorder=1.0)
    for one in windows.forbidden:
        left, right = across.at(max(one.from_nm_rad, across.low)), across.at(one.to_nm_rad)
        box(axes, (left, fitted, right - left, BAR_MM), look.PAPER, HATCH, zorder=2.0)
    for low, high in windows.recommended:
        box(axes, (across.at(low), safe, across.at(high) - across.at(low), BAR_MM), look.ACCENT, zorder=2.0)
    edge = LEFT_MM + PLOT_MM + 1.2
    look.put(axes, edge, fitted + BAR_MM / 2, "hatched: forbidden as fitted", ha="left", gid="bar")
    look.put(axes, edge, safe + BAR_MM / 2, "dark: recommended", ha="left", gid="bar")
    texts = [range_text(drawing.screening, reach, unit=False).replace(" to ", "–") for reach in windows.recommended]
    if not texts:
        look.put(
            axes, LEFT_MM + PLOT_MM / 2, safe + BAR_MM / 2, "nothing to recommend", gid="range", zorder=6, bbox=BACKING
        )
        return
    middles = [(across.at(low) + across.at(high)) / 2.0 for low, high in windows.recommended]
    sizes = [look.width_mm(text, bold=True) + 2.0 for text in texts]
    if sum(sizes) > PLOT_MM:
        texts = [str(index) for index in range(1, len(texts) + 1)]
        sizes = [look.width_mm(text, bold=True) + 2.0 for text in texts]
    centres = spread(middles, sizes, LEFT_MM, LEFT_MM + PLOT_MM)
    for text, middle, centre in zip(texts, middles, centres, strict=True):
        axes.plot([middle, centre], [safe + BAR_MM, safe + BAR_MM + 1.4], lw=look.HAIR_PT, color=look.QUIET, zorder=3)
        look.put(
            axes,
            centre,
            safe + BAR_MM + 1.4 + LABEL_MM / 2,
            text,
            fontweight="bold",
            gid="range",
            zorder=6,
            bbox=BACKING,
        )


def _draw_nominal(axes: Axes, drawing: Drawing, foot_mm: float) -> None:
    """A line at the nominal stiffness, and its tolerance (with the temperature factors) as a bar over the plot."""
    windows, across, up = drawing.windows, drawing.across, drawing.up
    nominal, top = windows.nominal_nm_rad, up.start_mm + up.length_mm
    text = f"nominal {shown_stiffness(drawing.screening, nominal)}"
    if not across.shows(nominal):
        look.put(axes, LEFT_MM + PLOT_MM / 2, top + 5.0, f"{text}, outside the search", gid="nominal")
        return
    x = across.at(nominal)
    low, high = (
        nominal * (1.0 + side) * factor for side, factor in zip(windows.tolerance, windows.factors, strict=True)
    )
    axes.plot([x, x], [foot_mm, top + 2.2], lw=look.LINE_PT, color=look.INK, ls=look.DASHES["natural"], zorder=4)
    if low < high:
        ends = across.at(low), across.at(high)
        axes.plot(ends, [top + 2.2] * 2, lw=look.HEAVY_PT, color=look.INK, solid_capstyle="butt", zorder=4)
        for end in ends:
            axes.plot([end] * 2, [top + 1.2, top + 3.2], lw=look.LINE_PT, color=look.INK, zorder=4)
        text += f", over its tolerance {range_text(drawing.screening, (low, high), unit=False)}"
    half = look.width_mm(text) / 2.0
    centre = min(max(x, LEFT_MM + half), look.WIDTH_MM - half)
    look.put(axes, centre, top + 5.4, text, gid="nominal")
