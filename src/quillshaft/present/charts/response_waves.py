"""The torque in a link over a working cycle at the chosen speeds: its mean, and where it turns round."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.response_results import Response, Wave
from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, count, link_words, listed
from quillshaft.present.charts.response_axes import Scale, draw_values, panel_axes, write_ends
from quillshaft.present.charts.response_common import Unit, link_number, torque_unit
from quillshaft.present.charts.window_axes import tick_text
from quillshaft.records import dataclass

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MOST_PANELS = 3
MOST_CURVES = 4
LEFT_MM, RIGHT_MM = 15.0, 40.0
PLOT_MM = look.WIDTH_MM - LEFT_MM - RIGHT_MM
HIGH_MM = {1: 74.0, 2: 52.0, 3: 40.0}
HEAD_MM = 4.6
AXIS_MM = 9.0
PATTERNS = ("-", (0, (5.0, 1.6)), (0, (6.0, 1.6, 1.2, 1.6)), (0, (1.6, 1.2)))
NO_MEAN = 0.01
"""A mean torque below this share of the swing counts as none."""


@dataclass(frozen=True)
class Curve:
    """The torque in one link of one wave [N·m] over the angle [deg]."""

    wave: Wave
    torque_nm: Floats

    @property
    def mean_nm(self) -> float:
        """Mean over the cycle [N·m]."""
        return float(np.mean(self.torque_nm))

    @property
    def swing_nm(self) -> float:
        """Half the peak-to-peak [N·m]."""
        return float(np.ptp(self.torque_nm)) / 2.0

    @property
    def has_mean(self) -> bool:
        """True where a mean torque passes that the wave swings about."""
        return abs(self.mean_nm) > NO_MEAN * max(self.swing_nm, 1e-9)

    @property
    def turned_nm(self) -> float:
        """The largest torque against the mean [N·m], signed; 0 where it never turns round or has no mean."""
        if not self.has_mean:
            return 0.0
        return min(0.0, float(self.torque_nm.min())) if self.mean_nm > 0 else max(0.0, float(self.torque_nm.max()))


def wave_chart(response: Response, link: str) -> Figure:
    """A panel for each group and speed, one curve a case; at most three panels of four curves.

    Raises KeyError where the link does not exist, ValueError where the response holds no wave of it.
    """
    found = _panels(response, link)
    if not found:
        raise ValueError(f"no wave of {link} was synthesised")
    panels = [panel[:MOST_CURVES] for panel in found[:MOST_PANELS]]
    left_out = sum(map(len, found)) - sum(map(len, panels))
    note = look.wrap(_note(response, panels, left_out), look.WIDTH_MM - 4.0)
    high, foot = HIGH_MM[len(panels)], len(note) * look.line_mm() + 2.0
    made = look.frame(_title(response, link, panels), len(panels) * (high + HEAD_MM + AXIS_MM) + foot)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    low_nm, high_nm = _span([curve for panel in panels for curve in panel])
    unit = torque_unit(response, max(abs(low_nm), abs(high_nm)))
    y = made.top_mm
    for panel in panels:
        wave = panel[0].wave
        text = f"{wave.group}, at {wave.speed_rpm:.0f} rpm"
        at = y - HEAD_MM / 2.0
        look.put(
            page, LEFT_MM, at, look.shorten_name(text, 90.0, bold=True), ha="left", fontweight="bold", gid="heading"
        )
        y -= HEAD_MM + high
        _draw_panel(made, page, panel, Scale(low_nm, high_nm, y, high), unit)
        y -= AXIS_MM
    look.notes(page, foot - 1.0, note)
    return made.figure


def has_wave(response: Response, link: str) -> bool:
    """True where a wave of the link was synthesised and is known."""
    return bool(_panels(response, link))


def _panels(response: Response, link: str) -> list[list[Curve]]:
    """Curves by group and speed, in the order of the response."""
    number = link_number(response, link)
    panels: dict[tuple[str, float], list[Curve]] = {}
    for wave in response.waves:
        torque = np.asarray(wave.torque_nm[number], dtype=float)
        if len(torque) and np.isfinite(torque).all():
            panels.setdefault((wave.group, round(wave.speed_rpm, 3)), []).append(Curve(wave, torque))
    return list(panels.values())


def _span(curves: Sequence[Curve]) -> tuple[float, float]:
    """Torque [N·m] from below the lowest to above the highest, zero included."""
    low = min([0.0, *(float(curve.torque_nm.min()) for curve in curves)])
    high = max([0.0, *(float(curve.torque_nm.max()) for curve in curves)])
    room = 0.08 * (high - low) or 1.0
    return low - (room if low < 0 or high == 0 else 0.0), high + (room if high > 0 or low == 0 else 0.0)


def _draw_panel(made: look.Frame, page: Axes, panel: Sequence[Curve], up: Scale, unit: Unit) -> None:
    """The waves of one speed, their means, the zero line, and what passes it hatched."""
    angle = np.asarray(panel[0].wave.angle_deg, dtype=float)
    low, high = float(angle.min()), float(angle.max())
    across = Scale(low, high if high > low else low + 1.0, LEFT_MM, PLOT_MM)
    axes = panel_axes(made, across, up)
    axes.axhline(0.0, lw=look.THIN_PT, color=look.INK, zorder=2, gid="zero")
    ends = []
    for curve, pattern in zip(panel, PATTERNS, strict=False):
        axes.plot(
            curve.wave.angle_deg, curve.torque_nm, lw=look.LINE_PT, color=look.INK, ls=pattern, zorder=4, gid="wave"
        )
        ends.append((up.at(float(curve.torque_nm[-1])), _curve_text(curve, unit)))
        if curve.turned_nm:
            sign = math.copysign(1.0, curve.turned_nm)
            axes.fill_between(
                curve.wave.angle_deg,
                0.0,
                np.where(sign * curve.torque_nm > 0, curve.torque_nm, 0.0),
                facecolor=look.SHADE,
                edgecolor=look.QUIET,
                hatch="//////",
                lw=0.0,
                zorder=1,
                gid="turned",
            )
    right = LEFT_MM + PLOT_MM
    for mean in _means(panel):
        axes.axhline(mean, lw=look.THIN_PT, color=look.QUIET, ls=(0, (9.0, 2.0, 1.5, 2.0)), zorder=3, gid="mean")
        ends.append((up.at(mean), f"mean {unit.text(mean)}"))
    ends.append((up.at(0.0), "zero"))
    write_ends(page, ends, right, (up.start_mm - 3.0, up.start_mm + up.length_mm + 3.0), RIGHT_MM)
    draw_values(page, up.times(unit.factor), LEFT_MM, [f"torque, {unit.name}"], 12.5)
    _angle_axis(page, across, up.start_mm)


def _means(panel: Sequence[Curve]) -> list[float]:
    """Different mean torques of a panel [N·m]."""
    found: list[float] = []
    for curve in panel:
        near = [mean for mean in found if abs(curve.mean_nm - mean) <= 0.01 * max(abs(mean), curve.swing_nm)]
        if curve.has_mean and not near:
            found.append(curve.mean_nm)
    return found


def _curve_text(curve: Curve, unit: Unit) -> str:
    if not curve.turned_nm:
        return curve.wave.case
    return f"{curve.wave.case},\nreverses to {unit.text(curve.turned_nm)}"


def _angle_axis(page: Axes, across: Scale, foot_mm: float) -> None:
    """Ticks at quarter turns, halved until they are few enough, and the axis' name under them."""
    turns = across.high - across.low
    step = next((size for size in (45.0, 90.0, 180.0, 360.0, 720.0) if turns / size <= 8.5), turns)
    first = math.ceil(across.low / step - 1e-9)
    for number in range(first, math.floor(across.high / step + 1e-9) + 1):
        x = across.at(number * step)
        page.plot([x, x], [foot_mm, foot_mm - 1.0], lw=look.THIN_PT, color=look.QUIET)
        look.put(page, x, foot_mm - 2.8, tick_text(number * step), gid="tick")
    look.put(page, across.start_mm + across.length_mm / 2.0, foot_mm - 5.9, "angle of its own shaft, °", gid="name")


