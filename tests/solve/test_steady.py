"""Steady response against dense complex solves, closed forms, published cases and the laws of balance and energy."""

from __future__ import annotations

import tracemalloc
from dataclasses import replace

import numpy as np
import pytest
from damped_networks import damping, random_damping
from hypothesis import given, settings
from hypothesis import strategies as st
from networks import chain, dense_response, make, random_network

from quillshaft.graph.network import TorqueLink
from quillshaft.solve import steady
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.steady import steady_chunks, steady_response

SHAPES = {
    "chain": {"nodes": 9, "chain_only": True},
    "tree": {"nodes": 12},
    "two stations": {"nodes": 2},
    "tied tree": {"nodes": 7, "ties": 2},
    "massless": {"nodes": 8, "loops": 1, "ties": 1, "massless": 3},
    "two loops": {"nodes": 8, "loops": 2},
    "four loops": {"nodes": 10, "loops": 4, "ties": 1},
    "rigid epicyclics": {"nodes": 5, "epicyclics": 2, "massless": 1},
    "elastic epicyclics": {"nodes": 5, "epicyclics": 2, "rigid": False, "loops": 1},
    "resting ring": {"nodes": 6, "epicyclics": 1, "resting_ring": True},
    "two resting rings": {"nodes": 4, "epicyclics": 2, "resting_ring": True, "rigid": False, "loops": 1},
}
FIELDS = ("angle", "spring_twist", "spring_torque", "tie_torque", "link_torque")


def with_rings(rng, network, given_damping, count):
    """The same with rings on viscous fluid alone: springs of stiffness 0."""
    hosts = rng.integers(network.nodes, size=count)
    own = np.arange(network.nodes, network.nodes + count)
    network = replace(
        network,
        inertia_kgm2=np.append(network.inertia_kgm2, rng.uniform(0.1, 5.0, count)),
        turning=np.append(network.turning, network.turning[hosts]),
        spring_ends=np.concatenate([network.spring_ends, np.stack([hosts, own], axis=1)]),
        spring_nm_rad=np.append(network.spring_nm_rad, np.zeros(count)),
    )
    none = np.zeros(count)
    return network, replace(
        given_damping,
        spring_loss=np.append(given_damping.spring_loss, none),
        spring_viscous=np.append(given_damping.spring_viscous, 10 ** rng.uniform(1, 4, count)),
        node_viscous=np.append(given_damping.node_viscous, none),
    )


def damped_case(shape, seed, points=7):
    """A random network with every kind of damping, frequencies over all its modes, and two loads."""
    rng = np.random.default_rng(seed)
    network = random_network(rng, decades=3.0, **SHAPES[shape])
    network, own = with_rings(rng, network, random_damping(rng, network, viscous=True, lossy=True), 2)
    lost = 0.02 * network.inertia_kgm2 * (rng.random(network.nodes) < 0.4)
    own = replace(own, node_lost_kgm2=lost)
    omega = 10 ** rng.uniform(1.5, 5, points)
    loads = [rng.normal(size=(network.nodes, points)) + 1j * rng.normal(size=(network.nodes, points))]
    loads.append((rng.normal(size=(network.nodes, 1)) * (rng.random((network.nodes, 1)) < 0.4)).astype(complex))
    loads[1][0] = 1.0
    return network, own, omega, loads


def weights(network, own, omega):
    """k (1 + jη) + jωc of springs, ties and torque links (0 where rigid) at one frequency."""
    links = np.array([1 / item.compliance_rad_per_nm if item.compliance_rad_per_nm else 0.0
                      for item in network.torque_links])  # fmt: skip
    return (
        network.spring_nm_rad * (1 + 1j * own.spring_loss) + 1j * omega * own.spring_viscous,
        network.tie_nm_rad * (1 + 1j * own.tie_loss) + 1j * omega * own.tie_viscous,
        links * (1 + 1j * own.link_loss) + 1j * omega * own.link_viscous,
    )


