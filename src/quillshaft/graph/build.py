"""Train -> TorsionalGraph: ratios, referral, merged nodes, and the networks at the tolerance corners."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np

from quillshaft.elements import shaft as shaft_formulas
from quillshaft.elements.crank import running_gear_inertia
from quillshaft.graph.cut_links import add_cuts, inner_nodes, with_cuts
from quillshaft.graph.dampers import damper_drafts, damper_parts, viscous_rings
from quillshaft.graph.fluid import fluid_parts
from quillshaft.graph.gears import check_rules, gear_parts
from quillshaft.graph.links import LinkDraft, draft_links
from quillshaft.graph.motions import held_by_nothing, independent_rows, rigid_motion_count
from quillshaft.graph.network import Floats, Ints, Network, TorqueLink
from quillshaft.graph.speeds import speed_ratios, station_names
from quillshaft.graph.states import Temperature
from quillshaft.graph.torsional import GraphLink, InertiaPart, RigidMeshes, TorsionalGraph
from quillshaft.train.model import Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.validate import Findings


def build_graph(train: Train, temperature: Temperature = "reference") -> TorsionalGraph:
    """The torsional graph of a train, referred to the speed of `speed-at`.

    Couplings stand at the given temperature; those whose stiffness follows torque at zero torque (see
    `graph.states`).

    Raises TrainFileError when the train is not connected, cannot turn (a loop whose ratios disagree), leaves
    a speed undetermined, or has a part without inertia and without stiffness to hold it.
    """
    findings = Findings(train.file, train.cases)
    check_rules(train, findings)
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    ratios = speed_ratios(train, findings)
    if ratios is None:
        raise TrainFileError(tuple(findings.problems))
    graph = _assemble(train, ratios, findings, temperature)
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    return graph


def _assemble(
    train: Train, ratios: tuple[Fraction, ...], findings: Findings, temperature: Temperature
) -> TorsionalGraph:
    names = station_names(train)
    number = {name: index for index, name in enumerate(names)}
    scale = np.array([abs(float(ratio)) or 1.0 for ratio in ratios])
    parts = _inertia_parts(train, names, scale, ratios, findings)
    parts += (*fluid_parts(train, number), *damper_parts(train, number), *gear_parts(train, number))
    drafts = draft_links(train, names, ratios, temperature)
    drafts += damper_drafts(train, number, ratios, findings)
    node = _merge(len(names), drafts)
    coefficients = [draft.node_coefficients(node, ratios) if draft.slot == "torque" else {} for draft in drafts]
    rigid_rows = [i for i, draft in enumerate(drafts) if draft.slot == "torque" and draft.stiffness is None]
    kept = independent_rows([coefficients[i] for i in rigid_rows])
    dropped = {i for i, keep in zip(rigid_rows, kept, strict=True) if not keep}
    links = _number_links(drafts, node, dropped, scale, ratios)
    links = with_cuts(links, train, int(node.max()) + 1, ratios)
    turning = _by_node(node, np.array([ratio != 0 for ratio in ratios]))
    turning = np.append(turning, [turning[node[first]] for _, first in inner_nodes(links)]).astype(bool)
    networks = {
        corner: _network(corner, node, turning, scale, parts, links, drafts, coefficients)
        for corner in ("nominal", "soft", "stiff", "static")
    }
    torque_rows = [coefficients[position] for position, link in enumerate(links) if link.slot == "torque"]
    _check_held(names, node, networks["nominal"], torque_rows, findings)
    return TorsionalGraph(
        names,
        ratios,
        scale,
        _station_inertia(len(names), parts, 0),
        parts,
        node,
        links,
        networks["nominal"],
        networks["soft"],
        networks["stiff"],
        networks["static"],
        _rigid_meshes(names, links, bool(dropped)),
        _lines(train, names),
        _viscous_to_ground(train, len(names)),
        viscous_rings(train, number),
    )


def _inertia_parts(
    train: Train, names: tuple[str, ...], scale: Floats, ratios: tuple[Fraction, ...], findings: Findings
) -> tuple[InertiaPart, ...]:
    number = {name: index for index, name in enumerate(names)}
    parts = []
    for index, station in enumerate(train.stations):
        inertia = station.inertia_kgm2
        if station.referred_to is not None:
            other = number[station.referred_to]
            if ratios[index] == 0 or ratios[other] == 0:
                message = "a station at rest has no speed to refer an inertia by"
                findings.add(("stations", station.name, "referred-to"), message, station.referred_to)
            inertia *= (scale[other] / scale[index]) ** 2
        if station.running_gear is not None:
            inertia += running_gear_inertia(station.running_gear)
        parts.append(InertiaPart(index, f"stations.{station.name}", inertia, station.tolerance))
    for shaft in train.shafts:
        if shaft.own_inertia != "none" and shaft.material is not None:
            for name, inertia in zip(shaft.between, shaft_formulas.own_inertias(shaft), strict=True):
                parts.append(InertiaPart(number[name], f"shafts.{shaft.name}", inertia, shaft.inertia_tolerance))
    for coupling in train.couplings:
        for name, inertia in zip(coupling.between, coupling.half_inertias_kgm2, strict=True):
            if inertia:
                element = f"couplings.{coupling.name}"
                parts.append(InertiaPart(number[name], element, inertia, coupling.inertia_tolerance))
    return tuple(parts)


def _viscous_to_ground(train: Train, count: int) -> Floats | None:
    """Damping to ground [N·m·s/rad] per station at its own speed; None where no station states any."""
    given = np.zeros(count)
    given[: len(train.stations)] = [station.viscous_nms_rad or 0.0 for station in train.stations]
    return given if given.any() else None


def _station_inertia(count: int, parts: tuple[InertiaPart, ...], side: int) -> Floats:
    """Inertia [kg·m²] per station: nominal (side 0), all light (−1) or all heavy (+1)."""
    inertia = np.zeros(count)
    for part in parts:
        deviation = 0.0 if side == 0 else part.tolerance[0] if side < 0 else part.tolerance[1]
        inertia[part.station] += part.inertia_kgm2 * (1.0 + deviation)
    return inertia


def _merge(count: int, drafts: list[LinkDraft]) -> Ints:
    """Node of each station: stations held together by rigid meshes share one, numbered in file order."""
    root = list(range(count))

    def find(a: int) -> int:
        while root[a] != a:
            root[a] = root[root[a]]
            a = root[a]
        return a

    for draft in drafts:
        if draft.slot == "rigid":
            a, b = sorted((find(draft.stations[0]), find(draft.stations[1])))
            root[b] = a
    order: dict[int, int] = {}
    return np.array([order.setdefault(find(a), len(order)) for a in range(count)], dtype=np.intp)


def _by_node(node: Ints, values: Ints) -> Ints:
    out = np.zeros(int(node.max()) + 1, dtype=values.dtype)
    out[node] = values
    return out


def _number_links(
    drafts: list[LinkDraft], node: Ints, dropped: set[int], scale: Floats, ratios: tuple[Fraction, ...]
) -> tuple[GraphLink, ...]:
    counts = {"cut": 0, "spring": 0, "tie": 0, "torque": 0, "rigid": 0, "slack": 0}
    links = []
    for position, draft in enumerate(drafts):
        slot = draft.slot
        if slot == "spring" and node[draft.stations[0]] == node[draft.stations[1]]:
            slot = "slack"
        if position in dropped:
            slot = "slack"
        first = float(scale[draft.stations[0]])
        referred = None if draft.stiffness is None else draft.stiffness * first**2
        links.append(
            GraphLink(
                draft.name,
                draft.kind,
                draft.stations,
                draft.stiffness,
                referred,
                tuple(float(value) for value in draft.station_coefficients(ratios)),
                1.0 / first,
                draft.tolerance,
                0.0 if draft.viscous is not None and draft.loss_factor is None else draft.loss_factor,
                slot,
                counts[slot],
                draft.ratio_text,
                draft.viscous or 0.0,
            )
        )
        counts[slot] += 1
    return tuple(links)


def _network(
    corner: str,
    node: Ints,
    turning: Ints,
    scale: Floats,
    parts: tuple[InertiaPart, ...],
    links: tuple[GraphLink, ...],
    drafts: list[LinkDraft],
    coefficients: list[dict[int, Fraction]],
) -> Network:
    side = {"soft": 1, "stiff": -1}.get(corner, 0)
    inertia = np.zeros(len(turning))
    np.add.at(inertia, node, _station_inertia(len(node), parts, side) * scale**2)

    def stiffness(link: GraphLink) -> float:
        deviation = 0.0 if side == 0 else link.tolerance[0] if side > 0 else link.tolerance[1]
        return (link.referred_nm_rad or 0.0) * (1.0 + deviation)

    springs = [link for link in links if link.slot == "spring"]
    ties = [
        link for link in links if link.slot == "tie" and not (corner == "static" and turning[node[link.stations[0]]])
    ]
    torque_links = [
        (_torque_link(coefficients[position], 1.0 / stiffness(link) if draft.stiffness else 0.0))
        for position, (link, draft) in enumerate(zip(links, drafts, strict=True))
        if link.slot == "torque"
    ]
    spring_ends = np.array([[node[s] for s in link.stations] for link in springs], dtype=np.intp)
    tie_node = np.array([node[link.stations[0]] for link in ties], dtype=np.intp)
    rows = [coefficients[position] for position, link in enumerate(links) if link.slot == "torque"]
    network = Network(
        inertia,
        turning.astype(bool),
        spring_ends.reshape(-1, 2),
        np.array([stiffness(link) for link in springs]),
        tie_node,
        np.array([stiffness(link) for link in ties]),
        tuple(torque_links),
        0,
    )
    network = add_cuts(network, links, node, side)
    return replace(network, rigid_motions=rigid_motion_count(len(turning), network.spring_ends, tie_node, rows))


def _torque_link(coefficients: dict[int, Fraction], compliance: float) -> TorqueLink:
    """Coefficients are normalised on the first-named station, so that T is the torque there, referred."""
    nodes = tuple(sorted(coefficients))
    return TorqueLink(nodes, tuple(float(coefficients[number]) for number in nodes), compliance)


def _check_held(
    names: tuple[str, ...], node: Ints, network: Network, rows: list[dict[int, Fraction]], findings: Findings
) -> None:
    loose = held_by_nothing(network, rows)
    if loose:
        held = [name for name, number in zip(names, node.tolist(), strict=True) if number in loose]
        message = f"nothing holds {', '.join(held)}: neither inertia nor a spring"
        findings.add(("stations", held[0]), message, None, "an inertia above zero, or a link with stiffness")


def _rigid_meshes(names: tuple[str, ...], links: tuple[GraphLink, ...], dropped: bool) -> RigidMeshes:
    numbers = [position for position, link in enumerate(links) if link.slot == "rigid"]
    ends = np.array([links[position].stations for position in numbers], dtype=np.intp).reshape(-1, 2)
    incidence = np.zeros((len(numbers), len(names)))
    incidence[np.arange(len(numbers)), ends[:, 0]] = 1.0
    incidence[np.arange(len(numbers)), ends[:, 1]] = -1.0
    recovery = np.asarray(np.linalg.pinv(incidence.T) if numbers else incidence, dtype=np.float64)
    known = np.array([_is_bridge(position, ends) and not dropped for position in range(len(numbers))], dtype=bool)
    return RigidMeshes(np.array(numbers, dtype=np.intp), ends, recovery, known)


def _is_bridge(position: int, ends: Ints) -> bool:
    """True where no other chain of rigid meshes joins the two stations of this one."""
    reached = {int(ends[position, 0])}
    grew = True
    while grew:
        grew = False
        for other, (a, b) in enumerate(ends.tolist()):
            if other != position and (a in reached) != (b in reached):
                reached |= {a, b}
                grew = True
    return int(ends[position, 1]) not in reached


def _lines(train: Train, names: tuple[str, ...]) -> tuple[tuple[int, ...], ...]:
    """Stations joined by shafts, each line and the lines themselves in file order."""
    number = {name: index for index, name in enumerate(names)}
    line = list(range(len(train.stations)))
    for shaft in train.shafts:
        a, b = (line[number[name]] for name in shaft.between)
        line = [min(a, b) if own in (a, b) else own for own in line]
    own_lines = {own for own, station in zip(line, train.stations, strict=True) if station.made_by is None}
    return tuple(tuple(i for i, own in enumerate(line) if own == first) for first in sorted(own_lines))
