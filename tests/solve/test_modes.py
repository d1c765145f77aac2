"""Natural modes against closed forms and published cases, and the books that every mode must keep."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from networks import chain, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.modes import natural_frequencies, natural_modes

STEEL_SHAFT = np.pi * 84e9 * 0.07**4 / 32  # case C: G · Ip of a 70 mm shaft, G = 84 GPa


def shape(modes, mode: int) -> np.ndarray:
    """Angles of a mode with the first node at 1."""
    return modes.angle[mode] / modes.angle[mode, 0]


def test_two_discs_have_one_mode_about_their_common_node():
    # w = sqrt(k (J1 + J2)/(J1 J2)), theta2/theta1 = -J1/J2: W. T. Thomson, Theory of Vibration, from memory.
    modes = natural_modes(chain([2.0, 3.0], [1e5]))
    assert modes.omega_rad_s == pytest.approx([288.675134594813], rel=1e-13)
    assert shape(modes, 0) == pytest.approx([1.0, -2 / 3], rel=1e-14)


@pytest.mark.parametrize(
    ("inertia", "stiffness", "omega", "shapes"),
    [
        # S. S. Rao, Mechanical Vibrations, Holzer example (compressor, turbine, generator), from memory; the
        # data give the exact surds 500 sqrt(2) and 500 sqrt(6).
        ([8.0, 6.0, 4.0], [4e6, 2e6], [500 * 2**0.5, 500 * 6**0.5], [[1, 0, -2], [1, -2, 1]]),
        # R. S. Khurmi, Theory of Machines, torsional chapter, from memory; recomputed from
        # w² = [b -+ sqrt(b² - 4c)]/2.
        (
            [0.15, 0.3, 0.09],
            [STEEL_SHAFT / 1.5, STEEL_SHAFT],
            [1072.46252897, 1740.65600254],
            [[1, -0.306999532, -0.643334894], [1, -2.44300047, 6.47666823]],
        ),
        # Closed forms of three equal discs, and of J, 2J, J: W. T. Thomson, Theory of Vibration, from memory.
        ([0.7] * 3, [3e4] * 2, [(3e4 / 0.7) ** 0.5, (9e4 / 0.7) ** 0.5], [[1, 0, -1], [1, -2, 1]]),
        ([0.7, 1.4, 0.7], [3e4] * 2, [(3e4 / 0.7) ** 0.5, (6e4 / 0.7) ** 0.5], [[1, 0, -1], [1, -1, 1]]),
    ],
    ids=["surds", "oil engine", "equal discs", "double middle"],
)
def test_three_discs_have_their_closed_form_modes(inertia, stiffness, omega, shapes):
    modes = natural_modes(chain(inertia, stiffness))
    assert modes.omega_rad_s == pytest.approx(omega, rel=5e-12)
    for mode, expected in enumerate(shapes):
        assert shape(modes, mode) == pytest.approx(expected, rel=1e-8, abs=1e-12)


def test_three_disc_surds_are_exact_to_the_last_digits():
    modes = natural_modes(chain([8.0, 6.0, 4.0], [4e6, 2e6]))
    assert modes.omega_rad_s == pytest.approx([500 * 2**0.5, 500 * 6**0.5], rel=1e-15)


@pytest.mark.parametrize("discs", [2, 4, 6, 10, 40])
def test_a_uniform_free_chain_has_its_closed_form_frequencies(discs):
    # w_i = 2 sqrt(k/J) sin(i pi/(2N)): J. P. Den Hartog, Mechanical Vibrations, ch. 4, from memory.
    modes = natural_modes(chain([0.5] * discs, [2e5] * (discs - 1)))
    exact = 2 * np.sqrt(4e5) * np.sin(np.arange(1, discs) * np.pi / (2 * discs))
    assert modes.omega_rad_s == pytest.approx(exact, rel=2e-15)
    assert modes.proven.all()


@pytest.mark.parametrize("discs", [1, 2, 5, 40])
def test_a_uniform_fixed_free_chain_has_its_closed_form_frequencies(discs):
    # w_i = 2 sqrt(k/J) sin((2i - 1) pi/(2 (2N + 1))): same source.
    modes = natural_modes(chain([1.0] * discs, [1.0] * (discs - 1), ties=[(0, 1.0)]))
    exact = 2 * np.sin((2 * np.arange(1, discs + 1) - 1) * np.pi / (2 * (2 * discs + 1)))
    assert modes.omega_rad_s == pytest.approx(exact, rel=2e-15)
    assert modes.tie_share.sum() + modes.spring_share.sum() == pytest.approx(discs, rel=1e-14)


def test_four_rotors_have_their_published_free_frequencies():
    # G. K. Grover, Mechanical Vibrations, ex. 7.7.2 (its free vibration recomputed).
    modes = natural_modes(chain([100.0, 50.0, 10.0, 50.0], [1e4, 1e4, 2e4]))
    assert modes.omega_rad_s == pytest.approx([10.6037898319, 21.1496911527, 57.7948977449], rel=1e-11)


def test_a_geared_pair_of_discs_referred_to_one_shaft():
    # k_eq = 1/(1/k1 + 1/(n² k2)): W. T. Thomson, Theory of Vibration, sec. 12.10; massless gears in the middle.
    n = 0.25
    modes = natural_modes(chain([0.5, 0.0, n**2 * 20.0], [2e4, n**2 * 3e5]))
    assert modes.omega_rad_s == pytest.approx([164.61097835062], rel=1e-12)


def test_a_free_elastic_epicyclic_has_one_mode_in_closed_form():
    # Three free nodes and one elastic link: w² = sum(a_i²/J_i)/c (one row B = a/sqrt(c J)); own derivation.
    link = TorqueLink((0, 1, 2), (24.0 * 2.6, 96.0 * 0.6, -120.0), 1e-4)
    network = make([0.4, 30.0, 9.0], [], links=[link])
    modes = natural_modes(network)
    expected = np.sqrt(sum(a**2 / j for a, j in zip(link.coefficients, (0.4, 30.0, 9.0), strict=True)) / 1e-4)
    assert network.rigid_motions == 2
    assert modes.omega_rad_s == pytest.approx([expected], rel=1e-14)
    assert modes.link_share == pytest.approx(np.array([[1.0]]), rel=1e-14)
    assert modes.proven.all()


def test_a_sprung_resting_ring_acts_as_a_spring_between_sun_and_carrier():
    # Rigid epicyclic, z_sun = 24, z_ring = 96, massless ring on a tie k: theta_ring = -rho (theta_sun - theta_c),
    # rho = z_sun n_sun / z_ring, so that sun and carrier see the stiffness rho² k; own derivation.
    sun_speed, k = 5.0, 4e7
    rho = 24 * sun_speed / 96
    link = TorqueLink((0, 1, 2), (24 * sun_speed, 96.0, -24 * sun_speed), 0.0)
    network = make([0.4, 0.0, 9.0], [], ties=[(1, k)], links=[link], resting=[1])
    modes = natural_modes(network)
    assert network.rigid_motions == 1
    assert modes.omega_rad_s == pytest.approx([np.sqrt(rho**2 * k * (0.4 + 9) / (0.4 * 9))], rel=1e-14)
    assert modes.tie_share == pytest.approx(np.array([[1.0]]), rel=1e-14)
    assert modes.proven.all()


def test_a_sprung_resting_ring_with_inertia_lowers_the_mode_by_its_reflected_inertia():
    # The same with ring inertia J: w² = rho² k / (Js Jc/(Js + Jc) + rho² J); own derivation.
    rho, k = 24 * 5.0 / 96, 4e7
    link = TorqueLink((0, 1, 2), (24 * 5.0, 96.0, -24 * 5.0), 0.0)
    modes = natural_modes(make([0.4, 3.0, 9.0], [], ties=[(1, k)], links=[link], resting=[1]))
    expected = np.sqrt(rho**2 * k / (0.4 * 9 / 9.4 + rho**2 * 3.0))
    assert modes.omega_rad_s == pytest.approx([expected], rel=1e-14)


def test_angles_of_massless_nodes_are_recovered_from_their_neighbours():
    modes = natural_modes(chain([2.0, 0.0, 3.0], [3e5, 1e5]))
    left, middle, right = modes.angle[0]
    assert middle == pytest.approx((3e5 * left + 1e5 * right) / 4e5, rel=1e-14)
    assert modes.node_share[0, 1] == 0.0


@pytest.mark.parametrize(
    "network",
    [chain([5.0], []), make([1.0, 2.0], []), chain([1.0, 0.0], [1e5])],
    ids=["one disc", "two loose discs", "a massless end"],
)
def test_a_network_without_elastic_modes_gives_empty_arrays(network):
    modes = natural_modes(network)
    assert modes.omega_rad_s.shape == (0,)
    assert modes.angle.shape == (0, network.nodes)
    assert modes.spring_share.shape == (0, len(network.spring_ends))
    assert modes.proven.shape == modes.cluster.shape == modes.residual.shape == (0,)
    assert natural_frequencies(network).shape == (0,)


RANDOM = [
    {"loops": 2, "massless": 2},
    {"ties": 2, "loops": 1},
    {"epicyclics": 1, "massless": 2},
    {"epicyclics": 2, "rigid": False, "resting_ring": True},
]


@pytest.mark.parametrize("recipe", RANDOM)
@pytest.mark.parametrize("seed", range(3))
def test_shapes_are_orthonormal_and_shares_sum_to_one(recipe, seed):
    network = random_network(np.random.default_rng(seed), nodes=9, decades=4, **recipe)
    modes = natural_modes(network)
    count = len(modes.omega_rad_s)
    product = (modes.angle * network.inertia_kgm2) @ modes.angle.T
    assert product == pytest.approx(np.eye(count), abs=1e-10)
    strain = modes.spring_share.sum(axis=1) + modes.tie_share.sum(axis=1) + modes.link_share.sum(axis=1)
    assert strain == pytest.approx(np.ones(count), rel=1e-14)
    assert modes.node_share.sum(axis=1) == pytest.approx(np.ones(count), rel=1e-14)


@pytest.mark.parametrize("recipe", RANDOM)
def test_frequencies_alone_are_the_same_numbers(recipe):
    network = random_network(np.random.default_rng(17), nodes=9, **recipe)
    assert natural_frequencies(network).tolist() == natural_modes(network).omega_rad_s.tolist()


def test_the_first_of_the_largest_angles_is_positive():
    modes = natural_modes(chain([1.0] * 3, [1e5] * 2))
    # Three equal discs move as 1, 0, -1 (the first end leads) and 1, -2, 1 (the middle leads).
    assert modes.angle[0] == pytest.approx([0.5**0.5, 0.0, -(0.5**0.5)], abs=1e-15)
    assert modes.angle[1] == pytest.approx(np.array([-1.0, 2.0, -1.0]) / 6**0.5, rel=1e-14)


@pytest.mark.parametrize("recipe", RANDOM)
def test_half_the_energy_shares_are_the_sensitivities_of_the_frequency(recipe):
    # d ln w / d ln k = strain share / 2, d ln w / d ln J = -kinetic share / 2: R. L. Fox and M. P. Kapoor,
    # "Rates of change of eigenvalues and eigenvectors", AIAA Journal 6, 1968, from memory.
    network = random_network(np.random.default_rng(23), nodes=7, decades=3, **recipe)
    modes = natural_modes(network)

    def slope(name: str, element: int) -> np.ndarray:
        step = 1e-5
        values = getattr(network, name)
        logs = []
        for factor in (1 + step, 1 - step):
            changed = values.copy()
            changed[element] *= factor
            logs.append(np.log(natural_frequencies(replace(network, **{name: changed}))))
        return (logs[0] - logs[1]) / (2 * step)

    for spring in range(len(network.spring_ends)):
        assert slope("spring_nm_rad", spring) == pytest.approx(modes.spring_share[:, spring] / 2, abs=1e-6)
    for tie in range(len(network.tie_node)):
        assert slope("tie_nm_rad", tie) == pytest.approx(modes.tie_share[:, tie] / 2, abs=1e-6)
    for node in range(network.nodes):
        assert slope("inertia_kgm2", node) == pytest.approx(-modes.node_share[:, node] / 2, abs=1e-6)


def test_the_compliance_of_an_elastic_epicyclic_has_its_share_as_sensitivity():
    network = random_network(np.random.default_rng(5), nodes=7, decades=3, epicyclics=1, rigid=False)
    modes, (link,) = natural_modes(network), network.torque_links

    def logs(factor: float) -> np.ndarray:
        softer = replace(link, compliance_rad_per_nm=link.compliance_rad_per_nm * factor)
        return np.log(natural_frequencies(replace(network, torque_links=(softer,))))

    slope = (logs(1 + 1e-5) - logs(1 - 1e-5)) / 2e-5
    assert slope == pytest.approx(-modes.link_share[:, 0] / 2, abs=1e-6)


def test_the_proof_fails_when_the_number_of_rigid_motions_is_wrong():
    network = chain([1.0, 2.0, 3.0], [1e5, 2e5])
    modes = natural_modes(replace(network, rigid_motions=0))
    assert not modes.proven.all()
