"""What shakes the train, with amplitude and phase: groups of sources locked in phase, and sources by themselves."""

from __future__ import annotations

import math
from fractions import Fraction
from functools import reduce

import numpy as np

from quillshaft.assess.response.amplitudes import PlainSource, plain_source
from quillshaft.assess.response.mean import MeanTorques
from quillshaft.assess.response_results import CaseKind
from quillshaft.graph.network import Floats, Ints
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.sources.cylinder_loads import CylinderLoads, cylinder_loads
from quillshaft.sources.gas import Complexes
from quillshaft.sources.line import Source
from quillshaft.train.basic_model import Assumed
from quillshaft.train.model import Excitation, Machine, Train
from quillshaft.train.problems import TrainFileError, did_you_mean
from quillshaft.train.validate import Findings

HARMONIC = 1e-6
"""How near an order must be to a multiple of its group's cycle."""


@dataclass(frozen=True)
class Line:
    """One order of a group: its source, harmonic of the working cycle, and where its torque comes from.

    order_index   place of the order among those of the group's machine; None of a locked excitation (`plain`)
    """

    source: Source
    harmonic: int
    order_index: int | None
    plain: PlainSource | None


@dataclass(frozen=True)
class Group:
    """Sources locked in phase.

    base         fundamental of the working cycle per turn of `speed-at`
    speed_ratio  of the shaft against whose angle the waves are drawn, and orders per turn of it
    stations     (cylinders,) station of each cylinder; empty without a machine
    """

    name: str
    base: float
    speed_ratio: float
    lines: tuple[Line, ...]
    cylinders: CylinderLoads | None
    stations: Ints

    @property
    def harmonics(self) -> Ints:
        """(lines,) harmonics of the working cycle."""
        return np.array([line.harmonic for line in self.lines], dtype=np.intp)


@dataclass(frozen=True)
class LoadCase:
    """How the machines run: share of full load, and which cylinder of which group is dead beside those of the file."""

    name: str
    kind: CaseKind
    note: str
    load_share: float = 1.0
    group: str | None = None
    dead: int | None = None


@dataclass(frozen=True)
class LoadSet:
    """All continuous sources: groups locked in phase, single ones, and those without an amplitude.

    silent   the latter with an amplitude of 0, to ask how large they may be; unjudged their names
    """

    groups: tuple[Group, ...]
    plain: tuple[PlainSource, ...]
    silent: tuple[PlainSource, ...]
    unjudged: tuple[str, ...]
    assumed: tuple[Assumed, ...]
    notes: tuple[str, ...]


def collect_loads(train: Train, graph: TorsionalGraph, sources: tuple[Source, ...], mean: MeanTorques) -> LoadSet:
    """The loads of the continuous sources of a train.

    Raises TrainFileError where an amplitude names no source, has no mean torque to refer to, or is locked to what it
    cannot follow.
    """
    findings = Findings(train.file, train.cases)
    assumed: list[Assumed] = []
    notes: list[str] = []
    _check_names(train, sources, findings)
    left = [source for source in sources if source.when == "continuous"]
    groups = [_machine_group(machine, graph, left) for machine in train.machines]
    machine_groups = [group for group in groups if group is not None]
    used = {line.source.name for group in machine_groups for line in group.lines}
    plain: list[PlainSource] = []
    silent: list[PlainSource] = []
    for source in left:
        if source.name in used:
            continue
        found = plain_source(train, graph, source, mean, findings, notes)
        (silent if found[0].silent else plain).append(found[0])
        assumed += found[1]
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    unjudged = tuple(item.source.name for item in silent)
    joined, single = _locked(train, machine_groups, plain, findings, notes)
    return LoadSet(joined, single, tuple(silent), unjudged, tuple(assumed), tuple(notes))


def _check_names(train: Train, sources: tuple[Source, ...], findings: Findings) -> None:
    names = sorted(name for source in sources for name in source.origins)
    off = set(train.excitations_off)
    first: dict[tuple[str, str], str] = {}
    for amplitude in train.amplitudes:
        named = next((source for source in sources if source.answers_to(amplitude.source)), None)
        if named is not None:
            origin = amplitude.source if amplitude.source in named.origins else named.origins[0]
            before = first.setdefault((named.name, origin), amplitude.source)
            if before != amplitude.source:
                message = f"is another name of the source that {before} already gives an amplitude"
                findings.add(("amplitudes", amplitude.source), message, None, "one amplitude for each source")
        if named is not None or amplitude.source in off:
            continue
        hint = did_you_mean(amplitude.source, names)
        message = f"there is no source of this name{hint}"
        findings.add(("amplitudes", amplitude.source), message, None, "as `check` lists it")


