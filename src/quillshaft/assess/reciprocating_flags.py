"""Oddities in the data of engines and reciprocating compressors (common practice figures throughout)."""

from __future__ import annotations

import math
from collections.abc import Iterator

from quillshaft.assess.results import Flag
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.gas import CycleError
from quillshaft.sources.reciprocating import cylinder_torques, machine_orders
from quillshaft.sources.reciprocating_sources import KINDS, crank_speed
from quillshaft.train.model import Machine, Train

BRAKE_OVER_INDICATED = (0.6, 1.0)
"""Power at the throws over indicated power of engines; below lies a slip in pressure, bore or power."""
SAME_THROW_RAD = math.radians(0.5)


def reciprocating_flags(train: Train, graph: TorsionalGraph) -> Iterator[Flag]:
    """Questions about cylinders: power against gas, throws of a vee, harmonics that stop too early."""
    for machine in train.machines:
        if machine.kind in KINDS:
            yield from _power(machine, train, graph)
            yield from _throws(machine)
            yield from _few_orders(machine)


def _power(machine: Machine, train: Train, graph: TorsionalGraph) -> Iterator[Flag]:
    """The file's power against that of the gas, where all cylinders work and each has its own figures."""
    if train.power is None:
        return
    if all(cylinder.dead for cylinder in machine.cylinders) and any(train.power.stations_w.values()):
        text = "none of its cylinders works, yet [power] is not zero: whose power is it?"
        yield Flag(f"machines.{machine.name}", text)
    if any(cylinder.dead for cylinder in machine.cylinders):
        return
    given = [train.power.stations_w.get(name) for name in dict.fromkeys(item.at for item in machine.cylinders)]
    speed = crank_speed(machine, graph, train.operation.rated_rad_s)
    try:
        means = [item.mean_nm for item in cylinder_torques(machine, speed)]
    except CycleError:
        return
    known = [mean for mean in means if mean is not None]
    watts = sum(value or 0.0 for value in given)
    indicated = sum(known) * speed
    if None in given or len(known) < len(machine.cylinders) or indicated == 0 or watts == 0:
        return
    share = watts / indicated
    low, high = BRAKE_OVER_INDICATED if machine.kind == KINDS[0] else (1.0, 1.0 / BRAKE_OVER_INDICATED[0])
    if not low <= share <= high:
        text = (
            f"[power] gives {watts / 1e3:.4g} kW at its throws, the gas {indicated / 1e3:.4g} kW: "
            f"{share:.2f} of it, ordinarily {low:.2g} to {high:.2g}; ask about pressures, bore, stroke and rating"
        )
        yield Flag(f"machines.{machine.name}", text)


def _throws(machine: Machine) -> Iterator[Flag]:
    """Two cylinders of a vee at one station stand on one throw if firing angle less bank is the same."""
    first: dict[str, tuple[int, float]] = {}
    for number, item in enumerate(machine.cylinders, start=1):
        if item.bank_rad is None:
            continue
        throw = item.fires_at_rad - item.bank_rad
        other, angle = first.setdefault(item.at, (number, throw))
        apart = abs(math.remainder(throw - angle, 2.0 * math.pi))
        if apart > SAME_THROW_RAD:
            text = (
                f"cylinders {other} and {number} at {item.at} stand on throws {math.degrees(apart):.4g}° apart by "
                "their firing angles and banks: two crankpins at one station, or angles that do not belong together?"
            )
            yield Flag(f"machines.{machine.name}", text)


def _few_orders(machine: Machine) -> Iterator[Flag]:
    """Harmonics that end below the orders screened leave those without gas torque."""
    orders = None if machine.gas is None else machine.gas.orders
    if orders is None or not orders.rows:
        return
    given = {row[0] for row in orders.rows}
    missing = [order for order in machine_orders(machine) if order not in given]
    if missing:
        listed = ", ".join(f"{order:g}" for order in missing[:8]) + (", …" if len(missing) > 8 else "")
        yield Flag(f"machines.{machine.name}", f"{orders.name} gives no gas torque of order {listed}: taken as none")
