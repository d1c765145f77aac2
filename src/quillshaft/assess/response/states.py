"""States of the train whose response is asked for: temperatures, dampers at fault, ends of the tolerances, damping."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Literal

import numpy as np

from quillshaft.assess.along import Settled, follows_speed, graph_at, settle
from quillshaft.assess.cutting import cut_finely
from quillshaft.assess.damped_network import damped_network
from quillshaft.assess.mean_torque import mean_torques
from quillshaft.assess.response.mean import shares_along
from quillshaft.assess.response_results import CaseKind
from quillshaft.assess.results import LinkDuty
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.states import Temperature, follows_temperature, follows_torque
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.damped_state import Damping
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.train.model import Train
from quillshaft.train.read import train_of

Asked = Literal["all", "worst", "one"]


Pick = Callable[[TorsionalGraph], Network]


@dataclass(frozen=True)
class State:
    """A train ready to be shaken.

    network, damping   referred, rings of untuned dampers as nodes of their own, after all others
    springs_along      (S,) speeds -> (springs, S) stiffness where it follows speed; None elsewhere
    settled            couplings at their mean torques, where a stiffness follows them or speed; None elsewhere
    loads              all: every load case is asked for; worst: the normal one, and the dead cylinder that is worst
                       for the couplings in the normal state; one: the normal one alone
    pick               which of the graph's networks it is: nominal, or an end of the tolerances
    temperature        at which the couplings stand
    judged             False of what is only shown beside the verdict
    """

    name: str
    kind: CaseKind
    note: str
    train: Train
    graph: TorsionalGraph
    network: Network
    damping: Damping
    plan: Plan
    temperature: Temperature
    duties: tuple[LinkDuty, ...]
    springs_along: Callable[[Floats], Floats] | None
    settled: Settled | None
    loads: Asked
    judged: bool
    pick: Pick


OWN_HEAT = "own heat"
"""Name of the state whose couplings stand at the temperature that their own heat brings them to."""


def _nominal(graph: TorsionalGraph) -> Network:
    return graph.network


def _soft(graph: TorsionalGraph) -> Network:
    return graph.soft_heavy


def _stiff(graph: TorsionalGraph) -> Network:
    return graph.stiff_light


def make_state(
    train: Train,
    name: str,
    kind: CaseKind,
    note: str,
    zeta: float,
    temperature: Temperature = "reference",
    pick: Pick = _nominal,
    loads: Asked = "one",
    judged: bool = True,
) -> State:
    """One state of a train, its distributed shafts already cut. Raises TrainFileError as building the graph does."""
    graph = build_graph(train, temperature)
    settled = settle(train, graph, temperature) if follows_speed(train) else None
    graph = graph if settled is None else settled.graph
    own = replace(graph, network=pick(graph))
    network, damping = damped_network(own, zeta)
    damping = with_magnifiers(train, graph, damping)
    along = None if settled is None else _along(train, settled, temperature, pick, network)
    duties = mean_torques(train, graph) if settled is None else settled.duties
    solved = (network, damping, plan_elimination(network))
    return State(name, kind, note, train, graph, *solved, temperature, duties, along, settled, loads, judged, pick)


def with_magnifiers(train: Train, graph: TorsionalGraph, damping: Damping) -> Damping:
    """The damping with that of cylinders whose machine states a dynamic magnifier M: J/M of each throw.

    A mode that moves cylinders alone then has the magnifier M at any frequency. Source: engine damping by a magnifier,
    Ker Wilson, Practical Solution of Torsional Vibration Problems (from memory; the form is derived).
    """
    lost = np.zeros(len(damping.node_viscous))
    for machine in train.machines:
        for cylinder in machine.cylinders if machine.magnifier else ():
            station = graph.number(cylinder.at)
            shared = sum(other.at == cylinder.at for other in machine.cylinders)
            inertia = float(graph.inertia_kgm2[station]) * float(graph.scale[station]) ** 2
            lost[graph.node[station]] += inertia / (machine.magnifier or 1.0) / shared
    return replace(damping, node_lost_kgm2=lost) if lost.any() else damping


def at_mean_torques(state: State, mean_nm: Floats) -> State:
    """The state with couplings that follow mean torque at other mean torques, (links,) [N·m] at rated speed; nan is 0.

    In an elastic loop the torques split by the stiffness itself: there the couplings stay as they are.
    """
    settled = state.settled
    if settled is None or settled.split_follows_stiffness or not follows_torque(state.train):
        return state
    torques = np.nan_to_num(mean_nm).tolist()
    duties = tuple(replace(d, mean_torque_nm=value) for d, value in zip(settled.duties, torques, strict=True))
    own = replace(settled, duties=duties)
    return replace(state, springs_along=_along(state.train, own, state.temperature, state.pick, state.network))


def _along(
    train: Train, settled: Settled, temperature: Temperature, pick: Pick, network: Network
) -> Callable[[Floats], Floats]:
    rings = len(network.spring_nm_rad) - len(settled.graph.network.spring_nm_rad)

    def stiffness(speed_rad_s: Floats) -> Floats:
        pairs = zip(speed_rad_s.tolist(), shares_along(train, speed_rad_s).tolist(), strict=True)
        graphs = [graph_at(train, settled, speed, temperature, share) for speed, share in pairs]
        columns = [pick(graph).spring_nm_rad for graph in graphs]
        return np.concatenate([np.array(columns).T, np.zeros((rings, len(speed_rad_s)))])

    return stiffness


def all_states(train: Train, temperature: Temperature) -> tuple[State, ...]:
    """The states asked for, the normal one first: cold and hot, dampers at fault, tolerance ends, high damping.

    Raises TrainFileError as building the graph does.
    """
    low, high = train.zeta
    train = cut_finely(train, temperature).train
    states = [make_state(train, "", "normal", "", low, temperature, loads="all")]
    if follows_temperature(train) and temperature == "reference":
        for word in ("cold", "hot"):
            note = f"couplings at their {'lowest' if word == 'cold' else 'highest'} operating temperature"
            states.append(make_state(train, word, "temperature", note, low, word, loads="worst"))
    for damper in train.dampers:
        if damper.state == "healthy":
            for fault in ("seized", "lost"):
                name = f"{damper.name} {fault}"
                other = cut_finely(train_of(train.file, (*train.cases, name)), temperature).train
                states.append(
                    make_state(other, name, "damper", f"damper {damper.name} {fault}", low, temperature, judged=False)
                )
    for name, pick in (("soft and heavy", _soft), ("stiff and light", _stiff)):
        if _has_tolerances(train):
            note = f"all tolerances together, {name}"
            states.append(make_state(train, name, "tolerance", note, low, temperature, pick, loads="worst"))
    if high != low:
        note = f"links that state no damping at ζ = {high * 100:.3g} % in place of {low * 100:.3g} %"
        states.append(make_state(train, "high damping", "high damping", note, high, temperature, judged=False))
    return tuple(states)


def _has_tolerances(train: Train) -> bool:
    rows = (*train.stations, *train.shafts, *train.couplings, *train.gears, *train.ties, *train.belts)
    return any(any(item.tolerance) for item in rows)
