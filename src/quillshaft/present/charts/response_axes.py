"""Panels over speed for the charts of the forced response: scales, shading, the speed strip, labels at line ends."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from quillshaft.assess.response_results import Response
from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import RPM
from quillshaft.present.charts.response_common import span_text, speeds_rpm
from quillshaft.present.charts.spread import spread
from quillshaft.present.charts.window_axes import LogScale, box, round_ticks, tick_text
from quillshaft.records import dataclass

if TYPE_CHECKING:
    from matplotlib.axes import Axes

STRIP_MM = 15.5
"""Height of the strip of speeds under the lowest panel."""
BAR_MM = 2.6
LEADER_MM = 3.4
WIDE = 5.0
"""Values that differ more than this are drawn on a logarithmic scale."""
DEEPEST = 30.0
"""A logarithmic scale begins at most so many times below the smaller of peak and limit."""


@dataclass(frozen=True)
class Scale:
    """An axis from `start_mm` on, `length_mm` long, for values from low to high."""

    low: float
    high: float
    start_mm: float
    length_mm: float
    log: bool = False

    def at(self, value: float) -> float:
        """Place [mm] of a value; values outside stand at the ends."""
        inside = min(max(value, self.low), self.high)
        if self.log:
            share = math.log(inside / self.low) / math.log(self.high / self.low)
        else:
            share = (inside - self.low) / (self.high - self.low)
        return self.start_mm + self.length_mm * share

    def ticks(self, room_mm: float) -> list[float]:
        """Round values on the axis, no closer than there is room for."""
        if self.log:
            return round_ticks(LogScale(self.low, self.high, self.start_mm, self.length_mm))
        step = round_step((self.high - self.low) * room_mm / self.length_mm)
        first, last = math.ceil(self.low / step - 1e-9), math.floor(self.high / step + 1e-9)
        return [number * step for number in range(first, last + 1)]

    def times(self, factor: float) -> Scale:
        """The same axis for values in another unit."""
        return Scale(self.low * factor, self.high * factor, self.start_mm, self.length_mm, self.log)


def round_step(value: float) -> float:
    """The round number (1, 2 or 5 times a power of ten) at or above a value."""
    size = 10.0 ** math.floor(math.log10(value)) if value > 0 else 1.0
    return next(size * part for part in (1.0, 2.0, 5.0, 10.0) if size * part >= value * (1.0 - 1e-9))


def speed_scale(response: Response, start_mm: float, length_mm: float) -> Scale:
    """The calculated speeds [rpm], from zero unless they begin high; one speed alone stands in the middle."""
    rpm = speeds_rpm(response)
    low, high = float(rpm[0]), float(rpm[-1])
    if low == high:
        room = 0.1 * abs(low) or 1.0
        return Scale(low - room, high + room, start_mm, length_mm)
    return Scale(0.0 if 0.0 <= low < 0.5 * high else low, high, start_mm, length_mm)


def value_scale(rows: Sequence[Floats], foot_mm: float, high_mm: float) -> Scale:
    """From zero to above the highest curve, logarithmic where another curve would lie too low to be read."""
    seen = [row[np.isfinite(row) & (row > 0)] for row in map(np.asarray, rows)]
    tops = [float(row.max()) for row in seen if len(row)]
    if not tops:
        return Scale(0.0, 1.0, foot_mm, high_mm)
    low, high = min(tops), max(tops)
    if high <= WIDE * low:
        return Scale(0.0, 1.14 * high, foot_mm, high_mm)
    least = min(float(row.min()) for row in seen if len(row))
    return Scale(max(0.6 * least, low / DEEPEST, high / 1e4), 1.6 * high, foot_mm, high_mm, log=True)


def panel_axes(made: look.Frame, across: Scale, up: Scale) -> Axes:
    """Axes without ticks, their limits those of the two scales."""
    from matplotlib.ticker import NullLocator

    wide, tall = made.width_mm, made.height_mm
    place = (across.start_mm / wide, up.start_mm / tall, across.length_mm / wide, up.length_mm / tall)
    axes = made.figure.add_axes(place)
    axes.set_xlim(across.low, across.high)
    axes.set_yscale("log" if up.log else "linear")
    axes.set_ylim(up.low, up.high)
    for axis in (axes.xaxis, axes.yaxis):
        axis.set_major_locator(NullLocator())
        axis.set_minor_locator(NullLocator())
    for spine in axes.spines.values():
        spine.set_linewidth(look.THIN_PT)
        spine.set_color(look.QUIET)
    return axes


def barred_rpm(response: Response) -> list[tuple[float, float]]:
    """Spans not to be run at [rpm]: those that the response asks for, and those of the file beyond them."""
    found = [(span.from_rpm, span.to_rpm) for span in response.restrictions.barred]
    stated = [(low * RPM, high * RPM) for low, high in response.screening.train.operation.barred_rad_s]
    apart = [span for span in stated if not any(span[0] < high and low < span[1] for low, high in found)]
    return sorted([*found, *apart])


def judged_rpm(response: Response) -> list[tuple[float, float]]:
    """Judged ranges [rpm] of the operating map."""
    return [(low * RPM, high * RPM) for low, high in response.screening.train.operation.ranges_rad_s]


def shade_speeds(axes: Axes, response: Response) -> None:
    """Judged ranges shaded, barred spans hatched, over the height of a panel."""
    for low, high in judged_rpm(response):
        axes.axvspan(low, high, facecolor=look.SHADE, edgecolor="none", zorder=0, gid="judged")
    for low, high in barred_rpm(response):
        axes.axvspan(
            low, high, facecolor=look.PAPER, edgecolor=look.FAINT, hatch="////", lw=0.0, zorder=0.5, gid="barred"
        )


def plot_over_speed(axes: Axes, response: Response, values: Floats, **style: Any) -> None:
    """A curve over speed; one calculated speed alone becomes a point with a level line to the panel's right edge."""
    rpm = speeds_rpm(response)
    drawn: dict[str, Any] = {"color": look.INK, "lw": look.LINE_PT, **style}
    if len(values) == 1:
        axes.plot(rpm, values, marker="o", ms=4.5, mfc=look.PAPER, mec=look.INK, ls="none", zorder=5, clip_on=False)
        rpm, values = np.array([rpm[0], axes.get_xlim()[1]]), np.repeat(values, 2)
    axes.plot(rpm, values, **drawn)


