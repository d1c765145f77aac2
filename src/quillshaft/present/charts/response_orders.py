"""Which lines make up the alternating torque in a link, as lanes over speed."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.response_results import Response
from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import RPM, link_words
from quillshaft.present.charts.response_axes import (
    STRIP_MM,
    Scale,
    draw_speeds,
    panel_axes,
    plot_over_speed,
    shade_speeds,
    speed_scale,
)
from quillshaft.present.charts.response_common import (
    Unit,
    link_number,
    nearest,
    outline_places,
    share_text,
    speeds_rpm,
    torque_text,
    torque_unit,
)
from quillshaft.records import dataclass

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MOST_LINES = 7
LEAST_SHARE = 0.02
"""Lines below this share of the largest are summed up with the others."""
LEFT_MM, RIGHT_MM = 37.0, 40.0
LANES_MM = 116.0
LOWEST_MM = 7.2
GAP_MM = 1.6


@dataclass(frozen=True)
class Lane:
    """One line's amplitude over speed [N·m], and how many lines it stands for."""

    name: str
    torque_nm: Floats
    lines: int = 1
    whole: bool = False

    @property
    def top_nm(self) -> float:
        """Its largest finite amplitude [N·m], 0 where there is none."""
        finite = self.torque_nm[np.isfinite(self.torque_nm)]
        return float(finite.max()) if len(finite) else 0.0


def order_contributions_chart(response: Response, link: str) -> Figure:
    """One lane a line on one scale of torque, the largest first, under a lane of all together in the normal case.

    Raises KeyError where the link does not exist.
    """
    lanes = leading_lines(response, link)
    number = link_number(response, link)
    whole = Lane("all together", np.asarray(response.normal.alternating_torque_nm[number], dtype=float), whole=True)
    drawn = [whole, *lanes]
    note = look.wrap(_lanes_note(lanes), look.WIDTH_MM - 4.0)
    foot = len(note) * look.line_mm() + 2.0
    per_nm = _height_per_nm(drawn)
    tall = [max(LOWEST_MM, lane.top_nm * per_nm) for lane in drawn]
    made = look.frame(_lanes_title(response, link, lanes), sum(tall) + len(tall) * GAP_MM + STRIP_MM + foot + 4.0)
    across = speed_scale(response, LEFT_MM, look.WIDTH_MM - LEFT_MM - RIGHT_MM)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    y = made.top_mm - 2.0
    for lane, high in zip(drawn, tall, strict=True):
        y -= high + GAP_MM
        top_nm = high / per_nm if per_nm else 1.0
        _draw_lane(made, page, response, lane, across, Scale(0.0, top_nm, y, high))
    _draw_yardstick(page, per_nm, torque_unit(response, whole.top_nm), made.top_mm - 2.0 - GAP_MM)
    draw_speeds(page, response, across, y)
    look.notes(page, foot - 1.0, note)
    return made.figure


def leading_lines(response: Response, link: str, most: int = MOST_LINES) -> list[Lane]:
    """The lines of largest amplitude in a link at any speed, the rest summed up by amplitude as the last one."""
    number = link_number(response, link)
    rows = [Lane(share.source, np.asarray(share.torque_nm[number], dtype=float)) for share in response.shares]
    rows = sorted((lane for lane in rows if lane.top_nm > 0.0), key=lambda lane: -lane.top_nm)
    shown = [lane for lane in rows[:most] if lane.top_nm >= LEAST_SHARE * rows[0].top_nm]
    return [*shown, *_rest(rows[len(shown) :])]


def _rest(rows: list[Lane]) -> list[Lane]:
    """The remaining lines as one: nothing, the line itself, or the sum of amplitudes."""
    if len(rows) <= 1:
        return rows
    return [Lane(f"{len(rows)} others, summed", np.sum([np.nan_to_num(r.torque_nm) for r in rows], axis=0), len(rows))]


def _height_per_nm(lanes: list[Lane]) -> float:
    """Millimetres of one N·m so that all lanes fill their height, small ones at their least height; 0 without any."""
    tops = sorted((lane.top_nm for lane in lanes if lane.top_nm > 0.0), reverse=True)
    for count in range(len(tops), 0, -1):
        per_nm = (LANES_MM - LOWEST_MM * (len(lanes) - count)) / sum(tops[:count])
        if tops[count - 1] * per_nm >= LOWEST_MM:
            return min(per_nm, 34.0 / tops[0])
    return 34.0 / tops[0] if tops else 0.0


