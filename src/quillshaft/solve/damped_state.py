"""The state matrix of a damped network in the coordinates of its undamped modes.

Angles are θ = Φ ξ + R ρ + U u: all undamped modes Φ, the rigid-body motions R, and what massless nodes can do
beside them, U. In these coordinates the inertia is the unit matrix, the undamped stiffness diagonal, and every
twist comes from the modes, never from the difference of two nearly equal angles. Massless coordinates that no
damper moves are condensed; those that one moves have a state of their own, of first order; a rigid-body motion
keeps a state only where damping to ground slows it. (State form of viscous damping: L. Meirovitch, Principles
and Techniques of Vibrations, sec. 4.8, from memory; these coordinates: own derivation.)
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any, TypeAlias

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.factor import incidence
from quillshaft.solve.modes import Modes
from quillshaft.solve.motions import rigid_motions

Numbers: TypeAlias = np.ndarray[Any, Any]  # float64 or complex128

RANK = 1e-9  # of the largest singular value: rows of ones and gear ratios, so far from any doubt


@dataclass(frozen=True)
class Damping:
    """Damping of a network's elements, referred like them. A spring without stiffness is a damper alone.

    spring_loss, tie_loss, link_loss            loss factors η of springs, ties and torque links: k (1 + jη)
    spring_viscous, tie_viscous, link_viscous   viscous coefficients [N·m·s/rad] beside their stiffness
    node_viscous                                (nodes,) damping to ground [N·m·s/rad]; negative feeds energy in
    node_lost_kgm2                              (nodes,) J/M [kg·m²] of cylinders whose own damping is stated by a
                                                magnifier M: torque −ω² (−j J/M) θ in steady vibration; None without
    """

    spring_loss: Floats
    tie_loss: Floats
    link_loss: Floats
    spring_viscous: Floats
    tie_viscous: Floats
    link_viscous: Floats
    node_viscous: Floats
    node_lost_kgm2: Floats | None = None

    @property
    def hysteretic(self) -> bool:
        """True where any element has a loss factor."""
        return bool(self.spring_loss.any() or self.tie_loss.any() or self.link_loss.any())


@dataclass(frozen=True)
class Elements:
    """All springs, ties, elastic torque links and, last, dampers to ground, one row each.

    twist       (elements, nodes) twist [rad] of each from the angles
    stiffness   (elements,) [N·m/rad]; loss (elements,); viscous (elements,) [N·m·s/rad]
    """

    twist: Floats
    stiffness: Floats
    loss: Floats
    viscous: Floats


@dataclass(frozen=True)
class State:
    """A first-order form: z' = matrix z, with angles (nodes, roots) = at_rate(root) z.

    matrix    (states, states) real, or complex where loss factors are in it
    shape     (nodes, states) angles that the displacement states stand for
    motion    (nodes, moving) rigid motions whose speeds are the first states
    """

    matrix: Numbers
    shape: Numbers
    motion: Floats

    def angles(self, roots: Numbers, vectors: Numbers) -> Numbers:
        """Angles (nodes, roots) of eigenvectors (states, roots) for their roots [1/s]."""
        moving = self.motion.shape[1]
        return self.shape @ vectors + self.motion @ (vectors[:moving] / roots)


def elements_of(network: Network, damping: Damping) -> Elements:
    """All elements that can store or lose energy as rows."""
    elastic = np.array([link.compliance_rad_per_nm > 0 for link in network.torque_links], dtype=bool)
    compliance = np.array([link.compliance_rad_per_nm for link in network.torque_links])[elastic]
    nodes = np.zeros(network.nodes)
    return Elements(
        np.concatenate([incidence(network), np.eye(network.nodes)]),
        np.concatenate([network.spring_nm_rad, network.tie_nm_rad, 1.0 / compliance, nodes]),
        np.concatenate([damping.spring_loss, damping.tie_loss, damping.link_loss[elastic], nodes]),
        np.concatenate(
            [damping.spring_viscous, damping.tie_viscous, damping.link_viscous[elastic], damping.node_viscous]
        ),
    )


def undamped(network: Network) -> Network:
    """The network without its springs of no stiffness: what its undamped modes and rigid motions are those of."""
    elastic = network.spring_nm_rad > 0
    if elastic.all():
        return network
    return replace(network, spring_ends=network.spring_ends[elastic], spring_nm_rad=network.spring_nm_rad[elastic])


def damped_state(network: Network, modes: Modes, damping: Damping, lossy: bool) -> State:
    """The state matrix; loss factors enter where `lossy`, and then it is complex.

    `modes` are those of `undamped(network)`.

    Raises numpy.linalg.LinAlgError where damping to ground cancels on a massless node.
    """
    elements = elements_of(network, damping)
    moved = _modal_twists(network, modes)
    free = _massless_motions(network)
    damped, still = _split(elements.twist[elements.viscous != 0] @ free)
    free, damped_count = np.concatenate([free @ damped, free @ still], axis=1), damped.shape[1]
    motion, pushed = _moving_rigid(network, elements)
    rows = np.concatenate([moved, elements.twist @ free], axis=1)
    stiffness = _stiffness_matrix(elements, rows, modes.omega_rad_s, lossy)
    kept = len(modes.omega_rad_s) + damped_count
    condensed = _condensed(stiffness, kept)
    shape = np.concatenate([modes.angle.T, free[:, :damped_count]], axis=1) - free[:, damped_count:] @ condensed
    stiffness = stiffness[:kept, :kept] - stiffness[:kept, kept:] @ condensed
    speed_rows = np.concatenate([pushed, rows[:, :kept]], axis=1)
    damper = (speed_rows.T * elements.viscous) @ speed_rows
    return _first_order(modes.omega_rad_s, stiffness, damper, shape, motion)


def _modal_twists(network: Network, modes: Modes) -> Floats:
    """(elements, modes) twists of every element in the undamped modes."""
    compliance = np.array([link.compliance_rad_per_nm for link in network.torque_links])
    elastic = compliance > 0
    link_twist = modes.link_torque.T[elastic] * compliance[elastic][:, None]
    a, b = network.spring_ends[:, 0], network.spring_ends[:, 1]
    spring_twist = modes.angle.T[a] - modes.angle.T[b]
    spring_twist[network.spring_nm_rad > 0] = modes.spring_twist.T
    return np.concatenate([spring_twist, modes.tie_twist.T, link_twist, modes.angle.T])


def _massless_motions(network: Network) -> Floats:
    """(nodes, motions) angles of massless nodes that rigid torque links leave free."""
    massless = np.flatnonzero(network.inertia_kgm2 == 0)
    unit = np.zeros((network.nodes, len(massless)))
    unit[massless, np.arange(len(massless))] = 1.0
    rigid = [link for link in network.torque_links if link.compliance_rad_per_nm == 0]
    rows = np.zeros((len(rigid), network.nodes))
    for row, link in zip(rows, rigid, strict=True):
        np.add.at(row, list(link.nodes), link.coefficients)
    return unit @ _split(rows @ unit)[1]


def _split(rows: Floats) -> tuple[Floats, Floats]:
    """Bases (columns, …) of the directions that the rows see, and of those they do not."""
    size = rows.shape[1]
    if not size or not rows.any():
        return np.zeros((size, 0)), np.eye(size)
    _, values, right = np.linalg.svd(rows)
    rank = int(np.count_nonzero(values > RANK * values[0]))
    return right[:rank].T, right[rank:].T


def _moving_rigid(network: Network, elements: Elements) -> tuple[Floats, Floats]:
    """Inertia-orthonormal rigid motions (nodes, moving) that dampers slow, and what they twist.

    A rigid motion twists no spring, tie or link that has stiffness, exactly.
    """
    basis = rigid_motions(undamped(network)).T
    lower = np.linalg.cholesky(basis.T @ (network.inertia_kgm2[:, None] * basis))
    basis = np.linalg.solve(lower, basis.T).T
    twist = np.where(elements.stiffness[:, None] > 0, 0.0, elements.twist @ basis)
    slowed, _ = _split(twist[elements.viscous != 0])
    return basis @ slowed, twist @ slowed


def _stiffness_matrix(elements: Elements, rows: Floats, omega: Floats, lossy: bool) -> Numbers:
    """Stiffness in the coordinates of modes and massless motions, which no real stiffness couples."""
    count = len(omega)
    own = rows[:, count:]
    stiffness: Numbers = np.zeros((rows.shape[1], rows.shape[1]))
    stiffness[range(count), range(count)] = omega**2
    stiffness[count:, count:] = (own.T * elements.stiffness) @ own
    if lossy:
        stiffness = stiffness + 1j * ((rows.T * (elements.stiffness * elements.loss)) @ rows)
    return stiffness


def _condensed(stiffness: Numbers, kept: int) -> Numbers:
    """K_ss⁻¹ K_sk: minus the angles of the coordinates s that have neither inertia nor damper, for those kept."""
    own = stiffness[kept:, kept:]
    if not len(own):
        return np.zeros((0, kept), dtype=stiffness.dtype)
    scale = 1.0 / np.sqrt(np.abs(np.diag(own)))
    solved = np.linalg.solve(own * np.outer(scale, scale), scale[:, None] * stiffness[kept:, :kept])
    return np.asarray(scale[:, None] * solved)


def _first_order(omega: Floats, stiffness: Numbers, damper: Floats, shape: Numbers, motion: Floats) -> State:
    """States: speeds of rigid motions, ω · modal displacements, modal speeds, damped massless displacements."""
    moving, count = motion.shape[1], len(omega)
    extra = stiffness.shape[0] - count
    speeds, place = slice(0, moving), slice(moving, moving + count)
    rates, last = slice(moving + count, moving + 2 * count), slice(moving + 2 * count, None)
    size = moving + 2 * count + extra
    both = np.r_[speeds, rates]
    force = np.zeros((moving + count + extra, size), dtype=stiffness.dtype)  # torques on (rigid, modal, extra)
    force[:, both] = damper[:, : moving + count]
    force[moving:, place] = stiffness[:, :count] / omega
    force[moving:, last] = stiffness[:, count:]
    matrix = np.zeros((size, size), dtype=stiffness.dtype)
    matrix[place, rates] = np.diag(omega)
    if extra:
        matrix[last] = -np.linalg.solve(damper[-extra:, -extra:], force[-extra:])
    matrix[both] = -force[: moving + count] - damper[: moving + count, moving + count :] @ matrix[last]
    seen = np.zeros((shape.shape[0], size), dtype=shape.dtype)
    seen[:, place] = shape[:, :count] / omega
    seen[:, last] = shape[:, count:]
    return State(matrix, seen, motion)
