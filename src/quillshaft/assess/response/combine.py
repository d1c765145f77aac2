"""Lines of a state put together: waves over the working cycle, groups and single sources added, mean torque beside."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np

from quillshaft.assess.link_torques import Numbers
from quillshaft.assess.response.evaluate import Kept, Lines, StateLines
from quillshaft.assess.response.loads import Group, LoadCase, LoadSet
from quillshaft.assess.response.states import State
from quillshaft.assess.response.synthesis import extremes
from quillshaft.assess.response_results import CaseResponse, LineShare
from quillshaft.elements.coupling_duty import FLAT_HZ
from quillshaft.graph.network import Bools, Floats, Ints
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.sources.line import TWO_PI
from quillshaft.train.model import Operation

BY_LINK = (
    "mean_torque_nm",
    "alternating_torque_nm",
    "root_sum_square_nm",
    "peak_torque_nm",
    "weighted_torque_nm",
    "twist_deg",
    "heat_w",
)
BY_STATION = ("angle_deg", "irregularity", "inertia_torque_nm")


@dataclass(frozen=True)
class Range:
    """Largest and smallest value of waves, (rows, S); groups added by amplitude, and by the root of their squares."""

    high: Floats
    low: Floats
    squares: Floats

    @property
    def half(self) -> Floats:
        """Half the peak-to-peak value, groups added by amplitude."""
        return np.asarray(0.5 * (self.high - self.low))


def put_together(values: list[tuple[Group, Complexes]], single: list[Floats], shape: tuple[int, int]) -> Range:
    """Waves of each group (rows, lines, S) and amplitudes of single sources (rows, S), added at their worst."""
    high, low, squares = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    for group, amplitude in values:
        rows, lines, speeds = amplitude.shape
        flat = np.moveaxis(amplitude, 1, 2).reshape(rows * speeds, lines)
        top, bottom = (item.reshape(rows, speeds) for item in extremes(flat, group.harmonics))
        high, low, squares = high + top, low + bottom, squares + (0.5 * (top - bottom)) ** 2
    for size in single:
        high, low, squares = high + size, low - size, squares + size**2
    return Range(high, low, squares)


def _worst(lines: Complexes) -> Floats:
    """(rows, S) largest magnitude over the places and frequencies that a single source may have."""
    return np.asarray(np.abs(lines).max(axis=1))


def line_weights(lines: Lines) -> Floats:
    """(lines, S) frequency factor of couplings: 1 to 10 Hz, √(f / 10 Hz) above (DIN 740-2, recalled)."""
    return np.sqrt(np.maximum(lines.omega_rad_s / (TWO_PI * FLAT_HZ), 1.0))


def torque_range(loads: LoadSet, case: LoadCase, number: int, lines: StateLines, share: Floats) -> Range:
    """The alternating torque of every link, (links, S), in load case `number` of a state."""
    groups = zip(loads.groups, lines.groups[number], strict=True)
    single = [
        item.amplitude_nm(share * case.load_share) * _worst(own.link_nm)
        for item, own in zip(loads.plain, lines.plain, strict=True)
    ]
    some = next((own for own in (*lines.groups[number], *lines.plain)), None)
    links = 0 if some is None else len(some.link_nm)
    return put_together([(group, own.link_nm) for group, own in groups], single, (links, len(share)))


def joined_range(parts: list[Range], order: Ints) -> Range:
    """Ranges at several sets of speeds as one, put in `order`."""
    names = Range.__dataclass_fields__
    return Range(*[np.concatenate([getattr(part, name) for part in parts], axis=1)[:, order] for name in names])


@dataclass(frozen=True)
class Combined:
    """What a case is put together from; `number` is its place among the load cases of the state.

    kept is what its groups' lines hold of angles and heat; those of single sources hold all.
    """

    state: State
    loads: LoadSet
    case: LoadCase
    number: int
    lines: StateLines
    speed_rad_s: Floats
    share: Floats
    torque: Range
    kept: Kept

    @property
    def groups(self) -> list[tuple[Group, Lines]]:
        """Every group with its lines."""
        return list(zip(self.loads.groups, self.lines.groups[self.number], strict=True))

    @property
    def plain(self) -> list[tuple[Floats, Lines]]:
        """(S,) amplitude of every single source, with its lines for 1 N·m."""
        sizes = [item.amplitude_nm(self.share * self.case.load_share) for item in self.loads.plain]
        return list(zip(sizes, self.lines.plain, strict=True))

    def rows(self, pick: Callable[[Lines], Complexes], rows: int) -> Range:
        """What `pick` takes of the lines, (rows, lines, S), as waves over the cycle."""
        grouped = [(group, pick(own)) for group, own in self.groups]
        single = [size * _worst(pick(own)) for size, own in self.plain]
        return put_together(grouped, single, (rows, len(self.speed_rad_s)))

    def angles(self, stations: tuple[int, ...], power: int, where: Bools) -> Floats:
        """(stations, S) half the range of angles times the circular frequency to a power, nan but `where` (S,)."""
        places, chosen = [self.kept.stations.index(station) for station in stations], list(stations)

        def taken(own: Lines, rows: list[int]) -> Complexes:
            return np.asarray(own.angle_rad[rows][:, :, where] * own.omega_rad_s[:, where] ** power)

        grouped = [(group, taken(own, places)) for group, own in self.groups]
        single = [size[where] * _worst(taken(own, chosen)) for size, own in self.plain]
        out = np.full((len(stations), len(where)), np.nan)
        out[:, where] = put_together(grouped, single, (len(stations), int(where.sum()))).half
        return out


def combine(what: Combined, mean_nm: Floats, watched: tuple[int, ...], couplings: tuple[int, ...]) -> CaseResponse:
    """One case; mean_nm (links,) is the mean torque at rated speed and the full load of the case.

    Angles and heat are known where they are kept; speed irregularity and inertia torque at the stations `watched`,
    weighted torque in the links `couplings`; nan elsewhere. What moves is worked out at all speeds in the normal case,
    in the others at the judged speeds.
    """
    state, case, torque = what.state, what.case, what.torque
    links = len(state.graph.links)
    mean = mean_nm[:, None] * what.share * case.load_share
    known = np.nan_to_num(mean)
    where = moving_speeds(what)
    irregular, inertia = _motion(what, list(watched), where)
    return CaseResponse(
        name=_case_name(state, case),
        kind=case.kind if state.kind == "normal" or case.dead is not None else state.kind,
        note=" and ".join(word for word in (case.note, state.note) if word),
        judged=state.judged,
        mean_torque_nm=mean,
        alternating_torque_nm=torque.half,
        root_sum_square_nm=np.sqrt(torque.squares),
        peak_torque_nm=np.maximum(np.abs(known + torque.high), np.abs(known + torque.low)),
        weighted_torque_nm=_spread(_weighted(what, couplings), couplings, links),
        twist_deg=np.degrees(torque.half * _compliance(state, what.lines.springs)),
        heat_w=_heat(what, links),
        angle_deg=_angles(what, where),
        irregularity=irregular,
        inertia_torque_nm=inertia,
        temperature_k={},
        runaway={},
        damper_w=_rings(what, heat=True),
        damper_nm=_rings(what, heat=False),
    )


def _weighted(what: Combined, couplings: tuple[int, ...]) -> Floats:
    """(couplings, S) alternating torque, each line weighed by its frequency."""
    return what.rows(lambda own: own.link_nm[list(couplings)] * line_weights(own), len(couplings)).half


def _spread(values: Floats, places: tuple[int, ...], rows: int) -> Floats:
    """(rows, S) with `values` at `places`, nan elsewhere."""
    out = np.full((rows, values.shape[1]), np.nan)
    out[list(places)] = values
    return out


def added_heat(loads: LoadSet, groups: list[tuple[Group, Floats]], single: list[Floats]) -> Floats:
    """(rows, S) heat [W] of all sources: of one frequency they add by amplitude, of others by power.

    groups: (rows, lines, S) of each; single: (rows, S) of each single source at its amplitude.
    """
    parts: dict[tuple[float, float], Floats] = {}
    for group, heat in groups:
        for number, harmonic in enumerate(group.harmonics.tolist()):
            key = (round(harmonic * group.base, 6), 0.0)
            parts[key] = parts.get(key, 0.0) + np.sqrt(np.maximum(heat[:, number], 0.0))
    for item, heat in zip(loads.plain, single, strict=True):
        order, constant = item.frequencies[0]
        key = (round(abs(order), 6), round(constant if order >= 0 else -constant, 6))
        parts[key] = parts.get(key, 0.0) + np.sqrt(np.maximum(heat, 0.0))
    return np.asarray(sum(part**2 for part in parts.values()))


def _heat(what: Combined, links: int) -> Floats:
    places = list(what.kept.links)
    groups = [(group, own.heat_w) for group, own in what.groups]
    single = [size**2 * own.heat_w[places].max(axis=1) for size, own in what.plain]
    return _spread(added_heat(what.loads, groups, single), what.kept.links, links)


def _angles(what: Combined, where: Bools) -> Floats:
    stations = what.kept.stations
    return _spread(np.degrees(what.angles(stations, 0, where)), stations, len(what.state.graph.stations))


def _case_name(state: State, case: LoadCase) -> str:
    return ", ".join(word for word in (case.name, state.name) if word)


def _compliance(state: State, springs: Numbers | None) -> Floats:
    """(links, S) or (links, 1) twist over torque at the first-named station [rad/(N·m)]; 0 of rigid links."""
    out = np.zeros((len(state.graph.links), 1 if springs is None else springs.shape[1]))
    for number, link in enumerate(state.graph.links):
        if not link.stiffness_nm_rad:
            continue
        own = link.stiffness_nm_rad
        if springs is not None and link.slot == "spring":
            own = springs[link.index].real * link.torque_scale**2
        out[number] = 1.0 / (own * abs(1 + 1j * (link.loss_factor or 0.0)))
    return out


def moving_speeds(what: Combined) -> Bools:
    """(S,) speeds at which the motion of stations is worked out."""
    everywhere = what.state.kind == "normal" and what.number == 0
    if everywhere:
        return np.ones(len(what.speed_rad_s), dtype=bool)
    return continuous_speeds(what.state.train.operation, what.speed_rad_s)


def continuous_speeds(operation: Operation, speed_rad_s: Floats) -> Bools:
    """(S,) True at speeds of the judged ranges, barred ones left out."""
    inside = np.zeros(len(speed_rad_s), dtype=bool)
    for low, high in operation.ranges_rad_s:
        inside |= (speed_rad_s >= low * (1 - 1e-9)) & (speed_rad_s <= high * (1 + 1e-9))
    for low, high in operation.barred_rad_s:
        inside &= ~((speed_rad_s > low * (1 + 1e-9)) & (speed_rad_s < high * (1 - 1e-9)))
    return inside


def _motion(what: Combined, watched: list[int], where: Bools) -> tuple[Floats, Floats]:
    """(stations, S) speed irregularity and inertia torque [N·m] at the watched stations, nan elsewhere."""
    graph, places = what.state.graph, tuple(watched)
    speed, rate = what.angles(places, 1, where), what.angles(places, 2, where)
    irregular = 2.0 * speed / np.multiply.outer(graph.scale[watched], what.speed_rad_s)
    inertia = rate * graph.inertia_kgm2[watched][:, None]
    stations = len(graph.stations)
    return _spread(irregular, places, stations), _spread(inertia, places, stations)


def _rings(what: Combined, heat: bool) -> dict[str, Floats]:
    """(S,) by untuned damper: heat [W] of its fluid, or torque amplitude [N·m] through it, at its station's speed."""
    graph = what.state.graph
    rings = [ring for ring in graph.rings if ring.viscous_nms_rad]
    if not rings:
        return {}
    if heat:
        groups = [(group, own.ring_w) for group, own in what.groups]
        total = added_heat(what.loads, groups, [size**2 * own.ring_w.max(axis=1) for size, own in what.plain])
    else:
        total = what.rows(lambda own: own.ring_nm, len(rings)).half
        total = total / np.array([float(graph.scale[ring.station]) for ring in rings])[:, None]
    return {ring.name: total[number] for number, ring in enumerate(rings)}


