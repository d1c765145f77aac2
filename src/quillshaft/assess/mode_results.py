"""Modes of the network as modes of the train: shapes at each station, shares by element, torques by link."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.link_torques import link_torques
from quillshaft.assess.results import ModeNode, ModeResult, Proof
from quillshaft.graph.network import Bools, Floats, Network
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes

SAME = 1e-6
STILL = 1e-9


def shared_clusters(modes: Modes) -> list[Bools]:
    """Masks (modes,) of the clusters of more than one mode."""
    masks = [modes.cluster == first for first in sorted(set(modes.cluster.tolist()))]
    return [mask for mask in masks if mask.sum() > 1]


def moved_angles(graph: TorsionalGraph, modes: Modes) -> Floats:
    """(modes, stations) size of the referred angle at each station, over the largest of the mode.

    In a cluster it is the root of the sum of squares over the cluster's inertia-orthonormal basis, which does
    not depend on the basis chosen.
    """
    size = np.abs(modes.angle)
    for members in shared_clusters(modes):
        size[members] = np.sqrt(np.sum(size[members] ** 2, axis=0))
    largest = np.max(size, axis=1, initial=0.0)
    return np.asarray(size[:, graph.node] / largest[:, None])


def mode_torques(graph: TorsionalGraph, network: Network, modes: Modes) -> Floats:
    """(modes, links) referred torque of every link over the largest of the mode; nan where it is open.

    In a cluster, the root of the sum of squares over its basis, as in `moved_angles`.
    """
    inertia = graph.inertia_kgm2 * graph.scale**2
    load = modes.omega_rad_s[:, None] ** 2 * inertia * modes.angle[:, graph.node]
    springs, ties = network.spring_nm_rad * modes.spring_twist, network.tie_nm_rad * modes.tie_twist
    torques = link_torques(graph, network, springs, ties, modes.link_torque, load)
    for members in shared_clusters(modes):
        torques[members] = np.sqrt(np.sum(torques[members] ** 2, axis=0))
    largest = np.nanmax(np.abs(np.nan_to_num(torques)), axis=1, initial=0.0)
    return torques / np.where(largest > 0, largest, 1.0)[:, None]


def _strain_by_link(graph: TorsionalGraph, modes: Modes) -> Floats:
    """(modes, links) strain energy shares; rigid links hold none."""
    shares = np.zeros((len(modes.omega_rad_s), len(graph.links)))
    for position, link in enumerate(graph.links):
        if link.slot == "spring":
            shares[:, position] = modes.spring_share[:, link.index]
        elif link.slot == "tie":
            shares[:, position] = modes.tie_share[:, link.index]
        elif link.slot == "torque":
            shares[:, position] = modes.link_share[:, link.index]
    return shares


def _kinetic_by_station(graph: TorsionalGraph, modes: Modes) -> Floats:
    """(modes, stations) kinetic energy shares: a merged node's share goes by inertia to its stations."""
    inertia = graph.inertia_kgm2 * graph.scale**2
    whole = graph.network.inertia_kgm2[graph.node]
    part = np.divide(inertia, whole, out=np.zeros_like(inertia), where=whole > 0)
    return modes.node_share[:, graph.node] * part


def _shape(angles: Floats) -> Floats:
    """Scaled so that the largest magnitude is 1, positive at the first within 1e-6 of it."""
    size = np.abs(angles)
    first = int(np.argmax(size >= size.max() * (1.0 - SAME)))
    return np.asarray(angles / angles[first])


def _standing_points(graph: TorsionalGraph, referred: Floats) -> tuple[ModeNode, ...]:
    nodes = []
    for link in graph.links:
        if len(link.stations) != 2 or link.slot not in ("spring", "rigid", "slack"):
            continue
        a, b = referred[link.stations[0]], referred[link.stations[1]]
        if a * b < 0 and min(abs(a), abs(b)) > STILL:
            nodes.append(ModeNode(link.name, float(abs(a) / (abs(a) + abs(b)))))
    return tuple(nodes)


def mode_results(
    graph: TorsionalGraph, modes: Modes, low_hz: Floats, high_hz: Floats, low_zeta: float
) -> tuple[ModeResult, ...]:
    """One record for each mode; `low_hz` and `high_hz` (modes,) are the bounds over the tolerances."""
    strain, kinetic = _strain_by_link(graph, modes), _kinetic_by_station(graph, modes)
    torques = mode_torques(graph, graph.network, modes)
    referred = modes.angle[:, graph.node]
    loss = np.array([2 * low_zeta if link.loss_factor is None else link.loss_factor for link in graph.links])
    names = [link.name for link in graph.links]
    results = []
    for index, omega in enumerate(modes.omega_rad_s.tolist()):
        actual = _shape(referred[index] * graph.scale)
        shape = _shape(referred[index])
        members = np.flatnonzero(modes.cluster == modes.cluster[index]) + 1
        results.append(
            ModeResult(
                index + 1,
                omega / (2 * math.pi),
                omega,
                omega * 30 / math.pi,
                float(strain[index] @ loss) / 2.0,
                dict(zip(graph.stations, actual.tolist(), strict=True)),
                dict(zip(graph.stations, shape.tolist(), strict=True)),
                dict(zip(names, strain[index].tolist(), strict=True)),
                dict(zip(graph.stations, kinetic[index].tolist(), strict=True)),
                {
                    name: None if math.isnan(torque) else torque
                    for name, torque in zip(names, torques[index].tolist(), strict=True)
                },
                _standing_points(graph, shape),
                (float(low_hz[index]), float(high_hz[index])),
                Proof(
                    int(modes.below[index]),
                    int(modes.above[index]),
                    float(modes.relative_width[index]),
                    bool(modes.proven[index]),
                ),
                float(modes.residual[index]),
                tuple(members.tolist()),
            )
        )
    return tuple(results)
