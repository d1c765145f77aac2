"""All cases of a train over speeds: states and load cases, the speed grid refined until every peak is found."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.assess.mean_torque import mean_torques
from quillshaft.assess.response.combine import (
    Combined,
    Range,
    aligned,
    combine,
    continuous_speeds,
    joined_range,
    line_shares,
    torque_range,
)
from quillshaft.assess.response.evaluate import Kept, StateLines, all_kept, evaluate, joined_lines
from quillshaft.assess.response.grid import MOST_SPEEDS, NEAREST, ROUNDS, first_speeds, refine
from quillshaft.assess.response.loads import LoadCase, LoadSet
from quillshaft.assess.response.mean import shares_along
from quillshaft.assess.response.states import State, at_mean_torques
from quillshaft.assess.response_results import CaseResponse, LineShare
from quillshaft.elements.coupling_duty import weighs_by_frequency
from quillshaft.graph.network import Floats
from quillshaft.graph.states import follows_torque
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.damped_state import undamped
from quillshaft.solve.modes import natural_modes
from quillshaft.train.model import Train

UNDAMPED = 1e-6
"""Damping ratio below which a mode counts as undamped."""


@dataclass(frozen=True)
class Swept:
    """Every case over the speeds (S,) [rad/s], with the state and the load case of each.

    lines, means   of the normal state, by load case: what its sources do, and mean link torques (links,) [N·m]; single
                   sources as in the first
    all_found      False where the grid could not be refined until every peak is found
    """

    speed_rad_s: Floats
    share: Floats
    cases: tuple[CaseResponse, ...]
    states: tuple[State, ...]
    loads: tuple[LoadCase, ...]
    shares: tuple[LineShare, ...]
    lines: StateLines
    means: list[Floats]
    all_found: bool


def watched_stations(train: Train, graph: TorsionalGraph) -> tuple[int, ...]:
    """Stations whose speed irregularity and inertia torque are worked out: `speed-at` and those of generators."""
    generators = {machine.at for machine in train.machines if machine.kind == "generator"}
    return tuple(sorted({graph.number(name) for name in (train.operation.speed_at, *generators) if name}))


def rubber_links(train: Train, graph: TorsionalGraph) -> tuple[int, ...]:
    """Links whose vibratory torque weighs more at a higher frequency."""
    rubber = {item.name for item in train.couplings if weighs_by_frequency(item.kind)}
    return tuple(number for number, link in enumerate(graph.links) if link.name in rubber)


def load_cases(train: Train, loads: LoadSet) -> tuple[LoadCase, ...]:
    """The normal case, every cylinder dead in turn, and light load."""
    cases = [LoadCase("normal", "normal", "")]
    for group in loads.groups:
        machine = None if group.cylinders is None else group.cylinders.machine
        for place, cylinder in enumerate(machine.cylinders if machine else ()):
            if not cylinder.dead and machine is not None:
                word = "dead" if machine.kind == "reciprocating-engine" else "unloaded"
                name = f"{group.name} cylinder {place + 1} {word}"
                cases.append(LoadCase(name, "dead cylinder", f"at {cylinder.at}", 1.0, group.name, place))
    share = train.operation.light_load
    if train.power is not None and any(group.cylinders and group.cylinders.follows_load for group in loads.groups):
        cases.append(LoadCase("light load", "light load", f"at {share * 100:.3g} % of full load", share))
    return tuple(cases)


def mean_links(state: State, case: LoadCase) -> Floats:
    """(links,) mean torque [N·m] at rated speed and full load, the dead cylinder's power left out; nan if unknown."""
    duties = state.duties
    if case.dead is not None and state.train.power is not None:
        duties = mean_torques(_without(state.train, case), state.graph)
    return np.array([np.nan if duty.mean_torque_nm is None else duty.mean_torque_nm for duty in duties])


def _without(train: Train, case: LoadCase) -> Train:
    """The train without the power of one cylinder; what balances it takes less.

    Where the power of the engine stands at another station, or at some of its throws only, all powers fall by the
    cylinder's share.
    """
    assert train.power is not None
    machine = next(item for item in train.machines if item.name == case.group)
    at = machine.cylinders[case.dead or 0].at
    watts = dict(train.power.stations_w)
    own = watts.get(at)
    if own is None or any(cylinder.at not in watts for cylinder in machine.cylinders):
        left = 1.0 - 1.0 / len(machine.cylinders)
        return replace(train, power=replace(train.power, stations_w={k: v and v * left for k, v in watts.items()}))
    watts[at] = own * (1.0 - 1.0 / sum(cylinder.at == at for cylinder in machine.cylinders))
    if None not in watts.values():
        largest = max((k for k in watts if k != at), key=lambda k: abs(watts[k] or 0.0), default=at)
        watts[largest] = None
    return replace(train, power=replace(train.power, stations_w=watts))


