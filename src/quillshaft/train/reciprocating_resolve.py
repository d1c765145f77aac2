"""Cylinders, slider-crank and gas of reciprocating machines: files read, defaults resolved and listed."""

from __future__ import annotations

from typing import Any

from quillshaft.train.basic_model import Assumed
from quillshaft.train.cards import read_card, read_orders
from quillshaft.train.reciprocating_model import (
    CompressorEnd,
    Cylinder,
    EngineGas,
    PressureCard,
    PressureOrders,
    SimpleCycle,
)
from quillshaft.train.validate import Findings, Rows

KINDS = ("reciprocating-engine", "reciprocating-compressor")
GAS_EXPONENT = 1.4
ENDS = (("head_end", "head-end"), ("crank_end", "crank-end"))
Read = dict[tuple[str | int, ...], PressureCard | PressureOrders | None]
"""What the files hold, by the way through the tables to the key that names them."""


def read_files(rows: Rows, findings: Findings) -> Read:
    """Every card and table of harmonics that [machines] name; problems of the files go to `findings`."""
    read: Read = {}
    for name, row in rows.keyed["machines"].items():
        if row.kind == "reciprocating-engine" and row.gas is not None:
            read |= _engine_files(name, row, findings)
        elif row.kind == "reciprocating-compressor":
            read |= _compressor_files(name, row, findings)
    return read


def _engine_files(name: str, row: Any, findings: Findings) -> Read:
    read: Read = {}
    gas, turns = row.gas, row.strokes // 2
    for key in ("indicator", "dead-indicator"):
        file = getattr(gas, key.replace("-", "_"))
        if file is not None:
            place = ("machines", name, "gas", key)
            read[place] = read_card(file, place, turns, gas.pressure == "gauge", findings)
    if gas.harmonics is not None:
        place = ("machines", name, "gas", "harmonics")
        read[place] = read_orders(gas.harmonics, place, turns, findings)
    return read


def _compressor_files(name: str, row: Any, findings: Findings) -> Read:
    read: Read = {}
    sides = ((i, key, getattr(item, attribute)) for i, item in enumerate(row.cylinders) for attribute, key in ENDS)
    for index, key, end in sides:
        if end is not None and end.indicator is not None:
            place = ("machines", name, "cylinders", index, key, "indicator")
            read[place] = read_card(end.indicator, place, 1, end.pressure == "gauge", findings)
    return read


def machine_parts(name: str, row: Any, read: Read) -> tuple[dict[str, Any], list[Assumed]]:
    """(fields of Machine for a reciprocating machine, what was assumed for them)."""
    said: list[Assumed] = []
    element = f"machines.{name}"
    engine = row.kind == "reciprocating-engine"
    dead = set(row.dead_cylinders)
    make = _engine_cylinder if engine else _compressor_cylinder
    cylinders = tuple(
        make(name, row, number, number in dead, read, said) for number in range(1, len(row.cylinders) + 1)
    )
    if any(item.reciprocating_kg is not None for item in cylinders):
        why = "it makes torque; the stations' inertias (or their running gear) are taken to hold its mean inertia"
        said.append(Assumed(element, "reciprocating-mass", "not added to the stations", why))
    fields = {
        "strokes": row.strokes if engine else 2,
        "cylinders": cylinders,
        "stroke_m": row.stroke,
        "rod_m": row.rod,
        "magnifier": row.magnifier,
        "gas": _engine_gas(name, row, cylinders, read, said) if engine else None,
    }
    return fields, said


def _engine_cylinder(_name: str, row: Any, number: int, dead: bool, _read: Read, _said: list[Assumed]) -> Cylinder:
    item = row.cylinders[number - 1]
    return Cylinder(
        item.at,
        item.fires_at,
        item.bank,
        item.dead or dead,
        row.bore,
        row.reciprocating_mass,
    )


def _engine_gas(
    name: str, row: Any, cylinders: tuple[Cylinder, ...], read: Read, said: list[Assumed]
) -> EngineGas | None:
    if row.gas is None:
        return None
    element, path = f"machines.{name}", ("machines", name, "gas")
    card, dead_card, orders = (read.get((*path, key)) for key in ("indicator", "dead-indicator", "harmonics"))
    if row.gas.indicator is not None and row.gas.pressure is None:
        said.append(
            Assumed(element, "gas.pressure", "absolute", "the card's pressures; the crankcase is at 1.01325 bar")
        )
    holds_dead = row.gas.cycle is not None or dead_card is not None or bool(getattr(orders, "dead", ()))
    if any(item.dead for item in cylinders) and not holds_dead:
        why = "nothing is given of a dead cylinder: its gas is taken to make no torque, not even by compression"
        said.append(Assumed(element, "gas of dead cylinders", "none", why))
    cycle = None
    if row.gas.cycle is not None:
        given = row.gas.cycle
        cycle = SimpleCycle(given.compression_ratio, given.imep, given.peak, given.intake)
        why = "a simple thermodynamic cycle in place of a card: the gas torques are indicative only"
        said.append(Assumed(element, "gas", "limited-pressure cycle, exponents 1.35 and 1.28", why))
        if given.intake is None:
            value = max(1e5, given.imep / 8.0) / 1e5
            said.append(Assumed(element, "gas.cycle.intake", f"{value:.4g} bar", "not given: imep / 8, at least 1 bar"))
    return EngineGas(card, dead_card, orders, cycle)  # type: ignore[arg-type]


def _compressor_cylinder(name: str, row: Any, number: int, dead: bool, read: Read, said: list[Assumed]) -> Cylinder:
    item = row.cylinders[number - 1]
    ends = {attribute: _end(name, number, key, getattr(item, attribute), read, said) for attribute, key in ENDS}
    element = f"machines.{name}"
    if (item.head_end is None) != (item.crank_end is None):
        open_end = "crank-end" if item.crank_end is None else "head-end"
        why = f"cylinder {number}: nothing is given for this side, it is taken at ambient pressure"
        said.append(Assumed(element, open_end, "1.01325 bar", why))
    if item.crank_end is not None and item.piston_rod is None:
        said.append(Assumed(element, "piston-rod", "0 mm", f"cylinder {number}: not given, no area is taken off"))
    return Cylinder(
        item.at,
        item.dead_centre,
        None,
        item.dead or dead,
        item.bore,
        item.reciprocating_mass,
        item.piston_rod or 0.0,
        **ends,
    )


def _end(name: str, number: int, key: str, row: Any, read: Read, said: list[Assumed]) -> CompressorEnd | None:
    if row is None:
        return None
    element = f"machines.{name}"
    if row.indicator is not None:
        if row.pressure is None:
            why = f"cylinder {number}, {key}: the card's pressures"
            said.append(Assumed(element, "pressure", "absolute", why))
        card = read.get(("machines", name, "cylinders", number - 1, key, "indicator"))
        return CompressorEnd(card)  # type: ignore[arg-type]
    if row.exponent is None:
        why = f"cylinder {number}, {key}: polytropic exponent, not given"
        said.append(Assumed(element, "exponent", f"{GAS_EXPONENT:g}", why))
    why = f"cylinder {number}, {key}: valves without loss; the gas torques are indicative only"
    said.append(Assumed(element, "gas", "ideal card", why))
    return CompressorEnd(None, row.clearance, row.suction, row.discharge, row.exponent or GAS_EXPONENT)
