"""How much load an engine may carry with a cylinder dead."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import partial

import numpy as np

from quillshaft.assess.response.combine import Combined, combine, line_weights, put_together, torque_range
from quillshaft.assess.response.evaluate import Kept, Lines, StateLines, all_kept, evaluate
from quillshaft.assess.response.findings import all_findings
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
from quillshaft.assess.response.loads import LoadCase, LoadSet
from quillshaft.assess.response.run import Swept, for_case, mean_links, rubber_links, watched_stations
from quillshaft.assess.response.states import OWN_HEAT, State
from quillshaft.assess.response_results import CaseResponse, DeadLoad
from quillshaft.graph.network import Floats, Ints
from quillshaft.graph.states import follows_torque
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.train.coupling_model import Coupling

HALVINGS = 7
MOST_FOLLOWED, MOST_TRIED = 200, 40
"""Speeds at which a load is tried for all checks beside the torque of links."""
AT_A_LOAD = ("tooth separation",)
"""Checks that less load does not help: they are shown over load by a map of their own."""


def dead_loads(ground: Ground, swept: Swept, loads: LoadSet) -> tuple[DeadLoad, ...]:
    """Largest share of load at which all limits hold in the judged ranges with each machine's worst cylinder dead.

    In the normal state, cold and hot, and at both ends of the tolerances: the torque of every link at all speeds, and
    every other check (heat, temperature, dampers, generators) at no more than 40 of them. Where couplings follow mean
    torque nothing is linear in the load: every check at no more than 200 speeds.
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
        if not any(item.limit is not None for item in all_findings(ground)):
            out.append(DeadLoad(group.name, swept.loads[numbers[0]].name, None, "no limits are given"))
            continue
        out.append(_dead_load(ground, swept, loads, group.name, numbers))
    return tuple(out)


def _dead_load(ground: Ground, swept: Swept, loads: LoadSet, name: str, numbers: list[int]) -> DeadLoad:
    """The limit of one machine: by the torques of every cylinder dead, then by all checks of the two worst of them."""
    numbers = sorted(numbers, key=lambda number: -_most_used(ground, swept.cases[number]))
    cases = [swept.loads[number] for number in numbers]
    states, follows = _states(swept), follows_torque(ground.train)
    hottest = max(range(len(cases)), key=lambda place: _heat(ground, swept.cases[numbers[place]]))
    legs = [] if follows else [_leg(ground, swept, loads, state, cases) for state in states]
    tests = [(place, partial(_over, ground, leg, place)) for place in range(len(cases)) for leg in legs]
    for place in range(len(cases)) if follows else sorted({0, hottest}):
        tests += [(place, partial(_trial, ground, swept, loads, state, cases[place])) for state in states]
    worst, share, why = 0, 1.0, "all limits of torque, heat and generators hold at full load"
    for place, test in tests:
        link = test(share)
        if link is None:
            continue
        if (unloaded := test(0.0)) is not None:
            return DeadLoad(name, cases[place].name, None, f"{unloaded} is beyond its limit even at no load")
        found = _bisected(test, share)
        worst, share, why = place, found[0], f"limited by {found[1] or link}"
    return DeadLoad(name, cases[worst].name, share, why)


def _bisected(test: Callable[[float], str | None], high: float) -> tuple[float, str]:
    """Largest share found below `high` that passes a test that 0 passes, and what is beyond its limit above it."""
    low, link = 0.0, ""
    for _ in range(HALVINGS):
        middle = 0.5 * (low + high)
        found = test(middle)
        if found is None:
            low = middle
        else:
            high, link = middle, found
    return low, link


def _states(swept: Swept) -> list[State]:
    """The states that are judged, the normal one first."""
    kept: dict[str, State] = {}
    for state in swept.states:
        if state.judged and state.kind in ("normal", "temperature", "tolerance") and state.name != OWN_HEAT:
            kept.setdefault(state.name, state)
    return list(kept.values())


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