def modes_of(state: State) -> tuple[Floats, Floats]:
    """(omega [rad/s], damping ratio) of a state's modes: half the loss factors by strain energy, and viscous parts."""
    network, damping = state.network, state.damping
    modes = natural_modes(undamped(network))
    elastic = network.spring_nm_rad > 0
    omega = modes.omega_rad_s
    ends = network.spring_ends
    twist = modes.angle[:, ends[:, 0]] - modes.angle[:, ends[:, 1]]
    twist[:, elastic] = modes.spring_twist
    lost = (twist**2) @ (network.spring_nm_rad * damping.spring_loss)
    lost = lost + omega * ((twist**2) @ damping.spring_viscous)
    lost = lost + (modes.tie_twist**2) @ (network.tie_nm_rad * damping.tie_loss)
    lost = lost + omega * ((modes.tie_twist**2) @ damping.tie_viscous)
    lost = lost + omega * ((modes.angle**2) @ np.abs(damping.node_viscous))
    if damping.node_lost_kgm2 is not None:
        lost = lost + omega**2 * ((modes.angle**2) @ damping.node_lost_kgm2)
    for number, link in enumerate(network.torque_links):
        square = modes.link_torque[:, number] ** 2 * link.compliance_rad_per_nm
        viscous = damping.link_viscous[number] * link.compliance_rad_per_nm
        lost = lost + square * (damping.link_loss[number] + omega * viscous)
    return omega, np.asarray(0.5 * lost / omega**2)


def sweep(states: tuple[State, ...], loads: LoadSet, watched: tuple[int, ...], couplings: tuple[int, ...]) -> Swept:
    """The response of every state and load case over speeds that are refined until every peak is found."""
    train = states[0].train
    modes = [modes_of(state) for state in states]
    speeds = first_speeds(train, loads, modes)
    cases = _asked(states, loads, couplings, speeds)
    states, cases = _apart(states, cases)
    means = [[mean_links(state, case) for case in own] for state, own in zip(states, cases, strict=True)]
    work = _Work(states, loads, cases, means, watched, couplings, bands(states, loads))
    least = NEAREST * min(max(float(np.min(zeta, initial=1.0)), 1e-3) for _, zeta in modes)
    parts = [work.part(speeds)]
    while True:
        order = np.argsort(np.concatenate([part.speed_rad_s for part in parts]), kind="stable")
        speeds = np.concatenate([part.speed_rad_s for part in parts])[order]
        ranges = [joined_range([part.ranges[case] for part in parts], order) for case in range(len(parts[0].ranges))]
        peaks = refine(speeds, np.nan_to_num(np.concatenate([item.half for item in ranges])), least)
        found = peaks.found or not len(peaks.add)
        if found or len(parts) > ROUNDS or len(speeds) + len(peaks.add) > MOST_SPEEDS:
            break
        parts.append(work.part(peaks.add))
    lines = [joined_lines([part.lines[state] for part in parts], order) for state in range(len(states))]
    return work.whole(speeds, lines, ranges, found)


def for_case(state: State, case: LoadCase) -> State:
    """The state with couplings that follow mean torque at that of a load case."""
    return at_mean_torques(state, mean_links(state, case) * case.load_share)


def _apart(
    states: tuple[State, ...], cases: list[tuple[LoadCase, ...]]
) -> tuple[tuple[State, ...], list[tuple[LoadCase, ...]]]:
    """The same, a state of its own for every load case where couplings follow its mean torque."""
    pairs: list[tuple[State, tuple[LoadCase, ...]]] = []
    for state, own in zip(states, cases, strict=True):
        if len(own) > 1 and follows_torque(state.train):
            pairs += [(for_case(state, case), (case,)) for case in own]
        else:
            pairs.append((state, own))
    return tuple(state for state, _ in pairs), [own for _, own in pairs]


