"""Variants of a train drawn within its tolerances, in chunks that any executor can solve.

Each chunk has a seed of its own, so that the result depends on the seed alone and not on who solves the chunks
or in what order.
"""

from __future__ import annotations

import os
from collections.abc import Callable
from concurrent.futures import Executor, ThreadPoolExecutor
from contextlib import nullcontext
from dataclasses import dataclass

import numpy as np

from quillshaft.graph.network import Floats, Ints
from quillshaft.study.inputs import VariedNetwork
from quillshaft.study.spread import Distribution, deviations
from quillshaft.study.variants import variant_frequencies

CHUNK = 500

Progress = Callable[[int, int], None]


@dataclass(frozen=True)
class Population:
    """All that drawing and solving needs; it can be sent to another process.

    draw        (inputs,) number of the random share each input follows; −1 where it does not vary
    low, high   (inputs,) tolerances
    """

    varied: VariedNetwork
    distribution: Distribution
    draw: Ints
    low: Floats
    high: Floats


def drawn_factors(population: Population, seed: np.random.SeedSequence, count: int) -> Floats:
    """Factors (count, inputs) on the inputs of one chunk of variants."""
    draws = int(population.draw.max(initial=-1)) + 1
    shares = np.random.default_rng(seed).random((count, draws + 1))  # the last column serves what does not vary
    low, high = population.low, population.high
    return 1.0 + deviations(population.distribution, shares[:, population.draw], low, high)


def solve_chunk(population: Population, seed: np.random.SeedSequence, count: int) -> Floats:
    """Natural frequencies [rad/s] (count, modes) of one chunk of variants."""
    return variant_frequencies(population.varied, drawn_factors(population, seed, count))


def sampled(
    population: Population, samples: int, seed: int, executor: Executor | None, progress: Progress | None
) -> Floats:
    """Natural frequencies [rad/s] (samples, modes) of all variants; without an executor, threads of its own."""
    counts = [min(CHUNK, samples - start) for start in range(0, samples, CHUNK)]
    seeds = np.random.SeedSequence(seed).spawn(len(counts))
    own = ThreadPoolExecutor(os.cpu_count()) if executor is None else nullcontext(executor)
    chunks: list[Floats] = []
    done = 0
    with own as workers:
        futures = [
            workers.submit(solve_chunk, population, chunk, count) for chunk, count in zip(seeds, counts, strict=True)
        ]
        try:
            for future in futures:
                chunks.append(future.result())
                done += len(chunks[-1])
                if progress is not None:
                    progress(done, samples)
        except BaseException:
            for future in futures:
                future.cancel()
            raise
    return np.concatenate(chunks)
