"""How much load an engine may carry with a cylinder dead."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.assess.response.combine import Combined, put_together, torque_range
from quillshaft.assess.response.evaluate import all_kept, evaluate
from quillshaft.assess.response.ground import Ground, judged_torque, share_of
from quillshaft.assess.response.heat import (
    SETTLED_K,
    ambient_k,
    complex_springs,
    heated_couplings,
    heated_springs,
    settle_heat,
    thinned,
)
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response_results import CaseResponse, DeadLoad
from quillshaft.graph.network import Bools, Floats
from quillshaft.sources.gas import Complexes
from quillshaft.train.coupling_model import Coupling

HALVINGS = 7
MOST_TRIED = 40
"""Speeds at which a load is tried for heat."""


def dead_loads(ground: Ground, swept: Swept, loads: LoadSet) -> tuple[DeadLoad, ...]:
    """Largest share of load at which all limits hold in the judged ranges with each machine's worst cylinder dead.

    Limits of torque, of heat and temperature of couplings, of a generator's electrical angle and inertia torque.
    """
    out = []
    for group in loads.groups:
        numbers = [
            n
            for n, case in enumerate(swept.loads)
            if case.group == group.name and swept.states[n].kind == "normal" and case.dead is not None
        ]
        if group.cylinders is None or not numbers or not group.cylinders.follows_load:
            continue
        if not _any_limit(ground):
            out.append(DeadLoad(group.name, swept.loads[numbers[0]].name, None, "no limits are given"))
            continue
        numbers.sort(key=lambda number: -_most_used(ground, swept.cases[number]))
        worst = numbers[0]
        share, why = _largest_share(ground, swept, loads, worst)
        hottest = max(numbers, key=lambda number: _heat(ground, swept.cases[number]))
        for number in numbers[1:]:
            limiting = _limiting if number == hottest else _torque_limiting
            if share is not None and limiting(ground, swept, loads, number, share) is not None:
                worst, (share, why) = number, _largest_share(ground, swept, loads, number)
        out.append(DeadLoad(group.name, swept.loads[worst].name, share, why))
    return tuple(out)


def _any_limit(ground: Ground) -> bool:
    generators = any(machine.kind == "generator" for machine in ground.train.machines)
    limited = any(curve.continuous_nm is not None for curve in ground.limits)
    return limited or generators or bool(heated_couplings(ground.train))


def _most_used(ground: Ground, case: CaseResponse) -> float:
    """Largest torque over continuous limit of any link in a case at the judged speeds."""
    inside, used = ground.continuous, 0.0
    for place, curve in enumerate(ground.limits):
        if curve.continuous_nm is not None:
            ratio = share_of(judged_torque(case, place)[inside], curve.continuous_nm[inside])
            used = max(used, float(np.nan_to_num(ratio, posinf=1e300).max(initial=0.0)))
    return used


def _heat(ground: Ground, case: CaseResponse) -> float:
    """Largest heat [W] of any coupling in a case at the judged speeds."""
    rows = [place for place, link in enumerate(ground.graph.links) if link.kind == "coupling"]
    return float(np.nan_to_num(case.heat_w[rows][:, ground.continuous]).max(initial=0.0))


def _limiting(ground: Ground, swept: Swept, loads: LoadSet, number: int, share: float) -> str | None:
    """What is beyond its limit at a share of load in load case `number`; None where nothing is."""
    return _torque_limiting(ground, swept, loads, number, share) or _trial(ground, swept, loads, number, share)


def _torque_limiting(ground: Ground, swept: Swept, loads: LoadSet, number: int, share: float) -> str | None:
    """The link whose torque is beyond its limit at a share of load, couplings at 30 °C."""
    places = [n for n, curve in enumerate(ground.limits) if curve.continuous_nm is not None]
    if not places:
        return None
    inside = ground.continuous
    limits = np.array([ground.limits[n].continuous_nm for n in places])[:, inside]
    weights = np.array([_weight(swept, number, n)[inside] for n in places])
    half = _at_load(swept, loads, number, share, places, inside) * weights
    over = np.flatnonzero((half > limits * (1 + 1e-9)).any(axis=1))
    return ground.limits[places[int(over[0])]].link if len(over) else None


def _largest_share(ground: Ground, swept: Swept, loads: LoadSet, number: int) -> tuple[float | None, str]:
    if _limiting(ground, swept, loads, number, 1.0) is None:
        return 1.0, "all limits of torque, heat and generators hold at full load"
    if (first := _limiting(ground, swept, loads, number, 0.0)) is not None:
        return None, f"{first} is beyond its limit even at no load"
    low, high, link = 0.0, 1.0, ""
    for _ in range(HALVINGS):
        middle = 0.5 * (low + high)
        found = _limiting(ground, swept, loads, number, middle)
        if found is None:
            low = middle
        else:
            high, link = middle, found
    return low, f"limited by {link}"


def _trial(ground: Ground, swept: Swept, loads: LoadSet, number: int, share: float) -> str | None:
    """What is beyond its limit at a share of load, stiffness, heat and temperature of couplings settled on each other.

    At no more than 40 of the judged speeds: heat, torques of links, and the motion of generators.
    """
    state, case = swept.states[0], replace(swept.loads[number], load_share=share)
    few = thinned(ground.continuous, MOST_TRIED)
    speeds, law = swept.speed_rad_s[few], swept.share[few]
    couplings, springs = heated_couplings(ground.train), None
    if couplings:
        allowed = {item.name: ambient_k(item) + _rise(item) for item in couplings}
        found = settle_heat(state, loads, case, speeds, law, max(allowed.values()))
        for name, highest in allowed.items():
            if found.runaway[name].any() or (found.temperature_k[name] > highest + SETTLED_K).any():
                return name
        springs = heated_springs(state, couplings, found.temperature_k, complex_springs(state, speeds))
    kept = all_kept(state.graph)
    lines = evaluate(state, loads, (case,), (kept,), speeds, law, springs)
    torque = torque_range(loads, case, 0, lines, law)
    weights = [_weight(swept, number, place)[few] for place in range(len(ground.limits))]
    for place, curve in enumerate(ground.limits):
        if curve.continuous_nm is not None:
            over = torque.half[place] * weights[place] > curve.continuous_nm[few] * (1 + 1e-9)
            if over.any():
                return curve.link
    return _generator(ground, Combined(state, loads, case, 0, lines, speeds, law, torque, kept))


def _rise(coupling: Coupling) -> float:
    return 0.0 if coupling.ratings is None else coupling.ratings.heat_rise_k or 0.0


def _generator(ground: Ground, what: Combined) -> str | None:
    """The generator whose electrical angle or inertia torque is beyond its limit."""
    duty = ground.train.duty
    for machine in ground.train.machines:
        if machine.kind != "generator" or machine.at is None:
            continue
        station = ground.graph.number(machine.at)
        every = np.ones(len(what.speed_rad_s), dtype=bool)
        angle = what.angles((station,), 0, every)[0] * (machine.poles or 2) / 2.0
        inertia = what.angles((station,), 2, every)[0] * float(ground.graph.inertia_kgm2[station])
        rated = machine.electrical.rated_torque_nm or ground.mean.at_station(ground.graph, station)
        if (angle > duty.electrical_rad).any() or (rated is not None and (inertia > duty.inertia_torque * rated).any()):
            return machine.name
    return None


def _weight(swept: Swept, number: int, place: int) -> Floats:
    """(S,) weighted over plain alternating torque of a coupling in a case; 1 of other links."""
    case = swept.cases[number]
    weighted, plain = case.weighted_torque_nm[place], case.alternating_torque_nm[place]
    with np.errstate(all="ignore"):
        return np.where(np.isfinite(weighted) & (plain > 0), weighted / plain, 1.0)


def _at_load(swept: Swept, loads: LoadSet, number: int, share: float, places: list[int], inside: Bools) -> Floats:
    """(places, speeds inside) alternating torque of load case `number` of the normal state at a share of its load.

    Lines are linear in the load: between none and full. Those at no load follow from the normal and the light case.
    """
    unloaded = no_load_lines(swept)
    values = []
    for group, own, none in zip(loads.groups, swept.lines.groups[number], unloaded, strict=True):
        empty, full = (part[places][:, :, inside] for part in (none, own.link_nm))
        values.append((group, empty + share * (full - empty)))
    single = [
        item.amplitude_nm(swept.share[inside] * share) * np.abs(own.link_nm[places][:, :, inside]).max(axis=1)
        for item, own in zip(loads.plain, swept.lines.plain, strict=True)
    ]
    return put_together(values, single, (len(places), int(inside.sum()))).half


def no_load_lines(swept: Swept) -> list[Complexes]:
    """By group (links, lines, S) [N·m] at no load, from the normal and the light-load case of the normal state."""
    light = next((n for n, case in enumerate(swept.loads) if case.kind == "light load"), None)
    full = swept.lines.groups[0]
    if light is None:
        return [own.link_nm for own in full]
    share = swept.loads[light].load_share
    return [
        (some.link_nm - share * own.link_nm) / (1.0 - share)
        for own, some in zip(full, swept.lines.groups[light], strict=True)
    ]
