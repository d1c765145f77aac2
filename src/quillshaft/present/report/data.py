"""The data as given, and the equivalent system made of it, actual and referred."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from quillshaft.elements.electrical import tie_stiffness
from quillshaft.present.duty_words import damper_limit_words, limit_words
from quillshaft.present.electrical_words import electrical_words, synchronizing_words
from quillshaft.present.gear_words import belt_text, gear_text, joint_text
from quillshaft.present.pdf.document import data_table, heading, note, paragraph
from quillshaft.present.report.damper_data import damper_text, fluid_text, ratings_text
from quillshaft.present.report.derived import derived_parts
from quillshaft.present.report.reciprocating_data import reciprocating_words
from quillshaft.present.report.shaft_data import material_rows, running_gear_words, shaft_words
from quillshaft.present.rows import link_heads, link_rows, station_heads, station_rows, tolerance_words
from quillshaft.present.units import SHOWN, ShownUnits
from quillshaft.present.viscous_words import viscous_words
from quillshaft.present.words import number, plain
from quillshaft.present.written_rows import written_rows
from quillshaft.train.basic_model import Provenance, Tolerance
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.model import Machine, Train

Row = tuple[str, str, str, str, str]


def data_parts(screening: Any) -> list[Any]:
    """Data table and equivalent system as blocks of a report."""
    train = screening.train
    rows = list(_elements(train, SHOWN[train.units]))
    head = ("Element", "as given", "tolerance", "source, document, date", "status")
    return [
        heading("Data"),
        paragraph(
            "Data of others are used as given. A tolerance marked * is a default of the tool; everything "
            "assumed is listed under Assumptions. Numbers are in the units that the file declares."
        ),
        data_table(head, rows, column_widths=(25, 42, 17, 30, 16)),
        heading("Materials and machines", 2),
        data_table(
            ("Machine", "kind", "at", "data", "source"),
            [_machine(item, SHOWN[train.units]) for item in train.machines],
        )
        if train.machines
        else paragraph("The file names no machines."),
        *_materials(train),
        heading("Every key as the file writes it", 2),
        data_table(("Element", "keys and values"), written_rows(train), column_widths=(30, 100)),
        heading("Equivalent system"),
        paragraph(
            f"Referred values stand for the speed of {train.operation.speed_at}: inertia and stiffness times "
            "the square of the speed ratio. Ratios are exact fractions of tooth numbers; a minus sign at a "
            "speed is a shaft that turns the other way."
        ),
        data_table(
            station_heads(screening), station_rows(screening), column_widths=(22, 18, 16, 17, 20, 50), align="lrrrrl"
        ),
        data_table(
            link_heads(screening),
            link_rows(screening),
            align="lllrrrrrl",
        ),
        note(
            "Stiffness, mean torque and wind-up of a link are those at its first-named station. Rigid: no "
            "stiffness is given, the two sides move as one. Wind-up follows from the mean torque at rated power."
        ),
        *derived_parts(screening),
    ]


def _where(provenance: Provenance) -> str:
    words = (provenance.source, provenance.document, provenance.date, provenance.note)
    return ", ".join(word for word in words if word) or "–"


def _tolerance(train: Train, element: str, tolerance: Tolerance) -> str:
    if tolerance == (0.0, 0.0):
        return "–"
    default = any(item.element == element and item.key == "tolerance" for item in train.assumed)
    return tolerance_words(tolerance) + (" *" if default else "")


def _row(train: Train, element: str, given: str, tolerance: Tolerance, provenance: Provenance) -> Row:
    name = element.split(".", 1)[1]
    return (
        name,
        given,
        _tolerance(train, element, tolerance),
        _where(provenance),
        provenance.status or "–",
    )


def _elements(train: Train, units: Any) -> Iterator[Row]:
    for station in train.stations:
        text = f"inertia {number(station.inertia_kgm2 * units.per_kgm2, 5)} {units.inertia}"
        if station.entrained:
            text += f", of it entrained fluid {plain(station.entrained)} of dry"
        if station.referred_to:
            text += f", referred to {station.referred_to}"
        if station.inertia_kgm2 == 0:
            text = "massless" if station.made_by is None else f"see {station.made_by.split('.', 1)[1]}"
        if station.running_gear is not None:
            text += "; " + running_gear_words(station.running_gear, units)
        text += viscous_words(station, units)
        yield _row(train, f"stations.{station.name}", text, station.tolerance, station.provenance)
    for shaft in train.shafts:
        text = shaft_words(shaft, units) + viscous_words(shaft, units) + limit_words(shaft, units)
        yield _row(train, f"shafts.{shaft.name}", text, shaft.tolerance, shaft.provenance)
    for coupling in train.couplings:
        text = f"{coupling.kind or 'coupling'}, {_coupling_stiffness(coupling, units)}"
        if coupling.rated_torque_nm is not None:
            text += f", rated {number(coupling.rated_torque_nm * units.per_nm)} {units.torque}"
        text += viscous_words(coupling, units) + ratings_text(coupling.ratings, units)
        if coupling.ambient_k is not None:
            text += f", in air of {coupling.ambient_k - 273.15:.4g} °C"
        if coupling.shaft_in_hub is not None:
            text += f", shaft ends in hubs {coupling.shaft_in_hub}"
        yield _row(train, f"couplings.{coupling.name}", text, coupling.tolerance, coupling.provenance)
    for gear in train.gears:
        text = gear_text(gear, units) + viscous_words(gear, units)
        yield _row(train, f"gears.{gear.name}", text, gear.tolerance, gear.provenance)
    for belt in train.belts:
        text = belt_text(belt, units) + viscous_words(belt, units)
        yield _row(train, f"belts.{belt.name}", text, belt.tolerance, belt.provenance)
    for joint in train.joints:
        yield _row(train, f"joints.{joint.name}", joint_text(joint), (0.0, 0.0), joint.provenance)
    for tie in train.ties:
        text = f"tie of {tie.at}, {number(tie_stiffness(tie) * units.per_nm_rad, 5)} {units.stiffness}"
        text += synchronizing_words(tie) + viscous_words(tie, units)
        yield _row(train, f"ties.{tie.name}", text, tie.tolerance, tie.provenance)
    for fluid in train.fluid_couplings:
        yield _row(train, f"couplings.{fluid.name}", fluid_text(fluid, units), (0.0, 0.0), fluid.provenance)
    for damper in train.dampers:
        text = damper_text(damper, units) + damper_limit_words(damper, units)
        yield _row(train, f"dampers.{damper.name}", text, damper.tolerance, damper.provenance)


def _coupling_stiffness(coupling: Coupling, units: ShownUnits) -> str:
    """Stiffness as stated: one number, or against mean torque, with its factors against temperature."""
    text = f"{number(coupling.stiffness_nm_rad * units.per_nm_rad, 5)} {units.stiffness}"
    if coupling.stiffness_points:
        points = [
            f"{number(stiffness * units.per_nm_rad)} at {number(torque * units.per_nm)} {units.torque}"
            for torque, stiffness in coupling.stiffness_points
        ]
        text = f"{units.stiffness}: {', '.join(points)} mean torque"
    for word, table in (("stiffness", coupling.temperature_points), ("damping", coupling.damping_points)):
        if table:
            factors = ", ".join(f"{number(factor)} at {kelvin - 273.15:.4g} °C" for kelvin, factor in table)
            text += f"; {word} times {factors}"
    return text


def _machine(machine: Machine, units: ShownUnits) -> tuple[str, ...]:
    data = []
    if machine.poles is not None:
        data.append(f"{machine.poles} poles")
    if machine.supply_hz is not None:
        data.append(f"{machine.supply_hz:g} Hz supply")
    if machine.kind == "converter-fed-motor":
        data.append(f"slip {machine.slip_hz:g} Hz")
    if machine.blades is not None:
        word = "blades" if machine.kind in ("fan", "propeller") else "vanes"
        data.append(f"{machine.blades} {word}")
    data += electrical_words(machine, units)
    if machine.diffuser_vanes is not None:
        data.append(f"{machine.diffuser_vanes} diffuser vanes")
    data += reciprocating_words(machine, units)
    if machine.passes:
        data.append("passes " + ", ".join(str(count) for count in machine.passes))
    at = machine.at or machine.cylinders[0].at
    return machine.name, machine.kind, at, "; ".join(data), _where(machine.provenance)


def _materials(train: Train) -> list[Any]:
    rows = material_rows(train, SHOWN[train.units])
    if not rows:
        return []
    return [data_table(("Material", "shear modulus", "density"), rows, align="lrr")]