def lost_of(network, own):
    return np.zeros(network.nodes) if own.node_lost_kgm2 is None else own.node_lost_kgm2


def dense(network, own, omega, load):
    """Every field of `Steady` at one frequency by numpy.linalg.solve, torque links as further unknowns.

    The matrix is scaled by the roots of its diagonal, so that what the solve loses is not a matter of units.
    """
    nodes, links = network.nodes, network.torque_links
    springs, ties, stages = weights(network, own, omega)
    matrix = np.zeros((nodes + len(links),) * 2, dtype=complex)
    inertia = network.inertia_kgm2 - 1j * lost_of(network, own)
    matrix[range(nodes), range(nodes)] = -(omega**2) * inertia + 1j * omega * own.node_viscous
    for (a, b), value in zip(network.spring_ends.tolist(), springs, strict=True):
        matrix[a, a] += value
        matrix[b, b] += value
        matrix[a, b] -= value
        matrix[b, a] -= value
    for node, value in zip(network.tie_node.tolist(), ties, strict=True):
        matrix[node, node] += value
    for unknown, (link, value) in enumerate(zip(links, stages, strict=True), start=nodes):
        for node, a in zip(link.nodes, link.coefficients, strict=True):
            matrix[node, unknown] += a
            matrix[unknown, node] += a
        matrix[unknown, unknown] = -1 / value if value else 0.0
    scale = 1 / np.sqrt(np.abs(np.diag(matrix)[:nodes]))
    scale = np.append(scale, [1 / max(abs(np.array(link.coefficients) * scale[list(link.nodes)])) for link in links])
    right = np.append(load, np.zeros(len(links)))
    x = scale * np.linalg.solve(matrix * np.outer(scale, scale), scale * right)
    twist = x[network.spring_ends[:, 0]] - x[network.spring_ends[:, 1]]
    return x[:nodes], twist, springs * twist, ties * x[network.tie_node], x[nodes:]


def at(load, point):
    return load[:, 0 if load.shape[1] == 1 else point]


def respond(network, own, omega, loads, springs=None):
    return steady_response(network, own, plan_elimination(network), omega, loads, springs)


def assert_same(found, other, rtol):
    """Every field equal, relative to the largest of the field at each point."""
    for name in FIELDS:
        ours, theirs = getattr(found, name), getattr(other, name)
        size = np.abs(theirs).max(axis=0, initial=0.0)
        assert (np.abs(ours - theirs) <= rtol * size + 1e-300).all(), name


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize("shape", SHAPES)
def test_every_kind_of_damping_matches_a_dense_complex_solve(shape, seed):
    """Angles and twists to 1e-10 of the largest angle, torques to 1e-10 of the largest torque of any link or load;
    stiffness over three decades, so that the dense solve itself is good for that."""
    network, own, omega, loads = damped_case(shape, seed)
    for load, found in zip(loads, respond(network, own, omega, loads), strict=True):
        for point, frequency in enumerate(omega):
            angle, twist, spring, tie, link = dense(network, own, frequency, at(load, point))
            size = np.abs(angle).max()
            np.testing.assert_allclose(found.angle[:, point], angle, rtol=0, atol=1e-10 * size)
            np.testing.assert_allclose(found.spring_twist[:, point], twist, rtol=0, atol=1e-10 * size)
            heaviest = max(np.abs(weights(network, own, frequency)[0]).max() * size, np.abs(spring).max())
            np.testing.assert_allclose(found.spring_torque[:, point], spring, rtol=0, atol=1e-10 * heaviest)
            np.testing.assert_allclose(found.tie_torque[:, point], tie, rtol=0, atol=1e-10 * heaviest)
            np.testing.assert_allclose(found.link_torque[:, point], link, rtol=1e-8, atol=1e-10 * np.abs(load).max())


