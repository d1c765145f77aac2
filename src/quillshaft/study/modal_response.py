"""Response of one mode of a train to a torque shaped as the mode itself, and what a ring at a station does to it.

With the torque M φ e^{jωt} on a mode φ (Σ J φ² = 1) an undamped train answers with the modal coordinate
q = φᵀ M θ = 1/(ω_n² − ω²): that of one disc on one spring. A ring of dynamic stiffness D at a station a changes
it to q − h² D/(1 + D g), with h = θ_a under the modal torque and g = θ_a under a unit torque at a (a change of
rank one: Golub and Van Loan, Matrix Computations, sec. 2.1, from memory). So a train is solved once for all rings.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from quillshaft.assess.damped_network import damped_network
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.damped_state import Damping

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Complexes = NDArray[np.complex128]

MOST_AT_ONCE = 4_000_000
"""Numbers of the stacked matrices that are held at once."""


@dataclass(frozen=True)
class Receptance:
    """Answers of a train without the ring, all (F,), at ω [rad/s] (F,).

    modal      q under the modal torque
    shared     θ at the station under the modal torque, and q under a unit torque at the station
    own        θ at the station under a unit torque there
    """

    omega: Floats
    modal: Complexes
    shared: Complexes
    own: Complexes


def modal_receptance(graph: TorsionalGraph, shape: Floats, station: int, omega: Floats, zeta: float) -> Receptance:
    """Answers of a damped train at ω [rad/s] (F,) to the modal torque of `shape` (nodes,) and to one at a station.

    Links that state no damping have the loss factor 2ζ. The station's angle and torque are referred.
    """
    network, damping = damped_network(graph, zeta)
    node, unknowns = int(graph.node[station]), network.nodes + len(network.torque_links)
    load = np.zeros((unknowns, 2), dtype=complex)
    load[: graph.network.nodes, 0] = graph.network.inertia_kgm2 * shape
    load[node, 1] = 1.0
    parts = []
    size = max(1, MOST_AT_ONCE // unknowns**2)
    for start in range(0, len(omega), size):
        parts.append(np.linalg.solve(_dynamic_stiffness(network, damping, omega[start : start + size]), load))
    answer = np.concatenate(parts)
    return Receptance(omega, answer[:, :, 0] @ load[:, 0], answer[:, node, 0], answer[:, node, 1])


def with_ring(answers: Receptance, ring: Complexes) -> Floats:
    """|q| (F,) with a ring of referred dynamic stiffness (F,) [N·m/rad] at the station."""
    return np.asarray(np.abs(answers.modal - answers.shared**2 * ring / (1.0 + ring * answers.own)))


def _dynamic_stiffness(network: Network, damping: Damping, omega: Floats) -> Complexes:
    """K (1 + jη) + jωC − ω²M, with the torques of torque links as further unknowns (F, unknowns, unknowns)."""
    nodes = network.nodes
    size = nodes + len(network.torque_links)
    matrix = np.zeros((len(omega), size, size), dtype=complex)
    inner = np.arange(nodes)
    matrix[:, inner, inner] += (
        -(omega[:, None] ** 2) * network.inertia_kgm2 + 1j * omega[:, None] * damping.node_viscous
    )
    springs = network.spring_nm_rad * (1.0 + 1j * damping.spring_loss) + 1j * omega[:, None] * damping.spring_viscous
    for (first, second), value in zip(network.spring_ends.tolist(), springs.T, strict=True):
        for row, column, sign in ((first, first, 1), (second, second, 1), (first, second, -1), (second, first, -1)):
            matrix[:, row, column] += sign * value
    ties = network.tie_nm_rad * (1.0 + 1j * damping.tie_loss) + 1j * omega[:, None] * damping.tie_viscous
    for at, value in zip(network.tie_node.tolist(), ties.T, strict=True):
        matrix[:, at, at] += value
    for index, link in enumerate(network.torque_links):
        row, compliance = nodes + index, link.compliance_rad_per_nm
        matrix[:, row, list(link.nodes)] = link.coefficients
        matrix[:, list(link.nodes), row] = link.coefficients
        softened = 1.0 + 1j * (damping.link_loss[index] + omega * damping.link_viscous[index] * compliance)
        matrix[:, row, row] = -compliance / softened
    return matrix
