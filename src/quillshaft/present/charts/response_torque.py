"""Alternating torque in links over speed against what they may carry: does each stay below its limit, and where not?"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.graph.network import Floats
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import capital, listed
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
    Unit,
    above_limit,
    judged_cases,
    limit_at_speeds,
    limit_of,
    outline_places,
    stress_unit,
    swing,
    torque_unit,
    uses,
    weighted,
    worst_of,
)
from quillshaft.present.charts.response_titles import panel_text, torque_title

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MOST_LINKS = 3
TORQUE_MM, STRESS_MM = 14.5, 14.5
RIGHT_MM = 38.0
HIGH_MM = {1: 84.0, 2: 56.0, 3: 42.0}
GAP_MM = 4.0
DEAD = (0, (5.0, 1.6))
OTHER = (0, (6.0, 1.6, 1.2, 1.6))
PASSING = (0, (2.2, 1.4))


def link_torque_chart(response: Response, link_names: Sequence[str]) -> Figure:
    """One panel a link: alternating torque over speed, the worst dead cylinder, and the limits that count.

    Raises ValueError where no link, or more than three, are asked for, KeyError where one does not exist.
    """
    links = list(link_names)
    if not 1 <= len(links) <= MOST_LINKS:
        raise ValueError(f"a figure shows one to three links, not {len(links)}")
    heads: list[list[str]] = [[]]
    if len(links) > 1:
        heads = [look.wrap(capital(panel_text(response, link)), look.WIDTH_MM - 2.0, bold=True) for link in links]
    note = look.wrap(_note(response, links), look.WIDTH_MM - 4.0)
    high = HIGH_MM[len(links)]
    foot = len(note) * look.line_mm() + 2.0
    body = sum(high + GAP_MM + len(head) * look.line_mm() for head in heads) + STRIP_MM + foot
    made = look.frame(torque_title(response, links), body)
    stressed = any(limit_of(response, link).mpa_per_nm for link in links)
    left = TORQUE_MM + (STRESS_MM if stressed else 0.0)
    across = speed_scale(response, left, look.WIDTH_MM - left - RIGHT_MM)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    y = made.top_mm
    for link, head in zip(links, heads, strict=True):
        for row, text in enumerate(head):
            at = y - 1.0 - (row + 0.5) * look.line_mm()
            look.put(page, 0.0, at, text, ha="left", color=look.ACCENT, fontweight="bold", gid="heading")
        y -= len(head) * look.line_mm() + high + 2.0
        _draw_link(made, page, response, link, across, (y, high))
        y -= GAP_MM - 2.0
    draw_speeds(page, response, across, y + GAP_MM - 2.0)
    look.notes(page, foot - 1.0, note)
    return made.figure


def _worst_in(response: Response, link: str, dead: bool) -> Floats | None:
    """(S,) the worst of the dead-cylinder cases, or of the other judged cases but the normal one."""
    rows = [
        swing(response, case, link)
        for case in judged_cases(response)[1:]
        if (case.kind == "dead cylinder") == dead and case is not response.normal
    ]
    return worst_of(rows) if rows else None


def _damped(response: Response) -> CaseResponse | None:
    return next((case for case in response.cases if case.kind == "high damping"), None)


def _curves(response: Response, link: str) -> Iterator[tuple[str, Floats, object]]:
    """Label, torque over speed and line pattern of the curves of a panel."""
    yield "normal", swing(response, response.normal, link), "-"
    for dead, label, pattern in ((True, "worst dead cylinder", DEAD), (False, "worst other case", OTHER)):
        row = _worst_in(response, link, dead)
        if row is not None:
            yield label, row, pattern


def _draw_link(
    made: look.Frame, page: Axes, response: Response, link: str, across: Scale, at_mm: tuple[float, float]
) -> None:
    foot, high = at_mm
    limit = limit_of(response, link)
    curves = list(_curves(response, link))
    limits = [row for row in (limit.continuous_nm, limit.passing_nm) if row is not None]
    judged = [2.0 * row[response.continuous] for _, row, _ in curves[:2]]
    up = value_scale([*(row for _, row, _ in curves), *limits, *judged], foot, high)
    unit = torque_unit(response, up.high)
    axes = panel_axes(made, across, up)
    shade_speeds(axes, response)
    ends = []
    calm = _damped(response)
    if calm is not None:
        _draw_band(axes, response, link, calm)
    for label, row, pattern in curves:
        plot_over_speed(axes, response, row, ls=pattern, zorder=3, gid=label)
        ends.append((_end(up, row), label))
    ends += _draw_limits(axes, response, link, up, unit)
    _mark_worst(axes, response, link, up)
    kind = " weighted" if weighted(response, link) else ""
    names = [f"{word}{kind}, {unit.name}" for word in ("alternating torque", "torque")]
    draw_values(page, up.times(unit.factor), across.start_mm, names, TORQUE_MM - 2.0)
    if limit.mpa_per_nm:
        stress = stress_unit(response)
        x = across.start_mm - TORQUE_MM
        page.plot([x, x], [foot, foot + high], lw=look.THIN_PT, color=look.QUIET)
        names = [f"nominal stress, {stress.name}", f"stress, {stress.name}"]
        draw_values(page, up.times(limit.mpa_per_nm * stress.factor), x, names, STRESS_MM - 2.0)
    right = across.start_mm + across.length_mm
    write_ends(page, ends, right, (foot - 0.5, foot + high + 1.5), look.WIDTH_MM - right)


def _end(up: Scale, row: Floats) -> float:
    value = last_value(np.asarray(row))
    return up.at(value) if math.isfinite(value) else math.nan


def _draw_band(axes: Axes, response: Response, link: str, calm: CaseResponse) -> None:
    """From the normal case at low damping down to high damping; a bar where one speed alone is calculated."""
    low, high = swing(response, calm, link), swing(response, response.normal, link)
    rpm = np.asarray(response.speed_rad_s) * 30.0 / math.pi
    if len(rpm) == 1:
        axes.plot([rpm[0]] * 2, [low[0], high[0]], lw=4.0, color=look.FAINT, solid_capstyle="butt", zorder=2)
        return
    at = outline_places(low, high)
    axes.fill_between(
        rpm[at], low[at], high[at], facecolor=look.FAINT, edgecolor="none", lw=0.0, zorder=2, gid="damping"
    )


def _draw_limits(axes: Axes, response: Response, link: str, up: Scale, unit: Unit) -> list[tuple[float, str]]:
    """Both limits, heavy where they count; their labels with the height of their ends [mm]."""
    limit = limit_of(response, link)
    counts = limit_at_speeds(response, link)
    ends = []
    for word, row, inside, pattern in (
        ("continuous", limit.continuous_nm, response.continuous, "-"),
        ("passing", limit.passing_nm, ~response.continuous, PASSING),
    ):
        if row is None or not np.isfinite(row).any():
            continue
        values = np.asarray(row, dtype=float)
        plot_limit(axes, response, values, lw=look.HAIR_PT, ls=pattern, zorder=3.5)
        plot_limit(axes, response, np.where(inside, counts, np.nan), lw=2.2, ls=pattern, zorder=4, gid=f"{word} limit")
        level = f"\n{unit.text(float(values[0]))}" if np.ptp(values) <= 1e-6 * abs(values[0]) else ""
        ends.append((_end(up, values), f"{word} limit{level}"))
    return ends


def _mark_worst(axes: Axes, response: Response, link: str, up: Scale) -> None:
    """A ring where the limit is used most, filled where it is exceeded; a bar at the top over all such speeds."""
    found = uses(response, link)
    if found and found[0].share > 0.0:
        over = found[0].share > 1.0
        face = look.INK if over else look.PAPER
        style: dict[str, Any] = {
            "marker": "o",
            "ms": 5.5,
            "mfc": face,
            "mec": look.INK,
            "mew": look.LINE_PT,
            "ls": "none",
        }
        axes.plot([found[0].rpm], [found[0].torque_nm], zorder=6, gid="worst", **style)
    for low, high in above_limit(response, link):
        least = 0.004 * (axes.get_xlim()[1] - axes.get_xlim()[0])
        ends = [low - max(0.0, least - (high - low)), high]
        axes.plot(ends, [up.high] * 2, lw=5.0, color=look.INK, solid_capstyle="butt", zorder=7, gid="above")


def _note(response: Response, links: Sequence[str]) -> str:
    text = "Shaded: judged ranges; hatched: barred."
    if any(limit_of(response, link).continuous_nm is not None for link in links):
        text += " Heavy line: the limit that counts at a speed; ring: its largest use"
        over = any(above_limit(response, link) for link in links)
        text += ", filled where it is exceeded; bar at the top edge: above the limit." if over else "."
    if _damped(response) is not None:
        text += " Grey band: normal case from low to high damping."
    if any(weighted(response, link) for link in links):
        text += " Weighted: in the judged ranges each order by the frequency factor of couplings."
    if any(case.kind not in ("normal", "dead cylinder") for case in judged_cases(response)):
        others = [case.name for case in judged_cases(response)[1:] if case.kind != "dead cylinder"]
        text += f" Other cases: {listed(others, 4)}."
    return text
