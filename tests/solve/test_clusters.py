"""Equal branches: clusters of equal frequencies, near ones, and loops whose pivots vanish at a mode."""

from __future__ import annotations

import numpy as np
import pytest
from networks import exact_frequencies, make

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.modes import natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.precise import count_below, solve_at


def star(branches: int, stiffness: float = 2e5, inertia: float = 0.8):
    """A motor, a hub and equal single-disc branches on the hub."""
    discs = [10.0, 2.0] + [inertia] * branches
    return make(discs, [(0, 1, 1e6)] + [(1, 2 + branch, stiffness) for branch in range(branches)])


def ring(nodes: int):
    return make([1.0] * nodes, [(node, (node + 1) % nodes, 1e6) for node in range(nodes)])


def grid(rows: int, columns: int):
    springs = []
    for row in range(rows):
        for column in range(columns):
            here = row * columns + column
            if row + 1 < rows:
                springs.append((here, here + columns, 1e6))
            if column + 1 < columns:
                springs.append((here, here + 1, 1e6))
    return make([1.0] * (rows * columns), springs)


def test_twin_geared_branches_have_their_exact_antisymmetric_mode():
    # J1 = 10, k1 = 1e6, gear 2.0, two pinions 0.05 at n = 3, kb = 2e5, Jb = 0.8: own data. In the antisymmetric
    # mode, sqrt(kb/Jb), motor, gear and pinions stand still.
    hub = 2.0 + 2 * 9 * 0.05
    network = make([10.0, hub, 7.2, 7.2], [(0, 1, 1e6), (1, 2, 1.8e6), (1, 3, 1.8e6)])
    modes = natural_modes(network)
    assert modes.omega_rad_s == pytest.approx([360.9999765752, 500.0, 1343.832546661], rel=1e-12)
    assert modes.angle[1, :2] == pytest.approx([0.0, 0.0], abs=1e-14)


@pytest.mark.parametrize("branches", [3, 4, 7])
def test_equal_branches_make_one_cluster_at_their_closed_form(branches):
    network = star(branches)
    modes = natural_modes(network)
    at = np.flatnonzero(np.abs(modes.omega_rad_s - 500.0) < 1.0)
    assert len(at) == branches - 1
    assert modes.omega_rad_s[at] == pytest.approx(np.full(branches - 1, 500.0), rel=1e-14)
    assert modes.cluster[at].tolist() == [at[0]] * (branches - 1)
    assert modes.below[at].tolist() == [at[0]] * (branches - 1)
    assert modes.above[at].tolist() == [at[-1] + 1] * (branches - 1)
    assert modes.proven.all()
    assert modes.residual.max() < 1e-13


def test_three_equal_lowest_modes_lie_between_zero_and_three():
    network = make([1e3, *[1.0] * 4], [(0, 1 + branch, 1e4) for branch in range(4)])
    modes = natural_modes(network)
    assert modes.below.tolist() == [0, 0, 0, 3]
    assert modes.above.tolist() == [3, 3, 3, 4]


def test_a_cluster_shares_its_energy_evenly_over_equal_branches():
    modes = natural_modes(star(4))
    inside = modes.cluster != np.arange(len(modes.cluster))
    at = np.flatnonzero(inside)[0] - 1
    for mode in range(at, at + 3):
        assert modes.spring_share[mode] == pytest.approx([0.0, 0.25, 0.25, 0.25, 0.25], abs=1e-13)
        assert modes.node_share[mode] == pytest.approx([0.0, 0.0, 0.25, 0.25, 0.25, 0.25], abs=1e-13)


