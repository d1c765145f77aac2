"""How far one value of a network has to change to put a mode on a frequency: closed form, one solution each.

A link's stiffness enters K as k·e·eᵀ, an inertia enters M as J·e·eᵀ. With r = eᵀ (K − ω²M)⁻¹ e, the response of
the link's twist to a unit torque across it or of the station's angle to a unit torque on it, a change of
−1/r in the stiffness or of 1/(ω²·r) in the inertia makes K − ω²M singular (rank-one update of a determinant:
Golub and Van Loan, Matrix Computations, sec. 2.1, from memory). Which mode that is follows from counting: a
change of rank one moves each frequency no farther than its neighbour.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import GraphLink, InertiaPart, TorsionalGraph
from quillshaft.solve.plan import Plan
from quillshaft.solve.precise import solve_at
from quillshaft.study.changed import element_of, part_in, stiffness_in, with_inertia, with_stiffness

MOST_POINTS = 4096
Side = Literal[-1, 0, 1]
"""Which network: 0 nominal, -1 soft and heavy, +1 stiff and light."""


@dataclass(frozen=True)
class Datum:
    """One value of the train that can be changed: a link's stiffness, or a station's own inertia.

    element       as the train file addresses it
    value         actual: N·m/rad at the first-named station, or kg·m²
    """

    element: str
    quantity: Literal["stiffness", "inertia"]
    value: float
    link: GraphLink | None = None
    part: InertiaPart | None = None

    @property
    def raises(self) -> bool:
        """True where more of it raises frequencies."""
        return self.link is not None


def data_of(graph: TorsionalGraph, network: Network) -> tuple[Datum, ...]:
    """Every stiffness and every station's own inertia that a network holds, links first, in file order."""
    links = tuple(
        Datum(element_of(link), "stiffness", link.stiffness_nm_rad, link=link)
        for link in graph.links
        if link.stiffness_nm_rad is not None and stiffness_in(network, link) is not None
    )
    parts = tuple(
        Datum(part.element, "inertia", part.inertia_kgm2, part=part)
        for part in graph.parts
        if part.element.startswith("stations.") and part.inertia_kgm2 > 0
    )
    return links + parts


def changed(graph: TorsionalGraph, network: Network, side: Side, datum: Datum, factor: float) -> Network:
    """A network, on its side of the tolerances, with one datum multiplied by a factor."""
    if datum.link is not None:
        return with_stiffness(network, datum.link, factor)
    assert datum.part is not None
    own = part_in(graph, datum.part, side)
    return with_inertia(network, int(graph.node[datum.part.station]), own * (factor - 1.0))


def factors_to(
    graph: TorsionalGraph, network: Network, plan: Plan, side: Side, data: tuple[Datum, ...], omega: Floats
) -> Floats:
    """(data, frequencies) factor on each datum that puts a mode of the network on each ω (F,) [rad/s].

    Not positive, or not finite, where no value of that datum does.
    """
    out = np.empty((len(data), len(omega)))
    size = max(1, MOST_POINTS // max(1, len(omega)))
    for start in range(0, len(data), size):
        part = data[start : start + size]
        out[start : start + size] = _factors(graph, network, plan, side, part, omega)
    return out


def _factors(
    graph: TorsionalGraph, network: Network, plan: Plan, side: Side, data: tuple[Datum, ...], omega: Floats
) -> Floats:
    points = len(omega)
    torque = np.zeros((network.nodes, len(data) * points))
    for number, datum in enumerate(data):
        columns = slice(number * points, (number + 1) * points)
        for node, coefficient in _ends(graph, network, datum):
            torque[node, columns] += coefficient
    omega2 = np.tile(omega**2, len(data))
    solution = solve_at(network, plan, omega2, torque)
    out = np.empty((len(data), points))
    with np.errstate(all="ignore"):
        for number, datum in enumerate(data):
            columns = slice(number * points, (number + 1) * points)
            link = datum.link
            if link is None:
                assert datum.part is not None
                response = solution.angle[graph.node[datum.part.station], columns]
                out[number] = 1.0 + 1.0 / (omega**2 * response * part_in(graph, datum.part, side))
            elif link.slot == "torque":
                out[number] = 1.0 - 1.0 / solution.link_torque[link.index, columns]
            else:
                twist = solution.spring_twist if link.slot == "spring" else solution.tie_twist
                stiffness = stiffness_in(network, link)
                assert stiffness is not None
                out[number] = 1.0 - 1.0 / (twist[link.index, columns] * stiffness)
    return out


def _ends(graph: TorsionalGraph, network: Network, datum: Datum) -> list[tuple[int, float]]:
    """(node, coefficient) of the vector e by which a datum enters the matrices."""
    link = datum.link
    if link is None:
        assert datum.part is not None
        return [(int(graph.node[datum.part.station]), 1.0)]
    if link.slot == "spring":
        first, second = network.spring_ends[link.index].tolist()
        return [(first, 1.0), (second, -1.0)]
    if link.slot == "tie":
        return [(int(network.tie_node[link.index]), 1.0)]
    own = network.torque_links[link.index]
    return list(zip(own.nodes, own.coefficients, strict=True))