def _machine_group(machine: Machine, graph: TorsionalGraph, sources: list[Source]) -> Group | None:
    """The orders of an engine or compressor that gives torques; None of any other machine."""
    loads = cylinder_loads(machine) if machine.cylinders else None
    if loads is None:
        return None
    stations = np.array([graph.number(cylinder.at) for cylinder in machine.cylinders], dtype=np.intp)
    ratio = abs(float(graph.speed_ratio[stations[0]]))
    lines = []
    for index, order in enumerate(loads.orders.tolist()):
        name = f"{machine.name} order-{order:g}"
        source = next((item for item in sources if name in item.origins), None)
        if source is not None:
            lines.append(Line(source, round(order * loads.turns), index, None))
    if not lines:
        return None
    return Group(machine.name, ratio / loads.turns, ratio, tuple(lines), loads, stations)


def _locked(
    train: Train, groups: list[Group], plain: list[PlainSource], findings: Findings, notes: list[str]
) -> tuple[tuple[Group, ...], tuple[PlainSource, ...]]:
    """Groups, and single sources that are left: what follows a machine or an excitation in phase is in its group.

    Excitations that follow one another make a group of their own.
    """
    locked = {item.name: item for item in train.excitations if item.locked_with is not None}
    chosen: dict[str, list[PlainSource]] = {}
    roots = {_root(item, locked) for item in locked.values()}
    for source in plain:
        own = locked.get(source.source.name)
        root = _root(own, locked) if own is not None else source.source.name if source.source.name in roots else None
        if root is not None:
            chosen.setdefault(root, []).append(source)
    names = {group.name for group in groups}
    for root, members in chosen.items():
        if root in names:
            groups = [_joined(group, members, findings) if group.name == root else group for group in groups]
            continue
        if all(source.source.name != root for source in members):
            notes.append(_alone(root, members))
        if len(members) > 1:
            groups.append(_own_group(root, members))
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    taken = {line.source.name for group in groups for line in group.lines}
    return tuple(groups), tuple(source for source in plain if source.source.name not in taken)


def _alone(root: str, members: list[PlainSource]) -> str:
    """What is said of excitations that follow a machine or excitation of which no steady torque is known."""
    names = " and ".join(source.source.name for source in members)
    if len(members) > 1:
        return f"{names} are locked with {root}, which gives no steady torque: they keep their phase to each other only"
    return f"{names} is locked with {root}, which gives no steady torque: it is taken as of unknown phase"


def _root(item: Excitation, locked: dict[str, Excitation]) -> str:
    """What an excitation follows in the end; one of a circle of excitations that follow one another."""
    seen: list[str] = []
    name = item.name
    while name in locked and name not in seen:
        seen.append(name)
        name = locked[name].locked_with or name
    return name if name not in seen else min(seen)


def _joined(group: Group, members: list[PlainSource], findings: Findings) -> Group:
    lines = list(group.lines)
    for member in members:
        order = abs(member.source.order) * member.source.speed_ratio
        harmonic = round(order / group.base)
        if harmonic < 1 or abs(order / group.base - harmonic) > HARMONIC:
            text = f"turns {order:.4g} times for each turn of `speed-at`, no multiple of the cycle of {group.name}"
            allowed = f"a multiple of {group.base:.4g} per turn of `speed-at`, or no locked-with"
            findings.add(("excitations", member.source.name, "order"), text, None, allowed)
            continue
        lines.append(Line(member.source, harmonic, None, member))
    return Group(group.name, group.base, group.speed_ratio, tuple(lines), group.cylinders, group.stations)


def _own_group(root: str, members: list[PlainSource]) -> Group:
    orders = [Fraction(abs(item.source.order) * item.source.speed_ratio).limit_denominator(1000) for item in members]
    base = reduce(_common, orders)
    lines = tuple(
        Line(item.source, round(order / base), None, item) for item, order in zip(members, orders, strict=True)
    )
    none = np.zeros(0, dtype=np.intp)
    return Group(f"{root} and what follows it", float(base), members[0].source.speed_ratio, lines, None, none)


def _common(a: Fraction, b: Fraction) -> Fraction:
    return Fraction(math.gcd(a.numerator * b.denominator, b.numerator * a.denominator), a.denominator * b.denominator)


def group_torques(group: Group, graph: TorsionalGraph, case: LoadCase, speed_rad_s: Floats, share: Floats) -> Complexes:
    """(stations, lines, S) referred torque [N·m] of a group's lines at speeds (S,) of `speed-at`.

    `share` (S,) is the torque that the load law asks for over that at rated speed; the case's share multiplies it.
    """
    out = np.zeros((len(graph.stations), len(group.lines), len(speed_rad_s)), dtype=complex)
    if group.cylinders is not None:
        dead = case.dead if case.group == group.name else None
        torque = group.cylinders.gas_nm(share * case.load_share, dead)
        torque = torque + group.cylinders.mass_nm(speed_rad_s * group.speed_ratio)
        rows = [number for number, line in enumerate(group.lines) if line.order_index is not None]
        chosen = [line.order_index for line in group.lines if line.order_index is not None]
        for cylinder, station in enumerate(group.stations.tolist()):
            out[station, rows] += torque[cylinder, chosen] * graph.scale[station]
    for number, line in enumerate(group.lines):
        if line.plain is not None:
            size = line.plain.amplitude_nm(share * case.load_share) * np.exp(1j * line.plain.phase_rad)
            out[:, number] += line.plain.places[0][:, None] * size
    return out
