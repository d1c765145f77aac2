"""One strip of a mode shape: the curve along its stations, its nodes, names and angles."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.graph.torsional import GraphLink
from quillshaft.present.charts import look
from quillshaft.present.charts.mode_setting import LABEL_MM, LEFT_MM, START_MM, Setting, names_height, strip_width
from quillshaft.present.charts.phrases import capital
from quillshaft.present.charts.strips import Strip

if TYPE_CHECKING:
    from matplotlib.axes import Axes


def draw_strip(
    made: look.Frame,
    setting: Setting,
    run: Strip,
    mode: ModeResult,
    corner_mm: tuple[float, float],
    head_mm: float,
) -> None:
    """One strip below and right of its upper left corner, `head_mm` kept for its caption."""
    left, top = corner_mm[0] + LEFT_MM, corner_mm[1] - head_mm
    if run.caption:
        head = look.millimetre_axes(made, top, corner_mm[1])
        text = look.shorten(capital(run.caption), strip_width(run, setting.pitch_mm) - LEFT_MM - 1.5)
        look.put(head, left, head_mm - look.line_mm() / 2, text, ha="left", color=look.QUIET, gid="caption")
    pitch = setting.pitch_mm
    width = START_MM + pitch * max(0.6, len(run.stations) - 1) + 1.0
    axes = look.plot_axes(made, (left, top - setting.curve_mm, width, setting.curve_mm))
    names = [setting.screening.graph.stations[station] for station in run.stations]
    x = [START_MM + pitch * k for k in range(len(names))]
    y = [mode.referred_shape[name] for name in names]
    axes.set_xlim(0.0, width)
    reach = 1.0 + 2.0 * LABEL_MM / (setting.curve_mm - 2.0 * LABEL_MM)
    axes.set_ylim(-reach, reach)
    axes.set_yticks([-1.0, 0.0, 1.0], ["−1", "0", "1"])
    axes.set_xticks([])
    for side in ("top", "right", "bottom"):
        axes.spines[side].set_visible(False)
    axes.axhline(0.0, lw=look.THIN_PT, color=look.QUIET, zorder=1)
    _draw_curve(axes, setting.screening, run, mode, x, y)
    _label_points(axes, x, y, pitch, run.lead, 1.2 * 2.0 * reach / setting.curve_mm)
    _write_names(made, setting, run, mode, (left, top - setting.curve_mm))


def _draw_curve(axes: Axes, screening: Screening, run: Strip, mode: ModeResult, x: list[float], y: list[float]) -> None:
    """The line of the shape, broken into shafts, couplings and meshes, its points and its nodes."""
    for k, number in enumerate(run.links):
        link = screening.graph.links[number]
        geared = link.kind in ("mesh", "epicyclic")
        axes.plot(
            x[k : k + 2],
            y[k : k + 2],
            lw=3.2 if geared else look.HEAVY_PT if link.kind == "shaft" else look.LINE_PT,
            ls=(0, (0.35, 0.45)) if geared else "-",
            color=look.ACCENT if geared else look.INK,
            dash_capstyle="butt",
            zorder=3,
        )
        if link.kind == "coupling":
            middle = ((x[k] + x[k + 1]) / 2, (y[k] + y[k + 1]) / 2)
            axes.plot(*middle, marker="s", ms=5, mfc=look.PAPER, mec=look.INK, mew=look.THIN_PT, zorder=4)
            axes.plot(*middle, marker="x", ms=4, color=look.INK, mew=look.THIN_PT, zorder=5)
        _draw_nodes(axes, mode, link, screening, run, k, x)
    for k, height in enumerate(y):
        axes.plot([x[k], x[k]], [0.0, height], lw=look.HAIR_PT, color=look.QUIET, zorder=2)
        lead = run.lead and k == 0
        axes.plot(x[k], height, marker="o", ms=4, mfc=look.PAPER if lead else look.INK, mec=look.INK, mew=1, zorder=6)


def _draw_nodes(
    axes: Axes, mode: ModeResult, link: GraphLink, screening: Screening, run: Strip, k: int, x: list[float]
) -> None:
    first = screening.graph.stations[link.stations[0]] == screening.graph.stations[run.stations[k]]
    for node in mode.nodes:
        if node.link == link.name:
            share = node.share if first else 1.0 - node.share
            at = x[k] + share * (x[k + 1] - x[k])
            axes.plot(at, 0.0, marker="D", ms=5, mfc=look.PAPER, mec=look.INK, mew=look.LINE_PT, zorder=7)


def _label_points(axes: Axes, x: list[float], y: list[float], pitch: float, lead: bool, off: float) -> None:
    """Referred angles at the points: all of them, or only turning points where columns are narrow."""
    for k, height in enumerate(y):
        inner = 0 < k < len(y) - 1
        turning = inner and (height - y[k - 1]) * (y[k + 1] - height) < -1e-4
        if pitch < 9.0 and inner and not turning:
            continue
        if lead and k == 0:
            continue
        up = height >= 0
        at = height + (off if up else -off)
        clear = {"facecolor": look.PAPER, "edgecolor": "none", "pad": 0.3, "alpha": 0.8}
        va = "bottom" if up else "top"
        look.put(axes, x[k], at, signed(height), va=va, gid="value", zorder=5.5, bbox=clear)


def signed(value: float) -> str:
    """An angle with two decimals and a proper minus sign."""
    text = f"{value:.2f}"
    return "0" if text in ("0.00", "-0.00") else text.replace("-", "−")


def _write_names(
    made: look.Frame, setting: Setting, run: Strip, mode: ModeResult, corner_mm: tuple[float, float]
) -> None:
    """Station names under the strip, and actual angles under the names."""
    left, top = corner_mm
    tall = names_height(setting, run)
    foot = top - tall - (look.line_mm() if setting.actual else 0.0)
    axes = look.millimetre_axes(made, foot, top)
    if setting.actual:
        look.put(axes, left - 1.0, look.line_mm() / 2, "actual", ha="right", color=look.QUIET)
    for k, station in enumerate(run.stations):
        name, at = setting.screening.graph.stations[station], left + START_MM + setting.pitch_mm * k
        if setting.upright:
            look.put(
                axes,
                at,
                top - foot - 0.8,
                look.shorten_name(name, setting.upright_mm),
                rotation=90,
                va="top",
                gid="station",
            )
            continue
        for row, text in enumerate(look.wrap_name(name, setting.pitch_mm - 1.5)):
            look.put(axes, at, top - foot - (row + 0.5) * look.line_mm(), text, gid="station")
        if setting.actual:
            look.put(axes, at, look.line_mm() / 2, signed(mode.shape[name]), color=look.QUIET)
