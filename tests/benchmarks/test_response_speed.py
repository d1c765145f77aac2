"""Steady response of 30 stations at 50 000 points against batched dense complex solves of the same points.

Processor time of this process, measured in interleaved pairs: the machine may be busy with other work. The dense
solve has its matrices assembled already, in blocks, so that it too works in memory of a sensible size.
"""

from __future__ import annotations

import time
from pathlib import Path
from statistics import median

import numpy as np
import pytest

from quillshaft import load, respond, screen
from quillshaft.assess.response.loads import collect_loads
from quillshaft.assess.response.mean import mean_torques_of
from quillshaft.assess.response.run import sweep
from quillshaft.assess.response.states import all_states
from quillshaft.graph.network import Network
from quillshaft.solve.damped_state import Damping
from quillshaft.solve.plan import plan_elimination
from quillshaft.solve.steady import steady_chunks

STATIONS, POINTS, BLOCK, PAIRS = 30, 50_000, 2500, 5
SIZES = (10, 30, 100, 300, 1000, 2000)


def network_of(stations: int, branched: bool, loops: int = 0) -> Network:
    """A chain or a random tree, with further springs that close loops."""
    rng = np.random.default_rng(7)
    ends = [(node, int(rng.integers(node)) if branched else node - 1) for node in range(1, stations)]
    joined = {frozenset(pair) for pair in ends}
    while len(ends) < stations - 1 + loops:
        pair = tuple(rng.choice(stations, 2, replace=False).tolist())
        if frozenset(pair) not in joined:
            joined.add(frozenset(pair))
            ends.append(pair)
    return Network(
        inertia_kgm2=10 ** rng.uniform(-1, 2, stations),
        turning=np.ones(stations, dtype=bool),
        spring_ends=np.array(ends, dtype=np.intp),
        spring_nm_rad=10 ** rng.uniform(5, 8, len(ends)),
        tie_node=np.zeros(0, dtype=np.intp),
        tie_nm_rad=np.zeros(0),
        torque_links=(),
        rigid_motions=1,
    )


def damping_of(network: Network, viscous: float = 0.0) -> Damping:
    """A loss factor of 0.05 on every spring, and viscous damping of `viscous` [s] times its stiffness."""
    none, springs = np.zeros(0), network.spring_nm_rad
    return Damping(np.full(len(springs), 0.05), none, none, viscous * springs, none, none, np.zeros(network.nodes))


def load_at_first(network: Network) -> np.ndarray:
    load = np.zeros((network.nodes, 1), dtype=complex)
    load[0] = 1.0
    return load


def seconds(work) -> float:
    start = time.process_time()
    work()
    return time.process_time() - start


def steady_seconds(network: Network, damping: Damping, omega: np.ndarray, load: np.ndarray) -> float:
    """Seconds for all angles and spring torques, order of elimination included."""

    def work() -> None:
        for _, (found,) in steady_chunks(network, damping, plan_elimination(network), omega, [load]):
            assert len(found.spring_torque) == len(network.spring_nm_rad)

    return seconds(work)


def dense_seconds(network: Network, damping: Damping, omega: np.ndarray, load: np.ndarray) -> tuple[float, float]:
    """Seconds to solve the assembled matrices, and to assemble them."""
    ends, springs = network.spring_ends, network.spring_nm_rad * (1 + 1j * damping.spring_loss)
    twist = np.zeros((len(ends), network.nodes))
    twist[range(len(ends)), ends[:, 0]], twist[range(len(ends)), ends[:, 1]] = 1.0, -1.0
    stiffness, inner = (twist.T * springs) @ twist, range(network.nodes)
    solving = assembling = 0.0
    for start in range(0, len(omega), BLOCK):
        squared = omega[start : start + BLOCK] ** 2
        begun = time.process_time()
        matrices = np.repeat(stiffness[None], len(squared), axis=0)
        matrices[:, inner, inner] -= np.multiply.outer(squared, network.inertia_kgm2)
        assembled = time.process_time()
        np.linalg.solve(matrices, load)
        assembling += assembled - begun
        solving += time.process_time() - assembled
    return solving, assembling


