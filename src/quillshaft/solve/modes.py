"""Natural frequencies and mode shapes: singular values of the factored matrix, refined and proven.

The singular value decomposition of B = C^½ A M^-½ gives every mode at once; one step of inverse iteration on
the elimination refines it; and the number of modes just below and just above each frequency (Sylvester's law
of inertia) proves it bracketed, with none missed.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.graph.network import Bools, Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.solve.factor import factorise
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.solve.precise import count_below, put
from quillshaft.solve.shapes import combine, kinetic_rows, refine, refine_group, strain_rows
from quillshaft.solve.substitution import Solution

BRACKET = 1e-11  # relative half-width of the bracket that proves a frequency
CLUSTER_GAP = 2e-11  # relative gap of frequencies that brackets cannot keep apart, rounding included
NEAR_GAP = 1e-8  # relative gap below which neighbours are refined together
SIGN_TOLERANCE = 1e-6


@dataclass(frozen=True)
class Modes:
    """Elastic modes in ascending order of frequency; every array has one row for each mode.

    omega_rad_s     (m,)
    angle           (m, nodes) referred angles, M-normalised: Σ J · angle² = 1; the first node within 1e-6 of
                    the largest magnitude is positive
    spring_twist    (m, springs) angle of the first end less that of the second
    tie_twist       (m, ties)
    link_torque     (m, torque links) [N·m]
    spring_share, tie_share, link_share   shares of the strain energy; together they sum to 1
    node_share      (m, nodes) shares of the kinetic energy; they sum to 1
    below, above    (m,) number of elastic modes just below and just above the frequency
    proven          (m,) True where below and above are what the position of the mode says
    cluster         (m,) position of the first mode of its cluster; modes of one cluster have frequencies that
                    the proof cannot tell apart: their shapes are one basis of many (see `refine_group`),
                    their shares the average over the cluster
    residual        (m,) largest imbalance of torques at a node over the largest torque in a link
    relative_width  (m,) half-width of the bracket of the proof over the frequency
    """

    omega_rad_s: Floats
    angle: Floats
    spring_twist: Floats
    tie_twist: Floats
    link_torque: Floats
    spring_share: Floats
    tie_share: Floats
    link_share: Floats
    node_share: Floats
    below: Ints
    above: Ints
    proven: Bools
    cluster: Ints
    residual: Floats
    relative_width: Floats


def natural_modes(network: Network, plan: Plan | None = None) -> Modes:
    """Return all elastic modes of a network; none gives empty arrays.

    Raises ArithmeticError when a shape cannot be refined, numpy.linalg.LinAlgError when a node has neither
    inertia nor stiffness to hold it.
    """
    plan = plan or plan_elimination(network)
    start = _first_modes(network)
    if start is None:
        return _no_modes(network)
    modes = _modes(network, plan, *start)
    return modes if modes.proven.all() else _modes(network, replace(plan, precisely=True), *start)


def _modes(network: Network, plan: Plan, momentum: Floats, omega: Floats) -> Modes:
    """Refine and prove the modes of given momentum (nodes, m) and frequencies (m,)."""
    omega, solution, cluster = _refined(network, plan, momentum, omega)
    strain, kinetic = _shares(network, solution, cluster)
    springs, links = len(network.spring_ends), strain.shape[1] - len(network.torque_links)
    below, above, proven, width = _proof(network, plan, omega, cluster)
    return Modes(
        omega_rad_s=omega,
        angle=solution.angle.T,
        spring_twist=solution.spring_twist.T,
        tie_twist=solution.tie_twist.T,
        link_torque=solution.link_torque.T,
        spring_share=strain[:, :springs],
        tie_share=strain[:, springs:links],
        link_share=strain[:, links:],
        node_share=kinetic,
        below=below,
        above=above,
        proven=proven,
        cluster=cluster,
        residual=_residual(network, solution, omega),
        relative_width=width,
    )


def natural_frequencies(network: Network, plan: Plan | None = None) -> Floats:
    """Return the elastic natural frequencies (m,) [rad/s]: the same numbers as `natural_modes`, unproven.

    Raises what `natural_modes` raises.
    """
    start = _first_modes(network)
    if start is None:
        return np.zeros(0)
    return _refined(network, plan or plan_elimination(network), *start)[0]


def _first_modes(network: Network) -> tuple[Floats, Floats] | None:
    """Momentum (nodes, m) and frequencies (m,), ascending, by the singular value decomposition."""
    factor = factorise(network)
    count = factor.elastic_modes
    if count == 0:
        return None
    _, omega, vectors = np.linalg.svd(factor.matrix, full_matrices=False)
    return (vectors[:count][::-1] @ factor.momentum).T, omega[:count][::-1]


def _no_modes(network: Network) -> Modes:
    none = np.zeros(0)
    numbers = np.zeros(0, dtype=np.intp)
    nodes = np.zeros((0, network.nodes))
    springs = np.zeros((0, len(network.spring_ends)))
    ties = np.zeros((0, len(network.tie_node)))
    links = np.zeros((0, len(network.torque_links)))
    return Modes(
        omega_rad_s=none,
        angle=nodes,
        spring_twist=springs,
        tie_twist=ties,
        link_torque=links,
        spring_share=springs,
        tie_share=ties,
        link_share=links,
        node_share=nodes,
        below=numbers,
        above=numbers,
        proven=np.zeros(0, dtype=bool),
        cluster=numbers,
        residual=none,
        relative_width=none,
    )


def _refined(network: Network, plan: Plan, momentum: Floats, omega: Floats) -> tuple[Floats, Solution, Ints]:
    """Return refined frequencies (m,) in order, their M-normalised shapes and their clusters (m,)."""
    solution = refine(network, plan, momentum, omega**2)
    strain = (strain_rows(network, solution) ** 2).sum(axis=0)
    kinetic = (kinetic_rows(network, solution) ** 2).sum(axis=0)
    refined = np.sqrt(strain / kinetic)
    solution = combine(solution, _signs(solution.angle) / np.sqrt(kinetic))
    near = (np.diff(omega) <= NEAR_GAP * omega[1:]) | (np.diff(refined) <= NEAR_GAP * refined[1:])
    if near.any():
        for run in _runs(near):
            refined[run] = _refine_run(network, plan, (momentum[:, run], refined[run]), run, solution)
    return refined, solution, _starts(np.diff(refined) <= CLUSTER_GAP * refined[1:])


def _starts(joined: Bools) -> Ints:
    """Position of the first member of each mode's run, from flags that join each mode to the next."""
    if not joined.any():
        return np.arange(len(joined) + 1)
    first = np.concatenate([[True], ~joined])
    starts: Ints = np.flatnonzero(first)[np.cumsum(first) - 1]
    return starts


