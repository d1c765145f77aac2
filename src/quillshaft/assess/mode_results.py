"""Modes of the network as modes of the train: shapes at each station, shares by element, torques by link."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np

from quillshaft.assess.link_torques import link_torques
from quillshaft.assess.results import Flag, ModeNode, ModeResult, Proof
from quillshaft.graph.cut_links import chain_angles, inside_name
from quillshaft.graph.network import Bools, Floats, Network
from quillshaft.graph.torsional import InertiaPart, TorsionalGraph
from quillshaft.solve.modes import Modes
from quillshaft.train.model import Train

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
        elif link.cut is not None:
            shares[:, position] = modes.spring_share[:, list(link.cut.springs)].sum(axis=1)
    return shares


def _kinetic_in_shafts(graph: TorsionalGraph, modes: Modes) -> dict[str, Floats]:
    """(modes,) kinetic energy shares inside shafts of distributed inertia, by the name they are listed under."""
    return {
        inside_name(link): modes.node_share[:, list(link.cut.nodes)].sum(axis=1)
        for link in graph.links
        if link.cut is not None
    }


def _kinetic_by_station(graph: TorsionalGraph, modes: Modes) -> Floats:
    """(modes, stations) kinetic energy shares: a merged node's share goes by inertia to its stations."""
    inertia = graph.inertia_kgm2 * graph.scale**2
    whole = graph.network.inertia_kgm2[graph.node]
    part = np.divide(inertia, whole, out=np.zeros_like(inertia), where=whole > 0)
    shares = np.asarray(modes.node_share[:, graph.node] * part)
    for item in graph.parts:
        if item.counted_at is not None and graph.inertia_kgm2[item.station] > 0:
            moved = shares[:, item.station] * (item.inertia_kgm2 / graph.inertia_kgm2[item.station])
            shares[:, item.counted_at] += moved
            shares[:, item.station] -= moved
    return shares


def part_energy(graph: TorsionalGraph, mode: ModeResult, part: InertiaPart) -> float:
    """Share of a mode's kinetic energy that one contribution to a station's inertia holds."""
    if all(item.counted_at is None for item in graph.parts):
        whole = float(graph.inertia_kgm2[part.station])
        share = part.inertia_kgm2 / whole if whole > 0 else 0.0
        return float(mode.kinetic_energy[graph.stations[part.station]] * share)
    squares = np.array([mode.shape[name] ** 2 for name in graph.stations])
    at_stations = sum(mode.kinetic_energy[name] for name in graph.stations)
    return float(at_stations * part.inertia_kgm2 * squares[part.station] / (graph.inertia_kgm2 @ squares))


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


def _standing_in_shafts(graph: TorsionalGraph, angle: Floats) -> tuple[ModeNode, ...]:
    """Standing points inside shafts of distributed inertia: by their share of the flexibility."""
    nodes, largest = [], float(np.max(np.abs(angle)))
    for link in graph.links:
        if link.cut is None:
            continue
        chain = chain_angles(link, graph.node, angle)
        flexibility = 1.0 / np.array(link.cut.referred_nm_rad)
        along = np.concatenate([[0.0], np.cumsum(flexibility)]) / flexibility.sum()
        for number, (a, b) in enumerate(pairwise(chain.tolist())):
            if a * b < 0 and max(abs(a), abs(b)) > STILL * largest:
                share = abs(a) / (abs(a) + abs(b))
                nodes.append(ModeNode(link.name, float(along[number] + share * (along[number + 1] - along[number]))))
    return tuple(nodes)


def viscous_ratios(graph: TorsionalGraph, modes: Modes, strain: Floats) -> Floats:
    """(modes,) damping ratios by viscous damping of links and to ground: Σ c · twist² / (2 ω Σ J · angle²).

    First order in the damping, with the undamped shapes (Rayleigh, Theory of Sound, art. 102, from memory); for a
    link it is half of c ω / k times its share of the strain energy, `strain` (modes, links).
    """
    omega, twice = modes.omega_rad_s, np.zeros(len(modes.omega_rad_s))
    for position, link in enumerate(graph.links):
        if link.viscous_nms_rad and link.stiffness_nm_rad:
            twice += omega * link.viscous_nms_rad / link.stiffness_nm_rad * strain[:, position]
    if graph.viscous_nms_rad is not None:
        size = modes.angle[:, graph.node] ** 2
        for members in shared_clusters(modes):
            size[members] = np.mean(size[members], axis=0)
        twice += size @ (graph.viscous_nms_rad * graph.scale**2) / np.where(omega > 0, omega, 1.0)
    return twice / 2.0


def growth_flags(train: Train, modes: tuple[ModeResult, ...]) -> tuple[Flag, ...]:
    """A question about every station whose negative damping makes a mode's damping ratio negative."""
    growing = [mode for mode in modes if mode.damping_ratio < 0]
    if not growing:
        return ()
    listed = ", ".join(f"{mode.mode} ({mode.frequency_hz:.2f} Hz)" for mode in growing[:6])
    verb = "grows" if len(growing) == 1 else "grow"
    text = f"negative damping: mode {listed} {verb} by the first-order estimate; `quillshaft damped` works it out"
    return tuple(Flag(f"stations.{item.name}", text) for item in train.stations if (item.viscous_nms_rad or 0.0) < 0)


def mode_results(
    graph: TorsionalGraph, modes: Modes, low_hz: Floats, high_hz: Floats, low_zeta: float
) -> tuple[ModeResult, ...]:
    """One record for each mode; `low_hz` and `high_hz` (modes,) are the bounds over the tolerances."""
    strain, kinetic = _strain_by_link(graph, modes), _kinetic_by_station(graph, modes)
    torques = mode_torques(graph, graph.network, modes)
    referred = modes.angle[:, graph.node]
    loss = np.array([2 * low_zeta if link.loss_factor is None else link.loss_factor for link in graph.links])
    names = [link.name for link in graph.links]
    viscous = viscous_ratios(graph, modes, strain)
    inside = _kinetic_in_shafts(graph, modes)
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
                float(strain[index] @ loss) / 2.0 + float(viscous[index]),
                dict(zip(graph.stations, actual.tolist(), strict=True)),
                dict(zip(graph.stations, shape.tolist(), strict=True)),
                dict(zip(names, strain[index].tolist(), strict=True)),
                dict(zip(graph.stations, kinetic[index].tolist(), strict=True))
                | {name: float(shares[index]) for name, shares in inside.items()},
                {
                    name: None if math.isnan(torque) else torque
                    for name, torque in zip(names, torques[index].tolist(), strict=True)
                },
                (*_standing_points(graph, shape), *_standing_in_shafts(graph, modes.angle[index])),
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
