"""The network that damped modes are those of: rings of untuned dampers apart, and every damping referred."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.graph.network import Network
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.solve.damped_state import Damping

ROUNDING = 1e-12  # of a ring's inertia: what is left where a station holds nothing else


def link_place(link: GraphLink) -> tuple[str, list[int]] | None:
    """Where the networks keep an elastic link: "spring", "tie" or "torque", and its numbers there; None if rigid.

    A shaft of distributed inertia is in lengths; each has the whole's ratio of viscous coefficient to stiffness.
    """
    if link.cut is not None:
        return "spring", list(link.cut.springs)
    if link.slot in ("spring", "tie", "torque") and link.stiffness_nm_rad:
        return link.slot, [link.index]
    return None


def damped_network(graph: TorsionalGraph, zeta: float) -> tuple[Network, Damping]:
    """The nominal network with every ring of an untuned damper as a node of its own, and its damping, referred.

    A link that states no damping takes the loss factor 2ζ (common practice). Rings come last among the nodes,
    their dampers last among the springs, with a stiffness of 0.
    """
    network = graph.network
    rings = [ring for ring in graph.rings if ring.viscous_nms_rad]
    inertia, turning, ends = list(network.inertia_kgm2), list(network.turning), network.spring_ends.tolist()
    for ring in rings:
        node, square = int(graph.node[ring.station]), float(graph.scale[ring.station]) ** 2
        inertia[node] = max(inertia[node] - ring.counted_kgm2 * square, 0.0)
        if inertia[node] <= ROUNDING * ring.counted_kgm2 * square:
            inertia[node] = 0.0
        ends.append([node, len(inertia)])
        inertia.append(ring.inertia_kgm2 * square)
        turning.append(turning[node])
    damping = _damping(graph, zeta, len(rings))
    whole = replace(
        network,
        inertia_kgm2=np.array(inertia),
        turning=np.array(turning, dtype=bool),
        spring_ends=np.array(ends, dtype=np.intp).reshape(-1, 2),
        spring_nm_rad=np.concatenate([network.spring_nm_rad, np.zeros(len(rings))]),
        rigid_motions=network.rigid_motions + len(rings),
    )
    return whole, damping


def _damping(graph: TorsionalGraph, zeta: float, rings: int) -> Damping:
    network = graph.network
    sizes = {"spring": len(network.spring_nm_rad), "tie": len(network.tie_nm_rad), "torque": len(network.torque_links)}
    loss = {slot: np.zeros(size) for slot, size in sizes.items()}
    viscous = {slot: np.zeros(size) for slot, size in sizes.items()}
    for link in graph.links:
        place = link_place(link)
        if place is None:
            continue
        slot, indices = place
        loss[slot][indices] = 2.0 * zeta if link.loss_factor is None else link.loss_factor
        viscous[slot][indices] = link.viscous_nms_rad / link.torque_scale**2
        if link.cut is not None and link.stiffness_nm_rad:
            viscous[slot][indices] = link.viscous_nms_rad / link.stiffness_nm_rad * np.array(link.cut.referred_nm_rad)
    fluid = [
        (ring.viscous_nms_rad or 0.0) * float(graph.scale[ring.station]) ** 2
        for ring in graph.rings
        if ring.viscous_nms_rad
    ]
    ground = np.zeros(network.nodes + rings)
    if graph.viscous_nms_rad is not None:
        np.add.at(ground, graph.node, graph.viscous_nms_rad * graph.scale**2)
    return Damping(
        np.concatenate([loss["spring"], np.zeros(rings)]),
        loss["tie"],
        loss["torque"],
        np.concatenate([viscous["spring"], np.array(fluid)]),
        viscous["tie"],
        viscous["torque"],
        ground,
    )
