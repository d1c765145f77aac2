"""Networks of a train with changed values: one link or one inertia at a time, or part of the way to another."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import GraphLink, InertiaPart, TorsionalGraph

TABLE = {
    "shaft": "shafts",
    "coupling": "couplings",
    "mesh": "gears",
    "epicyclic": "gears",
    "belt": "belts",
    "tie": "ties",
    "damper": "dampers",
}
"""Table of the train file that holds a link of each kind."""


@dataclass(frozen=True)
class Corners:
    """The nominal network and the two at the corners of all tolerances."""

    nominal: Network
    soft_heavy: Network
    stiff_light: Network


def corners_of(screening: Screening) -> Corners:
    """The networks that a screening was judged by: the one place from which comparison and levers take them."""
    graph = screening.graph
    return Corners(graph.network, graph.soft_heavy, graph.stiff_light)


def element_of(link: GraphLink) -> str:
    """The element as the train file addresses it: "couplings.flex-block"."""
    return f"{TABLE[link.kind]}.{link.name}"


def stiffness_in(network: Network, link: GraphLink) -> float | None:
    """Referred stiffness [N·m/rad] of a link in a network; None where it is rigid or joins a node to itself."""
    if link.slot == "spring":
        return float(network.spring_nm_rad[link.index])
    if link.slot == "tie":
        return float(network.tie_nm_rad[link.index])
    if link.slot == "torque":
        compliance = network.torque_links[link.index].compliance_rad_per_nm
        return 1.0 / compliance if compliance > 0 else None
    return None


def with_stiffness(network: Network, link: GraphLink, factor: float) -> Network:
    """The network with one link's stiffness multiplied. Raises ValueError when the link is no spring in it."""
    if stiffness_in(network, link) is None:
        raise ValueError(f"{link.name} is no spring in this network (slot {link.slot})")
    if link.slot == "torque":
        links = list(network.torque_links)
        own = links[link.index]
        links[link.index] = replace(own, compliance_rad_per_nm=own.compliance_rad_per_nm / factor)
        return replace(network, torque_links=tuple(links))
    if link.slot == "spring":
        return replace(network, spring_nm_rad=_scaled(network.spring_nm_rad, link.index, factor))
    return replace(network, tie_nm_rad=_scaled(network.tie_nm_rad, link.index, factor))


def _scaled(values: Floats, index: int, factor: float) -> Floats:
    out = values.copy()
    out[index] *= factor
    return out


def part_in(graph: TorsionalGraph, part: InertiaPart, side: int) -> float:
    """Referred inertia [kg·m²] of one part on a side of its tolerance: -1 heavy, 0 nominal, +1 light."""
    deviation = 0.0 if side == 0 else part.tolerance[1] if side < 0 else part.tolerance[0]
    return float(part.inertia_kgm2 * graph.scale[part.station] ** 2 * (1.0 + deviation))


def with_inertia(network: Network, node: int, added_kgm2: float) -> Network:
    """The network with a referred inertia [kg·m²] added to one node."""
    inertia = network.inertia_kgm2.copy()
    inertia[node] += added_kgm2
    return replace(network, inertia_kgm2=inertia)


@dataclass(frozen=True)
class Blend:
    """A network part of the way between two trains, with the actual inertia [kg·m²] of each station (stations,)."""

    network: Network
    inertia_kgm2: Floats


def blend(base: Screening, case: Screening, share: float) -> Blend:
    """The case's train with every element that both have at a geometric mean of both values.

    At share 0 the common stations and links have the base's stiffness and inertia, at 1 the case's; what only
    one train has, or has as 0 or rigid, stays the case's.
    """
    graph, before = case.graph, base.graph
    network, there = corners_of(case).nominal, corners_of(base).nominal
    known = {link.name: link for link in before.links}
    for link in graph.links:
        other = known.get(link.name)
        new = stiffness_in(network, link)
        old = None if other is None else stiffness_in(there, other)
        if other is None or new is None or old is None:
            continue
        ratio = old * other.torque_scale**2 / (new * link.torque_scale**2)
        if ratio != 1.0:
            network = with_stiffness(network, link, ratio ** (1.0 - share))
    inertia = graph.inertia_kgm2.copy()
    for index, name in enumerate(graph.stations):
        own = before.inertia_kgm2[before.stations.index(name)] if name in before.stations else 0.0
        if own > 0 and inertia[index] > 0:
            inertia[index] *= (own / inertia[index]) ** (1.0 - share)
    nodal = np.zeros(network.nodes)
    np.add.at(nodal, graph.node, inertia * graph.scale**2)
    for inner in (list(link.cut.nodes) for link in graph.links if link.cut is not None):
        nodal[inner] = network.inertia_kgm2[inner]
    return Blend(replace(network, inertia_kgm2=nodal), inertia)