def _asked(
    states: tuple[State, ...], loads: LoadSet, couplings: tuple[int, ...], speeds: Floats
) -> list[tuple[LoadCase, ...]]:
    """The load cases of every state; the worst dead cylinder is that of the largest torque in any coupling, or link."""
    cases = load_cases(states[0].train, loads)
    dead = [case for case in cases if case.dead is not None]
    worst: tuple[LoadCase, ...] = ()
    if dead and any(state.loads == "worst" for state in states):
        inside = continuous_speeds(states[0].train.operation, speeds)
        chosen = speeds[inside] if inside.any() else speeds
        share = shares_along(states[0].train, chosen)
        kept = (Kept((), ()),) * len(dead)
        lines = evaluate(states[0], loads, tuple(dead), kept, chosen, share)
        places = list(couplings) or slice(None)
        sizes = [
            float(np.nan_to_num(torque_range(loads, case, number, lines, share).half[places]).max())
            for number, case in enumerate(dead)
        ]
        worst = (dead[int(np.argmax(sizes))],)
    by = {"all": cases, "worst": (cases[0], *worst), "one": cases[:1]}
    return [by[state.loads] for state in states]


def bands(states: tuple[State, ...], loads: LoadSet) -> list[dict[str, tuple[float, ...]]]:
    """For every state and source with a band of constant frequency: the natural frequencies [rad/s] inside it."""
    out = []
    for state in states:
        omega = modes_of(state)[0]
        own = {}
        for item in loads.plain:
            if len(item.frequencies) > 1:
                low, high = min(f for _, f in item.frequencies), max(f for _, f in item.frequencies)
                own[item.source.name] = tuple(value for value in omega.tolist() if low < value < high)
        out.append(own)
    return out


@dataclass(frozen=True)
class _Work:
    states: tuple[State, ...]
    loads: LoadSet
    cases: list[tuple[LoadCase, ...]]
    means: list[list[Floats]]
    watched: tuple[int, ...]
    couplings: tuple[int, ...]
    bands: list[dict[str, tuple[float, ...]]]

    def places(self, state: State) -> tuple[tuple[int, ...], tuple[int, ...]]:
        """The watched stations and couplings by their places in a state that may lack a damper's own."""
        first, graph = self.states[0].graph, state.graph
        links = [link.name for link in graph.links]
        stations = tuple(graph.number(first.stations[number]) for number in self.watched)
        return stations, tuple(links.index(first.links[number].name) for number in self.couplings)

    def kept(self, state: State, cases: tuple[LoadCase, ...]) -> tuple[Kept, ...]:
        """Everything of the normal case; of the others the stations watched, and the heat of what may get hot."""
        every, stations = all_kept(state.graph), self.places(state)[0]
        whole = every if state.kind == "normal" else Kept(stations, every.links)
        hot = tuple(n for n, link in enumerate(state.graph.links) if link.kind in ("coupling", "damper"))
        return (whole, *[Kept(stations, hot)] * (len(cases) - 1))

    def part(self, speed_rad_s: Floats) -> _Part:
        """The lines of every state, and the alternating torques of every case, at speeds (S,)."""
        share = shares_along(self.states[0].train, speed_rad_s)
        lines = [
            evaluate(state, self.loads, own, self.kept(state, own), speed_rad_s, share, None, band)
            for state, own, band in zip(self.states, self.cases, self.bands, strict=True)
        ]
        ranges = [
            torque_range(self.loads, case, number, own_lines, share)
            for own, own_lines in zip(self.cases, lines, strict=True)
            for number, case in enumerate(own)
        ]
        return _Part(speed_rad_s, lines, ranges)

    def whole(self, speed_rad_s: Floats, lines: list[StateLines], ranges: list[Range], all_found: bool) -> Swept:
        """Every case at speeds (S,) from its lines and alternating torques."""
        share = shares_along(self.states[0].train, speed_rad_s)
        responses: list[CaseResponse] = []
        states, cases = [], []
        for state, own, means, own_lines in zip(self.states, self.cases, self.means, lines, strict=True):
            for number, (case, mean) in enumerate(zip(own, means, strict=True)):
                torque = ranges[len(responses)]
                kept = self.kept(state, own)[number]
                what = Combined(state, self.loads, case, number, own_lines, speed_rad_s, share, torque, kept)
                made = combine(what, mean, *self.places(state))
                responses.append(aligned(made, state.graph, self.states[0].graph))
                states.append(state)
                cases.append(case)
        shares = line_shares(self.loads, lines[0], share)
        found = (tuple(responses), tuple(states), tuple(cases), shares)
        normal = [number for number, state in enumerate(self.states) if state.kind == "normal"]
        groups = tuple(own for number in normal for own in lines[number].groups)
        means = [mean for number in normal for mean in self.means[number]]
        return Swept(speed_rad_s, share, *found, replace(lines[0], groups=groups), means, all_found)


@dataclass(frozen=True)
class _Part:
    """Some of the speeds: lines by state, alternating torques by case."""

    speed_rad_s: Floats
    lines: list[StateLines]
    ranges: list[Range]
