"""The symbolic phase: every unknown once, trees without fill, links after a node, structure only."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from networks import chain, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve.elimination import eliminate
from quillshaft.solve.modes import natural_modes
from quillshaft.solve.plan import plan_elimination


def order(plan) -> list[int]:
    return [*plan.leaf, *(step.unknown for step in plan.core)]


@pytest.mark.parametrize("seed", range(20))
def test_every_unknown_is_eliminated_exactly_once(seed):
    rng = np.random.default_rng(seed)
    network = random_network(rng, nodes=12, loops=seed % 4, epicyclics=seed % 3, massless=seed % 5)
    plan = plan_elimination(network)
    assert sorted(order(plan)) == list(range(network.nodes + len(network.torque_links)))


def test_a_tree_is_peeled_down_to_one_node_and_fills_nothing():
    network = random_network(np.random.default_rng(3), nodes=200)
    plan = plan_elimination(network)
    assert len(plan.leaf) == 199
    assert [step.neighbours for step in plan.core] == [()]
    assert plan.pair_count == 199


def test_a_single_ring_fills_one_pair_fewer_than_its_nodes_less_two():
    # Eliminating a ring of n nodes one by one joins two neighbours each time; the last triangle needs none.
    springs = [(node, (node + 1) % 9, 1.0) for node in range(9)]
    assert plan_elimination(make([1.0] * 9, springs)).pair_count == 9 + 9 - 3


@pytest.mark.parametrize("seed", range(20))
def test_a_torque_link_goes_after_at_least_one_of_its_nodes(seed):
    network = random_network(np.random.default_rng(seed), nodes=9, loops=1, epicyclics=2)
    sequence = order(plan_elimination(network))
    for unknown, link in enumerate(network.torque_links, start=network.nodes):
        assert min(sequence.index(node) for node in link.nodes) < sequence.index(unknown)


def test_a_massless_node_held_only_by_a_torque_link_goes_after_the_link():
    link = TorqueLink((0, 1, 2), (24.0, 96.0, -120.0), 0.0)
    network = make([1.0, 0.0, 2.0, 3.0], [(2, 3, 1e5)], links=[link])
    sequence = order(plan_elimination(network))
    assert sequence.index(1) > sequence.index(4)


def test_chosen_nodes_go_last_in_the_order_given():
    network = random_network(np.random.default_rng(5), nodes=15, loops=3, epicyclics=1)
    assert order(plan_elimination(network, last=(2, 7)))[-2:] == [2, 7]
    assert order(plan_elimination(chain([1.0] * 5, [1.0] * 4), last=(0, 1)))[-2:] == [0, 1]


def test_chosen_last_nodes_do_not_change_the_frequencies():
    network = random_network(np.random.default_rng(6), nodes=10, loops=2)
    free = natural_modes(network)
    chosen = natural_modes(network, plan_elimination(network, last=(1, 4)))
    assert chosen.omega_rad_s == pytest.approx(free.omega_rad_s, rel=1e-13)
    assert chosen.proven.all()


def test_one_plan_serves_other_values_of_the_same_structure():
    network = random_network(np.random.default_rng(8), nodes=12, loops=2, epicyclics=1)
    plan = plan_elimination(network)
    softer = replace(network, spring_nm_rad=network.spring_nm_rad * 0.7)
    assert plan_elimination(softer) == plan
    assert natural_modes(softer, plan).omega_rad_s == pytest.approx(natural_modes(softer).omega_rad_s, rel=1e-14)


def test_parallel_springs_share_a_pair_and_act_as_their_sum():
    two = make([2.0, 3.0], [(0, 1, 4e4), (1, 0, 6e4)])
    assert plan_elimination(two).spring_pair == (0, 0)
    modes = natural_modes(two)
    # Two discs, w = sqrt(k (J1 + J2)/(J1 J2)): W. T. Thomson, Theory of Vibration, from memory.
    assert modes.omega_rad_s == pytest.approx([288.675134594813], rel=1e-13)
    assert modes.spring_share[0] == pytest.approx([0.4, 0.6], rel=1e-13)
    assert modes.spring_twist[0, 0] == pytest.approx(-modes.spring_twist[0, 1], rel=1e-14)


def test_a_spring_with_both_ends_on_one_node_carries_nothing():
    modes = natural_modes(make([2.0, 3.0], [(0, 0, 7e4), (0, 1, 1e5)]))
    assert modes.omega_rad_s == pytest.approx([288.675134594813], rel=1e-13)
    assert modes.spring_twist[0, 0] == 0.0


def test_a_long_chain_is_eliminated_to_the_right_pivot():
    # At rest the last pivot of a chain tied at its other end is the stiffness of all springs in series.
    network = make([1.0] * 3, [(0, 1, 2.0), (1, 2, 3.0)], ties=[(0, 6.0)])
    plan = plan_elimination(network, last=(2,))
    pivot = eliminate(network, plan, np.zeros(1)).pivot
    assert pivot[2, 0] == pytest.approx(1.0, rel=1e-15)  # 1/(1/6 + 1/2 + 1/3)