@pytest.mark.parametrize("shape", ["tree", "massless", "four loops", "rigid epicyclics", "resting ring"])
def test_over_eight_decades_of_stiffness_torques_match_fifty_digits(shape):
    """Where a dense solve in double precision loses the soft parts: angles and every torque to 1e-9 of the largest
    of its kind by mpmath; twists of stiff springs are not differences of angles."""
    rng = np.random.default_rng(3)
    network = random_network(rng, decades=8.0, **SHAPES[shape])
    loss = rng.uniform(0.01, 0.1, len(network.spring_nm_rad))
    own = damping(network, spring_loss=loss)
    omega = 10 ** rng.uniform(1, 4, 3)
    load = rng.normal(size=(network.nodes, 1)).astype(complex)
    found = respond(network, own, omega, [load])[0]
    for point, frequency in enumerate(omega):
        springs = network.spring_nm_rad * (1 + 1j * loss)
        squared = frequency**2
        angle, twist, link = dense_response(network, load[:, 0], squared, springs=springs.tolist())
        np.testing.assert_allclose(found.angle[:, point], angle, rtol=1e-9, atol=1e-10 * np.abs(angle).max())
        torque = np.array(twist) * springs
        size = max(np.abs(torque).max(), np.abs(load).max())
        np.testing.assert_allclose(found.spring_torque[:, point], torque, rtol=0, atol=1e-9 * size)
        np.testing.assert_allclose(found.link_torque[:, point], link, rtol=1e-8)


def test_twist_and_torque_of_a_very_stiff_shaft_keep_their_digits():
    """Angles agree to 12 digits there; the torque still has 13 (dense complex solve with 50 digits)."""
    network = chain([3.0, 0.2, 7.0, 1.0], [1.5e4, 5e12, 2e6])
    own = damping(network, spring_loss=[0.05, 0.01, 0.02])
    load = np.array([[0.0], [0.0], [0.0], [5.0 + 1.0j]])
    found = respond(network, own, np.array([30.0]), [load])[0]
    springs = (network.spring_nm_rad * (1 + 1j * own.spring_loss)).tolist()
    _, twist, _ = dense_response(network, load[:, 0], 900.0, springs=springs)
    np.testing.assert_allclose(found.spring_twist[:, 0], twist, rtol=1e-13)
    np.testing.assert_allclose(found.spring_torque[:, 0], np.array(twist) * springs, rtol=1e-13)


