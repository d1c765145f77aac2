"""Ten thousand variants of a 30-station train against one bare stacked eigensolution of the same matrices."""

from __future__ import annotations

import time
from statistics import median

import numpy as np
import pytest

from quillshaft.assess.results import Screening
from quillshaft.study.inputs import inputs_of
from quillshaft.study.tolerance import population_of, tolerance_study
from quillshaft.study.tolerance_draws import CHUNK, drawn_factors
from trains import screening_of, train_text

STATIONS, SAMPLES, PAIRS = 30, 10_000, 7


def long_train(branched: bool) -> Screening:
    """Thirty stations in a chain or a tree, every inertia and stiffness with a tolerance, 1x and 2x judged."""
    rng = np.random.default_rng(7)
    stations = {f"s{i}": {"inertia": float(10 ** rng.uniform(-1, 2)), "tolerance": "5 %"} for i in range(STATIONS)}
    shafts = {}
    for i in range(1, STATIONS):
        other = int(rng.integers(i)) if branched else i - 1
        stiffness = float(10 ** rng.uniform(5, 8))
        shafts[f"k{i}"] = {"between": [f"s{other}", f"s{i}"], "stiffness": stiffness, "tolerance": "10 %"}
    return screening_of(train_text(stations, shafts=shafts))


def matrices(screening: Screening) -> np.ndarray:
    """M^-½ K M^-½ (variants, nodes, nodes) of the very variants that the study draws."""
    population = population_of(screening, inputs_of(screening.train, screening.graph), "uniform")
    varied = population.varied
    seeds = np.random.SeedSequence(1).spawn(SAMPLES // CHUNK)
    factors = np.concatenate([drawn_factors(population, seed, CHUNK) for seed in seeds])
    spring = varied.network.spring_nm_rad * factors[:, varied.spring_input]
    root = np.sqrt(factors[:, varied.part_input] @ varied.part_inertia)
    stiffness = np.zeros((SAMPLES, STATIONS, STATIONS))
    for number, (a, b) in enumerate(varied.network.spring_ends.tolist()):
        stiffness[:, a, a] += spring[:, number]
        stiffness[:, b, b] += spring[:, number]
        stiffness[:, a, b] -= spring[:, number]
        stiffness[:, b, a] -= spring[:, number]
    return stiffness / root[:, :, None] / root[:, None, :]


def _seconds(work) -> float:
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


@pytest.mark.benchmark
@pytest.mark.parametrize("branched", [False, True], ids=["chain", "tree"])
def test_ten_thousand_variants_cost_at_most_two_bare_eigensolutions(branched: bool):
    screening = long_train(branched)
    bare_matrices = matrices(screening)
    study = tolerance_study(screening, SAMPLES, 1)
    squares = np.linalg.eigvalsh(bare_matrices)[:, 1:]
    np.testing.assert_allclose(study.frequency_hz[:, 5:], np.sqrt(squares[:, 5:]) / (2 * np.pi), rtol=1e-7)
    times = []
    for _ in range(PAIRS):
        bare = _seconds(lambda: np.linalg.eigvalsh(bare_matrices))
        times.append((_seconds(lambda: tolerance_study(screening, SAMPLES, 1)), bare))
    ratios = sorted(whole / bare for whole, bare in times)
    print(
        f"\ntolerance study, {SAMPLES} variants of {STATIONS} stations, {'tree' if branched else 'chain'}: "
        f"{median(t[0] for t in times):.3f} s, bare eigvalsh {median(t[1] for t in times):.3f} s, "
        f"ratio median {median(ratios):.2f} ({ratios[0]:.2f} to {ratios[-1]:.2f})"
    )
    assert median(ratios) <= 2.0
