"""Mode shapes along the train, with standing points and where the energy sits."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.mode_setting import (
    BAR_MM,
    HEAD_MM,
    SMALLEST,
    Setting,
    Shares,
    bars_of,
    panel_height,
    row_height,
    setting_for,
    strip_width,
)
from quillshaft.present.charts.phrases import count, listed, mode_title
from quillshaft.present.charts.strip_plot import draw_strip

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure


def mode_shapes(screening: Screening, numbers: Sequence[int]) -> Figure:
    """One figure of one to three modes: referred angle along the train, nodes, and shares of energy.

    Raises ValueError where no mode, or more than three, are asked for, IndexError where one does not exist.
    """
    if not 1 <= len(numbers) <= 3:
        raise ValueError(f"a figure shows one to three modes, not {len(numbers)}")
    modes = [screening.mode(number) for number in numbers]
    setting = setting_for(screening, modes)
    note = _note_lines(setting)
    panels = [panel_height(setting, mode) for mode in modes]
    heads = [look.title_lines(mode_title(screening, mode)) for mode in modes]
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


def _draw_mode(made: look.Frame, setting: Setting, mode: ModeResult, top_mm: float) -> None:
    y = top_mm
    for row in setting.rows:
        left = 0.0
        for run in row:
            head = HEAD_MM if any(other.caption for other in row) else 0.0
            draw_strip(made, setting, run, mode, (left, y), head)
            left += strip_width(run, setting.pitch_mm)
        y -= row_height(setting, row)
    axes = look.millimetre_axes(made, 0.0, y)
    half = look.WIDTH_MM / 2.0
    strain, kinetic = (bars_of(shares, setting.bars) for shares in (mode.strain_energy, mode.kinetic_energy))
    _draw_bars(axes, "Strain energy by link", strain, 0.0, y - 1.5, hatched=True)
    _draw_bars(axes, "Kinetic energy by station", kinetic, half + 2.0, y - 1.5, hatched=False)


def _draw_bars(axes: Axes, heading: str, shares: Shares, left: float, top: float, hatched: bool) -> None:
    """A ranked list of shares with bars; the rest summed up in its last line."""
    from matplotlib.patches import Rectangle

    shown, rest = shares
    name_mm, full_mm = 33.0, 33.0
    look.put(axes, left, top - BAR_MM / 2, heading, ha="left", color=look.ACCENT, fontweight="bold")
    if rest >= SMALLEST:
        others = f"others together {rest * 100:.1f} %"
        at = left + look.width_mm(heading, bold=True) + 3.0
        look.put(axes, at, top - BAR_MM / 2, others, ha="left", color=look.QUIET)
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


def _note_lines(setting: Setting) -> list[str]:
    text = (
        f"Curve and figures: angle referred to {setting.screening.train.operation.speed_at}, the largest 1; "
        "diamond: stands still; crossed box: coupling; short strokes: gear mesh."
    )
    if setting.actual:
        text += " Actual: each shaft's own angle, positive in its own direction of rotation, the largest 1."
    if any(run.lead for row in setting.rows for run in row):
        text += " Open point: a station of another strip."
    if setting.left_out:
        names = [setting.screening.graph.stations[run.stations[-1]] for run in setting.left_out]
        text += f" Not drawn: {count(len(names), 'branch', 'branches')} with the least energy, to {listed(names, 5)}."
    return look.wrap(text, look.WIDTH_MM - 5.0)