@pytest.mark.parametrize("shape", ["tree", "four loops", "elastic epicyclics"])
def test_stiffness_that_follows_the_points_equals_single_solves(shape):
    network, own, omega, loads = damped_case(shape, 5)
    rng = np.random.default_rng(6)
    springs = network.spring_nm_rad[:, None] * rng.uniform(0.5, 2.0, (len(network.spring_nm_rad), len(omega)))
    springs[::2] = network.spring_nm_rad[::2, None]  # half of them constant
    found = respond(network, own, omega, loads, springs)
    complex_springs = springs * (1 + 1j * own.spring_loss[:, None])
    alike = respond(network, replace(own, spring_loss=own.spring_loss + 9.0), omega, loads, complex_springs)
    for load, real, both in zip(loads, found, alike, strict=True):
        assert_same(both, real, 1e-12)  # a complex stiffness holds the loss factors; those given are left out
        for point in range(len(omega)):
            single = replace(network, spring_nm_rad=springs[:, point])
            one = respond(single, own, omega[point : point + 1], [at(load, point)[:, None]])[0]
            for name in FIELDS:
                np.testing.assert_allclose(
                    getattr(real, name)[:, point], getattr(one, name)[:, 0], rtol=0,
                    atol=1e-12 * np.abs(getattr(one, name)).max(initial=0.0) + 1e-300,
                )  # fmt: skip


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize("shape", SHAPES)
def test_torques_balance_at_every_node(shape, seed):
    """Load + ω² J θ − damping to ground = torques of springs, ties and stages (d'Alembert), to 1e-11 of the largest."""
    network, own, omega, loads = damped_case(shape, 50 + seed)
    for load, found in zip(loads, respond(network, own, omega, loads), strict=True):
        inertia = network.inertia_kgm2 - 1j * lost_of(network, own)
        left = np.broadcast_to(load, found.angle.shape) + np.multiply.outer(inertia, omega**2) * found.angle
        ground = np.multiply.outer(own.node_viscous, 1j * omega) * found.angle
        left = left - ground
        largest = np.abs(left).max(axis=0)
        for (a, b), torque in zip(network.spring_ends.tolist(), found.spring_torque, strict=True):
            left[a] -= torque
            left[b] += torque
            largest = np.maximum(largest, np.abs(torque))
        for node, torque in zip(network.tie_node.tolist(), found.tie_torque, strict=True):
            left[node] -= torque
            largest = np.maximum(largest, np.abs(torque))
        for link, torque in zip(network.torque_links, found.link_torque, strict=True):
            for node, a in zip(link.nodes, link.coefficients, strict=True):
                left[node] -= a * torque
                largest = np.maximum(largest, np.abs(a * torque))
        assert (np.abs(left) <= 1e-11 * largest).all()


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize("shape", SHAPES)
def test_energy_fed_in_is_energy_dissipated(shape, seed):
    """½ Re(T̄ jωθ) = Σ ½ω Im(torque · conj(twist)) + ½ω²c|θ|² + ½ω³(J/M)|θ|² (mean power of harmonic torques).

    To 1e-9 of the power, or to 1e-14 of Σ |T| ω |θ| where nearly all of that only swings to and fro.
    """
    network, own, omega, loads = damped_case(shape, 80 + seed)
    own = replace(own, node_viscous=own.node_viscous + 0.05 * np.sqrt(network.inertia_kgm2 * 1e4))
    for load, found in zip(loads, respond(network, own, omega, loads), strict=True):
        fed = (0.5 * (np.conj(load) * 1j * omega * found.angle).real).sum(axis=0)
        apparent = np.abs(load * omega * found.angle).sum(axis=0)
        lost = 0.5 * omega * (found.spring_torque * found.spring_twist.conj()).imag.sum(axis=0)
        lost += 0.5 * omega * (found.tie_torque * found.angle[network.tie_node].conj()).imag.sum(axis=0)
        for number, link in enumerate(network.torque_links):
            if link.compliance_rad_per_nm:
                stage = np.array([weights(network, own, value)[2][number] for value in omega])
                torque = found.link_torque[number]
                lost += 0.5 * omega * (torque * (torque / stage).conj()).imag
        grounded = np.multiply.outer(own.node_viscous, omega**2)
        grounded = grounded + np.multiply.outer(lost_of(network, own), omega**3)
        lost += 0.5 * (grounded * np.abs(found.angle) ** 2).sum(axis=0)
        assert (lost > 0).all()
        assert (np.abs(fed - lost) <= 1e-9 * lost + 1e-14 * apparent).all()


@pytest.mark.parametrize("shape", ["tree", "massless", "four loops", "elastic epicyclics"])
def test_chunks_change_nothing(shape, monkeypatch):
    network, own, omega, loads = damped_case(shape, 9, points=41)
    springs = np.multiply.outer(network.spring_nm_rad, np.linspace(0.8, 1.2, len(omega)))
    whole = respond(network, own, omega, loads, springs)
    monkeypatch.setattr(steady, "FEWEST", 1)
    monkeypatch.setattr(steady, "MOST", 6)
    seen = []
    for cut, parts in steady_chunks(network, own, plan_elimination(network), omega, loads, springs):
        seen += list(range(len(omega))[cut])
        for part, of in zip(parts, whole, strict=True):
            for name in FIELDS:
                theirs = getattr(of, name)[:, cut]
                off = np.abs(getattr(part, name) - theirs)
                assert (off <= 1e-13 * np.abs(theirs).max(axis=0, initial=0.0)).all()
    assert seen == list(range(len(omega)))
    for found, of in zip(respond(network, own, omega, loads, springs), whole, strict=True):
        assert_same(found, of, 1e-13)


