"""How well a source can drive a mode: work per unit of transmitted torque, 1 at the best place."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.mode_results import mode_torques, moved_angles, shared_clusters
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes
from quillshaft.sources.line import Source


def excitabilities(graph: TorsionalGraph, network: Network, modes: Modes, sources: tuple[Source, ...]) -> Floats:
    """(sources, modes), each 0 to 1; nan where a rigid loop leaves the torque at the source open.

    A point: |referred angle| there over the largest of the mode. Several points: |Σ w θ exp(j n φ)| over the sum
    of their weights w (1 where the action gives none) and that largest angle (phase vectors: Den Hartog,
    Mechanical Vibrations, ch. 5). A shaft line: its most moved station. Inside a link: its torque over the
    largest link torque.
    """
    size = moved_angles(graph, modes)
    torques = np.abs(mode_torques(graph, network, modes))
    position = {link.name: index for index, link in enumerate(graph.links)}
    rows = [_row(source, graph, modes, size, torques, position) for source in sources]
    return np.array(rows).reshape(len(sources), len(modes.omega_rad_s))


def _row(
    source: Source,
    graph: TorsionalGraph,
    modes: Modes,
    size: Floats,
    torques: Floats,
    position: dict[str, int],
) -> Floats:
    action = source.action
    if action.kind == "link":
        return np.asarray(torques[:, position[action.link or ""]])
    stations = list(action.stations)
    if action.kind == "line":
        return np.asarray(size[:, stations].max(axis=1))
    if len(stations) == 1:
        return np.asarray(size[:, stations[0]])
    weights = np.array(action.weights) if action.weights else np.ones(len(stations))
    return _phase_sum(modes, graph, stations, np.array(action.phases_rad), weights)


def _phase_sum(modes: Modes, graph: TorsionalGraph, stations: list[int], phases: Floats, weights: Floats) -> Floats:
    angle = modes.angle[:, graph.node]
    total = np.abs(angle[:, stations] @ (weights * np.exp(1j * phases)))
    largest = np.max(np.abs(angle), axis=1)
    for members in shared_clusters(modes):
        total[members] = np.sqrt(np.sum(total[members] ** 2))
        largest[members] = np.max(np.sqrt(np.sum(angle[members] ** 2, axis=0)))
    return np.asarray(total / (max(float(np.sum(weights)), 1e-300) * largest))