def _title(response: Response, link: str, panels: Sequence[Sequence[Curve]]) -> str:
    name = link_words(response.screening, response.screening.graph.link(link))
    curves = [curve for panel in panels for curve in panel]
    unit = torque_unit(response, max(float(np.abs(curve.torque_nm).max()) for curve in curves))
    turned = [curve for curve in curves if curve.turned_nm]
    if turned:
        worst = max(turned, key=lambda curve: abs(curve.turned_nm / curve.mean_nm))
        often = "" if len(turned) == len(curves) else f" in {len(turned)} of {len(curves)} waves"
        at = f"{worst.wave.speed_rpm:.0f} rpm ({worst.wave.case})"
        return f"The torque in {name} reverses{often}, furthest at {at}: {unit.text(worst.turned_nm)}"
    if not any(curve.torque_nm.any() for curve in curves):
        return f"No torque passes {name}"
    if not any(curve.has_mean for curve in curves):
        return f"The torque in {name} swings about zero: no mean torque passes it, or none is known"
    least = min((curve for curve in curves if curve.has_mean), key=_left)
    return (
        f"At the speeds shown the torque in {name} does not reverse; at {least.wave.speed_rpm:.0f} rpm it falls to "
        f"{unit.text(_left(least))}"
    )


def _left(curve: Curve) -> float:
    """The smallest magnitude of torque left in the direction of the mean [N·m]."""
    return float(curve.torque_nm.min()) if curve.mean_nm > 0 else -float(curve.torque_nm.max())


def _note(response: Response, panels: Sequence[Sequence[Curve]], left_out: int) -> str:
    text = "Torque at the first-named station, mean included; long dash-dot: mean."
    if len({share.group for share in response.shares}) > 1:
        text += " Each wave holds its own sources alone; those of unknown phase beside them add to it."
    if any(curve.turned_nm for panel in panels for curve in panel):
        text += " Hatched: the torque reverses against its mean."
    bare = [curve.wave.case for panel in panels for curve in panel if not curve.has_mean]
    if bare and len(bare) < sum(map(len, panels)):
        text += f" Without mean torque: {listed(list(dict.fromkeys(bare)), 4)}."
    return text + (f" {capital(count(left_out, 'more wave'))} not drawn." if left_out else "")
