"""Torques of every link of the train, rigid meshes included, from what the networks give."""

from __future__ import annotations

from typing import Any, TypeAlias

import numpy as np

from quillshaft.graph.network import Network
from quillshaft.graph.torsional import TorsionalGraph

Numbers: TypeAlias = np.ndarray[Any, Any]  # float64 or complex128


def link_torques(
    graph: TorsionalGraph,
    network: Network,
    spring_torque: Numbers,
    tie_torque: Numbers,
    torque_link_torque: Numbers,
    load_nm: Numbers,
) -> Numbers:
    """(cases, links) referred torque [N·m] of every link, at its first-named station; nan where it is open.

    spring_torque, tie_torque, torque_link_torque   (cases, …) as the network's solution gives them
    load_nm    (cases, stations) referred torque that each station has to pass on: inertia torque ω² J θ in a
               mode, the mean torque in statics

    A rigid mesh carries what is left over at the stations it joins. In a closed loop of rigid meshes the
    split is open (nan).
    """
    return link_torque_rows(graph, network, spring_torque.T, tie_torque.T, torque_link_torque.T, load_nm.T).T


def link_torque_rows(
    graph: TorsionalGraph,
    network: Network,
    spring_torque: Numbers,
    tie_torque: Numbers,
    torque_link_torque: Numbers,
    load_nm: Numbers,
) -> Numbers:
    """`link_torques` with the axes turned: (…, cases) in and (links, cases) out, quicker over many cases."""
    torques = np.zeros((len(graph.links), load_nm.shape[1]), dtype=np.result_type(spring_torque, load_nm))
    turning_ties = len(tie_torque) < sum(link.slot == "tie" for link in graph.links)
    tie = 0
    for position, link in enumerate(graph.links):
        if link.slot == "spring":
            torques[position] = spring_torque[link.index]
        elif link.cut is not None:
            torques[position] = spring_torque[link.cut.springs[0]]
        elif link.slot == "torque":
            torques[position] = torque_link_torque[link.index]
        elif link.slot == "tie" and not (turning_ties and network.turning[graph.node[link.stations[0]]]):
            torques[position] = tie_torque[tie]
            tie += 1
    if len(graph.rigid.links):
        _rigid_meshes(graph, torques, spring_torque, load_nm)
    if graph.split_open:
        open_links = [i for i, link in enumerate(graph.links) if link.stiffness_nm_rad is None]
        torques[open_links] = np.nan
    return torques


def _rigid_meshes(graph: TorsionalGraph, torques: Numbers, spring_torque: Numbers, load_nm: Numbers) -> None:
    """Put the torques of rigid meshes in: what the stations they join pass on and no other link takes."""
    rigid = graph.rigid
    left = {station: load_nm[station].copy() for station in np.unique(rigid.ends).tolist()}
    for position, link in enumerate(graph.links):
        for station, coefficient in zip(link.stations, link.coefficients, strict=True):
            if station in left and link.slot != "rigid":
                far = link.cut is not None and station == link.stations[1]
                own = spring_torque[link.cut.springs[-1]] if link.cut is not None and far else torques[position]
                left[station] -= coefficient * own
    for row, position in enumerate(rigid.links.tolist()):
        torques[position] = sum(rigid.recovery[row, station] * own for station, own in left.items())
    torques[rigid.links[~rigid.known]] = np.nan