def line_shares(loads: LoadSet, lines: StateLines, share: Floats) -> tuple[LineShare, ...]:
    """What each source contributes in the first load case of a state."""
    out = []
    for group, own in zip(loads.groups, lines.groups[0], strict=True):
        for number, line in enumerate(group.lines):
            source = line.source
            out.append(LineShare(source.name, group.name, abs(source.order), 0.0, np.abs(own.link_nm[:, number])))
    for item, own in zip(loads.plain, lines.plain, strict=True):
        size = item.amplitude_nm(share) * _worst(own.link_nm)
        source = item.source
        out.append(LineShare(source.name, source.name, abs(source.order), source.frequency_hz, size))
    return tuple(out)


def aligned(made: CaseResponse, graph: TorsionalGraph, first: TorsionalGraph) -> CaseResponse:
    """A case of a graph that lacks stations or links of the first, in the order of that; nan where it lacks them."""
    links, wanted = [link.name for link in graph.links], [link.name for link in first.links]
    if links == wanted and graph.stations == first.stations:
        return made

    def taken(name: str) -> Floats:
        own, names = (list(graph.stations), list(first.stations)) if name in BY_STATION else (links, wanted)
        rows = getattr(made, name)
        out = np.full((len(names), rows.shape[1]), np.nan)
        for place, item in enumerate(names):
            if item in own:
                out[place] = rows[own.index(item)]
        return out

    moved: dict[str, Any] = {name: taken(name) for name in (*BY_LINK, *BY_STATION)}
    return replace(made, **moved)
