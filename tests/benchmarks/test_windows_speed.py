"""Cost of stiffness windows: 30 stations with 40 sources, and growth to 2 000 stations."""

from __future__ import annotations

import time
from statistics import median

import numpy as np
import pytest

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Network
from quillshaft.solve.link_counts import link_counts, open_link
from quillshaft.study.windows import stiffness_windows
from trains import screening_of, train_text

STATIONS, SOURCES, RUNS = 30, 40, 60


def long_train(stations: int) -> Screening:
    """A geared train of two shaft lines with 40 sources judged: 35 fixed ones, 1x and 2x of both, the mesh."""
    rng = np.random.default_rng(5)
    names = [f"s{i}" for i in range(stations)]
    inertia = dict(zip(names, (10 ** rng.uniform(-1, 1.5, stations)).tolist(), strict=True))
    stiffness = (10 ** rng.uniform(5, 8, stations)).tolist()
    links = {f"l{i}": (names[i], names[i + 1], stiffness[i]) for i in range(stations - 1) if i != stations // 2}
    half = stations // 2
    mesh = {"between": [names[half], names[half + 1]], "teeth": [23, 71], "mesh-stiffness": "4e8 N/m"}
    geometry = {"module": "6 mm", "helix": "10 deg", "pressure-angle": "20 deg"}
    pulses = {
        f"p{i}": {"at": names[i % stations], "frequency": f"{f!r} Hz"}
        for i, f in enumerate((10 ** rng.uniform(0.5, 2.5, SOURCES - 5)).tolist())
    }
    return screening_of(
        train_text(inertia, shafts=links, gears={"g": mesh | geometry}, excitations=pulses,
                   assumptions={"tolerances": "default"})
    )  # fmt: skip


def seconds(work) -> float:
    """Processor time of this process: the work runs on one core, and others may be using the machine."""
    start = time.process_time()
    work()
    return time.process_time() - start


@pytest.mark.benchmark
def test_windows_of_30_stations_and_40_sources_take_under_5_ms():
    screening = long_train(STATIONS)
    assert sum(source.when == "continuous" for source in screening.sources) == SOURCES
    links = [link.name for link in screening.graph.links]
    for link in links:
        stiffness_windows(screening, link)
    asked = [links[run % len(links)] for run in range(RUNS)]
    times = sorted(seconds(lambda link=link: stiffness_windows(screening, link)) for link in asked)
    print(
        f"\nwindows, {STATIONS} stations, {len(screening.sources)} sources: median {median(times) * 1e3:.2f} ms "
        f"({times[0] * 1e3:.2f} to {times[-1] * 1e3:.2f})"
    )
    assert median(times) < 5e-3


def tree(stations: int) -> Network:
    rng = np.random.default_rng(7)
    other = [int(rng.integers(node)) for node in range(1, stations)]
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


def all_counts(network: Network) -> None:
    """What windows ask of the solver: 80 points of the nominal network and 40 of each corner, one plan for all."""
    plan = None
    for points in (80, 40, 40):
        opened = open_link(network, "spring", 17, plan)
        plan = opened.plan
        link_counts(opened, np.geomspace(1e2, 1e6, points))


@pytest.mark.benchmark
def test_windows_grow_in_proportion_to_the_stations_up_to_2000():
    networks = {stations: tree(stations) for stations in (250, 2000)}
    pairs = [[seconds(lambda n=network: all_counts(n)) for network in networks.values()] for _ in range(9)]
    ratio = median(large / small for small, large in pairs)
    large = median(pair[1] for pair in pairs)
    print(f"\nwindows, 2000 stations: {large * 1e3:.0f} ms, {ratio:.1f} times the cost of 250 stations")
    assert ratio <= 16  # 8 in proportion, 64 if quadratic