@pytest.mark.benchmark
@pytest.mark.parametrize(
    ("name", "branched", "loops", "target"),
    [("chain", False, 0, 20), ("tree", True, 0, 20), ("2 loops", True, 2, 12), ("4 loops", True, 4, 12)],
    ids=["chain", "tree", "2 loops", "4 loops"],
)
def test_response_is_many_times_faster_than_batched_dense_solves(name, branched, loops, target):
    network, omega = network_of(STATIONS, branched, loops), np.geomspace(1.0, 5000.0, POINTS)
    damping, load = damping_of(network), load_at_first(network)
    viscous, all_loaded = damping_of(network, 1e-5), np.ones((STATIONS, POINTS), dtype=complex)
    all_loaded *= np.linspace(1.0, 2.0, POINTS)
    steady_seconds(network, damping, omega, load)
    pairs = [
        (steady_seconds(network, damping, omega, load), *dense_seconds(network, damping, omega, load))
        for _ in range(PAIRS)
    ]
    ratios = sorted(solving / ours for ours, solving, _ in pairs)
    ours, solving, assembling = (median(column) for column in zip(*pairs, strict=True))
    hard = median(steady_seconds(network, viscous, omega, all_loaded) for _ in range(PAIRS))
    print(
        f"\n{name}, {STATIONS} stations, {POINTS} points: {ours * 1e3:.0f} ms; dense solve alone {solving * 1e3:.0f} "
        f"ms, {median(ratios):.1f} times as long ({ratios[0]:.1f} to {ratios[-1]:.1f}), and its assembly "
        f"{assembling * 1e3:.0f} ms; every spring viscous and every station loaded {hard * 1e3:.0f} ms"
    )
    assert median(ratios) >= target


@pytest.mark.benchmark
@pytest.mark.parametrize("branched", [False, True], ids=["chain", "tree"])
def test_cost_of_a_station_and_point_stays_within_a_factor_of_two_to_2000_stations(branched):
    costs = dict.fromkeys(SIZES, np.inf)
    for _ in range(PAIRS):
        for stations in SIZES:
            network = network_of(stations, branched)
            omega = np.geomspace(1.0, 5000.0, max(8192, 1_500_000 // stations))
            spent = steady_seconds(network, damping_of(network), omega, load_at_first(network))
            costs[stations] = min(costs[stations], spent / stations / len(omega))
    ratio = max(costs.values()) / min(costs.values())
    shown = ", ".join(f"{stations}: {cost * 1e9:.1f}" for stations, cost in costs.items())
    print(f"\n{'tree' if branched else 'chain'}, ns a station and point: {shown}; most over least {ratio:.2f}")
    assert ratio <= 2.0


@pytest.mark.benchmark
def test_generator_set_with_24_orders_and_every_cylinder_dead_in_turn_takes_below_1_5_seconds():
    """The sweep of the example at low damping, its grid refined until every peak is found; all of `respond` beside.

    `respond` adds cold, hot and own heat, damper faults, tolerance ends, high damping, load limits and the rest.
    """
    screening = screen(load(Path(__file__).parents[2] / "examples" / "dairy-generator.toml"))
    mean = mean_torques_of(screening.train, screening.graph, screening.duties, screening.station_power_w)
    loads = collect_loads(screening.train, screening.graph, screening.sources, mean)
    states = all_states(screening.train, "reference")
    assert sum(len(group.lines) for group in loads.groups) == 24
    ring = next(n for n, link in enumerate(screening.graph.links) if link.name == "ring")
    sweeps, wholes = [], []
    for _ in range(PAIRS):
        start = time.process_time()
        swept = sweep(states[:1], loads, (0,), (ring,))
        middle = time.process_time()
        respond(screening)
        sweeps.append(middle - start)
        wholes.append(time.process_time() - middle)
    assert sum(case.kind == "dead cylinder" for case in swept.cases) == 6
    print(f"\nsweep of {len(swept.cases)} cases {median(sweeps):.2f} s, all of respond {median(wholes):.2f} s")
    assert median(sweeps) < 1.5
