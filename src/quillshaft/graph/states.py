"""The same graph in another state: link stiffnesses replaced, everything else as it stands."""

from __future__ import annotations

from dataclasses import replace
from typing import Literal

from quillshaft.elements.coupling import coupling_stiffness
from quillshaft.graph.network import Network
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.model import Train

Temperature = Literal["cold", "reference", "hot"] | float
"""State of the couplings: their coldest or hottest in service, 30 °C, or one temperature [K] for all."""

REFERENCE_K = 303.15


def coupling_temperature(coupling: Coupling, temperature: Temperature) -> float:
    """Temperature [K] of a coupling in a state."""
    if isinstance(temperature, float):
        return temperature
    if temperature == "reference" or coupling.operating_k is None:
        return REFERENCE_K
    return coupling.operating_k[0 if temperature == "cold" else 1]


def follows_torque(train: Train) -> bool:
    """True where a coupling's stiffness follows its mean torque, so that frequencies follow speed."""
    return any(coupling.stiffness_points for coupling in train.couplings)


def follows_temperature(train: Train) -> bool:
    """True where a coupling's stiffness or damping follows its temperature."""
    return any(coupling.temperature_points or coupling.damping_points for coupling in train.couplings)


def with_mean_torques(
    train: Train, graph: TorsionalGraph, torque_nm: dict[str, float], temperature: Temperature
) -> TorsionalGraph:
    """The graph with each torque-dependent coupling at its mean torque [N·m, actual, by coupling name]."""
    stiffness = {
        coupling.name: coupling_stiffness(
            coupling, torque_nm.get(coupling.name, 0.0), coupling_temperature(coupling, temperature)
        )
        for coupling in train.couplings
        if coupling.stiffness_points
    }
    return with_stiffness(graph, stiffness)


def with_stiffness(graph: TorsionalGraph, stiffness_nm_rad: dict[str, float]) -> TorsionalGraph:
    """The graph with the stiffness [N·m/rad, actual, by link name] of some springs replaced.

    Values of stiffness stand for the link as the graph holds it, at its first-named station. Raises KeyError for
    a link that is no spring.
    """
    factors = {}
    for name, value in stiffness_nm_rad.items():
        link = graph.link(name)
        if link.slot not in ("spring", "slack") or not link.stiffness_nm_rad:
            raise KeyError(name)
        factors[name] = value / link.stiffness_nm_rad
    if not factors:
        return graph
    links = tuple(_scaled(link, factors.get(link.name)) for link in graph.links)
    return replace(
        graph,
        links=links,
        network=_network(graph.network, graph, factors),
        soft_heavy=_network(graph.soft_heavy, graph, factors),
        stiff_light=_network(graph.stiff_light, graph, factors),
        static=_network(graph.static, graph, factors),
    )


def _scaled(link: GraphLink, factor: float | None) -> GraphLink:
    if factor is None or link.stiffness_nm_rad is None or link.referred_nm_rad is None:
        return link
    return replace(link, stiffness_nm_rad=link.stiffness_nm_rad * factor, referred_nm_rad=link.referred_nm_rad * factor)


def _network(network: Network, graph: TorsionalGraph, factors: dict[str, float]) -> Network:
    springs = network.spring_nm_rad.copy()
    for link in graph.links:
        if link.slot == "spring" and link.name in factors:
            springs[link.index] *= factors[link.name]
    return replace(network, spring_nm_rad=springs)
