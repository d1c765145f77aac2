"""Damped modes against dense eigenvalues, closed forms and the laws that every damped mode obeys."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import scipy.linalg
from damped_networks import damping, dense_matrices, random_damping, state_roots
from networks import chain, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.damped import damped_modes
from quillshaft.solve.modes import natural_modes

TREES = [{"nodes": 9}, {"nodes": 12, "chain_only": True}, {"nodes": 2}, {"nodes": 6, "ties": 2}]
LOOPS = [{"nodes": 8, "loops": 2}, {"nodes": 10, "loops": 3, "ties": 1}]
STAGES = [{"nodes": 6, "epicyclics": 1}, {"nodes": 5, "epicyclics": 1, "rigid": False, "loops": 1},
          {"nodes": 4, "epicyclics": 2, "rigid": False},
          {"nodes": 6, "epicyclics": 1, "resting_ring": True}]  # fmt: skip
KINDS = [(True, False), (False, True), (True, True)]


def both(motions):
    return motions.oscillating, motions.other


def shares(modes) -> np.ndarray:
    return np.concatenate([modes.spring_loss, modes.tie_loss, modes.link_loss, modes.node_loss], axis=1)


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize(("viscous", "lossy"), KINDS, ids=["viscous", "loss factors", "both"])
@pytest.mark.parametrize("shape", [*TREES, *LOOPS, *STAGES], ids=str)
def test_every_root_is_an_eigenvalue_of_the_assembled_state_matrix(shape, viscous, lossy, seed):
    rng = np.random.default_rng(seed)
    network = random_network(rng, decades=3.0, **shape)
    given = random_damping(rng, network, viscous, lossy)
    modes = damped_modes(network, given).oscillating
    roots = state_roots(network, given)
    assert modes.verified.all()
    nearest = np.argmin(np.abs(roots[:, None] - modes.root_1_s), axis=0)
    assert len(set(nearest.tolist())) == len(modes.root_1_s)  # each root once
    np.testing.assert_array_less(np.abs(roots[nearest] - modes.root_1_s), 1e-10 * np.abs(roots).max())


@pytest.mark.parametrize("seed", range(6))
def test_with_viscous_damping_every_eigenvalue_that_is_not_zero_is_found(seed):
    rng = np.random.default_rng(100 + seed)
    network = random_network(rng, nodes=7, loops=1, ties=1, decades=3.0)
    given = random_damping(rng, network, viscous=True, lossy=False)
    oscillating, other = both(damped_modes(network, given))
    found = np.concatenate([oscillating.root_1_s, oscillating.root_1_s.conj(), other.root_1_s])
    roots = state_roots(network, given)
    assert len(found) == len(roots)
    size = np.abs(roots).max()
    for root in roots:
        assert np.abs(found - root).min() < 1e-10 * size
    assert abs(found.sum() + np.trace(np.linalg.solve(*dense_matrices(network, given)[:2]))) < 1e-9 * size


def test_refinement_keeps_low_roots_where_the_dense_eigenvalues_lose_them():
    """Two discs on a soft spring behind six decades of stiffness: the low pair is known in closed form."""
    network = chain([1e3, 1e-3, 1e3], [1e12, 1.0])
    given = damping(network, spring_viscous=[0.0, 0.05])
    root = damped_modes(network, given).oscillating.root_1_s[0]
    inertia = (1e3 + 1e-3) * 1e3 / (2e3 + 1e-3)
    exact = complex(-0.05 / (2 * inertia), np.sqrt(1.0 / inertia - (0.05 / (2 * inertia)) ** 2))
    assert abs(root - exact) < 1e-10 * abs(exact)  # the stiff part is not quite rigid: 1e-12


@pytest.mark.parametrize("zeta", [0.0, 0.01, 0.3, 0.95])
def test_one_viscous_degree_of_freedom(zeta):
    """s = −ζ ω_n ± j ω_n √(1 − ζ²) (J. P. Den Hartog, Mechanical Vibrations, sec. 2.7)."""
    network = make([2.0], [], [(0, 5e4)])
    omega = np.sqrt(5e4 / 2.0)
    root = damped_modes(network, damping(network, tie_viscous=[2 * zeta * 2.0 * omega])).oscillating.root_1_s
    np.testing.assert_allclose(root, [complex(-zeta * omega, omega * np.sqrt(1 - zeta**2))], rtol=1e-14)


@pytest.mark.parametrize("eta", [1e-6, 0.1, 1.0, 8.0])
def test_one_hysteretic_degree_of_freedom(eta):
    """s = j ω_n √(1 + jη), from s² J + k (1 + jη) = 0 (own derivation)."""
    network = make([2.0], [], [(0, 5e4)])
    root = damped_modes(network, damping(network, tie_loss=[eta])).oscillating.root_1_s
    np.testing.assert_allclose(root, [1j * np.sqrt(5e4 / 2.0) * np.sqrt(1 + 1j * eta)], rtol=1e-14)


def test_two_free_discs_on_a_viscous_shaft():
    """J = 2 and 3 kg·m², k = 1e5, c = 20: ζ = c/(2 J_e ω_n) = 0.02886751345948, J_e = J1 J2/(J1 + J2)
    (own derivation)."""
    network = chain([2.0, 3.0], [1e5])
    motions = damped_modes(network, damping(network, spring_viscous=[20.0]))
    root = motions.oscillating.root_1_s[0]
    assert -root.real / abs(root) == pytest.approx(0.02886751345948, rel=1e-12)
    assert abs(root) == pytest.approx(np.sqrt(1e5 / 1.2), rel=1e-14)
    assert len(motions.other.root_1_s) == 0


def test_overcritical_damping_gives_two_rates_and_no_oscillation():
    """s = ω_n (−ζ ± √(ζ² − 1)) (Den Hartog, sec. 2.7)."""
    network = chain([2.0, 3.0], [1e5])
    omega = np.sqrt(1e5 / 1.2)
    for zeta in (1.0001, 2.0, 50.0):
        motions = damped_modes(network, damping(network, spring_viscous=[2 * zeta * 1.2 * omega]))
        assert len(motions.oscillating.root_1_s) == 0
        exact = omega * (-zeta + np.array([1, -1]) * np.sqrt(zeta**2 - 1))
        exact[0] = omega**2 / exact[1]  # the small one without cancellation
        np.testing.assert_allclose(motions.other.root_1_s, exact, rtol=1e-11)
        assert motions.other.verified.all()


def test_critical_damping_gives_one_rate_twice():
    network = chain([2.0, 3.0], [1e5])
    omega = np.sqrt(1e5 / 1.2)
    motions = damped_modes(network, damping(network, spring_viscous=[2 * 1.2 * omega]))
    assert len(motions.oscillating.root_1_s) == 0
    np.testing.assert_allclose(motions.other.root_1_s, [-omega, -omega], rtol=1e-7)  # a double root: √rounding


def test_a_loss_factor_leaves_the_rates_of_what_does_not_oscillate():
    network = chain([2.0, 3.0, 1.0], [1e5, 2e5])
    strong = {"spring_viscous": [3000.0, 0.0]}
    viscous = damped_modes(network, damping(network, **strong))
    lossy = damped_modes(network, damping(network, spring_loss=[0.0, 0.2], **strong))
    assert len(viscous.oscillating.root_1_s) == len(lossy.oscillating.root_1_s) == 1
    np.testing.assert_array_equal(viscous.other.root_1_s, lossy.other.root_1_s)


@pytest.mark.parametrize("seed", range(3))
def test_proportional_damping_gives_each_mode_its_ratio(seed):
    """C = α M + β K: ζ_i = α/(2 ω_i) + β ω_i/2 with the undamped shapes (Rayleigh, Theory of Sound, art. 97)."""
    network = random_network(np.random.default_rng(seed), nodes=8, loops=1, ties=1, decades=3.0)
    modes = natural_modes(network)
    alpha, beta = 0.02 * modes.omega_rad_s[0], 0.3 / modes.omega_rad_s[-1]
    given = damping(network, spring_viscous=beta * network.spring_nm_rad, tie_viscous=beta * network.tie_nm_rad,
                    node_viscous=alpha * network.inertia_kgm2)  # fmt: skip
    found = damped_modes(network, given).oscillating
    zeta = alpha / (2 * modes.omega_rad_s) + beta * modes.omega_rad_s / 2
    order = np.argsort(modes.omega_rad_s * np.sqrt(1 - zeta**2))
    np.testing.assert_allclose(np.abs(found.root_1_s), modes.omega_rad_s[order], rtol=1e-12)
    np.testing.assert_allclose(-found.root_1_s.real / np.abs(found.root_1_s), zeta[order], rtol=1e-10)
    shapes = modes.angle[order] / np.abs(modes.angle[order]).max(axis=1, keepdims=True)
    np.testing.assert_allclose(np.abs(found.angle), np.abs(shapes), atol=1e-9)


def test_one_loss_factor_for_all_turns_every_root_alike():
    """s_i = j ω_i √(1 + jη) with the undamped shapes (own derivation)."""
    network = random_network(np.random.default_rng(5), nodes=8, loops=2, ties=1, decades=3.0)
    given = damping(network, spring_loss=np.full(len(network.spring_nm_rad), 0.15), tie_loss=[0.15])
    found = damped_modes(network, given).oscillating
    np.testing.assert_allclose(found.root_1_s, 1j * natural_modes(network).omega_rad_s * np.sqrt(1 + 0.15j), rtol=1e-12)


def test_small_damping_gives_the_first_order_ratio():
    """ζ → Σ c · twist² / (2 ω) in M-normalised modes, the error falling as the square of the damping."""
    network = random_network(np.random.default_rng(8), nodes=7, decades=2.0)
    modes = natural_modes(network)
    shape = 10.0 ** np.random.default_rng(9).uniform(-6, -4, len(network.spring_nm_rad)) * network.spring_nm_rad
    errors = []
    for size in (1e-2, 1e-3):
        roots = damped_modes(network, damping(network, spring_viscous=size * shape)).oscillating.root_1_s
        first = size * (modes.spring_twist**2 @ shape) / (2 * modes.omega_rad_s)
        errors.append(np.abs(-roots.real / np.abs(roots) / first - 1).max())
    assert errors[1] < 1e-4
    assert errors[0] / errors[1] == pytest.approx(100, rel=0.3)


def test_negative_damping_to_ground_grows():
    """J s² + c s + k = 0 with c < 0: σ = −c/2J above zero (Den Hartog, sec. 7.1)."""
    network = make([2.0], [], [(0, 5e4)])
    modes = damped_modes(network, damping(network, node_viscous=[-3.0])).oscillating
    assert modes.root_1_s[0].real == pytest.approx(0.75, rel=1e-12)
    assert shares(modes).sum() == pytest.approx(-1.0, rel=1e-14)  # fed in, nothing lost


def test_damping_to_ground_slows_the_turning_of_the_whole():
    """A rigid-body motion falls as e^(−c t / ΣJ) where the shafts are stiff (own derivation)."""
    network = chain([2.0, 3.0], [1e12])
    motions = damped_modes(network, damping(network, node_viscous=[4.0, 6.0]))
    np.testing.assert_allclose(motions.other.root_1_s, [-10.0 / 5.0], rtol=1e-9)


def test_a_ring_on_fluid_alone_is_a_spring_without_stiffness():
    """Disc on a tie with a ring on viscous fluid: roots of J s³ J_r + … = 0, the cubic of the two equations
    J θ'' + c (θ' − φ') + k θ = 0 and J_r φ'' = c (θ' − φ') (Den Hartog, sec. 3.3)."""
    inertia, ring, k, c = 2.0, 0.5, 5e4, 60.0
    network = make([inertia, ring], [], [(0, k)])
    network = replace(network, spring_ends=np.array([[0, 1]]), spring_nm_rad=np.zeros(1), rigid_motions=1)
    oscillating, other = both(damped_modes(network, damping(network, spring_viscous=[c])))
    exact = np.roots([inertia * ring, c * (inertia + ring), k * ring, k * c])
    np.testing.assert_allclose(oscillating.root_1_s, exact[exact.imag > 0], rtol=1e-12)
    np.testing.assert_allclose(other.root_1_s, exact[exact.imag == 0].real, rtol=1e-12)
    assert oscillating.verified.all()
    assert other.verified.all()
    np.testing.assert_allclose(shares(oscillating), [[1.0, 0.0, 0.0, 0.0]], atol=1e-14)


def test_a_spring_in_series_with_a_damper_through_a_massless_node():
    """J s² (k + s c) + k s c = 0: a disc on a spring and a damper in series (Maxwell's body, own derivation)."""
    inertia, k, c = 2.0, 5e4, 400.0
    network = make([inertia, 0.0], [(0, 1, k)], [(1, 1e-3)])
    given = damping(network, tie_viscous=[c])
    oscillating, other = both(damped_modes(network, given))
    exact = np.roots([inertia * c, inertia * (k + 1e-3), k * c, k * 1e-3])
    np.testing.assert_allclose(oscillating.root_1_s, exact[exact.imag > 0], rtol=1e-11)
    assert len(other.root_1_s) == 1
    np.testing.assert_allclose(other.root_1_s, [-1e-3 / c], rtol=1e-6)


@pytest.mark.parametrize("seed", range(8))
@pytest.mark.parametrize(("viscous", "lossy"), KINDS, ids=["viscous", "loss factors", "both"])
def test_massless_nodes_are_those_of_the_pencil_with_a_singular_inertia(seed, viscous, lossy):
    """Finite eigenvalues of [[0, I], [−K, −C]] z = s [[I, 0], [0, M]] z by scipy's QZ, time in units of 1 ms."""
    rng = np.random.default_rng(seed)
    network = random_network(rng, nodes=7, loops=1, ties=1, massless=2, decades=2.0)
    given = random_damping(rng, network, viscous, lossy)
    m, c, k = dense_matrices(network, given)
    unit = np.eye(len(m))
    left = np.block([[0 * unit, unit], [-k * 1e-6, -c * 1e-3]])
    values = scipy.linalg.eig(left, np.block([[unit, 0 * unit], [0 * unit, m]]), right=False)
    values = values[np.isfinite(values)] * 1e3
    modes = damped_modes(network, given).oscillating
    assert modes.verified.all()
    assert len(modes.root_1_s) > 0
    for root in modes.root_1_s:
        assert np.abs(values - root).min() < 1e-7 * abs(root)


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize(("viscous", "lossy"), KINDS, ids=["viscous", "loss factors", "both"])
def test_energy_shares_sum_to_one_and_make_up_the_decay(seed, viscous, lossy):
    """−σ (|s|² θᴴMθ + θᴴKθ) = |s|² θᴴCθ + ω θᴴ(ηK)θ (own derivation)."""
    rng = np.random.default_rng(seed)
    network = random_network(rng, nodes=7, loops=1, ties=1, decades=2.0)
    given = random_damping(rng, network, viscous, lossy)
    modes = damped_modes(network, given).oscillating
    np.testing.assert_allclose(shares(modes).sum(axis=1), 1.0, rtol=1e-13)
    m, c, k = dense_matrices(network, given)
    for root, x in zip(modes.root_1_s, modes.angle, strict=True):
        lost = abs(root) ** 2 * (x.conj() @ c @ x).real + root.imag * (x.conj() @ k.imag @ x).real
        stored = abs(root) ** 2 * (x.conj() @ m @ x).real + (x.conj() @ k.real @ x).real
        assert lost / stored == pytest.approx(-root.real, rel=1e-9, abs=1e-12 * abs(root))


def test_equal_roots_are_all_found_and_verified():
    network = make([5.0, 1.0, 1.0, 1.0], [(0, 1, 1e5), (0, 2, 1e5), (0, 3, 1e5)])
    for given in ({}, {"spring_viscous": [9.0] * 3}, {"spring_loss": [0.1] * 3}):
        modes = damped_modes(network, damping(network, **given)).oscillating
        assert modes.verified.all()
        assert np.linalg.matrix_rank(modes.angle, tol=1e-6) == 3
        assert abs(modes.root_1_s[1] - modes.root_1_s[0]) < 1e-10 * abs(modes.root_1_s[0])


def test_a_network_without_elastic_modes_has_no_damped_ones():
    network = make([2.0], [])
    motions = damped_modes(network, damping(network))
    assert len(motions.oscillating.root_1_s) == len(motions.other.root_1_s) == 0
    np.testing.assert_allclose(damped_modes(network, damping(network, node_viscous=[3.0])).other.root_1_s, [-1.5])


def test_an_elastic_stage_over_three_stations_with_viscous_mesh():
    """One torque link that holds three free nodes: J_e s² + c s + k = 0 with 1/J_e = Σ a²/J (own derivation)."""
    inertia, a, k, c = np.array([2.0, 3.0, 5.0]), np.array([1.0, 2.0, -3.0]), 4e4, 15.0
    network = make(inertia, [], links=[TorqueLink((0, 1, 2), tuple(a.tolist()), 1.0 / k)])
    root = damped_modes(network, damping(network, link_viscous=[c])).oscillating.root_1_s
    inverse = (a**2 / inertia).sum()
    np.testing.assert_allclose(root, [complex(-c * inverse / 2, np.sqrt(k * inverse - (c * inverse / 2) ** 2))],
                               rtol=1e-13)  # fmt: skip
