"""A coupling's loss over speed against what it may give off, and the temperature that it reaches."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import TYPE_CHECKING, Literal

import numpy as np

from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.graph.network import Bools, Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import brief, capital, link_words, listed
from quillshaft.present.charts.response_axes import (
    STRIP_MM,
    Scale,
    draw_speeds,
    draw_values,
    last_value,
    panel_axes,
    plot_limit,
    plot_over_speed,
    shade_speeds,
    speed_scale,
    value_scale,
    write_ends,
)
from quillshaft.present.charts.response_common import (
    judged_cases,
    link_number,
    share_text,
    span_text,
    speeds_rpm,
    stretches,
    where,
    worst_of,
)
from quillshaft.records import dataclass
from quillshaft.train.coupling_model import Coupling

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT_MM, RIGHT_MM = 15.0, 40.0
HEAT_MM, WARM_MM, GAP_MM = 58.0, 46.0, 4.5
DEAD = (0, (5.0, 1.6))
OTHER = (0, (6.0, 1.6, 1.2, 1.6))
ZERO_C_K = 273.15
Kind = Literal["heat", "temperature"]


@dataclass(frozen=True)
class Limit:
    """A level that a panel shows: its value (W or °C) and what it is."""

    value: float
    label: str


def coupling_heat_chart(response: Response, link: str) -> Figure:
    """Loss in a link against its permitted loss and, where it was worked out, its temperature, over speed.

    Raises KeyError where the link does not exist.
    """
    link_number(response, link)
    warm = any(link in case.temperature_k for case in judged_cases(response))
    note = look.wrap(_note(response, link, warm), look.WIDTH_MM - 4.0)
    foot = len(note) * look.line_mm() + 2.0
    panels = HEAT_MM + (GAP_MM + WARM_MM if warm else 0.0)
    made = look.frame(heat_title(response, link), panels + STRIP_MM + foot + 3.0)
    across = speed_scale(response, LEFT_MM, look.WIDTH_MM - LEFT_MM - RIGHT_MM)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    y = made.top_mm - 2.0 - HEAT_MM
    _draw_panel(made, page, response, link, across, (y, HEAT_MM), "heat")
    if warm:
        y -= GAP_MM + WARM_MM
        _draw_panel(made, page, response, link, across, (y, WARM_MM), "temperature")
    draw_speeds(page, response, across, y)
    look.notes(page, foot - 1.0, note)
    return made.figure


def heat_title(response: Response, link: str) -> str:
    """Whether the coupling can give off its loss, and where it runs away."""
    graph = response.screening.graph.link(link)
    name = capital(link_words(response.screening, graph))
    permitted = permitted_w(response, link)
    value, rpm, case = _largest_w(response, link)
    away = [span_text(span) for span in stretches(response, _runaway(response, link))]
    tail = f"; it runs away at {listed(away, 4)} rpm" if away else ""
    if value <= 0.0:
        return f"{name} loses no power to vibration{tail}"
    at = where(response, rpm, case)
    if permitted is None:
        return f"{name} loses up to {brief(value)} W, {at}; no permitted loss is given{tail}"
    verb = "gives off too little heat: it loses" if value > permitted else "can give off its heat: it loses at most"
    return f"{name} {verb} {share_text(value / permitted)} of the permitted loss {at}{tail}"


def coupling_of(response: Response, link: str) -> Coupling | None:
    """The coupling that a link is; None where it is none."""
    return next((item for item in response.screening.train.couplings if item.name == link), None)


def permitted_w(response: Response, link: str) -> float | None:
    """The loss [W] that a coupling's maker permits; None where the file states none."""
    coupling = coupling_of(response, link)
    return None if coupling is None or coupling.ratings is None else coupling.ratings.permitted_heat_w


def _values(response: Response, case: CaseResponse, link: str, kind: Kind) -> Floats:
    """(S,) loss [W] or temperature [°C] in one case; nan where it is not known or has run away."""
    if kind == "heat":
        row: Floats = np.asarray(case.heat_w[link_number(response, link)], dtype=float)
        return row
    nothing: Floats = np.full(len(response.speed_rad_s), np.nan)
    return np.asarray(case.temperature_k.get(link, nothing), dtype=float) - ZERO_C_K


def _largest_w(response: Response, link: str) -> tuple[float, float, CaseResponse]:
    """Largest loss [W] of the judged cases in the judged ranges (in passing none settles), its rpm, its case."""
    rows = [
        (np.where(response.continuous, np.nan_to_num(_values(response, case, link, "heat"), posinf=0.0), 0.0), case)
        for case in judged_cases(response)
    ]
    row, case = max(rows, key=lambda item: float(item[0].max()))
    at = int(np.argmax(row))
    return float(row[at]), float(speeds_rpm(response)[at]), case


