"""Mode shapes along the train, with standing points and where the energy sits."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.graph.torsional import GraphLink
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, mode_title
from quillshaft.present.charts.strips import Strip, strips

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

CURVE_MM = 30.0
THIN_CURVE_MM = 20.0
BAR_MM = 3.6
MOST_BARS = 7
LEFT_MM = 13.0


def mode_shapes(screening: Screening, numbers: Sequence[int]) -> Figure:
    """One figure of one to three modes: referred angle along the train, nodes, and shares of energy.

    Raises ValueError where no mode, or more than three, are asked for, IndexError where one does not exist.
    """
    if not 1 <= len(numbers) <= 3:
        raise ValueError(f"a figure shows one to three modes, not {len(numbers)}")
    modes = [screening.mode(number) for number in numbers]
    runs = strips(screening.graph)
    note = _note_lines(screening, runs)
    panels = [_panel_height(screening, runs, mode) for mode in modes]
    heads = [look.wrap(mode_title(screening, mode), look.WIDTH_MM - 2.0, look.TITLE_PT, True) for mode in modes]
    extra = sum(len(head) * look.line_mm(look.TITLE_PT) + 5.0 for head in heads[1:])
    foot = len(note) * look.line_mm() + 2.0
    made = look.frame(mode_title(screening, modes[0]), sum(panels) + extra + foot)
    y = made.top_mm
    for index, mode in enumerate(modes):
        if index:
            y -= 4.0
            look.heading(made, y, heads[index])
            y -= len(heads[index]) * look.line_mm(look.TITLE_PT) + 1.0
        _draw_mode(made, screening, runs, mode, y)
        y -= panels[index]
    look.notes(look.millimetre_axes(made, 0.0, foot), foot - 1.0, note)
    return made.figure


def _most(runs: tuple[Strip, ...]) -> int:
    return max(len(run.stations) for run in runs)


def _pitch(runs: tuple[Strip, ...]) -> float:
    return min(26.0, (look.WIDTH_MM - LEFT_MM - 10.0) / max(1, _most(runs) - 1))


def _upright(runs: tuple[Strip, ...]) -> bool:
    """True where names stand upright because columns are too narrow for them."""
    return _pitch(runs) < 12.5


def _names_height(screening: Screening, run: Strip, runs: tuple[Strip, ...]) -> float:
    """Height [mm] of the station names under a strip."""
    names = [screening.graph.stations[station] for station in run.stations]
    if _upright(runs):
        return min(24.0, max(look.width_mm(name) for name in names)) + 1.5
    lines = max(len(look.wrap_name(name, _pitch(runs) - 1.5)) for name in names)
    return lines * look.line_mm() + 1.0


def _actual_row(screening: Screening, runs: tuple[Strip, ...]) -> bool:
    """True where actual angles differ from referred ones and there is room for a row of them."""
    return not _upright(runs) and bool(max(screening.graph.scale) != min(screening.graph.scale))


def _curve_mm(runs: tuple[Strip, ...]) -> float:
    return CURVE_MM if len(runs) == 1 else THIN_CURVE_MM


def _strip_height(screening: Screening, run: Strip, runs: tuple[Strip, ...]) -> float:
    caption = look.line_mm() + 0.5 if run.caption else 0.0
    actual = look.line_mm() if _actual_row(screening, runs) else 0.0
    return caption + _curve_mm(runs) + _names_height(screening, run, runs) + actual + 1.5


def _bars(shares: dict[str, float]) -> tuple[list[tuple[str, float]], float]:
    """The largest shares above 1 %, and what the others sum to."""
    ranked = sorted(shares.items(), key=lambda item: -item[1])
    shown = [item for item in ranked[:MOST_BARS] if item[1] >= 0.01]
    return shown, sum(share for _, share in ranked[len(shown) :])


def _panel_height(screening: Screening, runs: tuple[Strip, ...], mode: ModeResult) -> float:
    curves = sum(_strip_height(screening, run, runs) for run in runs)
    rows = max(len(_bars(mode.strain_energy)[0]), len(_bars(mode.kinetic_energy)[0])) + 2
    return curves + rows * BAR_MM + 3.0


def _draw_mode(
    made: look.Frame, screening: Screening, runs: tuple[Strip, ...], mode: ModeResult, top_mm: float
) -> None:
    y = top_mm
    for run in runs:
        height = _strip_height(screening, run, runs)
        _draw_strip(made, screening, runs, run, mode, y)
        y -= height
    axes = look.millimetre_axes(made, 0.0, y)
    half = look.WIDTH_MM / 2.0
    _draw_bars(axes, "Strain energy by link", mode.strain_energy, 0.0, y - 2.0, hatched=True)
    _draw_bars(axes, "Kinetic energy by station", mode.kinetic_energy, half + 2.0, y - 2.0, hatched=False)


def _draw_bars(axes: Axes, heading: str, shares: dict[str, float], left: float, top: float, hatched: bool) -> None:
    """A ranked list of shares with bars; the rest summed up in its last line."""
    from matplotlib.patches import Rectangle

    shown, rest = _bars(shares)
    name_mm, full_mm = 33.0, 33.0
    look.put(axes, left, top - BAR_MM / 2, heading, ha="left", color=look.ACCENT, fontweight="bold")
    for index, (name, share) in enumerate(shown, start=1):
        y = top - (index + 0.5) * BAR_MM
        look.put(axes, left, y, look.shorten(name, name_mm - 1.5), ha="left", gid="bar")
        axes.add_patch(
            Rectangle(
                (left + name_mm, y - 1.1),
                full_mm * share,
                2.2,
                facecolor=look.PAPER if hatched else look.ACCENT,
                edgecolor=look.INK,
                linewidth=look.THIN_PT,
                hatch="/////" if hatched else None,
            )
        )
        look.put(axes, left + name_mm + full_mm * share + 1.2, y, f"{share * 100:.1f} %", ha="left")
    if rest >= 0.0005:
        y = top - (len(shown) + 1.5) * BAR_MM
        look.put(axes, left, y, f"others together {rest * 100:.1f} %", ha="left", color=look.QUIET)


def _draw_strip(
    made: look.Frame,
    screening: Screening,
    runs: tuple[Strip, ...],
    run: Strip,
    mode: ModeResult,
    top_mm: float,
) -> None:
    if run.caption:
        head = look.millimetre_axes(made, top_mm - look.line_mm() - 0.5, top_mm)
        look.put(head, LEFT_MM, look.line_mm() / 2, capital(run.caption), ha="left", color=look.QUIET)
        top_mm -= look.line_mm() + 0.5
    pitch, curve = _pitch(runs), _curve_mm(runs)
    box = (LEFT_MM, top_mm - curve, pitch * max(1, len(run.stations) - 1) + 8.0, curve)
    axes = look.plot_axes(made, box)
    names = [screening.graph.stations[station] for station in run.stations]
    x = [4.0 + pitch * k for k in range(len(names))]
    y = [mode.referred_shape[name] for name in names]
    axes.set_xlim(0.0, box[2])
    axes.set_ylim(-1.5, 1.5)
    axes.set_yticks([-1.0, 0.0, 1.0], ["−1", "0", "1"])
    axes.set_xticks([])
    for side in ("top", "right", "bottom"):
        axes.spines[side].set_visible(False)
    axes.axhline(0.0, lw=look.THIN_PT, color=look.QUIET, zorder=1)
    _draw_curve(axes, screening, run, mode, x, y)
    _label_points(axes, x, y, pitch, run.lead)
    _write_names(made, screening, runs, run, mode, top_mm - curve)


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


def _label_points(axes: Axes, x: list[float], y: list[float], pitch: float, lead: bool) -> None:
    """Referred angles at the points: all of them, or only turning points where columns are narrow."""
    for k, height in enumerate(y):
        inner = 0 < k < len(y) - 1
        turning = inner and (height - y[k - 1]) * (y[k + 1] - height) <= 0
        if pitch < 9.0 and inner and not turning:
            continue
        if lead and k == 0:
            continue
        up = height >= 0
        at = height + (0.13 if up else -0.13)
        look.put(axes, x[k], at, signed(height), va="bottom" if up else "top", gid="value", zorder=8)


def signed(value: float) -> str:
    """An angle with two decimals and a proper minus sign."""
    text = f"{value:.2f}"
    return "0" if text in ("0.00", "-0.00") else text.replace("-", "−")


def _write_names(
    made: look.Frame,
    screening: Screening,
    runs: tuple[Strip, ...],
    run: Strip,
    mode: ModeResult,
    top_mm: float,
) -> None:
    """Station names under the strip, and actual angles under the names."""
    tall = _names_height(screening, run, runs)
    actual = _actual_row(screening, runs)
    foot = top_mm - tall - (look.line_mm() if actual else 0.0)
    axes = look.millimetre_axes(made, foot, top_mm)
    height, pitch = top_mm - foot, _pitch(runs)
    if actual:
        look.put(axes, 0.0, look.line_mm() / 2, "actual", ha="left", color=look.QUIET)
    for k, station in enumerate(run.stations):
        name, at = screening.graph.stations[station], LEFT_MM + 4.0 + pitch * k
        if _upright(runs):
            look.put(axes, at, height - 0.8, look.shorten(name, 24.0), rotation=90, va="top", gid="station")
            continue
        for row, text in enumerate(look.wrap_name(name, pitch - 1.5)):
            look.put(axes, at, height - (row + 0.5) * look.line_mm(), text, gid="station")
        if actual:
            look.put(axes, at, look.line_mm() / 2, signed(mode.shape[name]), color=look.QUIET)


def _note_lines(screening: Screening, runs: tuple[Strip, ...]) -> list[str]:
    text = (
        f"Curve and figures: angle referred to {screening.train.operation.speed_at}, the largest 1; "
        "diamond: stands still; crossed box: coupling; short strokes: gear mesh."
    )
    if _actual_row(screening, runs):
        text += " Actual: each shaft's own angle, the largest 1."
    if any(run.lead for run in runs):
        text += " Open point: a station of another strip."
    return look.wrap(text, look.WIDTH_MM - 5.0)
