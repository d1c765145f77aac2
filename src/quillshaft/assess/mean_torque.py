"""Mean torque and wind-up of every link under the rated power flow."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.link_torques import link_torques
from quillshaft.assess.results import LinkDuty
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.motions import rigid_motions
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.statics import static_torques
from quillshaft.train.model import Power, Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.validate import Findings

CLOSES = 1e-3


def mean_torques(train: Train, graph: TorsionalGraph) -> tuple[LinkDuty, ...]:
    """Mean torque [N·m] and wind-up [rad] per link, at its first-named station; None where not known.

    Raises TrainFileError when the power does not close, or not each rigid-body motion has its "balance".
    """
    if train.power is None:
        return tuple(LinkDuty(link.name, None, None) for link in graph.links)
    findings = Findings(train.file, train.cases)
    load = _station_torque(train, train.power, graph, findings)
    if findings.problems or load is None:
        raise TrainFileError(tuple(findings.problems))
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
    return tuple(_duty(link_index, float(torques[link_index]), graph) for link_index in range(len(graph.links)))


def mean_powers(train: Train, graph: TorsionalGraph) -> tuple[tuple[str, float], ...]:
    """Mean power [W] at each station of [power], the balancing ones worked out; empty where no power is given.

    Raises TrainFileError as `mean_torques` does.
    """
    if train.power is None:
        return ()
    findings = Findings(train.file, train.cases)
    load = _station_torque(train, train.power, graph, findings)
    if load is None or findings.problems:
        raise TrainFileError(tuple(findings.problems))
    rated = train.operation.rated_rad_s
    return tuple((name, float(load[graph.number(name)]) * rated) for name in train.power.stations_w)


def _duty(index: int, referred_nm: float, graph: TorsionalGraph) -> LinkDuty:
    link = graph.links[index]
    if np.isnan(referred_nm):
        return LinkDuty(link.name, None, None)
    torque = referred_nm * link.torque_scale
    stiffness = link.stiffness_nm_rad
    return LinkDuty(link.name, torque, 0.0 if stiffness is None else torque / stiffness)


def _station_torque(train: Train, power: Power, graph: TorsionalGraph, findings: Findings) -> Floats | None:
    """(stations,) referred mean torque [N·m], balanced so that it does no work on any rigid-body motion."""
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
    motions = rigid_motions(graph.static)[:, graph.node]
    largest = max(float(np.sum(np.abs(torque))), 1e-300)
    work = motions @ torque
    needed = len(motions)
    if balance:
        matrix = motions[:, balance]
        if len(balance) != needed or abs(np.linalg.det(matrix)) < 1e-9:
            given = ", ".join(graph.stations[station] for station in balance)
            message = f'{needed} "balance" needed, one for each motion the train is free to make; given at {given}'
            findings.add(("power",), message)
            return None
        torque[balance] = np.linalg.solve(matrix, -work)
    elif np.max(np.abs(work)) > CLOSES * largest:
        left = float(np.sum(torque))
        message = f"the powers do not close: {left * train.operation.rated_rad_s / 1e3:+.4g} kW are left over"
        if abs(left) <= CLOSES * largest:
            message = "the powers close, but not in the split that the teeth of the epicyclic gears ask for"
        places = "one station" if needed == 1 else f"{needed} stations"
        findings.add(("power",), message, None, f'{places} with "balance"')
        return None
    else:
        torque -= motions.T @ np.linalg.lstsq(motions @ motions.T, work, rcond=None)[0]
    return torque
