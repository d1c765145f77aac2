"""Modes of two trains matched by shape, through crossings and veerings of their frequencies.

Two shapes are compared by their mass-weighted product (modal assurance criterion: R. J. Allemang, "The modal
assurance criterion: twenty years of use and abuse", Sound and Vibration, 2003, from memory), here with the
geometric mean of both inertias at every station that both trains have, and normalised over all stations: what
moves elsewhere counts as unlike. The similarities of one mode to all modes of the other train then add up to 1
at most.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Bools, Floats, Ints
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.study.changed import blend

ALIKE = 0.8
"""Similarity from which two shapes are taken for one mode without following it."""
LIKELY = 0.6
SAMPLES = 33
ORDER_WEIGHT = 1e-9


@dataclass(frozen=True)
class Shapes:
    """Mass-weighted shapes: rows (stations, modes) with unit columns, and the cluster of each mode (modes,)."""

    stations: tuple[str, ...]
    rows: Floats
    cluster: Ints


@dataclass(frozen=True)
class Match:
    """One mode of the base and the mode of the case that it is, as positions from 0.

    similarity   of the two shapes, 0 to 1; of their subspaces in a cluster of equal frequencies
    steps        1 where the shapes were compared at once; more where the mode was followed along the change
    """

    base: int
    case: int
    similarity: float
    steps: int


def weighted_shapes(graph: TorsionalGraph, modes: Modes, inertia_kgm2: Floats) -> Shapes:
    """Shapes √J · actual angle at every station; inertia_kgm2 (stations,) is actual."""
    angles = graph.scale[:, None] * modes.angle.T[graph.node]
    rows = np.sqrt(inertia_kgm2)[:, None] * angles
    size = np.sqrt((rows**2).sum(axis=0))
    return Shapes(graph.stations, rows / np.where(size > 0, size, 1.0), modes.cluster)


def similarity_matrix(base: Shapes, case: Shapes) -> Floats:
    """Similarity (modes of the base, modes of the case), 0 to 1; clusters are compared as subspaces.

    Between clusters of p and q modes it is the mean squared cosine of the angles between the subspaces.
    """
    common = [name for name in base.stations if name in set(case.stations)]
    before, after = (
        shapes.rows[[shapes.stations.index(name) for name in common]].reshape(len(common), -1)
        for shapes in (base, case)
    )
    squares = (before.T @ after) ** 2
    return _over_clusters(squares, base.cluster, case.cluster)


def _over_clusters(squares: Floats, base: Ints, case: Ints) -> Floats:
    """Sums of squared cosines over both clusters, divided by the size of the smaller one."""
    rows, columns = (np.equal.outer(cluster, cluster).astype(float) for cluster in (base, case))
    sums = rows @ squares @ columns
    return np.asarray(np.minimum(sums / np.minimum.outer(rows.sum(axis=1), columns.sum(axis=1)), 1.0))


def assign(scores: Floats) -> list[tuple[int, int]]:
    """The one-to-one assignment (row, column) of the largest total score; among equals it keeps the order."""
    from scipy.optimize import linear_sum_assignment  # type: ignore[import-untyped]

    rows, columns = (np.arange(size) for size in scores.shape)
    ordered = scores - ORDER_WEIGHT * np.abs(np.subtract.outer(rows, columns))
    chosen = linear_sum_assignment(ordered, maximize=True)
    return list(zip(chosen[0].tolist(), chosen[1].tolist(), strict=True))


def match_modes(base: Screening, case: Screening) -> tuple[Match, ...]:
    """Every mode of the base with its counterpart in the case, as many as both have, in order of the base.

    Modes whose shape is kept are matched at once. The others are followed along the change from the base's
    values to the case's, each over the fewest steps in which its shape is kept. So a mode goes straight through
    a veering narrower than the change, where two modes exchange character, and its number changes there.
    """
    first, last = (weighted_shapes(item.graph, item.network_modes, item.graph.inertia_kgm2) for item in (base, case))
    whole = similarity_matrix(first, last)
    steps = np.zeros(whole.shape, dtype=np.intp)
    found = {a: b for a, b in assign(whole) if whole[a, b] >= ALIKE}
    steps[list(found), list(found.values())] = 1
    if len(found) < min(whole.shape):
        chain = [first, *_along(base, case), last]
        for wanted in (ALIKE, LIKELY):
            left = _left(whole, found)
            hops = _fewest_hops(chain, left[0], wanted)[:, left[1]]
            _take(found, steps, left, hops)
    rows, columns = _left(whole, found)
    for a, b in assign(whole[np.ix_(rows, columns)]):
        found[rows[a]] = columns[b]
        steps[rows[a], columns[b]] = 1
    return tuple(Match(a, b, float(whole[a, b]), int(steps[a, b])) for a, b in sorted(found.items()))


def _left(whole: Floats, found: dict[int, int]) -> tuple[list[int], list[int]]:
    """Modes of the base and of the case that are not matched yet."""
    taken = set(found.values())
    return (
        [a for a in range(whole.shape[0]) if a not in found],
        [b for b in range(whole.shape[1]) if b not in taken],
    )


def _take(found: dict[int, int], steps: Ints, left: tuple[list[int], list[int]], hops: Ints) -> None:
    """Match the modes that were followed to an end, those over the fewest steps first."""
    rows, columns = left
    scores = np.where(hops > 0, 1.0 / np.maximum(hops, 1), 0.0)
    for a, b in assign(scores):
        if hops[a, b] > 0:
            found[rows[a]] = columns[b]
            steps[rows[a], columns[b]] = hops[a, b]


def _along(base: Screening, case: Screening) -> list[Shapes]:
    """Shapes of the case's train on its way from the base's values to its own, the end left out."""
    plan = plan_elimination(case.graph.network)
    out = []
    for share in np.linspace(0.0, 1.0, SAMPLES)[:-1].tolist():
        between = blend(base, case, share)
        out.append(weighted_shapes(case.graph, natural_modes(between.network, plan), between.inertia_kgm2))
    return out


def _fewest_hops(chain: list[Shapes], rows: list[int], wanted: float) -> Ints:
    """(rows, modes of the last) fewest steps from each mode of the first, each over a similarity ≥ wanted; 0: none."""
    last = len(chain) - 1
    keeps = {
        (i, j): similarity_matrix(chain[i], chain[j]) >= wanted for i in range(last) for j in range(i + 1, last + 1)
    }
    start = np.zeros((len(rows), chain[0].rows.shape[1]), dtype=bool)
    start[np.arange(len(rows)), rows] = True
    reached: dict[int, Bools] = {0: start}
    hops = np.zeros((len(rows), chain[last].rows.shape[1]), dtype=np.intp)
    for number in range(1, last + 1):
        reached = _step(chain, reached, keeps)
        if last in reached:
            hops = np.where((hops == 0) & reached[last], number, hops)
    return hops


def _step(chain: list[Shapes], reached: dict[int, Bools], keeps: dict[tuple[int, int], Bools]) -> dict[int, Bools]:
    """Where each mode can be after one more step from where it has been reached."""
    out: dict[int, Bools] = {}
    for i, here in reached.items():
        if not here.any():
            continue
        for j in range(i + 1, len(chain)):
            there = (here.astype(float) @ keeps[i, j].astype(float)) > 0
            out[j] = there | out[j] if j in out else there
    return out