def _runs(joined: Bools) -> list[slice]:
    """Runs of two and more modes that the flags join."""
    if not joined.any():
        return []
    starts = _starts(joined)
    return [slice(start, start + size) for start, size in enumerate(np.bincount(starts).tolist()) if size > 1]


def _refine_run(network: Network, plan: Plan, found: tuple[Floats, Floats], run: slice, solution: Solution) -> Floats:
    """Refine a run of modes, of given momentum and frequencies, as a group: into `solution`; return ω."""
    momentum, omega = found
    omega2, shapes = refine_group(network, plan, momentum, np.sort(omega) ** 2)
    shapes = combine(shapes, _signs(shapes.angle))
    put(solution, run, shapes)
    return np.sqrt(omega2)


def _signs(angle: Floats) -> Floats:
    """+1 or -1 for each column, so that its first angle within 1e-6 of the largest becomes positive."""
    size = np.abs(angle)
    first = np.argmax(size >= (1 - SIGN_TOLERANCE) * size.max(axis=0), axis=0)
    return np.where(angle[first, np.arange(angle.shape[1])] < 0, -1.0, 1.0)


def _shares(network: Network, solution: Solution, cluster: Ints) -> tuple[Floats, Floats]:
    """Shares of the strain energy (m, elements) and the kinetic energy (m, nodes), averaged over clusters."""
    both = []
    for rows in (strain_rows(network, solution), kinetic_rows(network, solution)):
        energy = rows**2
        energy /= energy.sum(axis=0)
        both.append(energy.T)
    for run in _runs(cluster[1:] != np.arange(1, len(cluster))):
        for share in both:
            share[run] = share[run].mean(axis=0)
    return both[0], both[1]


def _proof(network: Network, plan: Plan, omega: Floats, cluster: Ints) -> tuple[Ints, Ints, Bools, Floats]:
    """Return below, above, proven and relative width of every mode, by one pass of counting."""
    count = len(omega)
    sizes = np.bincount(cluster, minlength=count)
    last = cluster + sizes[cluster] - 1
    low, high = omega * (1 - BRACKET), omega * (1 + BRACKET)
    counts = count_below(network, plan, np.concatenate([low, high]) ** 2)
    below, above = counts[:count][cluster], counts[count:][last]
    proven = (below == cluster) & (above == last + 1)
    return below, above, proven, (high[last] - low[cluster]) / (2 * omega)


def _residual(network: Network, solution: Solution, omega: Floats) -> Floats:
    """Largest imbalance of torques at a node over the largest torque in a link, (m,)."""
    springs, ties = len(network.spring_ends), len(network.tie_node)
    number = np.arange(springs)
    to_node = np.zeros((network.nodes, springs + ties + len(network.torque_links)))
    to_node[network.spring_ends[:, 0], number] = 1.0
    to_node[network.spring_ends[:, 1], number] -= 1.0
    to_node[network.tie_node, np.arange(springs, springs + ties)] = 1.0
    for column, link in enumerate(network.torque_links, start=springs + ties):
        np.add.at(to_node[:, column], list(link.nodes), link.coefficients)
    torque = np.concatenate(
        [
            network.spring_nm_rad[:, None] * solution.spring_twist,
            network.tie_nm_rad[:, None] * solution.tie_twist,
            solution.link_torque,
        ]
    )
    inertial = network.inertia_kgm2[:, None] * solution.angle * omega**2
    largest = (np.abs(to_node).max(axis=0)[:, None] * np.abs(torque)).max(axis=0)
    residual: Floats = np.abs(to_node @ torque - inertial).max(axis=0) / largest
    return residual
