"""Modes below a frequency as a function of one link's stiffness: against the modes of the network itself."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from networks import chain, make, random_network

from quillshaft.graph.network import Network, TorqueLink
from quillshaft.solve.link_counts import link_counts, open_link
from quillshaft.solve.modes import natural_frequencies

NEAR = 1e-9


def elastic(network: Network) -> list[tuple[str, int, float]]:
    """(slot, number, stiffness) of every link with a stiffness."""
    links = [("spring", i, k) for i, k in enumerate(network.spring_nm_rad.tolist())]
    links += [("tie", i, k) for i, k in enumerate(network.tie_nm_rad.tolist())]
    compliances = [link.compliance_rad_per_nm for link in network.torque_links]
    return links + [("torque", i, 1 / c) for i, c in enumerate(compliances) if c > 0]


def with_stiffness(network: Network, slot: str, index: int, stiffness: float) -> Network:
    springs, ties, links = network.spring_nm_rad.copy(), network.tie_nm_rad.copy(), list(network.torque_links)
    if slot == "torque":
        links[index] = replace(links[index], compliance_rad_per_nm=1 / stiffness)
    else:
        (springs if slot == "spring" else ties)[index] = stiffness
    return replace(network, spring_nm_rad=springs, tie_nm_rad=ties, torque_links=tuple(links))


def networks(count: int):
    rng = np.random.default_rng(11)
    for _ in range(count):
        network = random_network(
            rng,
            nodes=int(rng.integers(3, 12)),
            loops=int(rng.integers(0, 3)),
            massless=int(rng.integers(0, 3)),
            ties=int(rng.integers(0, 2)),
            epicyclics=int(rng.integers(0, 3)),
            rigid=bool(rng.integers(2)),
            resting_ring=bool(rng.integers(2)),
            decades=float(rng.choice([4.0, 8.0])),
        )
        omega = natural_frequencies(network)
        if len(omega):
            links = elastic(network)
            yield rng, network, omega, links[int(rng.integers(len(links)))]


def test_counts_hold_for_every_stiffness_over_six_decades_on_random_networks():
    points = 0
    for rng, network, omega, (slot, index, stiffness) in networks(150):
        at = np.exp(rng.uniform(np.log(omega[0] * 0.3), np.log(omega[-1] * 2), 30))
        counts = link_counts(open_link(network, slot, index), at**2)
        for k in stiffness * 10 ** rng.uniform(-3, 3, 5):
            modes = natural_frequencies(with_stiffness(network, slot, index, float(k)))
            sure = np.min(np.abs(modes[:, None] / at - 1), axis=0) > NEAR
            assert np.array_equal(counts.at(float(k))[sure], np.sum(modes[:, None] < at, axis=0)[sure])
            points += int(sure.sum())
    assert points > 20_000


def test_a_turning_stiffness_puts_a_mode_on_its_frequency_to_1e_13():
    worst, turns = 0.0, 0
    for rng, network, omega, (slot, index, stiffness) in networks(150):
        at = np.exp(rng.uniform(np.log(omega[0] * 0.3), np.log(omega[-1] * 2), 12))
        for point, turn in zip(at, link_counts(open_link(network, slot, index), at**2).turn_nm_rad, strict=True):
            if 1e-6 < turn / stiffness < 1e6:
                modes = natural_frequencies(with_stiffness(network, slot, index, float(turn)))
                worst = max(worst, float(np.min(np.abs(modes / point - 1))))
                turns += 1
    assert turns > 500
    assert worst < 1e-13


def test_long_arithmetic_gives_the_same_counts_and_turns():
    for rng, network, omega, (slot, index, _) in networks(15):
        at = np.exp(rng.uniform(np.log(omega[0] * 0.5), np.log(omega[-1] * 1.5), 6))
        opened = open_link(network, slot, index)
        precise = link_counts(replace(opened, plan=replace(opened.plan, precisely=True)), at**2)
        counts = link_counts(opened, at**2)
        known = omega[:, None] / at
        for k in (0.1, 1.0, 10.0):
            assert np.array_equal(counts.at(k * 1e8), precise.at(k * 1e8))
        finite = np.isfinite(precise.turn_nm_rad) & (np.abs(known - 1).min(axis=0) > 1e-3)
        assert np.allclose(counts.turn_nm_rad[finite], precise.turn_nm_rad[finite], rtol=1e-6)


def test_two_inertias_the_link_that_is_all_that_joins_them():
    """ω² = k (1/J₁ + 1/J₂) (Den Hartog, Mechanical Vibrations, ch. 2), and the two turn as one at zero."""
    counts = link_counts(open_link(chain([2.0, 3.0], [1e4]), "spring", 0), np.array([-1.0, 0.0, 100.0]) ** 2)
    assert counts.turn_nm_rad[2] == pytest.approx(100.0**2 / (1 / 2 + 1 / 3), rel=1e-14)
    assert counts.base.tolist() == [0, 0, 0]
    below = link_counts(open_link(chain([2.0, 3.0], [1e4]), "spring", 0), np.array([0.0]))
    assert below.at(1e-9).tolist() == [0]


def test_a_massless_end_that_hangs_on_the_link_alone_makes_its_stiffness_idle():
    network = make([2.0, 3.0, 0.0], [(0, 1, 1e4), (1, 2, 5e3)])
    omega = natural_frequencies(network)[0]
    counts = link_counts(open_link(network, "spring", 1), np.array([0.9 * omega, 1.1 * omega]) ** 2)
    for k in (1e-6, 1.0, 1e12):
        assert counts.at(k).tolist() == [0, 1]


def test_a_massless_member_that_hangs_on_an_epicyclic_stage_alone_makes_its_stiffness_idle():
    stage = TorqueLink((0, 1, 3), (1.0, 3.0, -4.0), 1e-6)
    network = make([2.0, 3.0, 4.0, 0.0], [(1, 2, 1e4)], links=[stage])
    omega = natural_frequencies(network)
    assert len(omega) == 1
    counts = link_counts(open_link(network, "torque", 0), np.array([0.9 * omega[0], 1.1 * omega[0]]) ** 2)
    for k in (1e-6, 1.0, 1e12):
        assert counts.at(k).tolist() == [0, 1]


def test_a_spring_beside_another_counts_that_one_in():
    """Two parallel springs add: the turning stiffness is that of the pair less the other one."""
    network = make([2.0, 3.0], [(0, 1, 1e4), (0, 1, 5e3)])
    counts = link_counts(open_link(network, "spring", 0), np.array([150.0]) ** 2)
    assert counts.turn_nm_rad[0] == pytest.approx(150.0**2 / (1 / 2 + 1 / 3) - 5e3, rel=1e-12)


def test_a_tie_turns_at_the_inertia_force():
    """One inertia on a spring to ground: ω² = k/J."""
    counts = link_counts(open_link(make([2.0], [], [(0, 1e4)]), "tie", 0), np.array([50.0]) ** 2)
    assert counts.turn_nm_rad[0] == pytest.approx(2.0 * 50.0**2, rel=1e-15)