def test_the_basis_of_a_cluster_is_cleared_in_node_order():
    # Nodes 2 to 5 are the equal branches: the second shape is still at node 2, the third at nodes 2 and 3.
    modes = natural_modes(star(4))
    at = np.flatnonzero(modes.cluster != np.arange(len(modes.cluster)))[0] - 1
    assert abs(modes.angle[at, 2]) > 0.1
    assert modes.angle[at + 1, 2] == pytest.approx(0.0, abs=1e-13)
    assert modes.angle[at + 2, 2:4] == pytest.approx([0.0, 0.0], abs=1e-13)
    product = (modes.angle * star(4).inertia_kgm2) @ modes.angle.T
    assert product == pytest.approx(np.eye(len(product)), abs=1e-12)


@pytest.mark.parametrize("difference", [0.0, 1e-14, 1e-12, 3e-12, 1e-11, 2e-11, 4e-11, 1e-9, 1e-7])
def test_nearly_equal_branches_are_right_proven_and_in_balance(difference):
    rng = np.random.default_rng(4)
    for _ in range(5):
        bend = 1 + difference * rng.normal(size=(2, 3))
        springs = [(0, 1, 1e6)] + [(1, 2 + branch, 2e5 * bend[0, branch]) for branch in range(3)]
        network = make([10.0, 2.0, *(0.8 * bend[1])], springs)
        modes = natural_modes(network)
        exact = [float(value) for value in exact_frequencies(network)]
        assert modes.omega_rad_s == pytest.approx(exact, rel=1e-14)
        assert modes.proven.all()
        assert modes.residual.max() < 1e-11


def test_two_separate_equal_trains_pair_every_mode():
    springs = [(0, 1, 1e5), (1, 2, 3e5), (3, 4, 1e5), (4, 5, 3e5)]
    network = make([1.0, 2.0, 3.0] * 2, springs)
    modes = natural_modes(network)
    assert network.rigid_motions == 2
    assert modes.cluster.tolist() == [0, 0, 2, 2]
    assert modes.below.tolist() == [0, 0, 2, 2]
    assert modes.above.tolist() == [2, 2, 4, 4]


@pytest.mark.parametrize("nodes", [3, 4, 6, 8, 12])
def test_a_uniform_ring_is_proven_at_its_closed_form(nodes):
    # w_i = 2 sqrt(k/J) sin(i pi/N), all but the highest of even rings in pairs: L. Brillouin, Wave Propagation
    # in Periodic Structures, from memory. In rings of 4, 8 and 12 a pivot vanishes exactly at a mode.
    modes = natural_modes(ring(nodes))
    exact = sorted(2e3 * np.sin(np.arange(1, nodes) * np.pi / nodes))
    assert modes.omega_rad_s == pytest.approx(exact, rel=1e-14)
    assert modes.proven.all()
    assert modes.residual.max() < 1e-13


@pytest.mark.parametrize(("rows", "columns"), [(2, 3), (3, 3), (3, 4), (4, 4)])
def test_a_uniform_grid_is_proven_at_its_closed_form(rows, columns):
    # w² = 4 k/J [sin²(i pi/(2 rows)) + sin²(j pi/(2 columns))]: product of two free chains (Kronecker sum).
    modes = natural_modes(grid(rows, columns))
    along = 4e6 * np.sin(np.arange(rows) * np.pi / (2 * rows)) ** 2
    across = 4e6 * np.sin(np.arange(columns) * np.pi / (2 * columns)) ** 2
    exact = np.sort(np.sqrt(np.add.outer(along, across).ravel()))[1:]
    assert modes.omega_rad_s == pytest.approx(exact, rel=1e-14)
    assert modes.proven.all()
    assert modes.residual.max() < 1e-12


