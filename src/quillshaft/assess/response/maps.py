"""Gear separation over speed and load, and the synthesised waves at chosen speeds."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.response.combine import put_together
from quillshaft.assess.response.evaluate import Kept, StateLines, evaluate
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.run import Swept, for_case
from quillshaft.assess.response.synthesis import cycle_points, wave
from quillshaft.assess.response_results import SeparationMap, Wave
from quillshaft.graph.network import Floats
from quillshaft.graph.states import follows_torque
from quillshaft.train.model import Operation, Train

RPM = 30.0 / math.pi
LOADS = 21


def separation_maps(train: Train, swept: Swept, loads: LoadSet) -> tuple[SeparationMap, ...]:
    """Alternating over mean torque of every gear with a known mean torque, from a twentieth of full load up.

    The load is a share of that of the load law at each speed; engine torque goes with it from motored to full, shares
    of mean torque with it, torques stated in N·m stay.
    """
    names = [link.name for link in swept.states[0].graph.links]
    share = np.linspace(0.0, 1.0, LOADS)[1:]
    gears = [gear.name for gear in train.gears if _has_mean(swept, names.index(gear.name))]
    if not gears:
        return ()
    places = [names.index(gear) for gear in gears]
    mean = np.abs(swept.cases[0].mean_torque_nm[places])
    empty = None if follows_torque(train) else _at_load(swept, loads, 0.0)
    torques = [_alternating(swept, loads, places, load, empty) for load in share.tolist()]
    rows = [torque / np.maximum(mean * load, 1e-300) for torque, load in zip(torques, share.tolist(), strict=True)]
    return tuple(SeparationMap(gear, share, np.array([row[n] for row in rows])) for n, gear in enumerate(gears))


def _has_mean(swept: Swept, place: int) -> bool:
    mean = swept.cases[0].mean_torque_nm[place]
    return bool(np.isfinite(mean).all() and mean.any())


def _alternating(swept: Swept, loads: LoadSet, places: list[int], load: float, empty: StateLines | None) -> Floats:
    """(places, S) alternating torque [N·m] of links in normal firing at a share of load.

    Lines are linear in the load, between none (`empty`) and full; worked out anew where couplings follow mean torque.
    """
    lines = _at_load(swept, loads, load) if empty is None else swept.lines
    torques = [own.link_nm[places] for own in lines.groups[0]]
    if empty is not None:
        none = [own.link_nm[places] for own in empty.groups[0]]
        torques = [least + load * (full - least) for full, least in zip(torques, none, strict=True)]
    single = [
        item.amplitude_nm(swept.share * load) * np.abs(own.link_nm[places]).max(axis=1)
        for item, own in zip(loads.plain, lines.plain, strict=True)
    ]
    shape = (len(places), len(swept.speed_rad_s))
    return put_together(list(zip(loads.groups, torques, strict=True)), single, shape).half


def _at_load(swept: Swept, loads: LoadSet, load: float) -> StateLines:
    """What the sources do in normal firing at a share of load, couplings at their mean torque there."""
    case = replace(swept.loads[0], load_share=load)
    state = for_case(swept.states[0], case)
    return evaluate(state, loads, (case,), (Kept((), ()),), swept.speed_rad_s, swept.share)


def chosen_speeds(operation: Operation) -> tuple[float, ...]:
    """Speeds [rad/s] at which waves are shown: idle, the ends of the judged range, rated."""
    speeds = {operation.rated_rad_s, operation.ranges_rad_s[0][0]} if operation.range_given else {operation.rated_rad_s}
    if operation.idle_rad_s:
        speeds.add(operation.idle_rad_s)
    return tuple(sorted(speeds))


def waves(swept: Swept, loads: LoadSet) -> tuple[Wave, ...]:
    """Waves of every group at the chosen speeds: the normal case, and that with the worst cylinder dead at rated."""
    operation = swept.states[0].train.operation
    out = []
    for number, group in enumerate(loads.groups):
        cases = [0, *_worst_dead(swept, group.name)]
        for speed in chosen_speeds(operation):
            at = int(np.argmin(np.abs(swept.speed_rad_s - speed)))
            for case in cases:
                if case and speed != operation.rated_rad_s:
                    continue
                lines = swept.lines.groups[case][number]
                points = cycle_points(group.harmonics)
                mean = np.nan_to_num(swept.cases[case].mean_torque_nm[:, at])
                torque = mean[:, None] + wave(lines.link_nm[:, :, at], group.harmonics, points)
                cycle = 360.0 * group.speed_ratio / group.base
                angle = np.asarray(np.arange(points) * (cycle / points), dtype=np.float64)
                out.append(Wave(swept.cases[case].name, group.name, speed * RPM, angle, torque))
    return tuple(out)


def _worst_dead(swept: Swept, group: str) -> list[int]:
    """Place of the case with the largest alternating torque in any link over that of the normal case at rated speed."""
    operation = swept.states[0].train.operation
    at = int(np.argmin(np.abs(swept.speed_rad_s - operation.rated_rad_s)))
    normal = np.maximum(swept.cases[0].alternating_torque_nm[:, at], 1e-12)
    found = [
        (float(np.nanmax(swept.cases[n].alternating_torque_nm[:, at] / normal)), n)
        for n, case in enumerate(swept.loads)
        if case.group == group and swept.states[n].kind == "normal"
    ]
    return [max(found)[1]] if found else []
