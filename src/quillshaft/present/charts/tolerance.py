"""Tolerance chart: how each judged mode is spread, against the bands in which sources excite it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from quillshaft.present.charts import look
from quillshaft.present.charts.spread import spread
from quillshaft.present.tolerance_words import DISTRIBUTION_WORDS, chance_text, risk_title
from quillshaft.present.words import hertz
from quillshaft.study.bands import pair_bands
from quillshaft.study.tolerance_results import ModeSpread, ToleranceStudy

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM = 27.0
RIGHT_MM = 38.0
ROW_MM = 16.0
STRIP_MM = 9.0
FOOT_MM = 21.0
MOST_ROWS = 8
BINS = 56
LEAST_SPAN = 0.01
LEAST_WIDTH = 1e-9

Place = Callable[[float], float]
"""Where a deviation stands along a strip [mm]."""


@dataclass(frozen=True)
class _Near:
    """A source's band beside a mode, as deviations from the nominal frequency: of itself, and with the margin."""

    source: str
    meets: tuple[float, float]
    around: tuple[float, float]


def tolerance_chart(study: ToleranceStudy) -> Figure:
    """One strip a judged mode: its distribution over the tolerances, its bounds, and the sources about it.

    Modes whose pairs may be not clear come first where not all fit the page.
    """
    rows = _chosen(study)
    left_out = len(study.screening.judged_modes) - len(rows)
    made = look.frame(risk_title(study), max(len(rows), 1) * ROW_MM + FOOT_MM)
    span = _span(study, rows)
    width = made.width_mm - LEFT_MM - RIGHT_MM
    axes = look.millimetre_axes(made, 0.0, made.top_mm)
    for index, mode in enumerate(rows):
        _row(axes, study, mode, made.top_mm - (index + 1) * ROW_MM, width, span)
    _scale(axes, width, span)
    look.notes(axes, 9.2, _notes(study, left_out))
    return made.figure


def _chosen(study: ToleranceStudy) -> list[ModeSpread]:
    """The judged modes in order; where they are too many, the likeliest at risk and then the lowest."""
    risk = list(dict.fromkeys(item.pair.mode for item in study.at_risk()))
    judged = [study.modes[number - 1] for number in study.screening.judged_modes]
    first = sorted(judged, key=lambda mode: risk.index(mode.mode) if mode.mode in risk else len(risk))[:MOST_ROWS]
    return sorted(first, key=lambda mode: mode.mode)


def _span(study: ToleranceStudy, rows: list[ModeSpread]) -> tuple[float, float]:
    """Deviations that every strip shows: all bounds and as much again about them, for the sources beside."""
    lows = [mode.low_hz / mode.nominal_hz - 1.0 for mode in rows]
    highs = [mode.high_hz / mode.nominal_hz - 1.0 for mode in rows]
    required = max((item.pair.worst_required for item in study.pairs), default=0.0)
    room = max(LEAST_SPAN, 0.35 * (max(highs, default=0.0) - min(lows, default=0.0)), required)
    return min(lows, default=0.0) - room, max(highs, default=0.0) + room


def _near(study: ToleranceStudy, mode: ModeSpread, span: tuple[float, float]) -> list[_Near]:
    found = []
    for item in study.pairs:
        if item.pair.mode != mode.mode:
            continue
        for band in pair_bands(study.screening, item.pair):
            meets, around = _deviations(mode, band.meets), _deviations(mode, band.not_clear)
            if around[0] < span[1] and span[0] < around[1]:
                found.append(_Near(item.pair.source, meets, around))
    return found


def _deviations(mode: ModeSpread, band: tuple[float, float]) -> tuple[float, float]:
    return band[0] / mode.nominal_hz - 1.0, band[1] / mode.nominal_hz - 1.0


def _row(
    axes: Axes, study: ToleranceStudy, mode: ModeSpread, foot: float, width: float, span: tuple[float, float]
) -> None:
    """One mode: its name, bands, distribution and bounds, and the chance of what may go wrong."""
    base = foot + 2.0

    def x(deviation: float) -> float:
        inside = min(max(deviation, span[0]), span[1])
        return LEFT_MM + width * (inside - span[0]) / (span[1] - span[0])

    near = _near(study, mode, span)
    for band in near:
        _box(axes, x(band.around[0]), x(band.around[1]), base, look.SHADE, None, 1.0)
    for band in near:
        _box(axes, x(band.meets[0]), x(band.meets[1]), base, "none", "//////", 1.5)
    axes.plot([LEFT_MM, LEFT_MM + width], [base, base], lw=look.HAIR_PT, color=look.QUIET, zorder=2)
    _distribution(axes, study, mode, base, x, near)
    _band_names(axes, near, base + STRIP_MM + 1.7, x, width)
    look.put(axes, 0.0, base + 5.4, f"Mode {mode.mode}", look.TEXT_PT, ha="left", fontweight="bold")
    look.put(axes, 0.0, base + 1.9, f"{hertz(mode.nominal_hz)} Hz", ha="left")
    right = LEFT_MM + width + 2.5
    for line, text in enumerate(_risk_lines(study, mode.mode)):
        look.put(axes, right, base + 7.2 - line * look.line_mm(), text, ha="left")