def test_loads_solved_together_equal_loads_solved_alone():
    """The last of several loads works in the memory of the elimination, the others in memory of their own."""
    network, own, omega, loads = damped_case("four loops", 12)
    for load, found in zip(loads, respond(network, own, omega, loads), strict=True):
        alone = respond(network, own, omega, [load])[0]
        everywhere = respond(network, own, omega, [np.broadcast_to(load, found.angle.shape)])[0]
        for name in FIELDS:
            np.testing.assert_array_equal(getattr(found, name), getattr(alone, name))
        assert_same(everywhere, alone, 1e-13)


def test_memory_does_not_grow_with_the_points(monkeypatch):
    monkeypatch.setattr(steady, "MOST", 256)
    network, own, _, _ = damped_case("two loops", 2)
    plan, load = plan_elimination(network), np.ones((network.nodes, 1), dtype=complex)

    def most(points):
        omega = np.linspace(10.0, 1e4, points)
        tracemalloc.start()
        for _ in steady_chunks(network, own, plan, omega, [load]):
            pass
        peak = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        return peak

    most(3 * 256)
    assert most(50 * 256) < 1.1 * most(3 * 256)


def test_no_points_and_no_loads_give_empty_results():
    network, own, omega, _ = damped_case("two loops", 2)
    assert respond(network, own, omega, []) == []
    found = respond(network, own, np.zeros(0), [np.zeros((network.nodes, 0))])[0]
    assert found.angle.shape == (network.nodes, 0)
    assert found.spring_twist.shape == (len(network.spring_nm_rad), 0)


def test_springs_side_by_side_share_their_torque_and_a_spring_on_one_node_has_none():
    """Three springs between the same stations, one of them the other way round; dense complex solve."""
    network = make([2.0, 1.0, 3.0], [(0, 1, 3e5), (1, 0, 1e5), (0, 1, 2e4), (1, 2, 4e5), (2, 2, 9e9)])
    own = damping(network, spring_loss=[0.1, 0.0, 0.3, 0.05, 0.0], spring_viscous=[0.0, 40.0, 0.0, 0.0, 0.0])
    load = np.array([[1.0], [0.0], [2.0j]])
    omega = np.array([100.0, 700.0])
    found = respond(network, own, omega, [load])[0]
    for point, frequency in enumerate(omega):
        angle, twist, spring, _, _ = dense(network, own, frequency, load[:, 0])
        np.testing.assert_allclose(found.angle[:, point], angle, rtol=1e-12)
        np.testing.assert_allclose(found.spring_torque[:, point], spring, rtol=1e-11, atol=1e-12)
        np.testing.assert_allclose(found.spring_twist[:, point], twist, rtol=1e-11, atol=1e-18)


def test_a_station_on_a_spring_of_no_weight_stays_where_it_is():
    network = make([2.0, 1.0, 5.0], [(0, 1, 3e5), (1, 2, 0.0)])
    found = respond(network, damping(network, spring_loss=[0.1, 0.0]), np.array([50.0]), [np.array([[1.0], [0], [0]])])
    assert found[0].angle[2, 0] == 0
    assert found[0].spring_torque[1, 0] == 0
    assert found[0].spring_twist[1, 0] == found[0].angle[1, 0]


def test_undamped_forced_response_of_four_rotors():
    # G. K. Grover, Mechanical Vibrations, ex. 7.7.2, recomputed to more digits (see test_elimination)
    network = chain([100.0, 50.0, 10.0, 50.0], [1e4, 1e4, 2e4])
    load = np.array([[0.0], [1e4], [0.0], [0.0]])
    found = respond(network, damping(network), np.array([5.0]), [load])[0]
    angles = [-2.0625398851308, -1.5469049138481, -1.8379068283344, -1.9604339502234]
    np.testing.assert_allclose(found.angle[:, 0], angles, rtol=1e-12)
    torques = [-5156.3497128271, 2910.0191448628, 2450.5424377792]
    np.testing.assert_allclose(found.spring_torque[:, 0], torques, rtol=1e-12)


