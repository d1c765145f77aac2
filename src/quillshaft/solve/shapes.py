"""Mode shapes refined on the elimination: inverse iteration, groups of neighbouring modes, energies.

One step of inverse iteration takes the angles and twists of a mode from the elimination, where a twist is
never the difference of two nearly equal angles; the frequency is then a quotient of two sums of positive
numbers (Rayleigh's quotient; G. H. Golub and C. F. Van Loan, Matrix Computations, sec. 8.2, from memory).
"""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Bools, Floats, Network
from quillshaft.solve.plan import Plan
from quillshaft.solve.precise import put, solve_at
from quillshaft.solve.substitution import Solution

SHIFT = 3e-15  # relative distance of the shift from the mode in ω²
ATTEMPTS = 12
GROUP_SHIFT = 1e-12  # the same for a group of neighbouring modes, beside its spread
GROUP_SPREADS = 30.0
EQUAL_GAP = 1e-13  # relative gap in ω² below which shapes count as one subspace
SIGNIFICANT_ANGLE = 1e-6  # of the largest angle in the subspace


def refine(network: Network, plan: Plan, momentum: Floats, omega2: Floats) -> Solution:
    """Return one step of inverse iteration for every mode at once.

    momentum (nodes, m) is inertia times angle of the modes found so far and omega2 (m,) their squared
    frequencies [rad²/s²]. A shift that hits a zero pivot is moved on. Raises ArithmeticError when no shift
    gives finite angles.
    """
    shift = SHIFT
    solution = solve_at(network, plan, omega2 * (1 + shift), momentum)
    for _ in range(ATTEMPTS):
        finite = _finite(solution)
        if finite.all():
            return solution
        shift *= 2
        again = np.flatnonzero(~finite)
        put(solution, again, solve_at(network, plan, omega2[again] * (1 + shift), momentum[:, again]))
    raise ArithmeticError(f"no finite shape near ω² = {omega2[~finite]}")


def _finite(solution: Solution) -> Bools:
    with np.errstate(invalid="ignore"):
        total = solution.angle.sum(axis=0) + solution.spring_twist.sum(axis=0)
        finite: Bools = np.isfinite(total + solution.link_torque.sum(axis=0))
    return finite


def strain_rows(network: Network, solution: Solution) -> Floats:
    """Return √(2 · strain energy) of every spring, tie and torque link, (elements, m) [√(N·m)], with sign."""
    compliances = np.array([link.compliance_rad_per_nm for link in network.torque_links])
    return np.concatenate(
        [
            np.sqrt(network.spring_nm_rad)[:, None] * solution.spring_twist,
            np.sqrt(network.tie_nm_rad)[:, None] * solution.tie_twist,
            np.sqrt(compliances)[:, None] * solution.link_torque,
        ]
    )


def kinetic_rows(network: Network, solution: Solution) -> Floats:
    """Return √J · angle of every node, (nodes, m) [√(kg·m²)·rad], with sign."""
    return np.sqrt(network.inertia_kgm2)[:, None] * solution.angle


def combine(solution: Solution, factors: Floats) -> Solution:
    """Return the shapes times factors: (m,) one for each shape, or (m, m) linear combinations in columns."""

    def times(rows: Floats) -> Floats:
        return rows * factors if factors.ndim == 1 else rows @ factors

    return Solution(
        times(solution.angle),
        times(solution.spring_twist),
        times(solution.tie_twist),
        times(solution.link_torque),
    )


def refine_group(network: Network, plan: Plan, momentum: Floats, omega2: Floats) -> tuple[Floats, Solution]:
    """Refine neighbouring modes together: squared frequencies (c,) [rad²/s²] and M-orthonormal shapes.

    Two steps of inverse iteration at one shift, far enough from all of them that they stay independent, then
    the Ritz values and vectors of their subspace. Shapes of equal frequency are not unique; their basis is
    chosen by elimination in node order: the second shape is zero at the first node that moves, the third
    there and at the next node that moves among those left, and so on.
    """
    spread = omega2[-1] / omega2[0] - 1.0
    shift = np.full(len(omega2), omega2.mean() * (1 + GROUP_SPREADS * spread + GROUP_SHIFT))
    solution = _orthonormal(network, solve_at(network, plan, shift, momentum))
    again = network.inertia_kgm2[:, None] * solution.angle
    solution = _orthonormal(network, solve_at(network, plan, shift, again))
    strain = strain_rows(network, solution)
    ritz, vectors = np.linalg.eigh(strain.T @ strain)
    solution = combine(solution, vectors)
    rotation = np.eye(len(ritz))
    edges = np.flatnonzero(np.diff(ritz) > EQUAL_GAP * ritz[1:]) + 1
    for equal in np.split(np.arange(len(ritz)), edges):
        rotation[np.ix_(equal, equal)] = _node_order_basis(solution.angle[:, equal])
    return ritz.astype(float), combine(solution, rotation)


def _orthonormal(network: Network, solution: Solution) -> Solution:
    solution = combine(solution, 1.0 / np.sqrt((kinetic_rows(network, solution) ** 2).sum(axis=0)))
    kinetic = kinetic_rows(network, solution)
    return combine(solution, np.linalg.inv(np.linalg.cholesky(kinetic.T @ kinetic)).T)


def _node_order_basis(angle: Floats) -> Floats:
    """Return the rotation (c, c) of the shapes that clears them in node order, by Householder reflections."""
    members = angle.shape[1]
    rotation = np.eye(members)
    significant = SIGNIFICANT_ANGLE * np.abs(angle).max()
    for first in range(members - 1):
        left = (angle @ rotation)[:, first:]
        size = np.sqrt((left**2).sum(axis=1))
        row = left[int(np.argmax(size > significant))]
        normal = row / np.linalg.norm(row)
        normal[0] += 1.0 if normal[0] >= 0 else -1.0
        reflection = np.eye(members - first) - 2 * np.outer(normal, normal) / (normal @ normal)
        rotation[:, first:] = rotation[:, first:] @ reflection
    return rotation