def test_planets_that_swing_against_each_other_in_loops_are_proven():
    # Sun, ring and n coupled planets: planets swing with sun and ring still at
    # w² = (2 k + 4 kc sin²(i pi/n))/J, i = 1 .. n - 1; own derivation.
    for planets in (3, 4, 6, 8):
        mesh = [(end, 2 + planet, 1e8) for planet in range(planets) for end in (0, 1)]
        coupled = [(2 + planet, 2 + (planet + 1) % planets, 1e7) for planet in range(planets)]
        modes = natural_modes(make([1.0, 9.0] + [0.3] * planets, mesh + coupled))
        still = np.sqrt((2e8 + 4e7 * np.sin(np.arange(1, planets) * np.pi / planets) ** 2) / 0.3)
        nearest = [modes.omega_rad_s[np.abs(modes.omega_rad_s - value).argmin()] for value in still]
        assert nearest == pytest.approx(still, rel=1e-14)
        assert modes.proven.all()


def test_counting_is_right_exactly_where_a_pivot_of_a_loop_vanishes():
    # Four equal discs in a ring: w² = 2k/J twice and 4k/J. At 2k/J the first pivot is exactly zero; a mode at a
    # point counts as below it.
    network = ring(4)
    points = 1e6 * np.array([0.0, 1.0, 2.0 * (1 - 1e-14), 2.0, 2.0 * (1 + 1e-14), 3.999, 4.001])
    counts = count_below(network, plan_elimination(network), points)
    assert counts.tolist() == [0, 0, 0, 2, 2, 2, 3]


def test_solving_next_to_a_vanishing_pivot_keeps_its_digits():
    # Ring of four at w² = 2k/J (1 + 1e-13), torque on nodes 0 and 2 against each other: they are alone with
    # (2k - w²J) x = 1, nodes 1 and 3 still.
    network = ring(4)
    omega2 = np.array([2e6 * (1 + 1e-13)])
    found = solve_at(network, plan_elimination(network), omega2, np.array([[1.0], [0.0], [-1.0], [0.0]]))
    expected = 1.0 / (2e6 - omega2[0])
    assert found.angle[:, 0] == pytest.approx([expected, 0.0, -expected, 0.0], rel=1e-14, abs=1e-3)


def whole_number_network(rng: np.random.Generator):
    """A small network of few different stiffnesses and inertias, so that modes and pivots often coincide."""
    nodes = int(rng.integers(3, 8))
    springs = [(node, int(rng.integers(node)), 1e6 * int(rng.integers(1, 3))) for node in range(1, nodes)]
    for _ in range(int(rng.integers(0, nodes))):
        a, b = rng.choice(nodes, 2, replace=False)
        springs.append((int(a), int(b), 1e6 * int(rng.integers(1, 3))))
    inertia = [float(rng.integers(1, 3)) for _ in range(nodes)]
    inertia[-1] = float(rng.integers(0, 2))
    ties = [(int(rng.integers(nodes)), 1e6) for _ in range(int(rng.integers(0, 3)))]
    if rng.random() < 0.6:
        return make(inertia, springs, ties)
    copies = [(a + nodes * copy, b + nodes * copy, k) for copy in range(3) for a, b, k in springs]
    compliance = float(rng.choice([0.0, 1e-6]))
    link = TorqueLink((0, nodes, 2 * nodes), (1.0, 1.0, -2.0), compliance)
    return make(inertia * 3, copies, ties, [link])


@pytest.mark.parametrize("start", range(0, 120, 20))
def test_networks_of_equal_parts_are_proven_and_in_balance(start):
    for seed in range(start, start + 20):
        network = whole_number_network(np.random.default_rng(seed))
        modes = natural_modes(network)
        assert modes.proven.all(), seed
        assert modes.residual.max(initial=0.0) < 1e-11, seed
        product = (modes.angle * network.inertia_kgm2) @ modes.angle.T
        assert product == pytest.approx(np.eye(len(product)), abs=1e-8), seed


@pytest.mark.parametrize("seed", range(0, 60, 4))
def test_networks_of_equal_parts_match_fifty_digit_arithmetic(seed):
    network = whole_number_network(np.random.default_rng(seed))
    exact = [float(value) for value in exact_frequencies(network)]
    assert natural_modes(network).omega_rad_s == pytest.approx(exact, rel=1e-12)