@pytest.mark.parametrize(
    ("omega", "first", "second", "torque"),
    [
        (200.0, 9.776923610938e-5, 4.797364472536e-4, 57.56837367043),
        (288.675, 3.119999519713e-3, 2.081925097343e-3, 520.480788987),
        (350.0, 4.596998639132e-4, 1.722119822078e-4, 63.28790346136),
    ],
)
def test_two_discs_on_a_viscous_shaft(omega, first, second, torque):
    """T0 J2/(J1+J2) √(1+(2ζr)²)/√((1−r²)²+(2ζr)²), J = 2 and 3, k = 1e5, c = 20, T0 = 50 (own derivation)."""
    network = chain([2.0, 3.0], [1e5])
    found = respond(network, damping(network, spring_viscous=[20.0]), np.array([omega]), [np.array([[50.0], [0.0]])])[0]
    np.testing.assert_allclose(np.abs(found.angle[:, 0]), [first, second], rtol=1e-11)
    assert abs(found.spring_torque[0, 0]) == pytest.approx(torque, rel=1e-11)


def one_station(r, zeta=0.0, eta=0.0):
    """Angle over static twist, and torque of the tie over the load, of one station at ω = r ω_n."""
    inertia, k = 2.0, 5e4
    network = make([inertia], [], [(0, k)])
    natural = np.sqrt(k / inertia)
    own = damping(network, tie_viscous=[2 * zeta * inertia * natural], tie_loss=[eta])
    found = respond(network, own, np.atleast_1d(r) * natural, [np.array([[3.0]])])[0]
    return np.abs(found.angle[0]) * k / 3.0, np.abs(found.tie_torque[0]) / 3.0


@pytest.mark.parametrize(
    ("zeta", "r", "most"),
    [
        (0.01, np.sqrt(1 - 2e-4), 50.00250018752),
        (0.05, 0.997496867163, 10.01252348644),
        (0.1, 0.9899494936612, 5.025189076296),
    ],
)
def test_magnification_of_one_degree_of_freedom(zeta, r, most):
    """1/√((1−r²)²+(2ζr)²), at most 1/(2ζ√(1−ζ²)) at r = √(1−2ζ²) (Den Hartog, Mechanical Vibrations, sec. 2.8,
    from memory)."""
    grid = np.linspace(0.1, 3.0, 400)
    np.testing.assert_allclose(
        one_station(grid, zeta)[0], 1 / np.sqrt((1 - grid**2) ** 2 + (2 * zeta * grid) ** 2), rtol=1e-11
    )
    assert one_station(r, zeta)[0][0] == pytest.approx(most, rel=1e-11)
    assert (one_station(np.linspace(0.9, 1.1, 2001), zeta)[0] <= most * (1 + 1e-12)).all()


def test_torque_magnification_of_a_coupling_with_relative_damping():
    """V(r) = √((1+η²)/((1−r²)²+η²)), ψ = 2πη = 0.8 (relative damping as in DIN 740-2, coupling makers' catalogues)."""
    values = [1.3251377135257, 7.9173876693521, 0.80230714148073, 0.12599318218266]
    found = one_station(np.array([0.5, 1.0, 1.5, 3.0]), eta=0.8 / (2 * np.pi))[1]
    np.testing.assert_allclose(found, values, rtol=1e-12)


def with_absorber(r, mu, tuning, zeta):
    """Angle over static twist of a tied station at ω = r ω_n with a ring: c = 2 ζ J_d ω_n, spring J_d (f ω_n)²."""
    inertia, k = 2.0, 5e4
    natural = np.sqrt(k / inertia)
    ring = mu * inertia
    network = make([inertia, ring], [(0, 1, ring * (tuning * natural) ** 2)], [(0, k)])
    own = damping(network, spring_viscous=[2 * zeta * ring * natural])
    found = respond(network, own, np.atleast_1d(r) * natural, [np.array([[1.0], [0.0]])])[0]
    return np.abs(found.angle[0]) * k


