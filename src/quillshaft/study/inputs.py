"""What varies in a tolerance study: each link's stiffness and each part's inertia, and what moves together."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from quillshaft.elements.epicyclic import ring_mesh_name
from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.graph.torsional import GraphLink, InertiaPart, TorsionalGraph
from quillshaft.solve.modes import Modes
from quillshaft.train.basic_model import Tolerance
from quillshaft.train.gear_model import Epicyclic
from quillshaft.train.model import Train

TABLE = {
    "shaft": "shafts",
    "coupling": "couplings",
    "mesh": "gears",
    "epicyclic": "gears",
    "belt": "belts",
    "tie": "ties",
    "damper": "dampers",
}
ELASTIC = ("spring", "tie", "torque", "cut")


@dataclass(frozen=True)
class Input:
    """One number of the train that has a tolerance, or could have one.

    element     table and name, "couplings.flex-block"
    quantity    what of it
    station     where an inertia sits; None for a stiffness
    tolerance   relative (low, high); (0, 0) where it does not vary
    group       elements of one group deviate together, by their main number: a link's stiffness, a station's
                inertia; None for one that deviates by itself
    """

    element: str
    quantity: Literal["stiffness", "inertia"]
    station: str | None
    tolerance: Tolerance
    group: str | None

    @property
    def varies(self) -> bool:
        """True where the tolerance is not zero."""
        return self.tolerance != (0.0, 0.0)


@dataclass(frozen=True)
class VariedNetwork:
    """A network whose springs, ties, torque links and inertias follow factors on the inputs.

    spring_input, tie_input, link_input   number of the input that each follows; −1 for a rigid torque link
    part_input      (parts,) number of the input that each part of the inertia follows
    part_inertia    (parts, nodes) referred nominal inertia [kg·m²] that each part brings to each node
    """

    network: Network
    spring_input: Ints
    tie_input: Ints
    link_input: Ints
    part_input: Ints
    part_inertia: Floats


def inputs_of(train: Train, graph: TorsionalGraph) -> tuple[Input, ...]:
    """Every elastic link's stiffness in file order, then every part of the inertia."""
    groups = element_groups(train)
    links = [(f"{TABLE[link.kind]}.{link.name}", link) for link in _elastic(graph)]
    stiffness = [Input(name, "stiffness", None, link.tolerance, groups.get(name)) for name, link in links]
    inertia = [
        Input(
            part.element,
            "inertia",
            graph.stations[part.station],
            part.tolerance,
            groups.get(part.element) if part.element.startswith("stations.") else None,
        )
        for part in graph.parts
        if part.inertia_kgm2 > 0
    ]
    return (*stiffness, *inertia)


def element_groups(train: Train) -> dict[str, str]:
    """Group of every element that names one, by table and name."""
    named: list[tuple[str, str | None]] = [(f"stations.{item.name}", item.group) for item in train.stations]
    named += [(f"shafts.{item.name}", item.group) for item in train.shafts]
    named += [(f"couplings.{item.name}", item.group) for item in train.couplings]
    named += [(f"gears.{item.name}", item.group) for item in train.gears]
    named += [(f"gears.{ring_mesh_name(item)}", item.group) for item in train.gears if isinstance(item, Epicyclic)]
    named += [(f"belts.{item.name}", item.group) for item in train.belts]
    named += [(f"ties.{item.name}", item.group) for item in train.ties]
    named += [(f"dampers.{item.name}", item.group) for item in train.dampers]
    return {element: group for element, group in named if group is not None}


def _elastic(graph: TorsionalGraph) -> list[GraphLink]:
    return [link for link in graph.links if link.slot in ELASTIC and link.referred_nm_rad is not None]


def vary(graph: TorsionalGraph, network: Network) -> VariedNetwork:
    """The network of a graph as it follows the inputs, numbered as `inputs_of` numbers them."""
    links = _elastic(graph)
    places = {slot: {link.index: number for number, link in enumerate(links) if link.slot == slot} for slot in ELASTIC}

    def followed(slot: str, count: int) -> Ints:
        return np.array([places[slot].get(index, -1) for index in range(count)], dtype=np.intp)

    spring = followed("spring", len(network.spring_ends))
    for number, link in enumerate(links):
        spring[list(link.cut.springs if link.cut else ())] = number
    parts = [part for part in graph.parts if part.inertia_kgm2 > 0]
    stations = np.array([part.station for part in parts], dtype=np.intp)
    brought = np.zeros((len(parts), network.nodes))
    own = np.array([part.inertia_kgm2 for part in parts]) * graph.scale[stations] ** 2
    brought[np.arange(len(parts)), graph.node[stations]] = own
    _add_inside_of_shafts(graph, parts, brought)
    return VariedNetwork(
        network,
        spring,
        followed("tie", len(network.tie_node)),
        followed("torque", len(network.torque_links)),
        np.arange(len(links), len(links) + len(parts)),
        brought,
    )


def _add_inside_of_shafts(graph: TorsionalGraph, parts: list[InertiaPart], brought: Floats) -> None:
    """What lies inside a shaft of distributed inertia deviates with the part at its first end."""
    for link in graph.links:
        if link.cut is None:
            continue
        own = (f"shafts.{link.name}", link.stations[0])
        row = next(index for index, part in enumerate(parts) if (part.element, part.station) == own)
        brought[row, list(link.cut.nodes)] += link.cut.referred_kgm2


def sensitivities(varied: VariedNetwork, modes: Modes, count: int) -> Floats:
    """(modes, inputs) change of ln f for a change of ln of each input: half its share of the energy, with sign.

    + for a stiffness, − for an inertia; a node's share goes to its parts by their inertia. Modes of a cluster
    have the mean of the cluster. (Rayleigh's quotient is stationary: Lord Rayleigh, The Theory of Sound,
    sec. 88, from memory.)
    """
    out = np.zeros((len(modes.omega_rad_s), count))
    strain = ((varied.spring_input, modes.spring_share), (varied.tie_input, modes.tie_share))
    for follows, shares in (*strain, (varied.link_input, modes.link_share)):
        elastic = follows >= 0
        np.add.at(out.T, follows[elastic], 0.5 * shares[:, elastic].T)
    whole = varied.part_inertia.sum(axis=0)
    part = np.divide(varied.part_inertia, whole, out=np.zeros_like(varied.part_inertia), where=whole > 0)
    out[:, varied.part_input] = -0.5 * modes.node_share @ part.T
    return out