def plot_limit(axes: Axes, response: Response, values: Floats, **style: Any) -> None:
    """A limit over speed; at one calculated speed alone a level line over the panel."""
    rpm = speeds_rpm(response)
    if len(values) == 1:
        rpm, values = np.array(axes.get_xlim()), np.repeat(values, 2)
    axes.plot(rpm, values, **{"color": look.INK, **style})


def last_value(values: Floats) -> float:
    """The last finite value of a curve; nan where there is none."""
    finite = values[np.isfinite(values)]
    return float(finite[-1]) if len(finite) else math.nan


def draw_values(page: Axes, up: Scale, x_mm: float, names: Sequence[str], far_mm: float) -> None:
    """Ticks and numbers left of a place [mm], the first name that fits upright `far_mm` from it."""
    for tick in up.ticks(9.0):
        y = up.at(tick)
        page.plot([x_mm, x_mm - 1.0], [y, y], lw=look.THIN_PT, color=look.QUIET)
        look.put(page, x_mm - 1.6, y, tick_text(tick).replace("-", "−"), ha="right", gid="tick")
    tails = [f"{name}, log scale" if up.log else name for name in names]
    fitting = [text for text in tails if look.width_mm(text) <= up.length_mm]
    text = fitting[0] if fitting else look.shorten(tails[-1], up.length_mm + 4.0)
    look.put(page, x_mm - far_mm, up.start_mm + up.length_mm / 2.0, text, rotation=90, gid="name")