@pytest.mark.parametrize(
    ("mu", "zeta", "r"),
    [
        (0.1, 0.4652421051992, 0.9759000729485),
        (0.2, 0.4351941398892, 0.9534625892456),
        (0.5, 0.3651483716701, 0.8944271909999),
        (1.0, 0.2886751345948, 0.8164965809277),
    ],
)
def test_peak_with_the_best_untuned_viscous_damper(mu, zeta, r):
    """Peak 1 + 2/μ at r = √(2/(2+μ)) with ζ = 1/√(2(1+μ)(2+μ)) (Den Hartog, Mechanical Vibrations, ch. 3)."""
    assert with_absorber(r, mu, 0.0, zeta)[0] == pytest.approx(1 + 2 / mu, rel=1e-11)
    assert (with_absorber(np.linspace(0.5, 1.5, 4001), mu, 0.0, zeta) <= (1 + 2 / mu) * (1 + 1e-11)).all()


@pytest.mark.parametrize(
    ("mu", "zeta", "peak"),
    [
        (0.05, 0.127267258054, 6.40844317),
        (0.1, 0.167852033154, 4.59022017),
        (0.2, 0.208333333333, 3.32753940),
    ],
)
def test_peak_with_the_best_tuned_and_damped_absorber(mu, zeta, peak):
    """f = 1/(1+μ), ζ = √(3μ/(8(1+μ)³)); fixed points at √(1+2/μ), the true peak a little above (Den Hartog, ch. 3,
    and J. E. Brock, 1946, from memory; peak recomputed)."""
    tuning = 1 / (1 + mu)
    fixed = np.sqrt((1 + np.array([-1, 1]) * np.sqrt(mu / (2 + mu))) / (1 + mu))
    for own in (0.0, zeta, 0.5):
        np.testing.assert_allclose(with_absorber(fixed, mu, tuning, own), np.sqrt(1 + 2 / mu), rtol=1e-10)
    assert with_absorber(np.linspace(0.6, 1.4, 80001), mu, tuning, zeta).max() == pytest.approx(peak, rel=1e-7)


def test_an_undamped_absorber_in_tune_stills_its_station():
    """G. K. Grover, Mechanical Vibrations, ex. 5.7.1: absorber amplitude T0/k2, resonances at 0.8 and 1.25."""
    network = make([0.735, 0.1488375], [(0, 1, 148837.5)], [(0, 7.35e5)])
    edges = np.array([0.8, 1.25])
    omega = 1000.0 * np.concatenate([[1.0], edges * (1 - 1e-7), edges * (1 + 1e-7)])
    found = respond(network, damping(network), omega, [np.array([[294.0], [0.0]])])[0].angle.real
    assert abs(found[0, 0]) < 1e-14
    assert found[1, 0] == pytest.approx(-0.001975308641975, rel=1e-12)
    assert (found[0, 1:3] * found[0, 3:5] < 0).all()  # from one side of the resonance to the other
    assert (np.abs(found[0, 1:]) > 100).all()


def test_an_elastic_stage_shares_its_torque_by_its_coefficients():
    """One torque link on three free stations: T = −Σ(a f/(ω²J)) / (Σ a²/(ω²J) − 1/K), K = k(1+jη)+jωc (own
    derivation)."""
    inertia, a = np.array([0.5, 20.0, 6.0]), np.array([24.0, 96.0, -120.0])
    network = make(inertia, [], links=[TorqueLink((0, 1, 2), tuple(a.tolist()), 1e-6)])
    own = damping(network, link_loss=[0.1], link_viscous=[30.0])
    omega, load = 250.0, np.array([1.0, 2.0, -0.5])
    found = respond(network, own, np.array([omega]), [load[:, None]])[0]
    stage = 1e6 * (1 + 0.1j) + 1j * omega * 30.0
    mobility = a**2 / (omega**2 * inertia)
    torque = (a * load / (omega**2 * inertia)).sum() / (mobility.sum() - 1 / stage)
    assert found.link_torque[0, 0] == pytest.approx(torque, rel=1e-12)
    np.testing.assert_allclose(found.angle[:, 0], (a * torque - load) / (omega**2 * inertia), rtol=1e-11)


