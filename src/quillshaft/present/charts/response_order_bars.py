"""Which lines make up the alternating torque in a few links at one speed, as bars."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.response_results import LineShare, Response
from quillshaft.present.charts import look
from quillshaft.present.charts.phrases import RPM, listed
from quillshaft.present.charts.response_common import Unit, link_number, nearest, share_text, speeds_rpm, torque_unit
from quillshaft.present.charts.response_orders import LEAST_SHARE, MOST_LINES, Lane, lead_of
from quillshaft.present.charts.window_axes import box

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MOST_LINKS = 4
ROW_MM = 5.0


def order_bars_chart(response: Response, link_names: Sequence[str], rpm: float | None = None) -> Figure:
    """Bars of the leading lines at one speed, by default rated, a column a link on one scale.

    Raises ValueError where no link, or more than four, are asked for, KeyError where one does not exist.
    """
    links = list(link_names)
    if not 1 <= len(links) <= MOST_LINKS:
        raise ValueError(f"a figure shows bars of one to four links, not {len(links)}")
    rated = response.screening.train.operation.rated_rad_s * RPM
    at = nearest(response, rated if rpm is None else rpm)
    columns = _bars_at(response, links, at)
    rows = len(columns[0])
    note = look.wrap(_bars_note(columns[0]), look.WIDTH_MM - 4.0)
    foot = len(note) * look.line_mm() + 2.0
    made = look.frame(_bars_title(response, links, columns, at), (rows + 1) * ROW_MM + 3.0 + foot)
    page = look.millimetre_axes(made, 0.0, made.top_mm)
    names_mm = min(44.0, max((look.width_mm(lane.name) for lane in columns[0]), default=0.0) + 3.0)
    wide = (look.WIDTH_MM - names_mm) / len(links)
    top = max((lane.top_nm for lanes in columns for lane in lanes), default=0.0)
    unit = torque_unit(response, top)
    for row, lane in enumerate(columns[0]):
        y = made.top_mm - (row + 1.5) * ROW_MM - 1.0
        look.put(page, 0.0, y, look.shorten_name(lane.name, names_mm - 2.0), ha="left", gid="line")
    for place, (link, lanes) in enumerate(zip(links, columns, strict=True)):
        _draw_column(page, link, lanes, (names_mm + place * wide, made.top_mm - 1.0, wide), top, unit)
    look.notes(page, foot - 1.0, note)
    return made.figure


def _bars_at(response: Response, links: list[str], at: int) -> list[list[Lane]]:
    """Per link the amplitudes at one speed of the lines that lead in any of the links, the rest summed up."""
    numbers = [link_number(response, link) for link in links]
    tables = [(share, [float(np.nan_to_num(share.torque_nm[n][at])) for n in numbers]) for share in response.shares]
    tables = sorted((item for item in tables if max(item[1]) > 0.0), key=lambda item: -max(item[1]))
    shown = [item for item in tables[: MOST_LINES + 1] if max(item[1]) >= LEAST_SHARE * max(tables[0][1])]
    rest: list[tuple[LineShare, list[float]]] = tables[len(shown) :]
    columns = []
    for place in range(len(links)):
        lanes = [Lane(share.source, np.array([values[place]])) for share, values in shown]
        others = sum(values[place] for _, values in rest)
        if rest:
            name = rest[0][0].source if len(rest) == 1 else f"{len(rest)} others, summed"
            lanes.append(Lane(name, np.array([others]), len(rest)))
        columns.append(lanes)
    return columns


def _draw_column(
    page: Axes, link: str, lanes: list[Lane], corner_mm: tuple[float, float, float], top_nm: float, unit: Unit
) -> None:
    """One link's bars under its name, each with its value beside it."""
    left, top, wide = corner_mm
    name = look.shorten_name(link, wide - 2.0, bold=True)
    look.put(page, left, top - ROW_MM / 2.0, name, ha="left", fontweight="bold", color=look.ACCENT, gid="heading")
    full = wide - 3.0 - max((look.width_mm(unit.text(lane.top_nm)) for lane in lanes), default=0.0) - 1.5
    page.plot([left, left], [top - ROW_MM, top - ROW_MM * (len(lanes) + 1)], lw=look.THIN_PT, color=look.QUIET)
    for row, lane in enumerate(lanes):
        y = top - (row + 1.5) * ROW_MM
        long = full * lane.top_nm / top_nm if top_nm > 0 else 0.0
        hatch = "......" if lane.lines > 1 else "/////"
        box(page, (left, y - 1.4, long, 2.8), look.PAPER, hatch, look.INK, zorder=2)
        look.put(page, left + long + 1.2, y, unit.text(lane.top_nm), ha="left", gid="value")


def _bars_title(response: Response, links: list[str], columns: list[list[Lane]], at: int) -> str:
    rpm = f"{speeds_rpm(response)[at]:.0f} rpm"
    leads = [(link, found) for link, lanes in zip(links, columns, strict=True) if (found := lead_of(lanes, 0))]
    if not leads:
        return f"At {rpm} no source puts alternating torque into {listed(links, 4)}"
    parts = [f"{name} in {link} ({share_text(share)})" for link, (name, share) in leads]
    return f"At {rpm} the largest part of the summed amplitudes is {listed(parts, 4)}"


def _bars_note(lanes: list[Lane]) -> str:
    text = "Amplitudes in the normal case, all columns on one scale."
    return text + (" Dotted: the others, their amplitudes summed." if any(lane.lines > 1 for lane in lanes) else "")