def write_ends(
    page: Axes, ends: Sequence[tuple[float, str]], x_mm: float, within_mm: tuple[float, float], room_mm: float
) -> None:
    """What each line is, right of a panel at the height [mm] of its end, moved apart and joined to it."""
    room = room_mm - LEADER_MM - 0.6
    found = [(y, _end_lines(text, room)) for y, text in ends if math.isfinite(y)]
    sizes = [len(lines) * look.line_mm() + 0.5 for _, lines in found]
    centres = spread([y for y, _ in found], sizes, *within_mm)
    for (y, lines), centre in zip(found, centres, strict=True):
        page.plot([x_mm + 0.4, x_mm + LEADER_MM - 0.6], [y, centre], lw=look.HAIR_PT, color=look.QUIET)
        top = centre + (len(lines) - 1) * look.line_mm() / 2.0
        for row, line in enumerate(lines):
            text = look.shorten(line, room)
            look.put(page, x_mm + LEADER_MM, top - row * look.line_mm(), text, ha="left", gid="end")


def _end_lines(text: str, room_mm: float) -> list[str]:
    """A label in one line, or else broken at its line ends first."""
    whole = text.replace("\n", " ")
    if look.width_mm(whole) <= room_mm:
        return [whole]
    return [line for part in text.split("\n") for line in look.wrap(part, room_mm)]


def draw_speeds(page: Axes, response: Response, across: Scale, top_mm: float) -> None:
    """The strip under the lowest panel: judged and barred ranges, idle, rated and trip, and the speed axis."""
    foot = top_mm - 1.2 - BAR_MM
    for spans, face, hatch in ((judged_rpm(response), look.SHADE, None), (barred_rpm(response), look.PAPER, "//////")):
        for low, high in spans:
            if low < across.high and across.low < high:
                left, right = across.at(low), across.at(high)
                box(page, (left, foot, max(right - left, 0.4), BAR_MM), face, hatch, look.INK, zorder=2)
    operation = response.screening.train.operation
    marks = [("idle", operation.idle_rad_s), ("rated", operation.rated_rad_s), ("trip", operation.trip_rad_s)]
    at = [(name, speed * RPM) for name, speed in marks if speed is not None and _on(across, speed * RPM)]
    for _, rpm in at:
        page.plot([across.at(rpm)] * 2, [foot - 0.8, top_mm], lw=look.LINE_PT, color=look.INK, zorder=4)
    _write_speeds(page, response, across, [(across.at(rpm), f"{name} {rpm:.0f}") for name, rpm in at], foot - 2.4)
    _speed_axis(page, response, across, top_mm - 9.9)


def _on(across: Scale, rpm: float) -> bool:
    return across.low <= rpm <= across.high


def _write_speeds(page: Axes, response: Response, across: Scale, labels: list[tuple[float, str]], y_mm: float) -> None:
    """Labels of the strip in one line, moved apart; ranges that find no room are left to their bars."""
    low, high = across.start_mm - 8.0, look.WIDTH_MM - 1.0
    for word, spans in (("judged", judged_rpm(response)), ("barred", barred_rpm(response))):
        for span in spans:
            text = f"{word} {span_text(span)}"
            used = sum(look.width_mm(other) + 2.5 for _, other in labels)
            if span[0] < across.high and across.low < span[1] and used + look.width_mm(text) + 2.5 <= high - low:
                labels.append(((across.at(span[0]) + across.at(span[1])) / 2.0, text))
    centres = spread([at for at, _ in labels], [look.width_mm(text) + 2.5 for _, text in labels], low, high)
    for (_, text), centre in zip(labels, centres, strict=True):
        look.put(page, centre, y_mm, text, gid="operation")


def _speed_axis(page: Axes, response: Response, across: Scale, y_mm: float) -> None:
    """Ticks at round speeds, and what the speed is, right of them."""
    right = across.start_mm + across.length_mm
    page.plot([across.start_mm, right], [y_mm, y_mm], lw=look.THIN_PT, color=look.QUIET)
    for tick in across.ticks(11.0):
        page.plot([across.at(tick)] * 2, [y_mm, y_mm - 1.0], lw=look.THIN_PT, color=look.QUIET)
        look.put(page, across.at(tick), y_mm - 2.8, tick_text(tick), gid="tick")
    name = f"rpm of {response.screening.train.operation.speed_at}"
    look.put(page, right + 4.5, y_mm - 2.8, look.shorten_name(name, look.WIDTH_MM - right - 5.0), ha="left", gid="name")