def _risk_lines(study: ToleranceStudy, mode: int) -> list[str]:
    """What stands right of a strip: the likeliest pair and its chance; at most three lines."""
    found = [item for item in study.at_risk() if item.pair.mode == mode]
    if not found:
        return ["clear throughout"]
    first = found[0]
    more = "" if len(found) == 1 else f" (+ {len(found) - 1} more)"
    room = RIGHT_MM - 2.5
    dismissed = ", dismissed" if first.pair.dismissed is not None else ""
    text = f"not clear of {first.pair.source}{more}{dismissed}: {chance_text(first.not_clear, study.samples)}"
    lines = look.wrap(text, room)
    return [look.shorten(line, room) for line in lines[:4]]


def _box(axes: Axes, left: float, right: float, base: float, face: str, hatch: str | None, order: float) -> None:
    from matplotlib.patches import Rectangle

    axes.add_patch(
        Rectangle(
            (left, base),
            max(right - left, 0.25),
            STRIP_MM,
            facecolor=face,
            edgecolor=look.QUIET if hatch else "none",
            linewidth=look.HAIR_PT if hatch else 0.0,
            hatch=hatch,
            zorder=order,
        )
    )


def _distribution(
    axes: Axes, study: ToleranceStudy, mode: ModeSpread, base: float, x: Place, near: list[_Near]
) -> None:
    """The sampled distribution standing on the line, dark inside a band; bounds, 5 to 95 %, nominal."""
    import numpy as np

    deviation = study.frequency_hz[:, mode.mode - 1] / mode.nominal_hz - 1.0
    low, high = mode.low_hz / mode.nominal_hz - 1.0, mode.high_hz / mode.nominal_hz - 1.0
    if high - low > LEAST_WIDTH:
        counts, edges = np.histogram(deviation, BINS, (low, high))
        tall = (counts / counts.max() * 0.84 * STRIP_MM).tolist()
        _steps(axes, edges.tolist(), tall, (low, high), base, x, look.FAINT)
        for band in near:
            inside = (max(low, band.around[0]), min(high, band.around[1]))
            if inside[0] < inside[1]:
                _steps(axes, edges.tolist(), tall, inside, base, x, look.INK)
    ends = [x(low), x(high)]
    axes.plot(ends, [base, base], lw=look.THIN_PT, color=look.INK, zorder=4)
    for end in ends:
        axes.plot([end, end], [base - 1.0, base + 1.0], lw=look.LINE_PT, color=look.INK, zorder=4)
    middle = [x(value / mode.nominal_hz - 1.0) for value in (mode.p05_hz, mode.p95_hz)]
    axes.plot(middle, [base, base], lw=look.HEAVY_PT, color=look.INK, zorder=4, solid_capstyle="butt")
    axes.plot([x(0.0)] * 2, [base - 1.0, base + STRIP_MM], lw=look.LINE_PT, color=look.INK, zorder=5)


def _steps(
    axes: Axes, edges: list[float], tall: list[float], inside: tuple[float, float], base: float, x: Place, face: str
) -> None:
    """The part of a stepped distribution between two deviations."""
    xs, ys = [x(inside[0])], [base]
    for height, start, end in zip(tall, edges[:-1], edges[1:], strict=True):
        if end > inside[0] and start < inside[1]:
            xs += [x(max(start, inside[0])), x(min(end, inside[1]))]
            ys += [base + height] * 2
    axes.fill([*xs, xs[-1]], [*ys, base], facecolor=face, edgecolor=look.INK, linewidth=look.THIN_PT, zorder=3)


def _band_names(axes: Axes, near: list[_Near], y: float, x: Place, width: float) -> None:
    """Names of the sources above their bands, shifted apart; the nearest where there is no room for all."""
    items = [(look.shorten_name(band.source, 32.0), (x(band.meets[0]) + x(band.meets[1])) / 2.0) for band in near]
    items.sort(key=lambda item: abs(item[1] - x(0.0)))
    while items and sum(look.width_mm(name) + 2.0 for name, _ in items) > width:
        items.pop()
    sizes = [look.width_mm(name) + 2.0 for name, _ in items]
    centres = spread([at for _, at in items], sizes, LEFT_MM, LEFT_MM + width)
    for (name, _), centre in zip(items, centres, strict=True):
        look.put(axes, centre, y, name, color=look.QUIET)


def _scale(axes: Axes, width: float, span: tuple[float, float]) -> None:
    """Deviation from the nominal frequency along the foot."""
    y = FOOT_MM - 2.5
    step = next(size for size in (0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0) if size * 9 >= span[1] - span[0])
    axes.plot([LEFT_MM, LEFT_MM + width], [y, y], lw=look.THIN_PT, color=look.QUIET)
    for number in range(int(span[0] / step), int(span[1] / step) + 1):
        at = LEFT_MM + width * (number * step - span[0]) / (span[1] - span[0])
        axes.plot([at, at], [y, y - 1.0], lw=look.THIN_PT, color=look.QUIET)
        text = "nominal" if number == 0 else f"{number * step * 100:+.3g} %".replace("-", "−")
        look.put(axes, at, y - 3.0, text)
    look.put(axes, LEFT_MM + width + 2.5, y - 3.0, "of its own frequency", ha="left")


def _notes(study: ToleranceStudy, left_out: int) -> list[str]:
    text = (
        f"Grey: {study.samples} sampled trains ({study.distribution}: {DISTRIBUTION_WORDS[study.distribution]}); "
        f"end marks: {study.bounds} bounds; heavy line: 5 % to 95 %. Hatched: a source over the running range; "
        "shaded: with the separation required over the tolerances; black: not clear. The nearest sources are named."
    )
    if left_out:
        text += f" {left_out} more judged modes are not drawn."
    return look.wrap(text, look.WIDTH_MM)
