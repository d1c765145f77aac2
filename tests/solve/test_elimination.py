"""Elimination, counting and response against closed forms, published cases and dense solutions."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from networks import chain, dense_response, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.elimination import CHUNK_POINTS, ElementValues, eliminate
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.precise import count_below
from quillshaft.solve.substitution import respond, solve

GROVER = chain([100.0, 50.0, 10.0, 50.0], [1e4, 1e4, 2e4])
MIXED = {
    "tree": {},
    "loops": {"loops": 3},
    "tied and massless": {"loops": 1, "ties": 2, "massless": 3},
    "rigid epicyclics": {"epicyclics": 2, "massless": 2},
    "elastic epicyclics": {"epicyclics": 2, "rigid": False, "loops": 1},
    "resting ring": {"epicyclics": 1, "resting_ring": True, "massless": 2},
    "two resting rings": {"epicyclics": 2, "resting_ring": True, "rigid": False, "loops": 1, "ties": 1},
}


def test_undamped_forced_response_of_four_rotors():
    # G. K. Grover, Mechanical Vibrations, ex. 7.7.2: 10 kN·m on rotor 2 at 5 rad/s; recomputed to more digits
    # than the text's -2.0627 rad, whose coefficients are rounded.
    torque = np.array([[0.0], [1e4], [0.0], [0.0]])
    found = solve(eliminate(GROVER, plan_elimination(GROVER), np.array([25.0])), torque)
    angles = [-2.0625398851308, -1.5469049138481, -1.8379068283344, -1.9604339502234]
    assert found.angle[:, 0] == pytest.approx(angles, rel=1e-12)
    assert found.angle[0, 0] == pytest.approx(-2.06274509804, rel=2e-4)
    torques = found.spring_twist[:, 0] * GROVER.spring_nm_rad
    assert torques == pytest.approx([-5156.3497128271, 2910.0191448628, 2450.5424377792], rel=1e-12)


@pytest.mark.parametrize("discs", [4, 6, 10, 57])
def test_counting_steps_at_every_closed_form_frequency_of_a_uniform_chain(discs):
    # w_i = 2 sqrt(k/J) sin(i pi/(2N)): J. P. Den Hartog, Mechanical Vibrations, ch. 4, from memory.
    network = chain([0.5] * discs, [2e5] * (discs - 1))
    omega = 2 * np.sqrt(4e5) * np.sin(np.arange(1, discs) * np.pi / (2 * discs))
    plan = plan_elimination(network)
    assert count_below(network, plan, (omega * (1 - 1e-13)) ** 2).tolist() == list(range(discs - 1))
    assert count_below(network, plan, (omega * (1 + 1e-13)) ** 2).tolist() == list(range(1, discs))


def test_counting_takes_an_exactly_zero_pivot():
    # Two discs J = 1, k = 1: the first pivot k - w²J is exactly zero at w = 1, the only mode lies at sqrt(2).
    network = chain([1.0, 1.0], [1.0])
    counts = count_below(network, plan_elimination(network), np.array([0.0, 1.0, 1.999999, 2.000001]))
    assert counts.tolist() == [0, 0, 0, 1]


def test_counting_takes_zero_pivots_of_stiff_shafts_in_a_loop():
    # Three discs in a ring, J = 1, k = 1e12: both modes at w² = 3k/J; a pivot vanishes at w² = 2k/J.
    network = make([1.0] * 3, [(0, 1, 1e12), (1, 2, 1e12), (2, 0, 1e12)])
    counts = count_below(network, plan_elimination(network), np.array([0.0, 2e12, 2.99e12, 3.01e12]))
    assert counts.tolist() == [0, 0, 0, 2]


def test_counting_of_no_points_is_empty():
    assert count_below(GROVER, plan_elimination(GROVER), np.zeros(0)).shape == (0,)


def test_counting_is_the_same_in_one_point_and_in_chunks():
    omega2 = np.linspace(0.0, 4e3, 2 * CHUNK_POINTS + 5)
    counts = count_below(GROVER, plan_elimination(GROVER), omega2)
    # Free frequencies of the four rotors: 10.6037898319, 21.1496911527, 57.7948977449 rad/s (same example).
    free = np.array([10.6037898319, 21.1496911527, 57.7948977449])
    assert counts.tolist() == (omega2[:, None] > free**2).sum(axis=1).tolist()


@pytest.mark.parametrize("kind", MIXED)
@pytest.mark.parametrize("seed", range(4))
def test_response_matches_the_dense_solution_with_fifty_digits(kind, seed):
    rng = np.random.default_rng(seed)
    network = random_network(rng, nodes=7, **MIXED[kind])
    torque = rng.normal(size=(network.nodes, 1))
    omega2 = 10 ** rng.uniform(2, 8, 3)
    found = solve(eliminate(network, plan_elimination(network), omega2), torque)
    for point, value in enumerate(omega2):
        angle, twist, link = dense_response(network, torque[:, 0], value)
        assert found.angle[:, point] == pytest.approx(angle, rel=1e-9, abs=1e-10 * np.abs(angle).max())
        torques = np.array(twist) * network.spring_nm_rad
        scale = max(np.abs(torques).max(), np.abs(torque).max())
        assert network.spring_nm_rad * found.spring_twist[:, point] == pytest.approx(torques, abs=1e-9 * scale)
        assert found.link_torque[:, point] == pytest.approx(link, rel=1e-8)


@pytest.mark.parametrize("kind", MIXED)
def test_damped_response_matches_a_dense_complex_solution(kind):
    rng = np.random.default_rng(11)
    network = random_network(rng, nodes=7, decades=2, **MIXED[kind])
    omega = np.array([30.0, 900.0, 4000.0])
    springs = [k * (1 + 0.1j) + 1j * omega * 20.0 for k in network.spring_nm_rad]
    ties = [k * (1 + 0.05j) for k in network.tie_nm_rad]
    inertia = [j * (1 + 0.01 * omega / 4000) for j in network.inertia_kgm2]
    torque = rng.normal(size=(network.nodes, 3)) + 1j * rng.normal(size=(network.nodes, 3))
    values = ElementValues(springs=springs, ties=ties, inertia=inertia)
    found = respond(network, plan_elimination(network), omega**2, torque, values)
    for point in range(3):
        angle, twist, link = dense_response(
            network,
            torque[:, point],
            omega[point] ** 2,
            springs=[k[point] for k in springs],
            ties=ties,
            inertia=[j[point] for j in inertia],
        )
        scale = np.abs(angle).max()
        assert found.angle[:, point] == pytest.approx(angle, abs=1e-11 * scale)
        assert found.spring_twist[:, point] == pytest.approx(twist, abs=1e-11 * scale)
        assert found.tie_twist[:, point] == pytest.approx(np.array(angle)[network.tie_node], abs=1e-11 * scale)
        assert found.link_torque[:, point] == pytest.approx(link, rel=1e-9)


def test_the_twist_of_a_very_stiff_shaft_keeps_its_digits():
    # The angles agree to some 12 digits here; their difference would leave the torque with 4.
    network = chain([3.0, 0.2, 7.0, 1.0], [1.5e4, 5e12, 2e6])
    torque = np.array([0.0, 0.0, 0.0, 5.0])
    found = solve(eliminate(network, plan_elimination(network), np.array([900.0])), torque[:, None])
    _, twist, _ = dense_response(network, torque, 900.0)
    assert found.spring_twist[:, 0] == pytest.approx(twist, rel=1e-13)


def test_a_transmission_error_on_a_free_epicyclic_gives_its_closed_form_torque():
    # Three free nodes and one elastic link: T = -e w² ... from sum(a² /(-w² J)) T ... = e + c T.
    link = TorqueLink((0, 1, 2), (24.0, 96.0, -120.0), 1e-6)
    network = make([0.5, 20.0, 6.0], [], links=[link])
    omega2, error = 250.0**2, 1e-3
    found = solve(
        eliminate(network, plan_elimination(network), np.array([omega2])),
        np.zeros((3, 1)),
        link_error=np.array([[error]]),
    )
    # Node i: -w² J_i x_i + a_i T = 0, link: sum(a_i x_i) - c T = e  =>  T = e / (sum(a_i²/(w² J_i)) - c).
    mobility = sum(a**2 / (omega2 * j) for a, j in zip(link.coefficients, (0.5, 20.0, 6.0), strict=True))
    assert found.link_torque[0, 0] == pytest.approx(error / (mobility - 1e-6), rel=1e-13)


def test_response_in_chunks_equals_response_point_by_point():
    omega2 = np.linspace(1.0, 4e3, CHUNK_POINTS + 3)
    torque = np.array([[0.0], [1e4], [0.0], [0.0]])
    plan = plan_elimination(GROVER)
    springs = np.multiply.outer(GROVER.spring_nm_rad, 1 + 0.02j + 1e-6j * omega2)
    together = respond(GROVER, plan, omega2, torque, ElementValues(springs=springs))
    assert together.angle.shape == (4, CHUNK_POINTS + 3)
    for point in (0, CHUNK_POINTS - 1, CHUNK_POINTS, CHUNK_POINTS + 2):
        one = ElementValues(springs=springs[:, point : point + 1])
        alone = respond(GROVER, plan, omega2[point : point + 1], torque, one)
        assert together.angle[:, point] == pytest.approx(alone.angle[:, 0], rel=1e-14)


def test_the_static_limit_of_a_tied_chain_is_its_flexibility():
    network = make([1.0, 1.0], [(0, 1, 3.0)], ties=[(0, 6.0)])
    found = solve(eliminate(network, plan_elimination(network), np.zeros(1)), np.array([[0.0], [1.0]]))
    assert found.angle[:, 0] == pytest.approx([1 / 6, 1 / 2], rel=1e-15)
    assert mpmath.almosteq(found.tie_twist[0, 0], mpmath.mpf(1) / 6, 1e-15)
