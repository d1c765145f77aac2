"""The orders of reciprocating engines and compressors as sources: where they act, how they add up, how large."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.engine import is_major
from quillshaft.sources.gas import Complexes, CycleError
from quillshaft.sources.line import Action, Source
from quillshaft.sources.reciprocating import CylinderTorque, cylinder_torques, machine_orders
from quillshaft.train.model import Machine, Train
from quillshaft.train.validate import Findings

KINDS = ("reciprocating-engine", "reciprocating-compressor")
SAME = 1e-9


def crank_speed(machine: Machine, graph: TorsionalGraph, speed_rad_s: float) -> float:
    """Speed [rad/s] of a machine's crank at a speed of `speed-at`."""
    return speed_rad_s * abs(float(graph.speed_ratio[graph.number(machine.cylinders[0].at)]))


def reciprocating_sources(
    machine: Machine, train: Train, graph: TorsionalGraph, findings: Findings
) -> Iterator[Source]:
    """One source for each order of an engine or compressor; contradictions go to `findings`."""
    stations = tuple(graph.number(cylinder.at) for cylinder in machine.cylinders)
    ratios = {graph.speed_ratio[station] for station in stations}
    if len(ratios) > 1 or 0 in ratios:
        word = "engine" if machine.kind == KINDS[0] else "compressor"
        findings.add(("machines", machine.name, "cylinders"), f"the cylinders of one {word} turn at one speed")
        return
    try:
        torques = cylinder_torques(machine, crank_speed(machine, graph, train.operation.rated_rad_s))
    except CycleError as error:
        path = ("machines", machine.name, "gas", "cycle", error.key)
        findings.add(path, error.message, None, error.allowed)
        return
    names = [graph.stations[station] for station in stations]
    at = names[0] if len(set(names)) == 1 else f"{names[0]} to {names[-1]}"
    for index, order in enumerate(machine_orders(machine)):
        tail = f"order-{order:g}"
        name = f"{machine.name} {tail}"
        family = ("engine",) if machine.kind == KINDS[0] else ()
        yield Source(
            name,
            (name,),
            ((name, tail, *family, machine.kind, machine.name, "default"),),
            at,
            stations[0],
            order,
            0.0,
            0.0,
            abs(float(graph.speed_ratio[stations[0]])),
            "continuous",
            _action(machine, order, stations, _at(torques, index)),
            major_order(machine, order, _at(torques, index)),
            _torque_words(machine, _at(torques, index)),
        )


def _at(torques: tuple[CylinderTorque, ...], index: int) -> Complexes | None:
    """(cylinders,) complex torque of one order [N·m]; None where the file gives none."""
    return np.array([item.torque_nm[index] for item in torques]) if torques else None


def _alike(machine: Machine, torque: Complexes | None) -> bool:
    """True where every cylinder acts with the same amplitude, each from its own dead centre."""
    if any(cylinder.dead for cylinder in machine.cylinders):
        return False
    size = None if torque is None else np.abs(torque)
    return machine.kind == KINDS[0] or size is None or float(np.ptp(size)) <= SAME * float(np.max(size))


def _weights(machine: Machine, torque: Complexes | None) -> Floats:
    """(cylinders,) share of each cylinder [-], the largest 1: by torque where known, else 1 or, dead, 0."""
    if torque is None or not np.any(torque):
        return np.array([0.0 if cylinder.dead else 1.0 for cylinder in machine.cylinders])
    size = np.abs(torque)
    return np.asarray(size / np.max(size))


def _action(machine: Machine, order: float, stations: tuple[int, ...], torque: Complexes | None) -> Action:
    phases = tuple(order * cylinder.fires_at_rad for cylinder in machine.cylinders)
    if _alike(machine, torque) and machine.kind == KINDS[0]:
        return Action("point", stations, phases)
    if torque is not None and np.any(torque):
        phases = tuple((-np.angle(torque)).tolist())
    return Action("point", stations, phases, weights=tuple(_weights(machine, torque).tolist()))


def major_order(machine: Machine, order: float, torque: Complexes | None) -> bool:
    """Whether the cylinders add on a rigid crank to at least half the sum of their amplitudes."""
    if _alike(machine, torque) and machine.kind == KINDS[0]:
        return is_major(order, [cylinder.fires_at_rad for cylinder in machine.cylinders])
    if torque is not None and np.any(torque):
        return bool(abs(np.sum(torque)) >= (0.5 - SAME) * np.sum(np.abs(torque)))
    live = [cylinder.fires_at_rad for cylinder in machine.cylinders if not cylinder.dead]
    return is_major(order, live) if live else False


def _torque_words(machine: Machine, torque: Complexes | None) -> str | None:
    """Amplitude at rated speed in words: of each cylinder, or of the firing and the dead ones."""
    if torque is None:
        return None
    size = np.abs(torque)
    dead = np.array([cylinder.dead for cylinder in machine.cylinders])
    parts = []
    for mask, word in ((~dead, "a cylinder"), (dead, "a dead one")):
        if np.any(mask):
            low, high = float(np.min(size[mask])), float(np.max(size[mask]))
            span = f"{high:.4g}" if high - low <= 1e-6 * high else f"{low:.4g} to {high:.4g}"
            parts.append(f"{span} N·m {word}")
    indicative = ", indicative" if is_indicative(machine) else ""
    return f"{'; '.join(parts)} at rated speed{indicative}"


def is_indicative(machine: Machine) -> bool:
    """True where gas torques rest on an idealised cycle in place of a card."""
    ends = [end for item in machine.cylinders for end in (item.head_end, item.crank_end) if end is not None]
    return (machine.gas is not None and machine.gas.cycle is not None) or any(end.card is None for end in ends)
