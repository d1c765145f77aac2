"""The rigid-body motions: motions that twist no link, found from the structure and its known count."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.plan import spring_parts


@dataclass(frozen=True)
class RigidParts:
    """What can turn as one piece.

    part            for each node the number of its part of the spring graph
    free            numbers of the parts without a tie
    conditions      (torque links, free parts) sum of each link's coefficients over each free part
    """

    part: list[int]
    free: list[int]
    conditions: Floats


def rigid_parts(network: Network) -> RigidParts:
    """Find the parts that springs hold together and what the torque links ask of their angles."""
    part = spring_parts(network)
    tied = {part[node] for node in network.tie_node.tolist()}
    free = [number for number in dict.fromkeys(part) if number not in tied]
    column = {number: place for place, number in enumerate(free)}
    conditions = np.zeros((len(network.torque_links), len(free)))
    for row, link in zip(conditions, network.torque_links, strict=True):
        for node, coefficient in zip(link.nodes, link.coefficients, strict=True):
            if part[node] in column:
                row[column[part[node]]] += coefficient
    return RigidParts(part, free, conditions)


def rigid_basis(parts: RigidParts, count: int) -> tuple[Floats, list[int]]:
    """Return `count` rigid motions (free parts, count) [rad] and the places of the parts that choose them.

    Elimination with full pivoting, stopped at the rank that the known count of motions says.
    """
    left, size = parts.conditions.copy(), len(parts.free)
    dependent: list[int] = []
    rows: list[int] = []
    for _ in range(size - count):
        candidates = np.abs(left)
        candidates[rows] = 0.0
        row, column = np.unravel_index(int(np.argmax(candidates)), left.shape)
        left[row] /= left[row, column]
        for other in range(len(left)):
            if other != row:
                left[other] -= left[other, column] * left[row]
        rows.append(int(row))
        dependent.append(int(column))
    chosen = [place for place in range(size) if place not in dependent]
    basis = np.zeros((size, len(chosen)))
    basis[chosen, range(len(chosen))] = 1.0
    basis[dependent] = -left[np.ix_(rows, chosen)]
    return basis, chosen


def rigid_motions(network: Network) -> Floats:
    """Return a basis of the rigid-body motions as referred angles [rad], (motions, nodes)."""
    parts = rigid_parts(network)
    basis, _ = rigid_basis(parts, network.rigid_motions)
    still = np.zeros((1, basis.shape[1]))
    place = {number: row for row, number in enumerate(parts.free)}
    rows = [place.get(number, len(parts.free)) for number in parts.part]
    motions: Floats = np.concatenate([basis, still])[rows].T
    return motions
