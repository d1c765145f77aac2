"""Orders of an engine or reciprocating compressor: how the cylinders add on a rigid crank and in each mode."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Floats
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.sources.reciprocating import (
    CylinderTorque,
    cylinder_torques,
    machine_orders,
    reciprocating_inertia,
    turns_of,
)
from quillshaft.sources.reciprocating_sources import KINDS, crank_speed, is_indicative, major_order
from quillshaft.train.model import Machine
from quillshaft.train.problems import did_you_mean


class OrdersError(ValueError):
    """A question about orders that the train cannot answer."""


@dataclass(frozen=True)
class OrderRow:
    """One order of a machine.

    vectors       (cylinders,) complex, of length 1: direction of each cylinder's part; 0 for one that does not act
    rigid_sum     |Σ β exp(j n φ)| with β = 1 of the cylinders that fire, at most their number
    mode_sums     by number of mode the same with β the referred angle, the largest of the mode 1
    gas_nm, inertia_nm, torque_nm   largest amplitude of a cylinder that acts [N·m]; None where not known
    dead_nm       largest amplitude of a dead cylinder; None where there is none or it is not known
    together_nm   amplitude of all cylinders together on a rigid crank
    """

    order: float
    major: bool
    vectors: Complexes
    rigid_sum: float
    mode_sums: dict[int, float]
    gas_nm: float | None
    inertia_nm: float | None
    torque_nm: float | None
    dead_nm: float | None
    together_nm: float | None


@dataclass(frozen=True)
class OrderStudy:
    """All orders of one machine; `modes` are the judged ones, `shapes` (modes, cylinders) their referred angles."""

    screening: Screening
    machine: Machine
    speed_rad_s: float
    turns: int
    rows: tuple[OrderRow, ...]
    modes: tuple[int, ...]
    shapes: Floats
    indicative: bool
    mean_nm: float | None
    inertia_kgm2: tuple[float, ...]

    @property
    def acting(self) -> int:
        """Cylinders that fire (of a compressor: are loaded)."""
        return sum(not cylinder.dead for cylinder in self.machine.cylinders)

    def crank_angles_deg(self) -> tuple[float, ...]:
        """Angle of each cylinder's throw [deg], 0 to 360: its dead centre less its bank."""
        return tuple(
            math.degrees(item.fires_at_rad - (item.bank_rad or 0.0)) % 360.0 for item in self.machine.cylinders
        )


def order_study(screening: Screening, name: str | None = None) -> OrderStudy:
    """The orders of the machine called `name`, or of the only one, at the rated speed.

    Raises OrdersError where there is no such machine, or several and none is named.
    """
    machine = _choose(screening, name)
    speed = crank_speed(machine, screening.graph, screening.train.operation.rated_rad_s)
    torques = cylinder_torques(machine, speed)
    stations = [screening.graph.number(cylinder.at) for cylinder in machine.cylinders]
    modes = screening.judged_modes
    names = [screening.graph.stations[station] for station in stations]
    shapes = np.array([[screening.mode(mode).referred_shape[at] for at in names] for mode in modes])
    shapes = shapes.reshape(len(modes), len(names))
    rows = tuple(
        _row(machine, index, order, torques, modes, shapes) for index, order in enumerate(machine_orders(machine))
    )
    means = [item.mean_nm for item in torques if item.mean_nm is not None]
    return OrderStudy(
        screening,
        machine,
        speed,
        turns_of(machine),
        rows,
        modes,
        shapes,
        is_indicative(machine),
        sum(means) if means else None,
        tuple(reciprocating_inertia(machine, cylinder) for cylinder in machine.cylinders),
    )


def reciprocating_machines(screening: Screening) -> tuple[Machine, ...]:
    """Engines and reciprocating compressors of the train, in file order."""
    return tuple(machine for machine in screening.train.machines if machine.kind in KINDS)


def _choose(screening: Screening, name: str | None) -> Machine:
    machines = reciprocating_machines(screening)
    names = [machine.name for machine in machines]
    if not machines:
        raise OrdersError("--machine: the file has no reciprocating-engine and no reciprocating-compressor")
    if name is None and len(machines) > 1:
        raise OrdersError(f"--machine: name one of {', '.join(names)}")
    if name is not None and name not in names:
        hint = did_you_mean(name, names) or "."
        known = ", ".join(names)
        raise OrdersError(f"--machine {name}: there is no reciprocating machine of this name{hint} Allowed: {known}")
    return machines[0] if name is None else machines[names.index(name)]


def _row(
    machine: Machine,
    index: int,
    order: float,
    torques: tuple[CylinderTorque, ...],
    modes: tuple[int, ...],
    shapes: Floats,
) -> OrderRow:
    angles = np.array([cylinder.fires_at_rad for cylinder in machine.cylinders])
    acts = np.array([not cylinder.dead for cylinder in machine.cylinders])
    vectors = np.where(acts, np.exp(1j * order * angles), 0.0)
    torque = np.array([item.torque_nm[index] for item in torques]) if torques else None
    return OrderRow(
        order,
        major_order(machine, order, torque),
        vectors,
        float(abs(np.sum(vectors))),
        {mode: float(abs(np.sum(vectors * shape))) for mode, shape in zip(modes, shapes, strict=True)},
        _largest([item.gas_nm for item in torques if not item.cylinder.dead], index),
        _largest([item.inertia_nm for item in torques if not item.cylinder.dead], index),
        _largest([item.torque_nm for item in torques if not item.cylinder.dead], index),
        _largest([item.torque_nm for item in torques if item.cylinder.dead], index),
        None if torque is None else float(abs(np.sum(torque))),
    )


def _largest(values: Sequence[Complexes | None], index: int) -> float | None:
    known = [float(abs(value[index])) for value in values if value is not None]
    return max(known, default=None)