def _draw_lane(made: look.Frame, page: Axes, response: Response, lane: Lane, across: Scale, up: Scale) -> None:
    """A filled curve with its name left, and its largest value and that at rated speed right."""
    axes = panel_axes(made, across, up)
    for side in ("top", "right", "left"):
        axes.spines[side].set_visible(False)
    shade_speeds(axes, response)
    values = np.nan_to_num(lane.torque_nm)
    rpm = speeds_rpm(response)
    face, hatch = look.FAINT, "...." if lane.lines > 1 else None
    if lane.whole:
        face, hatch = look.PAPER, "//////"
    if len(rpm) == 1:
        axes.plot([rpm[0]] * 2, [0.0, values[0]], lw=4.0, color=look.FAINT, solid_capstyle="butt", zorder=2)
    else:
        at = outline_places(values)
        axes.fill_between(rpm[at], 0.0, values[at], facecolor=face, edgecolor=look.QUIET, hatch=hatch, lw=0.0, zorder=2)
    plot_over_speed(axes, response, values, zorder=3, gid=lane.name, clip_on=False)
    _write_lane(page, lane, _lane_words(response, lane), up.start_mm + min(up.length_mm, 10.0) / 2.0)


def _write_lane(page: Axes, lane: Lane, words: Sequence[str], middle_mm: float) -> None:
    """The name of a lane left of it, its figures right of it."""
    weight = "bold" if lane.whole else "normal"
    name = look.shorten_name(lane.name, LEFT_MM - 3.0, bold=lane.whole)
    look.put(page, 0.0, middle_mm, name, ha="left", gid="line", fontweight=weight)
    for row, text in enumerate(words):
        at, short = middle_mm + (0.5 - row) * look.line_mm(), look.shorten(text, RIGHT_MM - 2.0)
        colour = look.QUIET if row else look.INK
        look.put(page, look.WIDTH_MM - RIGHT_MM + 2.0, at, short, ha="left", gid="value", color=colour)


def _lane_words(response: Response, lane: Lane) -> list[str]:
    at = int(np.argmax(np.nan_to_num(lane.torque_nm)))
    rated = nearest(response, response.screening.train.operation.rated_rad_s * RPM)
    words = [f"{torque_text(response, lane.top_nm)} at {speeds_rpm(response)[at]:.0f} rpm"]
    if lane.top_nm <= 0.0:
        return [torque_text(response, 0.0)]
    return words if rated == at else [*words, f"at rated {torque_text(response, float(lane.torque_nm[rated]))}"]


def _draw_yardstick(page: Axes, per_nm: float, unit: Unit, top_mm: float) -> None:
    """A bar of round length that shows the lanes' scale of torque, left of the first lane."""
    if per_nm <= 0:
        return
    value = 10.0 ** math.floor(math.log10(12.0 / per_nm * unit.factor))
    value *= next(part for part in (5.0, 2.0, 1.0) if part * value * per_nm / unit.factor <= 12.0)
    high = value / unit.factor * per_nm
    x = LEFT_MM - 1.5
    page.plot([x, x], [top_mm - high, top_mm], lw=look.HEAVY_PT, color=look.INK, solid_capstyle="butt")
    for y in (top_mm - high, top_mm):
        page.plot([x - 0.8, x + 0.8], [y, y], lw=look.THIN_PT, color=look.INK)
    look.put(page, x - 1.8, top_mm - min(high / 2.0, 2.0), unit.text(value / unit.factor), ha="right", gid="yardstick")


def lead_of(lanes: list[Lane], at: int) -> tuple[str, float] | None:
    """The single line with the largest amplitude at one speed, and its share of the sum of all; None without any."""
    total = sum(float(np.nan_to_num(lane.torque_nm[at])) for lane in lanes)
    if total <= 0.0:
        return None
    first = max((lane for lane in lanes if lane.lines == 1), key=lambda lane: float(np.nan_to_num(lane.torque_nm[at])))
    return first.name, float(np.nan_to_num(first.torque_nm[at])) / total


def _lanes_title(response: Response, link: str, lanes: list[Lane]) -> str:
    name = link_words(response.screening, response.screening.graph.link(link))
    whole = np.nan_to_num(response.normal.alternating_torque_nm[link_number(response, link)])
    at = int(np.argmax(whole))
    found = lead_of(lanes, at)
    if found is None:
        return f"No source puts alternating torque into {name}"
    text = f"{found[0]} leads with {share_text(found[1])} of the summed amplitudes"
    return f"In {name}, {text} at {speeds_rpm(response)[at]:.0f} rpm, where the torque is largest"


def _lanes_note(lanes: list[Lane]) -> str:
    text = "Amplitude of each line in the normal case, all on the scale of the bar at the top left; hatched: half the "
    text += "peak-to-peak of all lines together. Shaded: judged ranges; hatched over the lanes: barred."
    return text + (" Dotted: amplitudes of the others summed." if any(lane.lines > 1 for lane in lanes) else "")
