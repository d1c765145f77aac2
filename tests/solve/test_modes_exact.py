"""Every natural frequency against 50-digit arithmetic, every mode in balance and proven, on random networks."""

from __future__ import annotations

import numpy as np
import pytest
from networks import exact_frequencies, random_network

from quillshaft.solve.modes import natural_modes

KINDS = {
    "chain": {"chain_only": True},
    "tree": {},
    "loops": {"loops": 3},
    "massless": {"massless": 3, "loops": 2},
    "ties": {"ties": 2, "loops": 1},
    "rigid epicyclic": {"epicyclics": 1},
    "rigid epicyclic on massless nodes": {"epicyclics": 1, "massless": 4},
    "elastic epicyclic on massless nodes": {"epicyclics": 1, "rigid": False, "massless": 3},
    "two epicyclics in a loop": {"epicyclics": 2, "massless": 2, "loops": 1},
    "resting ring": {"epicyclics": 1, "resting_ring": True},
    "elastic resting ring": {"epicyclics": 1, "resting_ring": True, "rigid": False, "massless": 3},
    "two resting rings and a tie": {
        "epicyclics": 2,
        "resting_ring": True,
        "ties": 1,
        "loops": 1,
        "massless": 3,
    },
}


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(6))
def test_frequencies_match_fifty_digit_arithmetic_over_eight_decades(kind, seed):
    network = random_network(np.random.default_rng(seed), nodes=8, **KINDS[kind])
    exact = [float(value) for value in exact_frequencies(network)]
    assert natural_modes(network).omega_rad_s == pytest.approx(exact, rel=1e-12)


@pytest.mark.parametrize("kind", KINDS)
def test_every_mode_is_in_balance_and_proven(kind):
    for seed in range(40):
        network = random_network(np.random.default_rng(1000 + seed), nodes=10 + seed % 20, **KINDS[kind])
        modes = natural_modes(network)
        assert modes.proven.all(), seed
        assert modes.residual.max(initial=0.0) < 1e-11, seed
        alone = np.bincount(modes.cluster, minlength=len(modes.cluster))[modes.cluster] == 1
        assert modes.relative_width[alone] == pytest.approx(np.full(alone.sum(), 1e-11), rel=1e-4), seed


def test_the_residual_reported_is_the_imbalance_of_torques():
    network = random_network(np.random.default_rng(2), nodes=8, loops=2, ties=1, epicyclics=1)
    modes = natural_modes(network)
    for mode, omega in enumerate(modes.omega_rad_s):
        balance = -(omega**2) * network.inertia_kgm2 * modes.angle[mode]
        torques = network.spring_nm_rad * modes.spring_twist[mode]
        for (a, b), torque in zip(network.spring_ends, torques, strict=True):
            balance[a] += torque
            balance[b] -= torque
        for node, k in zip(network.tie_node, network.tie_nm_rad, strict=True):
            balance[node] += k * modes.angle[mode, node]
        for link, torque in zip(network.torque_links, modes.link_torque[mode], strict=True):
            np.add.at(balance, list(link.nodes), np.array(link.coefficients) * torque)
        assert np.abs(balance).max() <= 1e-11 * np.abs(torques).max()
