"""The factored matrix B whose singular values are the natural frequencies, never an assembled stiffness.

B = C^½ A M^-½ with one row for each spring, tie and elastic torque link; its right singular vectors are the
mode shapes times M^½. Massless nodes are condensed exactly: by the star-mesh transformation, whose weights
are sums and products of positive numbers, where no torque link touches them, and by an orthogonal projection
of the rows (QR) where one does. Rigid torque links are eliminated as constraints, on a massless node where
they have one. (Star-mesh: A. Rosen, "A new network theorem", Journal IEE 62, 1924, from memory.)
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import permutations

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass

ZERO_COEFFICIENT = 1e-12  # of a link's largest coefficient: what is left where exact fractions cancel


@dataclass(frozen=True)
class Factor:
    """The factored problem.

    matrix          (rows, coordinates) B; B v = ω u for each mode
    momentum        (coordinates, nodes) for a right singular vector v the row v @ momentum is M · angle
    elastic_modes   number of singular values that are not zero by structure
    """

    matrix: Floats
    momentum: Floats
    elastic_modes: int


def factorise(network: Network) -> Factor:
    """Return the factored matrix of a network; `elastic_modes` is counted, never found by a threshold."""
    if network.inertia_kgm2.all() and not any(_rigid(network)):
        return _plain(network)
    return _condensed(network)


def _rigid(network: Network) -> Iterator[bool]:
    return (link.compliance_rad_per_nm == 0 for link in network.torque_links)


def _plain(network: Network) -> Factor:
    root = np.sqrt(network.inertia_kgm2)
    rows = incidence(network)
    rows *= np.sqrt(_stiffness(network))[:, None]
    rows /= root
    return Factor(rows, np.diag(root), network.nodes - network.rigid_motions)


def incidence(network: Network) -> Floats:
    """Return the rows that make twists [rad] from angles [rad], (springs + ties + elastic torque links, nodes).

    A torque link's row holds its coefficients.
    """
    elastic = [link for link in network.torque_links if link.compliance_rad_per_nm > 0]
    springs, ties = len(network.spring_ends), len(network.tie_node)
    rows = np.zeros((springs + ties + len(elastic), network.nodes))
    if springs:
        number = np.arange(springs)
        rows[number, network.spring_ends[:, 0]] = 1.0
        rows[number, network.spring_ends[:, 1]] -= 1.0
    rows[np.arange(springs, springs + ties), network.tie_node] = 1.0
    for row, link in zip(rows[springs + ties :], elastic, strict=True):
        np.add.at(row, list(link.nodes), link.coefficients)
    return rows


def _stiffness(network: Network) -> Floats:
    compliances = [link.compliance_rad_per_nm for link in network.torque_links]
    elastic = 1.0 / np.array([compliance for compliance in compliances if compliance > 0])
    return np.concatenate([network.spring_nm_rad, network.tie_nm_rad, elastic])


def _condensed(network: Network) -> Factor:
    rows, kept = _mesh_rows(network)
    inertia = network.inertia_kgm2[kept]
    shape = _constraint_basis(_rigid_rows(network)[:, kept], inertia)
    moving = (inertia[:, None] * shape != 0).any(axis=0)
    reduced = rows @ shape
    if not moving.all():
        complete, _ = np.linalg.qr(reduced[:, ~moving], mode="complete")
        reduced = complete[:, np.count_nonzero(~moving) :].T @ reduced
    shape = shape[:, moving]
    lower = np.linalg.cholesky(shape.T @ (inertia[:, None] * shape))
    momentum = np.zeros((shape.shape[1], network.nodes))
    momentum[:, kept] = np.linalg.solve(lower, (inertia[:, None] * shape).T)
    matrix = np.linalg.solve(lower, reduced[:, moving].T).T
    return Factor(matrix, momentum, shape.shape[1] - network.rigid_motions)


def _rigid_rows(network: Network) -> Floats:
    rigid = [link for link in network.torque_links if link.compliance_rad_per_nm == 0]
    rows = np.zeros((len(rigid), network.nodes))
    for row, link in zip(rows, rigid, strict=True):
        np.add.at(row, list(link.nodes), link.coefficients)
    return rows


def _mesh_rows(network: Network) -> tuple[Floats, list[int]]:
    """Return the rows C^½ A after star-mesh condensation, and the nodes that are their columns."""
    touched = {node for link in network.torque_links for node in link.nodes}
    massless = [
        node for node, inertia in enumerate(network.inertia_kgm2.tolist()) if inertia == 0 and node not in touched
    ]
    weights, ties = _star_mesh(network, massless)
    gone = set(massless)
    kept = [node for node in range(network.nodes) if node not in gone]
    column = {node: number for number, node in enumerate(kept)}
    springs = [(a, b, weight) for a in kept for b, weight in weights[a].items() if a < b]
    tied = [(node, tie) for node, tie in ties.items() if node in column]
    elastic = [link for link in network.torque_links if link.compliance_rad_per_nm > 0]
    rows = np.zeros((len(springs) + len(tied) + len(elastic), len(kept)))
    for row, (a, b, weight) in zip(rows, springs, strict=False):
        row[column[a]], row[column[b]] = np.sqrt(weight), -np.sqrt(weight)
    for row, (node, tie) in zip(rows[len(springs) :], tied, strict=False):
        row[column[node]] = np.sqrt(tie)
    for row, link in zip(rows[len(springs) + len(tied) :], elastic, strict=True):
        coefficients = np.array(link.coefficients) / np.sqrt(link.compliance_rad_per_nm)
        np.add.at(row, [column[node] for node in link.nodes], coefficients)
    return rows, kept


def _star_mesh(network: Network, massless: list[int]) -> tuple[list[dict[int, float]], dict[int, float]]:
    """Eliminate massless nodes, those with the fewest neighbours first; return weights and ties that stay."""
    weights: list[dict[int, float]] = [{} for _ in range(network.nodes)]
    for (a, b), k in zip(network.spring_ends.tolist(), network.spring_nm_rad.tolist(), strict=True):
        if a != b:
            weights[a][b] = weights[b][a] = weights[a].get(b, 0.0) + k
    ties: dict[int, float] = {}
    for node, k in zip(network.tie_node.tolist(), network.tie_nm_rad.tolist(), strict=True):
        ties[node] = ties.get(node, 0.0) + k
    left = set(massless)
    while left:
        node = min(left, key=lambda candidate: (len(weights[candidate]), candidate))
        left.remove(node)
        _open_star(node, weights, ties)
    return weights, ties


def _open_star(node: int, weights: list[dict[int, float]], ties: dict[int, float]) -> None:
    """Replace the springs and the tie of one node by a mesh of springs and ties between its neighbours."""
    star, tie = weights[node], ties.pop(node, 0.0)
    weights[node] = {}
    total = tie + sum(star.values())
    for other, weight in star.items():
        del weights[other][node]
        if tie:
            ties[other] = ties.get(other, 0.0) + weight * (tie / total)
    for other, third in permutations(star, 2):
        weights[other][third] = weights[other].get(third, 0.0) + star[other] * (star[third] / total)


def _constraint_basis(constraints: Floats, inertia: Floats) -> Floats:
    """Return the angles (nodes, free coordinates) that satisfy the rigid links; each link frees one node.

    Massless nodes come first as the dependent node, then the largest coefficient.
    """
    left = constraints.copy()
    dependent: list[int] = []
    for row in range(len(left)):
        size = np.abs(left[row])
        size[size <= ZERO_COEFFICIENT * np.abs(constraints[row]).max()] = 0.0
        massless = np.where(inertia == 0, size, 0.0)
        pivot = int(np.argmax(massless if massless.any() else size))
        left[row] = np.where(size > 0, left[row], 0.0) / left[row, pivot]
        for other in range(len(left)):
            if other != row:
                left[other] -= left[other, pivot] * left[row]
                left[other, pivot] = 0.0
        dependent.append(pivot)
    free = [node for node in range(len(inertia)) if node not in dependent]
    basis = np.zeros((len(inertia), len(free)))
    basis[free, range(len(free))] = 1.0
    basis[dependent] = -left[:, free]
    return basis
