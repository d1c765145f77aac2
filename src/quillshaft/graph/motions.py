"""Rigid-body motions and independent rows, exactly: fractions, never a threshold."""

from __future__ import annotations

from fractions import Fraction

import numpy as np

from quillshaft.graph.network import Ints, Network

Terms = dict[int, Fraction]


def independent_rows(rows: list[Terms]) -> list[bool]:
    """For each row in turn, whether it adds to the rank of those before it."""
    pivots: dict[int, Terms] = {}
    kept = []
    for row in rows:
        left = _reduced(row, pivots)
        kept.append(bool(left))
        if left:
            pivot = min(left)
            pivots[pivot] = {key: value / left[pivot] for key, value in left.items()}
    return kept


def _reduced(row: Terms, pivots: dict[int, Terms]) -> Terms:
    left = dict(row)
    while True:
        shared = next((key for key in sorted(left) if key in pivots and left[key]), None)
        if shared is None:
            return {key: value for key, value in left.items() if value}
        weight = left[shared]
        for key, value in pivots[shared].items():
            left[key] = left.get(key, Fraction(0)) - weight * value
        left = {key: value for key, value in left.items() if value}


def _clusters(nodes: int, spring_ends: Ints, tie_node: Ints) -> tuple[list[int], set[int]]:
    """Cluster of each node joined by springs, and the clusters that a tie holds to ground."""
    root = list(range(nodes))

    def find(a: int) -> int:
        while root[a] != a:
            root[a] = root[root[a]]
            a = root[a]
        return a

    for a, b in spring_ends.tolist():
        root[find(a)] = find(b)
    return [find(a) for a in range(nodes)], {find(a) for a in tie_node.tolist()}


def _cluster_rows(cluster: list[int], held: set[int], rows: list[Terms]) -> list[Terms]:
    out: list[Terms] = []
    for row in rows:
        terms: Terms = {}
        for node, value in row.items():
            if cluster[node] not in held:
                terms[cluster[node]] = terms.get(cluster[node], Fraction(0)) + value
        out.append({key: value for key, value in terms.items() if value})
    return out


def rigid_motion_count(nodes: int, spring_ends: Ints, tie_node: Ints, rows: list[Terms]) -> int:
    """Number of motions that twist no link: free clusters less the independent torque links over them."""
    cluster, held = _clusters(nodes, spring_ends, tie_node)
    free = len(set(cluster) - held)
    return free - sum(independent_rows(_cluster_rows(cluster, held, rows)))


def held_by_nothing(network: Network, rows: list[Terms]) -> set[int]:
    """Nodes that neither inertia nor stiffness holds; `rows` are the exact torque links.

    A motion that twists no link and moves no inertia has no frequency. It exists exactly when holding every
    node that has inertia still leaves a rigid-body motion.
    """
    massive = np.flatnonzero(network.inertia_kgm2 > 0)
    cluster, held = _clusters(network.nodes, network.spring_ends, np.concatenate([network.tie_node, massive]))
    free = set(cluster) - held
    if len(free) == sum(independent_rows(_cluster_rows(cluster, held, rows))):
        return set()
    return {node for node in range(network.nodes) if cluster[node] in free}
