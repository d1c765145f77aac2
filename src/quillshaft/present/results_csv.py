"""Result tables as CSV: every number with all the digits that it holds, so that reading back gives the same number."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Callable, Iterable

from quillshaft.assess.results import Interference, ModeResult, Screening
from quillshaft.sources.line import Source

Cell = str | int | float | bool | None
Rows = list[tuple[Cell, ...]]


def screening_csv(screening: Screening) -> dict[str, str]:
    """File name -> CSV text of a screening: SI units in the headings, UTF-8, comma and decimal point.

    Blank cells are numbers that do not exist (a critical speed that is never met, the stiffness of a rigid mesh).
    """
    makers: dict[str, Callable[[Screening], Rows]] = {
        "modes.csv": _modes,
        "shapes.csv": _shapes,
        "interferences.csv": _interferences,
        "sources.csv": _sources,
        "stations.csv": _stations,
        "links.csv": _links,
    }
    return {name: csv_text(make(screening)) for name, make in makers.items()}


def csv_text(rows: Iterable[tuple[Cell, ...]]) -> str:
    """Rows as CSV text; floats by repr, None and not-a-number as blank cells."""
    stream = io.StringIO(newline="")
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerows([[_cell(value) for value in row] for row in rows])
    return stream.getvalue()


def _cell(value: Cell) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return repr(float(value)) if math.isfinite(value) else ""
    return str(value)


def _modes(screening: Screening) -> Rows:
    head = ("mode", "frequency [Hz]", "cycles per minute [cpm]", "lowest [Hz]", "highest [Hz]", "damping ratio [1]")
    rows: Rows = [(*head, "judged", "proven", "modes below", "modes above")]
    for mode in screening.modes:
        low, high = mode.bounds_hz
        numbers = (mode.mode, mode.frequency_hz, mode.cycles_per_min, low, high, mode.damping_ratio)
        judged = mode.mode in screening.judged_modes
        rows.append((*numbers, judged, mode.proof.proven, mode.proof.below, mode.proof.above))
    return rows


def _shapes(screening: Screening) -> Rows:
    """One row for each mode and station, then one for each mode and link."""
    head: tuple[Cell, ...] = ("mode", "frequency [Hz]", "element", "kind", "angle [1]", "kinetic energy share [1]")
    rows: Rows = [(*head, "strain energy share [1]", "link torque [1]")]
    for mode in screening.modes:
        rows += _shape_rows(mode)
    return rows


def _shape_rows(mode: ModeResult) -> Rows:
    start = (mode.mode, mode.frequency_hz)
    torque = mode.link_torque
    stations: Rows = [
        (*start, name, "station", angle, mode.kinetic_energy[name], None, None) for name, angle in mode.shape.items()
    ]
    links: Rows = [
        (*start, name, "link", None, None, share, torque.get(name)) for name, share in mode.strain_energy.items()
    ]
    inside: Rows = [
        (*start, name, "inside shaft", None, share, None, None)
        for name, share in mode.kinetic_energy.items()
        if name not in mode.shape
    ]
    return stations + inside + links


def _interferences(screening: Screening) -> Rows:
    head = ("source", "mode", "frequency [Hz]", "critical speed [rpm]", "critical speeds [rpm]", "judged at [rpm]")
    margins = ("margin [1]", "worst margin [1]", "required [1]", "required worst [1]", "excitability [1]")
    rows: Rows = [(*head, *margins, "verdict", "worst verdict", "dismissed because", "dismissed by")]
    for pair in screening.interferences:
        rows.append((*_pair_place(screening, pair), *_pair_numbers(pair)))
    return rows


def _pair_place(screening: Screening, pair: Interference) -> tuple[Cell, ...]:
    speeds = " ".join(repr(float(speed)) for speed in pair.critical_speeds_rpm)
    frequency = screening.mode(pair.mode).frequency_hz
    return pair.source, pair.mode, frequency, pair.critical_speed_rpm, speeds, pair.judged_at_rpm


def _pair_numbers(pair: Interference) -> tuple[Cell, ...]:
    said = pair.dismissed
    margins = (pair.margin, pair.worst_margin, pair.required, pair.worst_required, pair.excitability)
    return (
        *margins,
        pair.verdict,
        pair.worst_verdict,
        None if said is None else said.because,
        None if said is None else said.by,
    )


def _sources(screening: Screening) -> Rows:
    rows: Rows = [("source", "at", "order [1]", "frequency [Hz]", "speed ratio [1]", "when", "switched off because")]
    rows += [(*_source(source), None) for source in screening.sources]
    return rows + [(*_source(source), why) for source, why in screening.sources_off]


def _source(source: Source) -> tuple[Cell, ...]:
    return source.name, source.at, source.order, source.frequency_hz, source.speed_ratio, source.when


def _stations(screening: Screening) -> Rows:
    graph = screening.graph
    rpm = screening.train.operation.rated_rad_s * 30.0 / math.pi
    rows: Rows = [("station", "inertia [kg m^2]", "speed ratio [1]", "rated speed [rpm]", "referred inertia [kg m^2]")]
    for index, name in enumerate(graph.stations):
        ratio, inertia = float(graph.speed_ratio[index]), float(graph.inertia_kgm2[index])
        rows.append((name, inertia, ratio, rpm * ratio, inertia * float(graph.scale[index]) ** 2))
    return rows


def _links(screening: Screening) -> Rows:
    head = ("link", "kind", "from", "to", "stiffness [N m/rad]", "referred stiffness [N m/rad]")
    rows: Rows = [(*head, "tolerance low [1]", "tolerance high [1]", "mean torque [N m]", "wind-up [rad]", "teeth")]
    graph = screening.graph
    for link, duty in zip(graph.links, screening.duties, strict=True):
        ends = [graph.stations[station] for station in link.stations]
        to = " and ".join(ends[1:]) or "ground"
        numbers = (link.stiffness_nm_rad, link.referred_nm_rad, *link.tolerance, duty.mean_torque_nm, duty.wind_up_rad)
        rows.append((link.name, link.kind, ends[0], to, *numbers, link.ratio_text))
    return rows
