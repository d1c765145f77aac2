"""What the file states of a reciprocating machine, in words for the report's data table."""

from __future__ import annotations

import math

from quillshaft.present.units import SHOWN, ShownUnits
from quillshaft.present.words import counted, number
from quillshaft.train.model import Machine
from quillshaft.train.reciprocating_model import CompressorEnd, Cylinder, EngineGas

LB_KG = 0.45359237
PSI_PA = 6894.757293168361
"""The international pound and lbf/in² (exact definitions)."""


def _mass(mass_kg: float, units: ShownUnits) -> str:
    return f"{number(mass_kg)} kg" if units is SHOWN["SI"] else f"{number(mass_kg / LB_KG)} lb"


def _pressure(pressure_pa: float, units: ShownUnits) -> str:
    return f"{number(pressure_pa / 1e5)} bar" if units is SHOWN["SI"] else f"{number(pressure_pa / PSI_PA)} psi"


def reciprocating_words(machine: Machine, units: ShownUnits) -> list[str]:
    """Cylinders, slider-crank, masses and gas; empty for other machines."""
    if not machine.cylinders:
        return []
    words = [_cylinder_words(machine)]
    dead = [str(index) for index, item in enumerate(machine.cylinders, start=1) if item.dead]
    if dead:
        words.append(f"cylinder {', '.join(dead)} dead" if len(dead) == 1 else f"cylinders {', '.join(dead)} dead")
    words += _geometry(machine, units)
    if machine.magnifier is not None:
        words.append(f"magnifier {number(machine.magnifier)} of each cylinder")
    if machine.gas is not None:
        words.append(_gas_words(machine.gas, units))
    if machine.kind == "reciprocating-compressor":
        words += [text for index, item in enumerate(machine.cylinders, start=1) for text in _sides(index, item, units)]
    return words


def _cylinder_words(machine: Machine) -> str:
    angles = ", ".join(_angle(item) for item in machine.cylinders)
    if machine.kind == "reciprocating-compressor":
        return f"{counted(len(machine.cylinders), 'cylinder')}, outer dead centre at {angles}"
    return f"{machine.strokes}-stroke, {counted(len(machine.cylinders), 'cylinder')} firing at {angles}"


def _angle(item: Cylinder) -> str:
    bank = "" if item.bank_rad is None else f" (bank {math.degrees(item.bank_rad):.4g}°)"
    return f"{item.at} {math.degrees(item.fires_at_rad):.4g}°{bank}"


def _geometry(machine: Machine, units: ShownUnits) -> list[str]:
    words = []
    engine = machine.kind == "reciprocating-engine"
    sizes = (("bore", machine.cylinders[0].bore_m if engine else None), ("stroke", machine.stroke_m))
    for word, value in (*sizes, ("rod", machine.rod_m)):
        if value is not None:
            words.append(f"{word} {value * units.per_m:.5g} {units.length}")
    mass = machine.cylinders[0].reciprocating_kg
    if engine and mass is not None:
        words.append(f"reciprocating mass {_mass(mass, units)} a cylinder")
    return words


def _gas_words(gas: EngineGas, units: ShownUnits) -> str:
    if gas.card is not None:
        kind = "gauge" if gas.card.gauge else "absolute"
        text = f"gas by indicator card {gas.card.name}, {len(gas.card.angle_rad)} points, {kind}"
        return text + (f"; dead cylinders by {gas.dead_card.name}" if gas.dead_card else "")
    if gas.orders is not None:
        return f"gas by tangential-pressure harmonics {gas.orders.name}, {len(gas.orders.rows)} orders"
    if gas.cycle is None:
        return "no gas"
    cycle = gas.cycle
    text = f"gas by simple cycle (indicative): compression ratio {cycle.compression_ratio:g}"
    text += f", imep {_pressure(cycle.imep_pa, units)}, peak {_pressure(cycle.peak_pa, units)}"
    return text + (f", intake {_pressure(cycle.intake_pa, units)}" if cycle.intake_pa is not None else "")


def _sides(index: int, item: Cylinder, units: ShownUnits) -> list[str]:
    words = []
    if item.bore_m is not None:
        text = f"cylinder {index}: bore {item.bore_m * units.per_m:.5g} {units.length}"
        if item.piston_rod_m:
            text += f", piston rod {item.piston_rod_m * units.per_m:.5g} {units.length}"
        words.append(text)
    if item.reciprocating_kg is not None:
        words.append(f"cylinder {index}: reciprocating mass {_mass(item.reciprocating_kg, units)}")
    for side, end in (("head end", item.head_end), ("crank end", item.crank_end)):
        if end is not None:
            words.append(f"cylinder {index}, {side}: {_end_words(end, units)}")
    return words


def _end_words(end: CompressorEnd, units: ShownUnits) -> str:
    if end.card is not None:
        kind = "gauge" if end.card.gauge else "absolute"
        return f"indicator card {end.card.name}, {len(end.card.angle_rad)} points, {kind}"
    pressures = f"{_pressure(end.suction_pa, units)} to {_pressure(end.discharge_pa, units)} absolute"
    return f"ideal card (indicative), {pressures}, clearance {end.clearance * 100:.4g} %, exponent {end.exponent:g}"
