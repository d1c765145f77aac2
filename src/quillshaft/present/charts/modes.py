"""Mode shapes along the train, with standing points and where the energy sits."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.graph.torsional import GraphLink
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, count, listed, mode_title
from quillshaft.present.charts.strips import Strip, strips

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

BAR_MM = 3.6
LEFT_MM = 12.0
START_MM = 6.0
END_MM = 5.0
NARROWEST_MM = 12.5
CAPTION_MM = 64.0
SMALLEST = 0.0005
"""Shares below this are not mentioned."""

Shares = tuple[list[tuple[str, float]], float]
"""Names with their shares, the largest first, and what all others sum to."""


@dataclass(frozen=True)
class Size:
    """Room [mm] and rows that one of several modes in a figure gets."""

    rows: int
    curve_mm: float
    bars: int
    upright_mm: float


SIZES = {1: Size(3, 30.0, 7, 28.0), 2: Size(2, 24.0, 5, 18.0), 3: Size(1, 17.0, 3, 12.0)}
"""By the number of modes in the figure."""


@dataclass(frozen=True)
class Setting:
    """How a figure of modes is laid out: strips side by side in rows, and sizes [mm]."""

    screening: Screening
    rows: tuple[tuple[Strip, ...], ...]
    pitch_mm: float
    curve_mm: float
    bars: int
    upright_mm: float
    left_out: tuple[Strip, ...]

    @property
    def upright(self) -> bool:
        """True where names stand upright because columns are too narrow for them."""
        names = self.screening.graph.stations
        return self.pitch_mm < NARROWEST_MM or not all(look.breaks_well(name, self.pitch_mm - 1.5) for name in names)

    @property
    def actual(self) -> bool:
        """True where actual angles differ from referred ones and there is room for a row of them."""
        scale = self.screening.graph.scale
        return not self.upright and float(max(scale)) != float(min(scale))


def mode_shapes(screening: Screening, numbers: Sequence[int]) -> Figure:
    """One figure of one to three modes: referred angle along the train, nodes, and shares of energy.

    Raises ValueError where no mode, or more than three, are asked for, IndexError where one does not exist.
    """
    if not 1 <= len(numbers) <= 3:
        raise ValueError(f"a figure shows one to three modes, not {len(numbers)}")
    modes = [screening.mode(number) for number in numbers]
    setting = _setting(screening, modes)
    note = _note_lines(setting)
    panels = [_panel_height(setting, mode) for mode in modes]
    heads = [look.wrap(mode_title(screening, mode), look.WIDTH_MM - 2.0, look.TITLE_PT, True) for mode in modes]
    extra = sum(len(head) * look.line_mm(look.TITLE_PT) + 4.0 for head in heads[1:])
    foot = len(note) * look.line_mm() + 2.0
    made = look.frame(mode_title(screening, modes[0]), sum(panels) + extra + foot)
    y = made.top_mm
    for index, mode in enumerate(modes):
        if index:
            look.heading(made, y - 3.0, heads[index])
            y -= len(heads[index]) * look.line_mm(look.TITLE_PT) + 4.0
        _draw_mode(made, setting, mode, y)
        y -= panels[index]
    look.notes(look.millimetre_axes(made, 0.0, foot), foot - 1.0, note)
    return made.figure


def _setting(screening: Screening, modes: Sequence[ModeResult]) -> Setting:
    """Strips side by side in rows; where there are too many rows, those that move least are left out."""
    runs = list(strips(screening.graph))
    most = max(len(run.stations) for run in runs)
    room = look.WIDTH_MM - LEFT_MM - START_MM
    pitch = min(26.0, room / (most - 0.5), (room - END_MM) / max(1, most - 1))
    size = SIZES[len(modes)]
    left_out: list[Strip] = []
    rows = _rows(runs, pitch)
    while len(rows) > size.rows:
        least = min(runs[1:], key=lambda run: _share(screening, run, modes))
        runs.remove(least)
        left_out.append(least)
        rows = _rows(runs, pitch)
    curve = size.curve_mm * {1: 1.0, 2: 0.75}.get(len(rows), 0.6)
    upright = size.upright_mm if len(rows) == 1 else min(16.0, size.upright_mm)
    return Setting(screening, rows, pitch, curve, size.bars, upright, tuple(left_out))


def _rows(runs: Sequence[Strip], pitch_mm: float) -> tuple[tuple[Strip, ...], ...]:
    rows: list[list[Strip]] = []
    for run in runs:
        used = sum(_strip_width(other, pitch_mm) for other in rows[-1]) if rows else look.WIDTH_MM
        if used + _strip_width(run, pitch_mm) <= look.WIDTH_MM + 0.01:
            rows[-1].append(run)
        else:
            rows.append([run])
    return tuple(map(tuple, rows))


def _share(screening: Screening, run: Strip, modes: Sequence[ModeResult]) -> float:
    """Largest share of the energies, over the modes, that sits on a strip."""
    graph = screening.graph
    own = run.stations[1:] if run.lead else run.stations
    return max(
        sum(mode.kinetic_energy[graph.stations[station]] for station in own)
        + sum(mode.strain_energy[graph.links[link].name] for link in run.links)
        for mode in modes
    )


def _strip_width(run: Strip, pitch_mm: float) -> float:
    """Width [mm] of a strip with its axis, from name to name, or with its caption if that is wider."""
    plain = START_MM + pitch_mm * (len(run.stations) - 0.5)
    return LEFT_MM + max(plain, min(look.width_mm(run.caption) + 3.0, CAPTION_MM))


def _names_height(setting: Setting, run: Strip) -> float:
    """Height [mm] of the station names under a strip."""
    names = [setting.screening.graph.stations[station] for station in run.stations]
    if setting.upright:
        return min(setting.upright_mm, max(look.width_mm(name) for name in names)) + 1.5
    lines = max(len(look.wrap_name(name, setting.pitch_mm - 1.5)) for name in names)
    return lines * look.line_mm() + 1.0


def _row_height(setting: Setting, row: tuple[Strip, ...]) -> float:
    caption = look.line_mm() + 0.5 if any(run.caption for run in row) else 0.0
    actual = look.line_mm() if setting.actual else 0.0
    names = max(_names_height(setting, run) for run in row)
    return caption + setting.curve_mm + names + actual + 1.5


def _bars(shares: dict[str, float], most: int) -> Shares:
    """The largest shares above 1 %, and what the others sum to."""
    ranked = sorted(shares.items(), key=lambda item: -item[1])
    shown = [item for item in ranked[:most] if item[1] >= 0.01]
    return shown, sum(share for _, share in ranked[len(shown) :])


def _panel_height(setting: Setting, mode: ModeResult) -> float:
    curves = sum(_row_height(setting, row) for row in setting.rows)
    lists = (_bars(shares, setting.bars) for shares in (mode.strain_energy, mode.kinetic_energy))
    rows = max(len(shown) + (rest >= SMALLEST) for shown, rest in lists) + 1
    return curves + rows * BAR_MM + 3.0


def _draw_mode(made: look.Frame, setting: Setting, mode: ModeResult, top_mm: float) -> None:
    y = top_mm
    for row in setting.rows:
        left = 0.0
        for run in row:
            head = look.line_mm() + 0.5 if any(other.caption for other in row) else 0.0
            _draw_strip(made, setting, run, mode, (left, y), head)
            left += _strip_width(run, setting.pitch_mm)
        y -= _row_height(setting, row)
    axes = look.millimetre_axes(made, 0.0, y)
    half = look.WIDTH_MM / 2.0
    strain, kinetic = (_bars(shares, setting.bars) for shares in (mode.strain_energy, mode.kinetic_energy))
    _draw_bars(axes, "Strain energy by link", strain, 0.0, y - 1.5, hatched=True)
    _draw_bars(axes, "Kinetic energy by station", kinetic, half + 2.0, y - 1.5, hatched=False)


def _draw_bars(axes: Axes, heading: str, shares: Shares, left: float, top: float, hatched: bool) -> None:
    """A ranked list of shares with bars; the rest summed up in its last line."""
    from matplotlib.patches import Rectangle

    shown, rest = shares
    name_mm, full_mm = 33.0, 33.0
    look.put(axes, left, top - BAR_MM / 2, heading, ha="left", color=look.ACCENT, fontweight="bold")
    for index, (name, share) in enumerate(shown, start=1):
        y = top - (index + 0.5) * BAR_MM
        look.put(axes, left, y, look.shorten_name(name, name_mm - 1.5), ha="left", gid="bar")
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
    if rest >= SMALLEST:
        y = top - (len(shown) + 1.5) * BAR_MM
        look.put(axes, left, y, f"others together {rest * 100:.1f} %", ha="left", color=look.QUIET)


def _draw_strip(
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
        text = look.shorten(capital(run.caption), _strip_width(run, setting.pitch_mm) - LEFT_MM - 1.5)
        look.put(head, left, head_mm / 2, text, ha="left", color=look.QUIET, gid="caption")
    pitch = setting.pitch_mm
    width = START_MM + pitch * max(0.6, len(run.stations) - 1) + 1.0
    axes = look.plot_axes(made, (left, top - setting.curve_mm, width, setting.curve_mm))
    names = [setting.screening.graph.stations[station] for station in run.stations]
    x = [START_MM + pitch * k for k in range(len(names))]
    y = [mode.referred_shape[name] for name in names]
    axes.set_xlim(0.0, width)
    axes.set_ylim(-1.5, 1.5)
    axes.set_yticks([-1.0, 0.0, 1.0], ["−1", "0", "1"])
    axes.set_xticks([])
    for side in ("top", "right", "bottom"):
        axes.spines[side].set_visible(False)
    axes.axhline(0.0, lw=look.THIN_PT, color=look.QUIET, zorder=1)
    _draw_curve(axes, setting.screening, run, mode, x, y)
    _label_points(axes, x, y, pitch, run.lead)
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


def _label_points(axes: Axes, x: list[float], y: list[float], pitch: float, lead: bool) -> None:
    """Referred angles at the points: all of them, or only turning points where columns are narrow."""
    for k, height in enumerate(y):
        inner = 0 < k < len(y) - 1
        turning = inner and (height - y[k - 1]) * (y[k + 1] - height) < -1e-4
        if pitch < 9.0 and inner and not turning:
            continue
        if lead and k == 0:
            continue
        up = height >= 0
        at = height + (0.17 if up else -0.17)
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
    tall = _names_height(setting, run)
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


def _note_lines(setting: Setting) -> list[str]:
    text = (
        f"Curve and figures: angle referred to {setting.screening.train.operation.speed_at}, the largest 1; "
        "diamond: stands still; crossed box: coupling; short strokes: gear mesh."
    )
    if setting.actual:
        text += " Actual: each shaft's own angle, the largest 1."
    if any(run.lead for row in setting.rows for run in row):
        text += " Open point: a station of another strip."
    if setting.left_out:
        names = [setting.screening.graph.stations[run.stations[-1]] for run in setting.left_out]
        text += f" Not drawn: {count(len(names), 'branch', 'branches')} with the least energy, to {listed(names, 5)}."
    return look.wrap(text, look.WIDTH_MM - 5.0)