@dataclass(frozen=True)
class _Leg:
    """All dead cylinders in one state at the judged speeds: lines at no load, then at full load, of each in turn."""

    state: State
    loads: LoadSet
    lines: StateLines
    share: Floats


def _leg(ground: Ground, swept: Swept, loads: LoadSet, state: State, cases: list[LoadCase]) -> _Leg:
    both = tuple(replace(case, load_share=share) for case in cases for share in (0.0, 1.0))
    speeds, law = swept.speed_rad_s[ground.continuous], swept.share[ground.continuous]
    return _Leg(state, loads, evaluate(state, loads, both, (Kept((), ()),) * len(both), speeds, law), law)


def _over(ground: Ground, leg: _Leg, place: int, load: float) -> str | None:
    """The link whose torque is beyond its limit with the cylinder `place` dead at a share of load.

    Lines are linear in the load: between none and full.
    """
    places = [n for n, curve in enumerate(ground.limits) if curve.continuous_nm is not None]
    if not places:
        return None
    rubber = set(rubber_links(ground.train, ground.graph))
    weighs = np.array([number in rubber for number in places])

    def judged(own: Lines, torque: Complexes) -> Complexes:
        return np.asarray(np.where(weighs[:, None, None], torque * line_weights(own), torque))

    values = []
    pairs = zip(leg.loads.groups, leg.lines.groups[2 * place], leg.lines.groups[2 * place + 1], strict=True)
    for group, none, full in pairs:
        empty, whole = none.link_nm[places], full.link_nm[places]
        values.append((group, judged(full, empty + load * (whole - empty))))
    single = [
        item.amplitude_nm(leg.share * load) * np.abs(judged(own, own.link_nm[places])).max(axis=1)
        for item, own in zip(leg.loads.plain, leg.lines.plain, strict=True)
    ]
    half = put_together(values, single, (len(places), len(leg.share))).half
    limits = np.array([ground.limits[n].continuous_nm for n in places])[:, ground.continuous]
    over = np.flatnonzero((half > limits * (1 + 1e-9)).any(axis=1))
    return ground.limits[places[int(over[0])]].link if len(over) else None


def _trial(ground: Ground, swept: Swept, loads: LoadSet, state: State, case: LoadCase, load: float) -> str | None:
    """What is beyond any limit at a share of load, at no more than 40 of the judged speeds.

    In the normal state with stiffness, heat and temperature of couplings settled on each other.
    """
    case = replace(case, load_share=load)
    follows = follows_torque(ground.train)
    state = for_case(state, case) if follows else state
    few = thinned(ground.continuous, MOST_FOLLOWED if follows else MOST_TRIED)
    speeds, law = swept.speed_rad_s[few], swept.share[few]
    couplings, springs = heated_couplings(ground.train) if state.kind == "normal" else (), None
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
    what = Combined(state, loads, case, 0, lines, speeds, law, torque, kept)
    watched, rubber = watched_stations(ground.train, state.graph), rubber_links(ground.train, state.graph)
    made = combine(what, mean_links(state, case), watched, rubber)
    tried = replace(_at(ground, few), cases=(replace(made, judged=True),))
    failed = (item for item in all_findings(tried) if item.verdict == "fail" and item.check not in AT_A_LOAD)
    return next((item.element for item in failed), None)


def _at(ground: Ground, few: Ints) -> Ground:
    """The same at some of its speeds, all of them run at for good."""

    def taken(row: Floats | None) -> Floats | None:
        return None if row is None else row[few]

    limits = tuple(
        replace(curve, continuous_nm=taken(curve.continuous_nm), passing_nm=taken(curve.passing_nm))
        for curve in ground.limits
    )
    return replace(ground, speed_rad_s=ground.speed_rad_s[few], continuous=np.ones(len(few), dtype=bool), limits=limits)


def _rise(coupling: Coupling) -> float:
    return 0.0 if coupling.ratings is None else coupling.ratings.heat_rise_k or 0.0
