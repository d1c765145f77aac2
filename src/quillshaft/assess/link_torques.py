"""Torques of every link of the train, rigid meshes included, from what the networks give."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import TorsionalGraph


def link_torques(
    graph: TorsionalGraph,
    network: Network,
    spring_torque: Floats,
    tie_torque: Floats,
    torque_link_torque: Floats,
    load_nm: Floats,
) -> Floats:
    """(cases, links) referred torque [N·m] of every link, at its first-named station; nan where it is open.

    spring_torque, tie_torque, torque_link_torque   (cases, …) as the network's solution gives them
    load_nm    (cases, stations) referred torque that each station has to pass on: inertia torque ω² J θ in a
               mode, the mean torque in statics

    A rigid mesh carries what is left over at the stations it joins. In a closed loop of rigid meshes the
    split is open (nan).
    """
    torques = np.zeros((len(load_nm), len(graph.links)))
    give = np.zeros((len(graph.links), len(graph.stations)))
    turning_ties = len(tie_torque.T) < sum(link.slot == "tie" for link in graph.links)
    tie = 0
    for position, link in enumerate(graph.links):
        for station, coefficient in zip(link.stations, link.coefficients, strict=True):
            give[position, station] += coefficient
        if link.slot == "spring":
            torques[:, position] = spring_torque[:, link.index]
        elif link.cut is not None:
            torques[:, position] = spring_torque[:, link.cut.springs[0]]
        elif link.slot == "torque":
            torques[:, position] = torque_link_torque[:, link.index]
        elif link.slot == "tie" and not (turning_ties and network.turning[graph.node[link.stations[0]]]):
            torques[:, position] = tie_torque[:, tie]
            tie += 1
    left = load_nm - torques @ give
    for link in graph.links:
        if link.cut is not None:
            inside = spring_torque[:, link.cut.springs[0]] - spring_torque[:, link.cut.springs[-1]]
            left[:, link.stations[1]] += inside * link.coefficients[1]
    rigid = graph.rigid
    if len(rigid.links):
        torques[:, rigid.links] = left @ rigid.recovery.T
        torques[:, rigid.links[~rigid.known]] = np.nan
    if graph.split_open:
        open_links = [i for i, link in enumerate(graph.links) if link.stiffness_nm_rad is None]
        torques[:, open_links] = np.nan
    return torques
