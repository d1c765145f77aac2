"""Damping for the networks of the solver's tests, and the same problem as dense matrices."""

from __future__ import annotations

import numpy as np
import scipy.linalg

from quillshaft.graph.network import Network
from quillshaft.solve.damped_state import Damping


def damping(network: Network, **given) -> Damping:
    """Damping of a network: arrays by name, zero where not given."""
    springs, ties, links = len(network.spring_nm_rad), len(network.tie_nm_rad), len(network.torque_links)
    sizes = {"spring": springs, "tie": ties, "link": links}
    parts = {f"{kind}_{word}": np.zeros(size) for kind, size in sizes.items() for word in ("loss", "viscous")}
    parts["node_viscous"] = np.zeros(network.nodes)
    return Damping(**{**parts, **{name: np.asarray(value, dtype=float) for name, value in given.items()}})


def random_damping(rng: np.random.Generator, network: Network, viscous: bool, lossy: bool) -> Damping:
    """Damping of about half of the elements: loss factors to 0.3, viscous from next to nothing to overcritical."""
    links = np.array([1 / link.compliance_rad_per_nm if link.compliance_rad_per_nm else 0.0
                      for link in network.torque_links])  # fmt: skip
    stiffness = {"spring": network.spring_nm_rad, "tie": network.tie_nm_rad, "link": links}
    given = {}
    for kind, k in stiffness.items():
        given[f"{kind}_loss"] = lossy * (k > 0) * rng.uniform(0, 0.3, len(k)) * (rng.random(len(k)) < 0.7)
        given[f"{kind}_viscous"] = viscous * k * 10 ** rng.uniform(-6, -2, len(k)) * (rng.random(len(k)) < 0.5)
    ground = 10 ** rng.uniform(0, 5, network.nodes) * (rng.random(network.nodes) < 0.3)
    return damping(network, node_viscous=viscous * ground, **given)


def dense_matrices(network: Network, given: Damping) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """M, C and K (1 + jη), assembled entry by entry; rigid links as a null space."""
    m, c, k = np.diag(network.inertia_kgm2), np.diag(given.node_viscous), np.zeros((network.nodes,) * 2, complex)
    rows = []
    for (a, b), *values in zip(network.spring_ends.tolist(), network.spring_nm_rad, given.spring_loss,
                               given.spring_viscous, strict=True):  # fmt: skip
        row = np.zeros(network.nodes)
        row[a], row[b] = 1.0, -1.0
        rows.append((row, *values))
    for node, *values in zip(network.tie_node.tolist(), network.tie_nm_rad, given.tie_loss, given.tie_viscous,
                             strict=True):  # fmt: skip
        rows.append((np.eye(network.nodes)[node], *values))
    rigid = []
    for link, loss, viscous in zip(network.torque_links, given.link_loss, given.link_viscous, strict=True):
        row = np.zeros(network.nodes)
        np.add.at(row, list(link.nodes), link.coefficients)
        if link.compliance_rad_per_nm:
            rows.append((row, 1.0 / link.compliance_rad_per_nm, loss, viscous))
        else:
            rigid.append(row)
    for row, stiffness, loss, viscous in rows:
        k = k + stiffness * (1 + 1j * loss) * np.outer(row, row)
        c = c + viscous * np.outer(row, row)
    basis = scipy.linalg.null_space(np.array(rigid)) if rigid else np.eye(network.nodes)
    return tuple(basis.T @ matrix @ basis for matrix in (m, c, k))


def state_roots(network: Network, given: Damping) -> np.ndarray:
    """Eigenvalues of the assembled state matrix [[0, I], [−M⁻¹K, −M⁻¹C]] by scipy.linalg.eig; all with inertia."""
    m, c, k = dense_matrices(network, given)
    size = len(m)
    state = np.zeros((2 * size, 2 * size), complex)
    state[:size, size:] = np.eye(size)
    state[size:, :size] = -np.linalg.solve(m, k)
    state[size:, size:] = -np.linalg.solve(m, c)
    return scipy.linalg.eig(state if given.hysteretic else state.real, right=False)
