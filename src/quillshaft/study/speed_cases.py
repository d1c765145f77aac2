"""The networks that stand for a train over its speeds and temperatures, for questions about one stiffness.

Where a coupling's stiffness follows mean torque, the running range is cut into cells of speed. Each cell is
asked about with the nominal networks of both its ends, and with corner networks that enclose it. Couplings that
soften with heat stand at their softest in the soft corner and at their stiffest in the stiff one.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np

from quillshaft.assess.along import follows_speed, graph_at, settle
from quillshaft.assess.results import Screening
from quillshaft.graph.network import Network
from quillshaft.graph.states import coupling_temperature, follows_temperature, with_stiffness
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.train.basic_model import Range, table_value
from quillshaft.train.coupling_model import Coupling

CELLS = 24


@dataclass(frozen=True)
class Networks:
    """Nominal, and the corners that enclose all tolerances."""

    nominal: Network
    soft_heavy: Network
    stiff_light: Network


@dataclass(frozen=True)
class SpeedCase:
    """Networks, the ranges of speed [rad/s] in which they hold, and couplings that follow torque.

    link_share   by coupling: its stiffness over that at rated torque, nominal here, lowest and highest
    """

    networks: Networks
    ranges_rad_s: tuple[Range, ...]
    link_share: dict[str, tuple[float, float, float]] = field(default_factory=dict)


def temperature_factors(screening: Screening, name: str) -> Range:
    """Lowest and highest stiffness of a link over its temperatures in service, over that as screened."""
    coupling = next((item for item in screening.train.couplings if item.name == name), None)
    return (1.0, 1.0) if coupling is None else _heat_range(screening, coupling)


def _heat_range(screening: Screening, coupling: Coupling) -> Range:
    if not coupling.temperature_points or coupling.operating_k is None:
        return (1.0, 1.0)
    cold, hot = coupling.operating_k
    points = [value for kelvin, value in coupling.temperature_points if cold < kelvin < hot]
    points += [table_value(coupling.temperature_points, kelvin) for kelvin in (cold, hot)]
    here = table_value(coupling.temperature_points, coupling_temperature(coupling, screening.temperature))
    return min(min(points) / here, 1.0), max(max(points) / here, 1.0)


def _heated(screening: Screening, graph: TorsionalGraph, side: int) -> TorsionalGraph:
    """The graph with every coupling at its softest (side 0) or stiffest (side 1) over its temperatures."""
    stiffness = {
        coupling.name: (graph.link(coupling.name).stiffness_nm_rad or 0.0) * _heat_range(screening, coupling)[side]
        for coupling in screening.train.couplings
        if coupling.temperature_points
    }
    return with_stiffness(graph, stiffness)


def speed_cases(screening: Screening) -> tuple[SpeedCase, ...]:
    """The networks to use and the speeds they hold for; one set for the whole range where none depends on speed."""
    train, graph = screening.train, screening.graph
    if follows_speed(train):
        return tuple(case for span in train.operation.ranges_rad_s for case in _cells(screening, span))
    soft, stiff = graph, graph
    if follows_temperature(train):
        soft, stiff = _heated(screening, graph, 0), _heated(screening, graph, 1)
    networks = Networks(graph.network, soft.soft_heavy, stiff.stiff_light)
    return (SpeedCase(networks, train.operation.ranges_rad_s),)


def _cells(screening: Screening, span: Range) -> list[SpeedCase]:
    train, temperature = screening.train, screening.temperature
    settled = settle(train, screening.graph, temperature)
    speeds = np.linspace(span[0], span[1], CELLS + 1).tolist()
    graphs = [graph_at(train, settled, speed, temperature) for speed in speeds]
    names = [coupling.name for coupling in train.couplings if coupling.stiffness_points]
    names += [damper.name for damper in train.dampers if damper.kind == "pendulum" and damper.swings]
    cases = []
    for (low, first), (high, second) in pairwise(zip(speeds, graphs, strict=True)):
        ends = [{name: _share(settled.graph, graph, name) for name in names} for graph in (first, second)]
        softest = {name: min(end[name] for end in ends) for name in names}
        stiffest = {name: max(end[name] for end in ends) for name in names}
        soft = _heated(screening, _with_shares(settled.graph, softest), 0)
        stiff = _heated(screening, _with_shares(settled.graph, stiffest), 1)
        for graph, end in ((first, ends[0]), (second, ends[1])):
            networks = Networks(graph.network, soft.soft_heavy, stiff.stiff_light)
            share = {name: (end[name], softest[name], stiffest[name]) for name in names}
            cases.append(SpeedCase(networks, ((low, high),), share))
    return cases


def _share(rated: TorsionalGraph, graph: TorsionalGraph, name: str) -> float:
    return (graph.link(name).stiffness_nm_rad or 0.0) / (rated.link(name).stiffness_nm_rad or 1.0)


def _with_shares(rated: TorsionalGraph, shares: dict[str, float]) -> TorsionalGraph:
    return with_stiffness(
        rated, {name: (rated.link(name).stiffness_nm_rad or 0.0) * share for name, share in shares.items()}
    )
