"""Generators, couplings and dampers under forced response, in sentences."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from functools import partial

import numpy as np

from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.graph.network import Floats
from quillshaft.present.response_values import (
    celsius_text,
    dead_cases,
    largest,
    rated_place,
    rpm_at,
    torque_text,
)
from quillshaft.present.words import number, percent
from quillshaft.train.model import Machine

Values = Callable[[CaseResponse], Floats | None]
"""(S,) of a case; None where the case holds none."""


def generator_lines(response: Response) -> list[str]:
    """For every generator at rated speed: irregularity, angle, electrical angle and inertia torque."""
    lines = []
    for machine in response.screening.train.machines:
        if machine.kind == "generator" and machine.at is not None:
            cases = [response.normal, *_worst_dead(response, machine)]
            lines += [_generator(response, machine, case) for case in cases]
    return lines


def _worst_dead(response: Response, machine: Machine) -> list[CaseResponse]:
    """The dead-cylinder case that makes the generator run least evenly at rated speed."""
    station, place = response.screening.graph.number(machine.at or ""), rated_place(response)
    cases = dead_cases(response)
    return [max(cases, key=lambda case: float(case.irregularity[station][place]))] if cases else []


def _generator(response: Response, machine: Machine, case: CaseResponse) -> str:
    station, place = response.screening.graph.number(machine.at or ""), rated_place(response)
    uneven, angle, torque = (
        float(rows[station][place]) for rows in (case.irregularity, case.angle_deg, case.inertia_torque_nm)
    )
    degree = "1 in ∞" if uneven <= 0 else f"1 in {number(1.0 / uneven, 3)}"
    text = f"{machine.name} at {rpm_at(response, place):.0f} rpm, {case.name}: speed irregularity {percent(uneven)} "
    text += f"({degree}), angle ±{number(angle, 3)}°"
    if machine.poles:
        text += f", ±{number(angle * machine.poles / 2.0, 3)} electrical degrees ({machine.poles} poles)"
    if math.isfinite(torque):
        text += f", inertia torque ±{torque_text(response, torque)}"
    return text + "."


def coupling_lines(response: Response) -> list[str]:
    """Heat of couplings that are rated for it or warm up: at rated speed, at its largest, and their temperature."""
    lines = []
    for coupling in response.screening.train.couplings:
        permitted = None if coupling.ratings is None else coupling.ratings.permitted_heat_w
        warm = [case for case in response.cases if coupling.name in case.temperature_k and case.judged]
        if permitted is None and not warm:
            continue
        link = [item.name for item in response.screening.graph.links].index(coupling.name)
        lines.append(_heat_line(response, coupling.name, partial(_link_heat, link), permitted))
        lines += _temperature_lines(response, coupling.name, warm)
    return lines


def _link_heat(link: int, case: CaseResponse) -> Floats:
    return np.asarray(case.heat_w[link])


def _damper_heat(name: str, case: CaseResponse) -> Floats | None:
    return case.damper_w.get(name)


def _damper_torque(name: str, case: CaseResponse) -> Floats | None:
    return case.damper_nm.get(name)


def _heat_line(response: Response, name: str, values: Values, permitted_w: float | None) -> str:
    """ "ring loses 210 W at rated speed and at most 480 W in continuous running (at …); 620 W are permitted"."""
    normal = values(response.normal)
    rated = math.nan if normal is None else float(normal[rated_place(response)])
    found = _most(response, values)
    text = f"{name} loses {number(rated, 3)} W at rated speed in the normal case"
    if found is not None:
        top, rpm, case = found
        text += f", and at most {number(top, 3)} W in continuous running (at {rpm:.0f} rpm, case {case.name})"
    return text + (
        "; the heat permitted is not given." if permitted_w is None else f"; {number(permitted_w)} W are permitted."
    )


def _most(response: Response, values: Values) -> tuple[float, float, CaseResponse] | None:
    """Largest value in continuous running over the judged cases, its speed [rpm] and case."""
    best: tuple[float, float, CaseResponse] | None = None
    for case in response.cases:
        row = values(case)
        if row is None or not case.judged:
            continue
        place, top = largest(np.where(response.continuous, row, np.nan))
        if math.isfinite(top) and (best is None or top > best[0]):
            best = (top, rpm_at(response, place), case)
    return best


def _temperature_lines(response: Response, name: str, warm: list[CaseResponse]) -> Iterator[str]:
    for case in warm:
        away = case.runaway.get(name)
        bad = [] if away is None else [place for place, gone in enumerate(away.tolist()) if gone]
        if bad:
            low, high = rpm_at(response, bad[0]), rpm_at(response, bad[-1])
            where = f"at {low:.0f} rpm" if low == high else f"between {low:.0f} and {high:.0f} rpm"
            yield (
                f"{name} RUNS AWAY {where} in case {case.name}: heat, stiffness and temperature do not settle; "
                "keep out of it."
            )
            continue
        place, top = largest(case.temperature_k[name])
        if math.isfinite(top):
            yield (
                f"{name} settles at {celsius_text(response, top)} at most (at {rpm_at(response, place):.0f} rpm, "
                f"case {case.name})."
            )


def damper_lines(response: Response) -> list[str]:
    """Heat and torque of dampers whose fluid was followed."""
    lines = []
    for damper in response.screening.train.dampers:
        cases = [case for case in response.cases if damper.name in case.damper_w and case.judged]
        if not cases:
            continue
        found = _most(response, partial(_damper_heat, damper.name))
        if found is None:
            continue
        top, rpm, case = found
        where = f"at {rpm:.0f} rpm, case {case.name}"
        text = f"{damper.name} turns at most {number(top, 3)} W into heat in continuous running ({where})"
        if damper.permitted_heat_w is not None:
            text += f"; {number(damper.permitted_heat_w)} W are permitted"
        torque = _most(response, partial(_damper_torque, damper.name))
        if torque is not None:
            text += f"; torque through it up to ±{torque_text(response, torque[0])}"
        lines.append(f"{text}.")
    return lines
