"""Mean torque and wind-up of every link under the rated power flow."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.fluid_torque import fluid_columns
from quillshaft.assess.link_torques import link_torques
from quillshaft.assess.results import LinkDuty
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.motions import rigid_motions
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.statics import static_torques
from quillshaft.train.model import Power, Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.validate import Findings

CLOSES = 1e-3
NO_TORQUE = 1e-13
"""Of the largest torque: what lies below is left by rounding."""


def mean_torques(train: Train, graph: TorsionalGraph) -> tuple[LinkDuty, ...]:
    """Mean torque [N·m] and wind-up [rad] per link, at its first-named station; None where not known.

    Raises TrainFileError when the power does not close, or not each rigid-body motion has its "balance".
    """
    if train.power is None:
        return tuple(LinkDuty(link.name, None, None) for link in graph.links)
    findings = Findings(train.file, train.cases)
    loads = _loads(train, train.power, graph, findings)
    if findings.problems or loads is None:
        raise TrainFileError(tuple(findings.problems))
    load = loads.whole
    network = graph.static
    nodal = np.zeros(network.nodes)
    np.add.at(nodal, graph.node, load)
    solution = static_torques(network, plan_elimination(network), nodal)
    torques = link_torques(
        graph,
        network,
        solution.spring_torque[None, :],
        solution.tie_torque[None, :],
        solution.link_torque[None, :],
        load[None, :],
    )[0]
    size = np.abs(torques)
    torques = np.where(size <= NO_TORQUE * float(np.max(np.nan_to_num(size), initial=0.0)), 0.0, torques)
    return tuple(_duty(link_index, float(torques[link_index]), graph) for link_index in range(len(graph.links)))


def mean_powers(train: Train, graph: TorsionalGraph) -> tuple[tuple[str, float], ...]:
    """Mean power [W] at each station of [power], the balancing ones worked out; empty where no power is given.

    Raises TrainFileError as `mean_torques` does.
    """
    if train.power is None:
        return ()
    findings = Findings(train.file, train.cases)
    loads = _loads(train, train.power, graph, findings)
    if loads is None or findings.problems:
        raise TrainFileError(tuple(findings.problems))
    rated = train.operation.rated_rad_s
    return tuple((name, float(loads.own[graph.number(name)]) * rated) for name in train.power.stations_w)


def fluid_torques(train: Train, graph: TorsionalGraph) -> dict[str, float]:
    """Mean torque [N·m, actual] through each fluid coupling, the same on both sides; empty without power.

    Raises TrainFileError as `mean_torques` does.
    """
    if train.power is None or not train.fluid_couplings:
        return {}
    findings = Findings(train.file, train.cases)
    loads = _loads(train, train.power, graph, findings)
    if loads is None or findings.problems:
        raise TrainFileError(tuple(findings.problems))
    firsts = [graph.number(coupling.between[0]) for coupling in train.fluid_couplings]
    torques = loads.through / graph.scale[firsts]
    return {coupling.name: float(value) for coupling, value in zip(train.fluid_couplings, torques, strict=True)}


def _duty(index: int, referred_nm: float, graph: TorsionalGraph) -> LinkDuty:
    link = graph.links[index]
    if np.isnan(referred_nm):
        return LinkDuty(link.name, None, None)
    torque = referred_nm * link.torque_scale
    stiffness = link.stiffness_nm_rad
    return LinkDuty(link.name, torque, 0.0 if stiffness is None else torque / stiffness)


@dataclass(frozen=True)
class _Loads:
    """Referred mean torques [N·m]: of each station's own power, and through each fluid coupling."""

    own: Floats
    through: Floats
    carried: Floats

    @property
    def whole(self) -> Floats:
        """(stations,) what each station passes on to its links."""
        return np.asarray(self.own + self.through @ self.carried)


def _loads(train: Train, power: Power, graph: TorsionalGraph, findings: Findings) -> _Loads | None:
    """Mean torques, balanced so that they do no work on any rigid-body motion."""
    torque, balance = _stated(train, power, graph, findings)
    motions = rigid_motions(graph.static)[:, graph.node]
    largest = max(float(np.sum(np.abs(torque))), 1e-300)
    carried = fluid_columns(train, graph)
    through = motions @ carried.T
    needed = len(motions) - len(carried)
    if balance:
        matrix = np.hstack([motions[:, balance], through])
        if len(balance) != needed or abs(np.linalg.det(matrix)) < 1e-9:
            given = ", ".join(graph.stations[station] for station in balance)
            message = f'{needed} "balance" needed, one for each motion the train is free to make; given at {given}'
            findings.add(("power",), message)
            return None
        found = np.asarray(np.linalg.solve(matrix, -(motions @ torque)), dtype=np.float64)
        torque[balance] = found[: len(balance)]
        return _Loads(torque, found[len(balance) :], carried)
    passed = np.zeros(len(carried))
    if len(carried):
        passed[:] = np.linalg.lstsq(through, -(motions @ torque), rcond=None)[0]
    work = motions @ (torque + passed @ carried)
    if np.max(np.abs(work)) > CLOSES * largest:
        _not_closed(train, float(np.sum(torque + passed @ carried)), largest, needed, findings)
        return None
    torque -= motions.T @ np.linalg.lstsq(motions @ motions.T, work, rcond=None)[0]
    return _Loads(torque, passed, carried)


def _stated(train: Train, power: Power, graph: TorsionalGraph, findings: Findings) -> tuple[Floats, list[int]]:
    """(stations,) referred mean torque [N·m] of the powers stated, and the stations that balance them."""
    torque = np.zeros(len(graph.stations))
    balance = []
    for name, watts in power.stations_w.items():
        station = graph.number(name)
        if graph.speed_ratio[station] == 0:
            allowed = "a member held still carries its torque by a tie"
            findings.add(("power", name), "this station does not turn, so it takes no power", None, allowed)
        elif watts is None:
            balance.append(station)
        else:
            torque[station] = watts / train.operation.rated_rad_s
    return torque, balance


def _not_closed(train: Train, left_nm: float, largest_nm: float, needed: int, findings: Findings) -> None:
    message = f"the powers do not close: {left_nm * train.operation.rated_rad_s / 1e3:+.4g} kW are left over"
    if abs(left_nm) <= CLOSES * largest_nm:
        message = "the powers close, but not in the split that the teeth of the epicyclic gears ask for"
        if train.fluid_couplings:
            message = "the powers close, but a fluid coupling passes on its torque, not its power: the slip is heat"
    places = "one station" if needed == 1 else f"{needed} stations"
    findings.add(("power",), message, None, f'{places} with "balance"')