def _runaway(response: Response, link: str) -> Bools:
    """(S,) True where stiffness, heat and temperature do not settle in a judged case."""
    away: Bools = np.zeros(len(response.speed_rad_s), dtype=bool)
    for case in judged_cases(response):
        if link in case.runaway:
            away = away | np.asarray(case.runaway[link], dtype=bool)
    return away


def _curves(response: Response, link: str, kind: Kind) -> Iterator[tuple[str, Floats, object]]:
    """Label, values and line pattern: the normal case, the worst dead cylinder, the worst of the others."""
    yield "normal", _values(response, response.normal, link, kind), "-"
    others = judged_cases(response)[1:]
    for dead, label, pattern in ((True, "worst dead cylinder", DEAD), (False, "worst other case", OTHER)):
        rows = [_values(response, case, link, kind) for case in others if (case.kind == "dead cylinder") == dead]
        if rows:
            yield label, worst_of(rows), pattern


def _limit(response: Response, link: str, kind: Kind) -> Limit | None:
    """The permitted loss, or the hottest the coupling is stated to stand at in service."""
    if kind == "heat":
        permitted = permitted_w(response, link)
        return None if permitted is None else Limit(permitted, f"permitted {brief(permitted)} W")
    coupling = coupling_of(response, link)
    if coupling is None or coupling.operating_k is None:
        return None
    hottest = coupling.operating_k[1] - ZERO_C_K
    return Limit(hottest, f"hottest stated {brief(hottest)} °C")


def _draw_panel(
    made: look.Frame,
    page: Axes,
    response: Response,
    link: str,
    across: Scale,
    at_mm: tuple[float, float],
    kind: Kind,
) -> None:
    """One quantity over speed with its limit and the speeds of runaway."""
    curves, limit = list(_curves(response, link, kind)), _limit(response, link, kind)
    level = [] if limit is None else [np.array([limit.value])]
    up = _heat_scale([*(row for _, row, _ in curves), *level], at_mm, kind)
    axes = panel_axes(made, across, up)
    shade_speeds(axes, response)
    ends = []
    for label, row, pattern in curves:
        if np.isfinite(row).any():
            plot_over_speed(axes, response, row, ls=pattern, zorder=3, gid=label)
            ends.append((up.at(last_value(row)), label))
    if limit is not None:
        plot_limit(axes, response, np.full(len(response.speed_rad_s), limit.value), lw=2.2, zorder=4, gid="limit")
        ends.append((up.at(limit.value), limit.label))
    _mark_runaway(axes, response, link)
    foot, high = at_mm
    right = across.start_mm + across.length_mm
    write_ends(page, ends, right, (foot - 0.5, foot + high + 1.5), RIGHT_MM)
    name = "power lost, W" if kind == "heat" else "temperature, °C"
    draw_values(page, up, LEFT_MM, [name], 12.5)


def _heat_scale(rows: list[Floats], at_mm: tuple[float, float], kind: Kind) -> Scale:
    """Loss from zero; temperature over what is reached, with room on both sides."""
    if kind == "heat":
        return value_scale(rows, *at_mm)
    finite = np.concatenate([row[np.isfinite(row)] for row in rows] or [np.array([])])
    low, high = (float(finite.min()), float(finite.max())) if len(finite) else (0.0, 100.0)
    room = max(0.12 * (high - low), 5.0)
    return Scale(low - room, high + room, *at_mm)


def _mark_runaway(axes: Axes, response: Response, link: str) -> None:
    """Speeds at which the coupling runs away, cross-hatched over the panel between heavy edges."""
    low, high = axes.get_xlim()
    for start, end in stretches(response, _runaway(response, link)):
        half = max(0.0, 0.006 * (high - low) - (end - start)) / 2.0
        axes.axvspan(
            start - half,
            end + half,
            facecolor="none",
            edgecolor=look.QUIET,
            hatch="xxx",
            lw=0.0,
            zorder=1.5,
            gid="runaway",
        )
        for edge in (start - half, end + half):
            axes.axvline(edge, lw=look.THIN_PT, color=look.INK, zorder=1.6)


def _note(response: Response, link: str, warm: bool) -> str:
    text = "Shaded: judged ranges; hatched: barred."
    if _runaway(response, link).any():
        text += (
            " Cross-hatched: in a judged case heat, temperature and stiffness do not settle: the coupling runs away."
        )
    rows = [_values(response, case, link, "temperature") for case in judged_cases(response)] if warm else []
    if rows and any(math.isnan(value) for row in rows for value in row.tolist()):
        text += " No temperature is drawn where none is reached."
    if not warm:
        text += " No temperature was worked out for this link."
    others = [case.name for case in judged_cases(response)[1:] if case.kind != "dead cylinder"]
    return text + (f" Other cases: {listed(others, 4)}." if others else "")
