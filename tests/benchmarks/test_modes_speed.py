"""Cost of a complete modal solution against one bare singular value decomposition of the same matrix."""

from __future__ import annotations

import time
from statistics import median

import numpy as np
import pytest

from quillshaft.graph.network import Network
from quillshaft.solve.elimination import eliminate
from quillshaft.solve.factor import factorise
from quillshaft.solve.modes import natural_modes
from quillshaft.solve.plan import plan_elimination

PAIRS = 400
STATIONS = 30


def _network(stations: int, branched: bool) -> Network:
    rng = np.random.default_rng(7)
    other = [int(rng.integers(node)) if branched else node - 1 for node in range(1, stations)]
    return Network(
        inertia_kgm2=10 ** rng.uniform(-1, 2, stations),
        turning=np.ones(stations, dtype=bool),
        spring_ends=np.array([(node, other[node - 1]) for node in range(1, stations)], dtype=np.intp),
        spring_nm_rad=10 ** rng.uniform(5, 8, stations - 1),
        tie_node=np.zeros(0, dtype=np.intp),
        tie_nm_rad=np.zeros(0),
        torque_links=(),
        rigid_motions=1,
    )


def _seconds(work) -> float:
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


@pytest.mark.benchmark
@pytest.mark.parametrize("branched", [False, True], ids=["chain", "tree"])
def test_plan_modes_refinement_and_proof_cost_at_most_twelve_bare_svds(branched: bool):
    network = _network(STATIONS, branched)
    matrix = factorise(network).matrix
    assert matrix.shape == (STATIONS - 1, STATIONS)
    ratios = []
    for _ in range(PAIRS):
        bare = _seconds(lambda: np.linalg.svd(matrix))
        ratios.append(_seconds(lambda: natural_modes(network)) / bare)
    ratio = median(ratios)
    print(f"\nmodes of {STATIONS} stations, {'tree' if branched else 'chain'}: {ratio:.2f} bare SVDs")
    assert natural_modes(network).proven.all()
    assert ratio <= 12


@pytest.mark.benchmark
def test_plan_and_elimination_of_a_tree_grow_in_proportion_to_its_stations():
    costs = {}
    omega2 = np.linspace(1.0, 1e6, 8)
    for stations in (250, 2000):
        network = _network(stations, branched=True)
        costs[stations] = min(
            _seconds(lambda network=network: eliminate(network, plan_elimination(network), omega2)) for _ in range(9)
        )
    ratio = costs[2000] / costs[250]
    print(f"\nplan and elimination, 2000 over 250 stations: {ratio:.1f} times the cost")
    assert ratio <= 16  # 8 in proportion, 64 if quadratic
