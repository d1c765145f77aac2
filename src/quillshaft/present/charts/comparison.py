"""Modes before and after a change, joined by shape, against the bands of the sources they come near."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from quillshaft.assess.results import SEVERITY, Screening, Verdict, graver
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import brief
from quillshaft.present.charts.spread import spread
from quillshaft.present.comparison_words import comparison_title
from quillshaft.present.words import hertz
from quillshaft.study.compare import CaseComparison, MatchedMode
from quillshaft.study.source_bands import ForbiddenBand, named_bands

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM = 30.0
RIGHT_MM = 79.0
NAMES_MM = 31.0
"""Where the names of the sources begin, right of the plot."""
PLOT_MM = look.WIDTH_MM - LEFT_MM - RIGHT_MM
BODY_MM = 104.0
FOOT_MM = 17.5
HEAD_MM = 6.0
LABEL_MM = look.SMALL_PT * look.POINT_MM * 1.25
BEFORE, AFTER = 0.22, 0.78
"""Where the two columns stand, as shares of the width."""
MOST_MODES = 12


@dataclass(frozen=True)
class _View:
    """What is drawn: modes, bands before and after, and the range of frequency [Hz]."""

    base: Screening
    case: CaseComparison
    modes: tuple[MatchedMode, ...]
    bands: tuple[tuple[ForbiddenBand, ...], tuple[ForbiddenBand, ...]]
    low_hz: float
    high_hz: float

    def height(self, frequency_hz: float) -> float:
        """Height [mm] above the foot of the plot, on a logarithmic scale."""
        return BODY_MM * math.log(frequency_hz / self.low_hz) / math.log(self.high_hz / self.low_hz)


def comparison_chart(base: Screening, case: CaseComparison) -> Figure:
    """Natural frequencies of matched modes before and after, with their tolerances, against the nearest sources."""
    view = _view(base, case)
    made = look.frame(comparison_title(case), BODY_MM + FOOT_MM + HEAD_MM)
    axes = look.plot_axes(made, (LEFT_MM, FOOT_MM, PLOT_MM, BODY_MM))
    axes.set_xlim(0.0, 1.0)
    axes.set_ylim(0.0, BODY_MM)
    axes.set_xticks([])
    axes.set_yticks([])
    for side in (0, 1):
        for band in view.bands[side]:
            _draw_band(axes, view, band, side)
    for mode in view.modes:
        _draw_mode(axes, view, mode)
    _write_heads(made, case)
    _write_modes(made, view)
    _write_sources(made, view)
    _write_key(made, view)
    return made.figure


def _view(base: Screening, case: CaseComparison) -> _View:
    judged = set(base.judged_modes), set(case.screening.judged_modes)
    modes = [item for item in case.matched if item.mode_base in judged[0] or item.mode_case in judged[1]]
    modes = (modes or list(case.matched))[:MOST_MODES]
    edges = [edge for item in modes for edge in (*item.from_bounds_hz, *item.to_bounds_hz)] or [1.0, 10.0]
    low, high = 0.8 * min(edges), 1.22 * max(edges)
    names = tuple(_names(screening, low, high) for screening in (base, case.screening))
    both = tuple(dict.fromkeys((*names[0], *names[1])))
    bands = tuple(
        tuple(band for band in named_bands(screening, both) if band.free_to_hz > low and band.free_from_hz < high)
        for screening in (base, case.screening)
    )
    return _View(base, case, tuple(modes), (bands[0], bands[1]), low, high)


def _names(screening: Screening, low_hz: float, high_hz: float) -> tuple[str, ...]:
    """Sources worth a band: those of every pair not clear, and for each judged mode the nearest."""
    names = [pair.source for pair in screening.not_clear()]
    for number in screening.judged_modes:
        pairs = [pair for pair in screening.interferences if pair.mode == number]
        if low_hz < screening.mode(number).frequency_hz < high_hz and pairs:
            names.append(min(pairs, key=lambda pair: abs(pair.worst_margin)).source)
    return tuple(dict.fromkeys(names))


def _draw_band(axes: Axes, view: _View, band: ForbiddenBand, side: int) -> None:
    """A source over its half of the chart: dark where it runs, between dashes where no mode may stand."""
    left, right = (0.0, 0.5) if side == 0 else (0.5, 1.0)
    low, high, start, end = (
        view.height(min(max(value, view.low_hz), view.high_hz))
        for value in (band.low_hz, band.high_hz, band.free_from_hz, band.free_to_hz)
    )
    axes.fill_between([left, right], start, end, facecolor=look.PALE, edgecolor="none", lw=0.0, zorder=0.5)
    axes.fill_between([left, right], low, high, facecolor=look.FAINT, edgecolor="none", lw=0.0, alpha=0.7, zorder=0.7)
    for edge in (low, high):
        axes.plot([left, right], [edge, edge], lw=look.HAIR_PT, color=look.QUIET, zorder=0.8)
    for edge in (start, end):
        axes.plot(
            [left, right], [edge, edge], lw=look.THIN_PT, color=look.QUIET, ls=look.DASHES["required"], zorder=0.6
        )


def _draw_mode(axes: Axes, view: _View, mode: MatchedMode) -> None:
    heights = [view.height(mode.from_hz), view.height(mode.to_hz)]
    dashes = look.DASHES["fixed"] if mode.doubtful else "-"
    width = look.HEAVY_PT if mode.renumbered else look.LINE_PT
    axes.plot([BEFORE, AFTER], heights, lw=width, color=look.ACCENT, ls=dashes, zorder=3)
    sides = (
        (BEFORE, mode.from_bounds_hz, view.base, mode.mode_base),
        (AFTER, mode.to_bounds_hz, view.case.screening, mode.mode_case),
    )
    for (x, bounds, screening, number), height in zip(sides, heights, strict=True):
        low, high = (view.height(edge) for edge in bounds)
        axes.plot([x, x], [low, high], lw=look.LINE_PT, color=look.INK, zorder=4)
        for edge in (low, high):
            axes.plot([x - 0.018, x + 0.018], [edge, edge], lw=look.LINE_PT, color=look.INK, zorder=4)
        verdict, nominal = _verdict(screening, number)
        face = look.INK if nominal else look.PAPER
        marker = look.MARKERS[verdict][0]
        size = 4.0 if verdict == "clear" else 6.0
        axes.plot(x, height, marker=marker, ms=size, mfc=face, mec=look.INK, mew=look.LINE_PT, ls="none", zorder=5)


def _verdict(screening: Screening, number: int) -> tuple[Verdict, bool]:
    """Gravest verdict of a mode, and whether it is as grave at nominal values; dismissed pairs left out."""
    worst: Verdict = "clear"
    nominal: Verdict = "clear"
    for pair in screening.interferences:
        if pair.mode == number and pair.dismissed is None:
            worst = graver(worst, graver(pair.verdict, pair.worst_verdict))
            nominal = graver(nominal, pair.verdict)
    return worst, SEVERITY[nominal] >= SEVERITY[worst]


def _write_heads(made: look.Frame, case: CaseComparison) -> None:
    axes = look.millimetre_axes(made, FOOT_MM + BODY_MM, FOOT_MM + BODY_MM + HEAD_MM)
    texts = ((BEFORE, "before"), (AFTER, f"after: {case.name}"))
    for share, text in texts:
        room = 0.56 * PLOT_MM
        look.put(
            axes,
            LEFT_MM + share * PLOT_MM,
            2.4,
            look.shorten_name(text, room, bold=True),
            fontweight="bold",
            gid="head",
        )


def _write_modes(made: look.Frame, view: _View) -> None:
    """Number and frequency of every mode, left before and right after the change, joined to its mark."""
    axes = look.millimetre_axes(made, FOOT_MM, FOOT_MM + BODY_MM)
    axes.set_zorder(-1)
    columns = (
        (0.0, LEFT_MM - 2.0, [(item.mode_base, item.from_hz) for item in view.modes]),
        (LEFT_MM + PLOT_MM + 2.0, LEFT_MM + PLOT_MM, [(item.mode_case, item.to_hz) for item in view.modes]),
    )
    for place, (x, edge, items) in enumerate(columns):
        wanted = [view.height(frequency) for _, frequency in items]
        centres = spread(wanted, [LABEL_MM] * len(items), 0.0, BODY_MM)
        for (number, frequency), at, centre in zip(items, wanted, centres, strict=True):
            text = f"mode {number}  {hertz(frequency)} Hz"
            mark = LEFT_MM + (BEFORE if place == 0 else AFTER) * PLOT_MM
            ends = [LEFT_MM, LEFT_MM - 1.6] if place == 0 else [edge, edge + 1.6]
            axes.plot(ends, [at, centre], lw=look.HAIR_PT, color=look.QUIET)
            _leader(made, mark, ends[0], at)
            align = "right" if place == 0 else "left"
            look.put(axes, LEFT_MM - 2.2 if place == 0 else x, centre, text, fontweight="bold", gid="mode", ha=align)


def _leader(made: look.Frame, mark_mm: float, edge_mm: float, height_mm: float) -> None:
    """A hair line from a mark to the edge of the plot."""
    axes = made.figure.axes[0]
    shares = [(value - LEFT_MM) / PLOT_MM for value in (mark_mm, edge_mm)]
    axes.plot(shares, [height_mm] * 2, lw=look.HAIR_PT, color=look.QUIET, ls=(0, (1.0, 1.6)), zorder=2)


def _write_sources(made: look.Frame, view: _View) -> None:
    """Names of the sources at the far right, those of one band together, joined to it."""
    axes = look.millimetre_axes(made, FOOT_MM, FOOT_MM + BODY_MM)
    axes.set_zorder(-2)
    names: dict[tuple[float, float], list[str]] = {}
    for band in view.bands[1] or view.bands[0]:
        names.setdefault((round(band.low_hz, 6), round(band.high_hz, 6)), []).append(band.source)
    start = LEFT_MM + PLOT_MM + NAMES_MM
    middles = [
        view.height(min(max(math.sqrt(max(low, view.low_hz) * min(high, view.high_hz)), view.low_hz), view.high_hz))
        for low, high in names
    ]
    centres = spread(middles, [LABEL_MM] * len(middles), 0.0, BODY_MM)
    for ((low, high), sources), middle, centre in zip(names.items(), middles, centres, strict=True):
        axes.plot([start - 2.6, start - 0.6], [middle, centre], lw=look.HAIR_PT, color=look.QUIET)
        axes.plot([start - 3.4, start - 2.6], [middle, middle], lw=look.LINE_PT, color=look.FAINT)
        values = f"{brief(low)}–{brief(high)} Hz" if high > low else f"{brief(high)} Hz"
        first = sources[0] if len(sources) == 1 else f"{sources[0]} +{len(sources) - 1}"
        text = look.shorten(f"{first}  {values}", RIGHT_MM - NAMES_MM)
        look.put(axes, start, centre, text, ha="left", color=look.QUIET, gid="source")


def _write_key(made: look.Frame, view: _View) -> None:
    axes = look.millimetre_axes(made, 0.0, FOOT_MM)
    lines = [
        "Grey: a source over the judged range, named at the right; between dashes no mode may stand. Uprights: the",
        "mode over all tolerances. Mark: gravest verdict over the tolerances (circle: meets, triangle: too close,",
        "square: meets in a barred range, dot: clear), filled where it is as grave nominally. Logarithmic scale.",
        "Dismissed pairs leave no mark.",
    ]
    if any(item.renumbered for item in view.modes):
        lines[-1] += " Heavy: renumbered."
    if any(item.doubtful for item in view.modes):
        lines[-1] += " Dashed: doubtful match."
    look.notes(axes, FOOT_MM - 2.5, lines)
