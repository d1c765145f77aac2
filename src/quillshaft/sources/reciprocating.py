"""Torque harmonics of each cylinder of an engine or reciprocating compressor, from its gas and its moving mass."""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np

from quillshaft.elements.slider_crank import equivalent_inertia, inertia_harmonics
from quillshaft.graph.network import Floats
from quillshaft.records import dataclass
from quillshaft.sources.engine import orders_of
from quillshaft.sources.gas import (
    AMBIENT_PA,
    Complexes,
    card_pressure,
    cycle_pressure,
    end_pressure,
    tangential,
    torque_harmonics,
)
from quillshaft.train.model import Machine
from quillshaft.train.reciprocating_model import CompressorEnd, Cylinder, EngineGas


@dataclass(frozen=True)
class CylinderTorque:
    """Torque of one cylinder on the crank at one speed, in the crank's own sense of rotation.

    number        of the cylinder, from 1 in file order
    gas_nm        (orders,) complex C_n [N·m]; the torque is mean + Σ Re(C_n exp(j n θ)) with the crank angle θ
                  from which the machine's firing angles count; C_n = cosine − j · sine coefficient
    inertia_nm    the same of the reciprocating mass; None where no mass is given, gas_nm where no gas is
    torque_nm     (orders,) complex, gas and mass together
    mean_nm       mean gas torque [N·m]
    """

    number: int
    cylinder: Cylinder
    gas_nm: Complexes | None
    inertia_nm: Complexes | None
    torque_nm: Complexes
    mean_nm: float | None


def has_torque(machine: Machine) -> bool:
    """True where the file gives enough to work out torques: gas, or a reciprocating mass, of any cylinder."""
    return machine.gas is not None or any(
        item.reciprocating_kg is not None or item.head_end is not None or item.crank_end is not None
        for item in machine.cylinders
    )


def turns_of(machine: Machine) -> int:
    """Turns of a working cycle: two in a four-stroke engine, else one."""
    return 2 if machine.strokes == 4 else 1


def machine_orders(machine: Machine) -> tuple[float, ...]:
    """The orders screened of an engine or compressor."""
    return orders_of(machine.strokes or 2)


def cylinder_torques(machine: Machine, omega_rad_s: float) -> tuple[CylinderTorque, ...]:
    """Torque harmonics of every cylinder at a crank speed [rad/s], at the orders of `machine_orders`.

    Empty where the file gives neither gas nor mass. Raises CycleError where a simple cycle cannot be.
    """
    if not has_torque(machine):
        return ()
    return tuple(_cylinder(machine, number, omega_rad_s) for number in range(1, len(machine.cylinders) + 1))


def _cylinder(machine: Machine, number: int, omega_rad_s: float) -> CylinderTorque:
    cylinder = machine.cylinders[number - 1]
    orders = np.array(machine_orders(machine))
    radius, rod_ratio = crank_radius(machine), rod_ratio_of(machine)
    turned = np.exp(-1j * orders * cylinder.fires_at_rad)
    inertia = None
    if cylinder.reciprocating_kg is not None:
        sine = inertia_harmonics(rod_ratio, int(orders[-1]))
        whole = np.abs(orders - np.round(orders)) < 1e-9
        values = np.where(whole, sine[np.where(whole, np.round(orders).astype(int) - 1, 0)], 0.0)
        inertia = -1j * values * turned * cylinder.reciprocating_kg * (radius * omega_rad_s) ** 2
    mean, gas = _gas(machine, cylinder, orders)
    gas = None if gas is None else gas * turned
    total = np.zeros(len(orders), dtype=complex)
    for part in (gas, inertia):
        total = total if part is None else total + part
    return CylinderTorque(number, cylinder, gas, inertia, total, mean)


def crank_radius(machine: Machine) -> float:
    """Half the stroke [m]; 0 where no stroke is given."""
    return 0.5 * (machine.stroke_m or 0.0)


def rod_ratio_of(machine: Machine) -> float:
    """Crank radius over rod length [-]."""
    return crank_radius(machine) / (machine.rod_m or 1.0)


def _gas(machine: Machine, cylinder: Cylinder, orders: Floats) -> tuple[float | None, Complexes | None]:
    """(mean, C_n from the cylinder's own dead centre) of the gas torque [N·m]; None where no gas is given."""
    if machine.kind == "reciprocating-compressor":
        return _compressor_gas(machine, cylinder, orders)
    if machine.gas is None or cylinder.bore_m is None:
        return None, None
    scale = math.pi / 4.0 * cylinder.bore_m**2 * crank_radius(machine)
    turns, rod_ratio = turns_of(machine), rod_ratio_of(machine)
    mean, values = _engine_gas(machine.gas, turns, rod_ratio, cylinder.dead, tuple(orders.tolist()))
    return scale * mean, np.asarray(scale * values)


@lru_cache(maxsize=64)
def _engine_gas(
    gas: EngineGas, turns: int, rod_ratio: float, dead: bool, orders: tuple[float, ...]
) -> tuple[float, Complexes]:
    """(mean, C_n) of the tangential pressure [Pa] on a piston of an engine."""
    if gas.orders is not None:
        rows = gas.orders.dead if dead else gas.orders.rows
        given = {round(2.0 * order): complex(cosine, -sine) for order, cosine, sine in rows}
        return given.get(0, 0j).real, np.array([given.get(round(2.0 * order), 0j) for order in orders])
    card = gas.dead_card if dead else gas.card
    if gas.cycle is not None:
        pressure = cycle_pressure(gas.cycle, turns, rod_ratio, not dead)
    elif card is not None:
        pressure = card_pressure(card)
    else:
        return 0.0, np.zeros(len(orders), dtype=complex)
    return torque_harmonics(tangential(pressure, turns, rod_ratio), turns, np.array(orders))


def _compressor_gas(machine: Machine, cylinder: Cylinder, orders: Floats) -> tuple[float | None, Complexes | None]:
    """Both sides of a piston: head side on the whole area, crank side on the area less the rod's, against it."""
    if cylinder.bore_m is None or (cylinder.head_end is None and cylinder.crank_end is None):
        return None, None
    mean, total = 0.0, np.zeros(len(orders), dtype=complex)
    if cylinder.dead:
        return mean, total
    area, rod_area = (math.pi / 4.0 * size**2 for size in (cylinder.bore_m, cylinder.piston_rod_m))
    sides = ((cylinder.head_end, area, False), (cylinder.crank_end, rod_area - area, True))
    for end, signed_area, crank_side in sides:
        if end is not None:
            part, values = _side_gas(end, rod_ratio_of(machine), crank_side, tuple(orders.tolist()))
            arm = signed_area * crank_radius(machine)
            mean, total = mean + part * arm, total + values * arm
    return mean, np.asarray(total)


@lru_cache(maxsize=64)
def _side_gas(
    end: CompressorEnd, rod_ratio: float, crank_side: bool, orders: tuple[float, ...]
) -> tuple[float, Complexes]:
    """(mean, C_n) of the tangential pressure [Pa over ambient] on one side of a compressor's piston."""
    gauge = end_pressure(end, rod_ratio, crank_side) - AMBIENT_PA
    return torque_harmonics(tangential(gauge, 1, rod_ratio), 1, np.array(orders))


def reciprocating_inertia(machine: Machine, cylinder: Cylinder) -> float:
    """Mean inertia [kg·m²] of a cylinder's reciprocating mass on its throw. Source: `equivalent_inertia`."""
    return equivalent_inertia(cylinder.reciprocating_kg or 0.0, crank_radius(machine), rod_ratio_of(machine))
