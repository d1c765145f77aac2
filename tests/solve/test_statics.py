"""Mean torques against plain sums, closed forms and 60-digit solutions."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from networks import chain, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.motions import rigid_motions
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.statics import static_torques

KINDS = {
    "tree": {},
    "loops": {"loops": 3},
    "epicyclic": {"epicyclics": 1},
    "two epicyclics in a loop": {"epicyclics": 2, "loops": 1},
    "elastic resting ring": {"epicyclics": 1, "resting_ring": True, "rigid": False},
    "tied loops": {"ties": 1, "loops": 2},
    "elastic epicyclics and a tie": {"epicyclics": 2, "rigid": False, "ties": 1},
}


def balanced_torque(rng, network) -> np.ndarray:
    """Torques on the nodes that some torques in the links hold: no work on any rigid motion."""
    torque = np.zeros(network.nodes)
    for a, b in network.spring_ends:
        through = rng.normal() * 1e3
        torque[a] += through
        torque[b] -= through
    for node in network.tie_node:
        torque[node] += rng.normal() * 1e3
    for link in network.torque_links:
        np.add.at(torque, list(link.nodes), np.array(link.coefficients) * rng.normal() * 10)
    return torque


def exact(network, torque):
    """Spring, tie and torque-link torques by a 60-digit solution; a support of 1e-25 N·m/rad holds the rest."""
    nodes, links = network.nodes, len(network.torque_links)
    with mpmath.workdps(60):
        matrix = mpmath.zeros(nodes + links)
        for node in range(nodes):
            matrix[node, node] = mpmath.mpf(10) ** -25
        for (a, b), k in zip(network.spring_ends.tolist(), network.spring_nm_rad.tolist(), strict=True):
            for i, j, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
                matrix[i, j] += sign * mpmath.mpf(k)
        for node, k in zip(network.tie_node.tolist(), network.tie_nm_rad.tolist(), strict=True):
            matrix[node, node] += mpmath.mpf(k)
        for unknown, link in enumerate(network.torque_links, start=nodes):
            matrix[unknown, unknown] = -mpmath.mpf(link.compliance_rad_per_nm)
            for node, a in zip(link.nodes, link.coefficients, strict=True):
                matrix[node, unknown] += mpmath.mpf(a)
                matrix[unknown, node] += mpmath.mpf(a)
        x = mpmath.lu_solve(matrix, mpmath.matrix([mpmath.mpf(t) for t in torque.tolist()] + [0] * links))
        ends = zip(network.spring_ends.tolist(), network.spring_nm_rad.tolist(), strict=True)
        ties = zip(network.tie_node.tolist(), network.tie_nm_rad.tolist(), strict=True)
        return (
            [float(k * (x[a] - x[b])) for (a, b), k in ends],
            [float(k * x[node]) for node, k in ties],
            [float(x[nodes + number]) for number in range(links)],
        )


def test_every_torque_of_a_chain_is_the_sum_of_the_torques_before_it():
    network = chain([1.0] * 4, [1.5e4, 5e12, 3e6])
    found = static_torques(network, plan_elimination(network), np.array([1200.0, -200.0, 300.0, -1300.0]))
    assert found.spring_torque == pytest.approx([1200.0, 1000.0, 1300.0], rel=1e-15)
    assert found.spring_twist == pytest.approx([1200 / 1.5e4, 1000 / 5e12, 1300 / 3e6], rel=1e-15)


def test_torque_splits_between_parallel_shafts_by_their_stiffness():
    network = make([1.0, 1.0], [(0, 1, 1e5), (0, 1, 3e5)])
    found = static_torques(network, plan_elimination(network), np.array([400.0, -400.0]))
    assert found.spring_torque == pytest.approx([100.0, 300.0], rel=1e-15)


def test_an_elastic_loop_splits_by_the_stiffness_of_its_two_ways():
    # Ways of 2e5 alone and of 2e5, 2e5 in series (1e5): torques two to one.
    network = make([1.0] * 3, [(0, 2, 2e5), (0, 1, 2e5), (1, 2, 2e5)])
    found = static_torques(network, plan_elimination(network), np.array([300.0, 0.0, -300.0]))
    assert found.spring_torque == pytest.approx([200.0, 100.0, 100.0], rel=1e-14)


def test_a_free_epicyclic_splits_its_torque_as_its_teeth_say():
    # Ts : Tr : Tc = zs : zr : -(zs + zr), all speeds equal here: Willis, Principles of Mechanism, from memory.
    link = TorqueLink((0, 1, 2), (24.0, 96.0, -120.0), 0.0)
    network = make([1.0] * 6, [(3, 0, 1e5), (4, 1, 2e5), (2, 5, 3e5)], links=[link])
    found = static_torques(network, plan_elimination(network), np.array([0, 0, 0, 240.0, 960.0, -1200.0]))
    assert network.rigid_motions == 2
    assert found.link_torque == pytest.approx([10.0], rel=1e-14)
    assert found.spring_torque == pytest.approx([240.0, 960.0, 1200.0], rel=1e-14)


def test_a_resting_ring_holds_its_share_on_its_tie():
    # Ring at rest on a tie: torque at the ring = z_ring / (z_sun n_sun) of the referred sun torque.
    link = TorqueLink((0, 1, 2), (24 * 5.0, 96.0, -24 * 5.0), 0.0)
    network = make([1.0] * 4, [(3, 0, 1e5)], ties=[(1, 4e7)], links=[link], resting=[1])
    found = static_torques(network, plan_elimination(network), np.array([0.0, 0.0, -500.0, 500.0]))
    assert found.link_torque == pytest.approx([500 / 120], rel=1e-14)
    assert found.tie_torque == pytest.approx([-500 * 96 / 120], rel=1e-14)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(5))
def test_torques_match_a_sixty_digit_solution(kind, seed):
    rng = np.random.default_rng(seed)
    network = random_network(rng, nodes=8, **KINDS[kind])
    torque = balanced_torque(rng, network)
    found = static_torques(network, plan_elimination(network), torque)
    springs, ties, links = exact(network, torque)
    scale = np.abs([*springs, *ties]).max()
    assert found.spring_torque == pytest.approx(springs, abs=1e-13 * scale)
    assert found.tie_torque == pytest.approx(ties, abs=1e-13 * scale)
    assert found.link_torque == pytest.approx(links, rel=1e-11)


@pytest.mark.parametrize("kind", KINDS)
def test_angles_agree_with_twists_ties_and_links(kind):
    rng = np.random.default_rng(31)
    network = random_network(rng, nodes=8, decades=2, **KINDS[kind])
    found = static_torques(network, plan_elimination(network), balanced_torque(rng, network))
    a, b = network.spring_ends.T
    size = np.abs(found.angle).max()
    assert found.angle[a] - found.angle[b] == pytest.approx(found.spring_twist, abs=1e-12 * size)
    assert network.tie_nm_rad * found.angle[network.tie_node] == pytest.approx(found.tie_torque, rel=1e-9)
    for link, torque in zip(network.torque_links, found.link_torque, strict=True):
        stretch = np.array(link.coefficients) @ found.angle[list(link.nodes)]
        assert stretch == pytest.approx(link.compliance_rad_per_nm * torque, abs=1e-10 * size)


@pytest.mark.parametrize("kind", KINDS)
def test_rigid_motions_twist_nothing_and_are_as_many_as_counted(kind):
    network = random_network(np.random.default_rng(9), nodes=8, **KINDS[kind])
    motions = rigid_motions(network)
    assert motions.shape == (network.rigid_motions, network.nodes)
    assert np.linalg.matrix_rank(motions) == network.rigid_motions
    a, b = network.spring_ends.T
    assert (motions[:, a] == motions[:, b]).all()
    assert (motions[:, network.tie_node] == 0).all()
    for link in network.torque_links:
        terms = motions[:, list(link.nodes)] * np.array(link.coefficients)
        assert terms.sum(axis=1) == pytest.approx(np.zeros(len(motions)), abs=1e-13 * np.abs(terms).sum())


def test_torques_that_turn_the_train_are_refused_with_their_sum():
    network = chain([1.0, 1.0], [1e5])
    with pytest.raises(ValueError, match=r"sum is 0\.5 N·m of 200\.5 N·m"):
        static_torques(network, plan_elimination(network), np.array([100.5, -100.0]))


def test_torques_against_the_teeth_of_a_free_epicyclic_are_refused():
    link = TorqueLink((0, 1, 2), (24.0, 96.0, -120.0), 0.0)
    network = make([1.0] * 3, [], links=[link])
    with pytest.raises(ValueError, match="do not balance"):
        static_torques(network, plan_elimination(network), np.array([100.0, 100.0, -200.0]))


def test_no_torque_gives_no_twist():
    network = chain([1.0] * 3, [1e5, 2e5])
    assert static_torques(network, plan_elimination(network), np.zeros(3)).spring_torque.tolist() == [0.0, 0.0]
