"""The search for levers: factors on every stiffness and inertia at which an interference may become clear."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from quillshaft.assess.mode_results import part_energy
from quillshaft.assess.results import Interference, Screening, Verdict, graver
from quillshaft.assess.separation import highest_frequency, required_separation
from quillshaft.graph.network import Floats, Network
from quillshaft.solve.modes import natural_frequencies
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.sources.line import Source
from quillshaft.study.changed import corners_of
from quillshaft.study.reach import Datum, Side, data_of, factors_to
from quillshaft.study.source_bands import TOUCHING, forbidden_bands
from quillshaft.train.basic_model import Range

LARGEST_FACTOR = {"stiffness": 20.0, "inertia": 5.0}
"""Changes beyond these factors, up or down, are no way out."""
TWO_PI = 2.0 * math.pi


@dataclass(frozen=True)
class SourceNeed:
    """A continuous source with what it requires, nominally and over the tolerances.

    hull_hz   lowest and highest frequency that can fail either requirement: beyond them a mode is clear
    """

    source: Source
    nominal: float
    worst: float
    hull_hz: Range


@dataclass(frozen=True)
class Search:
    """A screening with what every search needs: networks and frequencies [rad/s] by side of the tolerances."""

    screening: Screening
    plan: Plan
    networks: dict[Side, Network]
    omega: dict[Side, Floats]
    data: tuple[Datum, ...]
    known: dict[tuple[str, int], Verdict]
    needs: tuple[SourceNeed, ...]
    top_hz: float


def prepare(screening: Screening) -> Search:
    """What every search over a screening needs, worked out once."""
    corners = corners_of(screening)
    networks: dict[Side, Network] = {0: corners.nominal, -1: corners.soft_heavy, 1: corners.stiff_light}
    plan = plan_elimination(corners.nominal)
    omega = {side: natural_frequencies(network, plan) for side, network in networks.items()}
    known = {(pair.source, pair.mode): graver(pair.verdict, pair.worst_verdict) for pair in screening.interferences}
    train = screening.train
    needs = tuple(_need_of(screening, source) for source in screening.sources if source.when == "continuous")
    top = highest_frequency(screening.sources, train.operation, train.criteria)
    return Search(screening, plan, networks, omega, data_of(screening.graph, corners.nominal), known, needs, top)


def _need_of(screening: Screening, source: Source) -> SourceNeed:
    criteria = screening.train.criteria
    nominal, worst = (required_separation(source, table) for table in (criteria.separation, criteria.worst_case))
    bands = forbidden_bands(screening, source, max(nominal, worst))
    return SourceNeed(source, nominal, worst, (bands[0][0] * (1.0 - TOUCHING), bands[-1][1] * (1.0 + TOUCHING)))


def sensitivity(screening: Screening, datum: Datum, mode: int) -> float:
    """d ln f / d ln value: half the share of strain energy, minus half that of kinetic energy."""
    result = screening.mode(mode)
    if datum.link is not None:
        return 0.5 * result.strain_energy[datum.link.name]
    assert datum.part is not None
    return -0.5 * part_energy(screening.graph, result, datum.part)


def candidates_for(study: Search, pair: Interference) -> list[tuple[Datum, float]]:
    """(datum, factor) at which the pair may become clear, the smallest change first."""
    need = next(need for need in study.needs if need.source.name == pair.source)
    found = [item for upward in (True, False) for item in _one_way(study, pair.mode, need, upward)]
    return [(study.data[number], factor) for _, number, factor in sorted(found)]


def _one_way(study: Search, mode: int, need: SourceNeed, upward: bool) -> list[tuple[float, int, float]]:
    """(size, number of the datum, factor) of the changes that take a mode above the source, or below it."""
    targets = _targets(study, need, upward)
    columns = [_factors_of(study, mode, side, edges, upward) for side, edges in targets]
    out = []
    for number, datum in enumerate(study.data):
        sized = [(max(factor, 1.0 / factor), factor) for factor in _joint([column[number] for column in columns])]
        out += [(size, number, factor) for size, factor in sized if 1.0 < size <= LARGEST_FACTOR[datum.quantity]]
    return out


def _joint(columns: list[Floats]) -> list[float]:
    """Factors to try for one datum: with one edge each for worst case and nominal, the one that satisfies both."""
    if any(np.isnan(column).all() for column in columns):
        return []
    each = [[float(value) for value in column if not math.isnan(value)] for column in columns]
    if all(len(values) == 1 for values in each):
        return [max((values[0] for values in each), key=lambda factor: abs(math.log(factor)))]
    return sorted({value for values in each for value in values})


def _targets(study: Search, need: SourceNeed, upward: bool) -> tuple[tuple[Side, Floats], tuple[Side, Floats]]:
    """Edges ω [rad/s] of what is forbidden, for the corner that has to pass them and for the nominal network."""
    corner: Side = -1 if upward else 1
    return (corner, _edges(study, need, need.worst, upward)), (0, _edges(study, need, need.nominal, upward))


def _edges(study: Search, need: SourceNeed, required: float, upper: bool) -> Floats:
    """Upper or lower ends ω [rad/s] of the forbidden stretches of a source; none at standstill."""
    bands = forbidden_bands(study.screening, need.source, required)
    ends = [high if upper else low for low, high in bands]
    return np.array([end * TWO_PI for end in ends if end > 0.0])


def _factors_of(study: Search, mode: int, side: Side, edges: Floats, upward: bool) -> Floats:
    """(data, edges) factor on each datum that takes a mode to each edge; 1 where it is past it, nan if never."""
    own, network = study.omega[side], study.networks[side]
    out = np.full((len(study.data), len(edges)), np.nan)
    if not len(edges):
        return out
    factors = factors_to(study.screening.graph, network, study.plan, side, study.data, edges)
    grows = np.array([datum.raises == upward for datum in study.data])[:, None]
    right_way = np.isfinite(factors) & (factors > 0.0) & ((factors > 1.0) == grows)
    below = np.searchsorted(own, edges)
    next_to_it = below == (mode if upward else mode - 1)
    past = below < mode if upward else below >= mode
    out[right_way & next_to_it] = factors[right_way & next_to_it]
    out[:, past] = 1.0
    return out
