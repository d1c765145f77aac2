"""Tolerance study: how likely each interference is when every stiffness and inertia may deviate, and why.

The bounds of each natural frequency over all tolerances are those of the screening. Between them, variants of
the train are drawn at random and each is judged.
"""

from __future__ import annotations

import math
from collections import Counter
from concurrent.futures import Executor
from typing import Literal

import numpy as np

from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.study.chances import judged
from quillshaft.study.drivers import drivers_of
from quillshaft.study.inputs import Input, inputs_of, vary
from quillshaft.study.spread import DISTRIBUTIONS, Distribution
from quillshaft.study.tolerance_draws import Population, Progress, sampled
from quillshaft.study.tolerance_results import ModeSpread, ToleranceStudy
from quillshaft.train.problems import did_you_mean

TWO_PI = 2.0 * math.pi
MOST_SAMPLES = 1_000_000
MOST_FREQUENCIES = 100_000_000


def study_network(graph: TorsionalGraph) -> Network:
    """The network whose variants are studied: couplings that follow mean torque stand at that of rated speed."""
    return graph.network


def tolerance_study(
    screening: Screening,
    samples: int = 10_000,
    seed: int = 1,
    distribution: Distribution = "uniform",
    executor: Executor | None = None,
    progress: Progress | None = None,
) -> ToleranceStudy:
    """Draw `samples` variants of a screened train within its tolerances and judge each.

    Every stiffness and every part of the inertia deviates by itself, those of one group together. `executor`
    is any of the kind of concurrent.futures; None works here. `progress` is called with the variants done and
    their number. The same seed gives the same result whatever the executor.

    Raises ValueError for a number of samples, a seed or a distribution that cannot be used.
    """
    _check(screening, samples, seed, distribution)
    inputs = inputs_of(screening.train, screening.graph)
    population = population_of(screening, inputs, distribution)
    frequency = sampled(population, samples, seed, executor, progress) / TWO_PI
    pairs, any_not_clear = judged(screening, frequency)
    risky = tuple(item.pair for item in pairs if item.not_clear.certain != "never" or _suspect(item.pair))
    bounds, because = _bounds_words(inputs)
    return ToleranceStudy(
        screening=screening,
        samples=samples,
        seed=seed,
        distribution=distribution,
        inputs=inputs,
        bounds=bounds,
        bounds_because=because,
        modes=_spreads(screening, frequency),
        pairs=pairs,
        any_not_clear=any_not_clear,
        drivers=drivers_of(screening, population.varied, inputs, distribution, risky),
        lone_groups=tuple(group for group, members in _groups(inputs).items() if len(members) == 1),
        frequency_hz=frequency,
    )


def _suspect(pair: Interference) -> bool:
    return pair.verdict != "clear" or pair.worst_verdict != "clear"


def _check(screening: Screening, samples: int, seed: int, distribution: str) -> None:
    modes = len(screening.modes)
    most = min(MOST_SAMPLES, MOST_FREQUENCIES // max(modes, 1))
    if not 1 <= samples <= most:
        raise ValueError(f"samples = {samples}: from 1 to {most} can be drawn of this train")
    if seed < 0:
        raise ValueError(f"seed = {seed}: a seed is a whole number from 0 upwards")
    if distribution not in DISTRIBUTIONS:
        hint = did_you_mean(distribution, DISTRIBUTIONS)
        raise ValueError(
            f'distribution = "{distribution}": there is no such distribution{hint}. '
            f"Allowed: {' | '.join(DISTRIBUTIONS)}"
        )


def population_of(screening: Screening, inputs: tuple[Input, ...], distribution: Distribution) -> Population:
    """What is drawn and solved for a screened train."""
    shares: dict[str, int] = {}
    draw = [
        shares.setdefault(f"group {item.group}" if item.group else f"input {number}", len(shares))
        if item.varies
        else -1
        for number, item in enumerate(inputs)
    ]
    return Population(
        vary(screening.graph, study_network(screening.graph)),
        distribution,
        np.array(draw, dtype=np.intp),
        np.array([item.tolerance[0] for item in inputs], dtype=float),
        np.array([item.tolerance[1] for item in inputs], dtype=float),
    )


def _spreads(screening: Screening, frequency: Floats) -> tuple[ModeSpread, ...]:
    low, high = np.quantile(frequency, (0.05, 0.95), axis=0)
    return tuple(
        ModeSpread(mode.mode, mode.frequency_hz, *mode.bounds_hz, float(low[index]), float(high[index]))
        for index, mode in enumerate(screening.modes)
    )


def _groups(inputs: tuple[Input, ...]) -> dict[str, list[Input]]:
    groups: dict[str, list[Input]] = {}
    for item in inputs:
        if item.group is not None:
            groups.setdefault(item.group, []).append(item)
    return groups


def _bounds_words(inputs: tuple[Input, ...]) -> tuple[Literal["exact", "safe"], str]:
    """Whether the bounds are reached; they are where all members of each group are of one quantity."""
    joined = {
        group: Counter(item.quantity for item in members if item.varies)
        for group, members in _groups(inputs).items()
        if sum(item.varies for item in members) > 1
    }
    if not joined:
        return "exact", "every tolerance deviates by itself: the bounds hold every variant and are reached"
    named = ", ".join(joined)
    if any(len(kinds) > 1 for kinds in joined.values()):
        return "safe", f"one deviation moves stiffness and inertia together in {named}: the bounds need not be reached"
    return "safe", f"one deviation moves several elements in {named}: the bounds hold every variant"
