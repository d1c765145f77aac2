"""Shafts of distributed inertia in the network: springs and nodes inside one link of the train."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from itertools import pairwise

import numpy as np

from quillshaft.elements.shaft import cut_shaft
from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.graph.torsional import CutLink, GraphLink
from quillshaft.train.basic_model import Tolerance
from quillshaft.train.model import Train
from quillshaft.train.shaft_model import Shaft


def with_cuts(
    links: tuple[GraphLink, ...], train: Train, nodes: int, ratios: tuple[Fraction, ...]
) -> tuple[GraphLink, ...]:
    """The links with the places of every cut shaft's springs and inner nodes: after those of all other links.

    `nodes` is the number of nodes that hold stations.
    """
    shafts = {shaft.name: shaft for shaft in train.shafts if shaft.own_inertia == "distributed"}
    if not shafts:
        return links
    spring, node = sum(link.slot == "spring" for link in links), nodes
    out = []
    for link in links:
        if link.slot != "cut":
            out.append(link)
            continue
        cut = _cut(link, shafts[link.name], spring, node, ratios)
        spring, node = spring + len(cut.springs), node + len(cut.nodes)
        out.append(replace(link, cut=cut, ratio_text=f"in {len(cut.springs)} lengths"))
    return tuple(out)


def _cut(link: GraphLink, shaft: Shaft, spring: int, node: int, ratios: tuple[Fraction, ...]) -> CutLink:
    made = cut_shaft(shaft)
    square = (float(abs(ratios[link.stations[0]])) or 1.0) ** 2
    inner = made.inertia_kgm2[1:-1]
    return CutLink(
        tuple(range(spring, spring + len(made.stiffness_nm_rad))),
        tuple(range(node, node + len(inner))),
        tuple(value * square for value in made.stiffness_nm_rad),
        tuple(value * square for value in inner),
        shaft.inertia_tolerance,
    )


def inner_nodes(links: tuple[GraphLink, ...]) -> list[tuple[int, int]]:
    """(inner node, first station of its shaft) in the order of the nodes."""
    return [(node, link.stations[0]) for link in links if link.cut is not None for node in link.cut.nodes]


def add_cuts(network: Network, links: tuple[GraphLink, ...], node: Ints, side: int) -> Network:
    """The network with the springs and inner inertias of cut shafts, on a side of their tolerances.

    side +1 is soft and heavy, −1 stiff and light. The network's `inertia_kgm2` has zeros at the inner nodes.
    """
    inertia = network.inertia_kgm2.copy()
    ends, stiffness = [network.spring_ends], [network.spring_nm_rad]
    for link in links:
        if link.cut is None:
            continue
        soft, heavy = _deviations(link.tolerance, link.cut.inertia_tolerance, side)
        chain = [int(node[link.stations[0]]), *link.cut.nodes, int(node[link.stations[1]])]
        ends.append(np.array(list(pairwise(chain)), dtype=np.intp))
        stiffness.append(np.array(link.cut.referred_nm_rad) * (1.0 + soft))
        inertia[list(link.cut.nodes)] = np.array(link.cut.referred_kgm2) * (1.0 + heavy)
    if len(ends) == 1:
        return network
    return replace(
        network,
        inertia_kgm2=inertia,
        spring_ends=np.concatenate(ends),
        spring_nm_rad=np.concatenate(stiffness),
    )


def _deviations(stiffness: Tolerance, inertia: Tolerance, side: int) -> tuple[float, float]:
    if side == 0:
        return 0.0, 0.0
    return (stiffness[0], inertia[1]) if side > 0 else (stiffness[1], inertia[0])


def inside_name(link: GraphLink) -> str:
    """How the inertia inside a shaft is listed beside the stations."""
    return f"{link.name} (distributed)"


def chain_angles(link: GraphLink, node: Ints, angle: Floats) -> Floats:
    """(..., lengths + 1) referred angles along a cut shaft from its first station; `angle` is (..., nodes)."""
    assert link.cut is not None
    chain = [int(node[link.stations[0]]), *link.cut.nodes, int(node[link.stations[1]])]
    return np.asarray(angle[..., chain])
