"""Natural frequencies of many variants of one network at once, by stacked singular value decompositions.

Every variant has the same graph; only stiffnesses and inertias differ. Its factored matrix B = C^½ A M^-½ is
laid on a stack, and one call gives the singular values of all of them. Massless nodes are condensed by the
star-mesh transformation with arrays over the variants. Networks with rigid torque links, or with torque links
on massless nodes, are solved one by one.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import permutations

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.solve.modes import natural_frequencies
from quillshaft.solve.plan import plan_elimination
from quillshaft.study.inputs import VariedNetwork

Weights = list[dict[int, Floats]]


def variant_frequencies(varied: VariedNetwork, factors: Floats) -> Floats:
    """Elastic natural frequencies [rad/s] (variants, modes), rising, for factors (variants, inputs) on the inputs.

    Raises what `natural_modes` raises.
    """
    spring = varied.network.spring_nm_rad * factors[:, varied.spring_input]
    tie = varied.network.tie_nm_rad * factors[:, varied.tie_input]
    link = np.where(varied.link_input >= 0, factors[:, varied.link_input], 1.0)
    inertia = factors[:, varied.part_input] @ varied.part_inertia
    if _stackable(varied.network):
        return _stacked(varied.network, spring, tie, link, inertia)
    return _one_by_one(varied.network, spring, tie, link, inertia)


def _stackable(network: Network) -> bool:
    return all(
        link.compliance_rad_per_nm > 0 and network.inertia_kgm2[list(link.nodes)].all() for link in network.torque_links
    )


def _one_by_one(network: Network, spring: Floats, tie: Floats, link: Floats, inertia: Floats) -> Floats:
    plan = plan_elimination(network)
    rows = []
    for row in range(len(inertia)):
        torque_links = tuple(
            replace(item, compliance_rad_per_nm=item.compliance_rad_per_nm / float(factor))
            for item, factor in zip(network.torque_links, link[row], strict=True)
        )
        variant = replace(
            network,
            spring_nm_rad=spring[row],
            tie_nm_rad=tie[row],
            inertia_kgm2=inertia[row],
            torque_links=torque_links,
        )
        rows.append(natural_frequencies(variant, plan))
    return np.array(rows)


@dataclass(frozen=True)
class _Springs:
    """Springs and ties of every variant: where they stand, and (variants, …) stiffnesses [N·m/rad]."""

    ends: Ints
    spring: Floats
    tie_node: Ints
    tie: Floats


def _stacked(network: Network, spring: Floats, tie: Floats, link: Floats, inertia: Floats) -> Floats:
    held = _Springs(network.spring_ends, spring, network.tie_node, tie)
    massless = np.flatnonzero(network.inertia_kgm2 == 0).tolist()
    if massless:
        held = _condense(network, massless, spring, tie)
    kept = np.flatnonzero(network.inertia_kgm2 > 0)
    modes = len(kept) - network.rigid_motions
    if modes <= 0:
        return np.zeros((len(inertia), 0))
    matrix = _matrices(network, held, link, inertia, kept[_leaves_first(held.ends, kept)])
    omega = np.linalg.svd(matrix, compute_uv=False)
    return np.asarray(omega[:, :modes][:, ::-1])


def _leaves_first(ends: Ints, kept: Ints) -> Ints:
    """Order of the kept nodes, leaves before the root: a tree's matrix is upper triangular then, a chain's bidiagonal.

    The reduction of such a matrix costs the decomposition least.
    """
    place = {node: position for position, node in enumerate(kept.tolist())}
    around: list[list[int]] = [[] for _ in place]
    for a, b in ends.tolist():
        around[place[a]].append(place[b])
        around[place[b]].append(place[a])
    order: list[int] = []
    seen: set[int] = set()
    for root in sorted(range(len(place)), key=lambda node: len(around[node])):
        queue = [root] if root not in seen else []
        seen.update(queue)
        for node in queue:
            fresh = [other for other in dict.fromkeys(around[node]) if other not in seen]
            seen.update(fresh)
            queue += fresh
        order += queue
    return np.array(order[::-1], dtype=np.intp)


def _matrices(network: Network, held: _Springs, link: Floats, inertia: Floats, kept: Ints) -> Floats:
    """C^½ A M^-½ of every variant (variants, rows, kept nodes); rows of zeros make it at least square."""
    column = np.full(network.nodes, -1)
    column[kept] = np.arange(len(kept))
    springs, ties = len(held.ends), len(held.tie_node)
    rows = springs + ties + len(network.torque_links)
    matrix = np.zeros((len(inertia), max(rows, len(kept)), len(kept)))
    slack = 1.0 / np.sqrt(inertia[:, kept])
    first = np.argsort(column[held.ends].min(axis=1, initial=len(kept)), kind="stable")
    root = np.sqrt(held.spring[:, first])
    for end, sign in ((0, 1.0), (1, -1.0)):
        at = column[held.ends[first, end]]
        matrix[:, np.arange(springs), at] = root * slack[:, at] * sign
    at = column[held.tie_node]
    matrix[:, np.arange(springs, springs + ties), at] = np.sqrt(held.tie) * slack[:, at]
    for row, item in enumerate(network.torque_links, start=springs + ties):
        at = column[list(item.nodes)]
        stiff = np.sqrt(link[:, row - springs - ties] / item.compliance_rad_per_nm)
        matrix[:, row, at] = stiff[:, None] * np.array(item.coefficients) * slack[:, at]
    return matrix


def _condense(network: Network, massless: list[int], spring: Floats, tie: Floats) -> _Springs:
    """What stays when the massless nodes are eliminated, those with the fewest neighbours first."""
    weights: Weights = [{} for _ in range(network.nodes)]
    for (a, b), k in zip(network.spring_ends.tolist(), spring.T, strict=True):
        weights[a][b] = weights[b][a] = weights[a].get(b, 0.0) + k
    ties: dict[int, Floats] = {}
    for node, k in zip(network.tie_node.tolist(), tie.T, strict=True):
        ties[node] = ties.get(node, 0.0) + k
    left = set(massless)
    while left:
        node = min(left, key=lambda candidate: (len(weights[candidate]), candidate))
        left.remove(node)
        _open_star(node, weights, ties)
    gone = set(massless)
    pairs = [(a, b) for a in range(network.nodes) if a not in gone for b in weights[a] if a < b]
    return _Springs(
        np.array(pairs, dtype=np.intp).reshape(-1, 2),
        _columns([weights[a][b] for a, b in pairs], len(spring)),
        np.array(list(ties), dtype=np.intp),
        _columns(list(ties.values()), len(spring)),
    )


def _columns(arrays: list[Floats], rows: int) -> Floats:
    return np.stack(arrays, axis=1) if arrays else np.zeros((rows, 0))


def _open_star(node: int, weights: Weights, ties: dict[int, Floats]) -> None:
    """Replace the springs and the tie of one node by springs and ties between its neighbours, in every variant."""
    star, tie = weights[node], ties.pop(node, None)
    weights[node] = {}
    total = sum(star.values()) + (0.0 if tie is None else tie)
    for other, weight in star.items():
        del weights[other][node]
        if tie is not None:
            ties[other] = ties.get(other, 0.0) + weight * (tie / total)
    for other, third in permutations(star, 2):
        weights[other][third] = weights[other].get(third, 0.0) + star[other] * (star[third] / total)
