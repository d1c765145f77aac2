"""The response of one state over speeds: torques, angles and heat, by group and by single source."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.damped_network import link_place
from quillshaft.assess.link_torques import Numbers, link_torque_rows
from quillshaft.assess.response.amplitudes import PlainSource
from quillshaft.assess.response.loads import Group, LoadCase, LoadSet, group_torques
from quillshaft.assess.response.states import State
from quillshaft.graph.network import Floats, Ints
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.steady import Steady, steady_chunks
from quillshaft.sources.gas import Complexes

LOWEST_RAD_S = 0.2
"""Lowest circular frequency worked out: below it a source only leans on the train."""


@dataclass(frozen=True)
class Kept:
    """Stations whose angle, and links whose heat, are kept."""

    stations: tuple[int, ...]
    links: tuple[int, ...]


def all_kept(graph: TorsionalGraph) -> Kept:
    """Every station and every link."""
    return Kept(tuple(range(len(graph.stations))), tuple(range(len(graph.links))))


@dataclass(frozen=True)
class Lines:
    """Complex amplitudes of every line, actual.

    link_nm (links, lines, S) torque at the first-named station; angle_rad (stations kept, lines, S)
    heat_w (links kept, lines, S) power lost in links; ring_w, ring_nm (rings, lines, S) in the rings of untuned dampers
    omega_rad_s (lines, S) circular frequency of each line
    """

    omega_rad_s: Floats
    link_nm: Complexes
    angle_rad: Complexes
    heat_w: Floats
    ring_w: Floats
    ring_nm: Complexes


def group_response(
    state: State,
    group: Group,
    cases: tuple[LoadCase, ...],
    kept: tuple[Kept, ...],
    speed_rad_s: Floats,
    share: Floats,
    springs: Numbers | None,
) -> list[Lines]:
    """`Lines` of a group for each load case; all orders are eliminated together, once for all cases.

    springs (springs, S) is the stiffness along the speeds where it follows them, or is iterated.
    """
    omega = np.maximum(np.multiply.outer(group.harmonics * group.base, speed_rad_s), LOWEST_RAD_S)
    loads = [group_torques(group, state.graph, case, speed_rad_s, share) for case in cases]
    return _solved(state, omega, loads, kept, springs)


def plain_responses(
    state: State,
    sources: tuple[PlainSource, ...],
    speed_rad_s: Floats,
    springs: Numbers | None,
    band_rad_s: dict[str, tuple[float, ...]] | None = None,
) -> tuple[Lines, ...]:
    """`Lines` of single sources of 1 N·m each, one line for each place and frequency a source may have.

    All are eliminated together. band_rad_s are more frequencies [rad/s], by source name, inside its band.
    """
    rows, ends = [], []
    for item in sources:
        more = ((0.0, value) for value in (band_rad_s or {}).get(item.source.name, ()))
        frequencies = [*item.frequencies, *more]
        rows += [(place, order, constant) for place in item.places for order, constant in frequencies]
        ends.append(len(rows))
    if not rows:
        return ()
    omega = np.array([np.abs(order * speed_rad_s + constant) for _, order, constant in rows])
    load = np.array([place for place, _, _ in rows], dtype=complex).T[:, :, None]
    load = np.broadcast_to(load, (load.shape[0], len(rows), len(speed_rad_s)))
    whole = _solved(state, np.maximum(omega, LOWEST_RAD_S), [load], (all_kept(state.graph),), springs)[0]
    out = []
    for item, start, end in zip(sources, [0, *ends], ends, strict=False):
        own = Lines(*[getattr(whole, name)[..., start:end, :] for name in Lines.__dataclass_fields__])
        if item.inside is not None:
            own.link_nm[item.inside] -= 1.0
        out.append(own)
    return tuple(out)


def _solved(
    state: State, omega: Floats, loads: list[Complexes], kept: tuple[Kept, ...], springs: Numbers | None
) -> list[Lines]:
    """`Lines` at frequencies (lines, S) for loads (stations, lines, S), referred."""
    lines, speeds = omega.shape
    flat = [np.reshape(load, (len(load), -1)) for load in loads]
    at_nodes = [_at_nodes(state, load) for load in flat]
    along = None if springs is None else np.tile(springs, lines)
    points = omega.reshape(-1)
    out = [_room(state, points, own) for own in kept]
    for cut, parts in steady_chunks(state.network, state.damping, state.plan, points, at_nodes, along):
        for part, load, into, own in zip(parts, flat, out, kept, strict=True):
            _collect(state, points[cut], load[:, cut], part, into, cut, own)
    return [_shaped(into, lines, speeds) for into in out]


def _at_nodes(state: State, load: Complexes) -> Complexes:
    """(nodes, points) torques of stations (stations, points), referred, on the nodes they belong to."""
    out = np.zeros((state.network.nodes, load.shape[1]), dtype=complex)
    for station in np.flatnonzero(load.any(axis=1)).tolist():
        out[state.graph.node[station]] += load[station]
    return out


def _shaped(flat: Lines, lines: int, speeds: int) -> Lines:
    """The same with every axis of points made (lines, S)."""
    parts = {name: getattr(flat, name) for name in Lines.__dataclass_fields__}
    return Lines(**{name: item.reshape((*item.shape[:-1], lines, speeds)) for name, item in parts.items()})


def _room(state: State, omega: Floats, kept: Kept) -> Lines:
    graph, points = state.graph, len(omega)
    rings = len(state.network.spring_nm_rad) - len(graph.network.spring_nm_rad)
    links, stations = (len(graph.links), points), (len(kept.stations), points)
    return Lines(
        omega,
        np.empty(links, dtype=complex),
        np.empty(stations, dtype=complex),
        np.zeros((len(kept.links), points)),
        np.zeros((rings, points)),
        np.zeros((rings, points), dtype=complex),
    )


def _collect(state: State, omega: Floats, load: Complexes, part: Steady, into: Lines, cut: slice, kept: Kept) -> None:
    graph, chosen = state.graph, list(kept.stations)
    into.angle_rad[:, cut] = part.angle[graph.node[chosen]] * graph.scale[chosen][:, None]
    rings = len(into.ring_w)
    own = len(part.spring_torque) - rings
    twist = part.spring_twist if rings or kept.links else part.spring_torque
    for number in range(rings):
        into.ring_w[number, cut] = _spring_heat(omega, part, twist, own + number)
    into.ring_nm[:, cut] = part.spring_torque[own:]
    passed = _passed_on(state, omega, load, part)
    springs = part.spring_torque[:own]
    torques = link_torque_rows(graph, state.network, springs, part.tie_torque, part.link_torque, passed)
    for position, link in enumerate(graph.links):
        np.multiply(torques[position], link.torque_scale, into.link_nm[position, cut])
    for row, position in enumerate(kept.links):
        into.heat_w[row, cut] = _link_heat(state, omega, (part, twist), graph.links[position])


def _link_heat(state: State, omega: Floats, solved: tuple[Steady, Numbers], link: GraphLink) -> Floats:
    """(points,) power [W] lost in a link: half of ω times the part of its torque that leads its twist, times that."""
    place, (part, twist) = link_place(link), solved
    if place is None or (place[0] == "tie" and link.index >= len(part.tie_torque)):
        return np.zeros(len(omega))
    if place[0] == "tie":
        return _tie_heat(state, omega, part, link.index)
    if place[0] == "torque":
        return _torque_link_heat(state, omega, part, link.index)
    return np.asarray(sum(_spring_heat(omega, part, twist, number) for number in place[1]))


def _spring_heat(omega: Floats, part: Steady, twist: Numbers, number: int) -> Floats:
    return np.asarray(0.5 * omega * np.imag(part.spring_torque[number] * np.conj(twist[number])))


def _tie_heat(state: State, omega: Floats, part: Steady, number: int) -> Floats:
    twist = part.angle[state.network.tie_node[number]]
    return np.asarray(0.5 * omega * np.imag(part.tie_torque[number] * np.conj(twist)))


def _torque_link_heat(state: State, omega: Floats, part: Steady, number: int) -> Floats:
    compliance = state.network.torque_links[number].compliance_rad_per_nm
    stiffness = 1.0 / compliance * (1 + 1j * state.damping.link_loss[number])
    stiffness = stiffness + 1j * omega * state.damping.link_viscous[number]
    torque = part.link_torque[number]
    return np.asarray(0.5 * omega * np.imag(torque * np.conj(torque / stiffness)))


def _passed_on(state: State, omega: Floats, load: Complexes, part: Steady) -> Complexes:
    """(stations, points) referred torque that each station has to pass on to its links: wanted at rigid meshes only."""
    graph = state.graph
    if not len(graph.rigid.links):
        return np.zeros((len(graph.stations), len(omega)), dtype=complex)
    inertia = graph.inertia_kgm2 * graph.scale**2
    rings = [ring for ring in graph.rings if ring.viscous_nms_rad]
    own = len(part.spring_torque) - len(rings)
    for ring in rings:
        inertia[ring.station] -= ring.counted_kgm2 * float(graph.scale[ring.station]) ** 2
    left = np.array(load)
    square = omega**2
    for station in np.unique(graph.rigid.ends).tolist():
        node = graph.node[station]
        factor = inertia[station] * square
        if graph.viscous_nms_rad is not None:
            factor = factor - 1j * omega * graph.viscous_nms_rad[station] * graph.scale[station] ** 2
        if state.damping.node_lost_kgm2 is not None:
            whole = float(inertia[graph.node == node].sum()) or 1.0
            factor = factor - 1j * square * state.damping.node_lost_kgm2[node] * inertia[station] / whole
        left[station] += factor * part.angle[node]
    for number, ring in enumerate(rings):
        left[ring.station] -= part.spring_torque[own + number]
    return left


@dataclass(frozen=True)
class StateLines:
    """Everything of one state over speeds: by load case the lines of each group, and those of the single sources.

    springs (springs, S) is the stiffness it was worked out with, where that follows speed or heat.
    """

    groups: tuple[tuple[Lines, ...], ...]
    plain: tuple[Lines, ...]
    springs: Numbers | None


def joined_lines(parts: list[StateLines], order: Ints) -> StateLines:
    """The same state at the speeds of all parts together, put in `order`."""

    def whole(of: list[Lines]) -> Lines:
        names = Lines.__dataclass_fields__
        return Lines(*[np.concatenate([getattr(item, name) for item in of], axis=-1)[..., order] for name in names])

    stiffness = [part.springs for part in parts if part.springs is not None]
    first = parts[0]
    return StateLines(
        tuple(
            tuple(whole([part.groups[case][group] for part in parts]) for group in range(len(own)))
            for case, own in enumerate(first.groups)
        ),
        tuple(whole([part.plain[number] for part in parts]) for number in range(len(first.plain))),
        np.concatenate(stiffness, axis=1)[:, order] if stiffness else None,
    )


def evaluate(
    state: State,
    loads: LoadSet,
    cases: tuple[LoadCase, ...],
    kept: tuple[Kept, ...],
    speed_rad_s: Floats,
    share: Floats,
    springs: Numbers | None = None,
    band_rad_s: dict[str, tuple[float, ...]] | None = None,
) -> StateLines:
    """The lines of all sources of a state at speeds (S,): `groups[case][group]`, `plain[source]` for 1 N·m.

    kept says for each case what is kept of the groups; all is kept of single sources. band_rad_s are further
    frequencies by source name to look at inside its band.
    """
    if springs is None and state.springs_along is not None:
        springs = state.springs_along(speed_rad_s)
    by_group = [group_response(state, group, cases, kept, speed_rad_s, share, springs) for group in loads.groups]
    groups = tuple(tuple(own[number] for own in by_group) for number in range(len(cases)))
    plain = plain_responses(state, loads.plain, speed_rad_s, springs, band_rad_s)
    return StateLines(groups, plain, springs)