shapes, seeds = st.sampled_from(sorted(SHAPES)), st.integers(0, 10_000)


@given(shapes, seeds)
@settings(max_examples=40)
def test_twice_the_load_gives_twice_the_response(shape, seed):
    network, own, omega, loads = damped_case(shape, seed)
    twice = respond(network, own, omega, [2 * load for load in loads])
    for found, single in zip(twice, respond(network, own, omega, loads), strict=True):
        for name in FIELDS:
            np.testing.assert_array_equal(getattr(found, name), 2 * getattr(single, name))


@given(shapes, seeds, st.floats(0.05, 20.0))
@settings(max_examples=40)
def test_referred_to_another_speed_angles_and_torques_only_change_scale(shape, seed, ratio):
    """Inertia, stiffness and damping × n², torques × n, angles ÷ n (Thomson, Theory of Vibration, sec. 12.10)."""
    network, own, omega, loads = damped_case(shape, seed)
    square = ratio**2
    links = tuple(TorqueLink(link.nodes, tuple(ratio * a for a in link.coefficients), link.compliance_rad_per_nm)
                  for link in network.torque_links)  # fmt: skip
    referred = replace(network, inertia_kgm2=square * network.inertia_kgm2, tie_nm_rad=square * network.tie_nm_rad,
                       spring_nm_rad=square * network.spring_nm_rad, torque_links=links)  # fmt: skip
    other = replace(own, spring_viscous=square * own.spring_viscous, tie_viscous=square * own.tie_viscous,
                    node_viscous=square * own.node_viscous, node_lost_kgm2=square * own.node_lost_kgm2)  # fmt: skip
    there = respond(referred, other, omega, [ratio * load for load in loads])
    factors = {"angle": 1 / ratio, "spring_twist": 1 / ratio, "spring_torque": ratio, "tie_torque": ratio,
               "link_torque": 1.0}  # fmt: skip
    for found, here in zip(there, respond(network, own, omega, loads), strict=True):
        for name, factor in factors.items():
            theirs = factor * getattr(here, name)
            size = np.abs(theirs).max(axis=0, initial=0.0)
            assert (np.abs(getattr(found, name) - theirs) <= 1e-9 * size + 1e-300).all(), name


@given(shapes, seeds)
@settings(max_examples=40)
def test_the_order_of_nodes_does_not_matter(shape, seed):
    """To 1e-9 of the largest: another order rounds differently, and next to a lightly damped resonance that grows."""
    network, own, omega, loads = damped_case(shape, seed)
    order = np.random.default_rng(seed).permutation(network.nodes)
    place = np.argsort(order)
    links = tuple(replace(link, nodes=tuple(int(place[node]) for node in link.nodes)) for link in network.torque_links)
    moved = replace(network, inertia_kgm2=network.inertia_kgm2[order], turning=network.turning[order],
                    spring_ends=place[network.spring_ends], tie_node=place[network.tie_node],
                    torque_links=links)  # fmt: skip
    other = replace(own, node_viscous=own.node_viscous[order], node_lost_kgm2=own.node_lost_kgm2[order])
    there = respond(moved, other, omega, [load[order] for load in loads])
    for found, here in zip(there, respond(network, own, omega, loads), strict=True):
        np.testing.assert_allclose(found.angle[place], here.angle, rtol=0, atol=1e-9 * np.abs(here.angle).max())
        assert_same(replace(found, angle=found.angle[place], spring_ends=network.spring_ends), here, 1e-9)
