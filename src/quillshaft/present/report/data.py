"""The data as given, and the equivalent system made of it, actual and referred."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from quillshaft.present.pdf.document import data_table, heading, note, paragraph
from quillshaft.present.rows import link_heads, link_rows, station_heads, station_rows, tolerance_words
from quillshaft.present.units import SHOWN, ShownUnits
from quillshaft.present.words import number, plain
from quillshaft.train.model import Coupling, Epicyclic, GearMesh, Machine, Provenance, Shaft, Tolerance, Train

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
        data_table(("Machine", "kind", "at", "data", "source"), [_machine(item) for item in train.machines])
        if train.machines
        else paragraph("The file names no machines."),
        *_materials(train),
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
            text = "massless"
        yield _row(train, f"stations.{station.name}", text, station.tolerance, station.provenance)
    for shaft in train.shafts:
        text = _shaft(shaft, units)
        yield _row(train, f"shafts.{shaft.name}", text, shaft.tolerance, shaft.provenance)
    for coupling in train.couplings:
        text = f"{coupling.kind or 'coupling'}, {_coupling_stiffness(coupling, units)}"
        if coupling.rated_torque_nm is not None:
            text += f", rated {number(coupling.rated_torque_nm * units.per_nm)} {units.torque}"
        if coupling.shaft_in_hub is not None:
            text += f", shaft ends in hubs {coupling.shaft_in_hub}"
        yield _row(train, f"couplings.{coupling.name}", text, coupling.tolerance, coupling.provenance)
    for gear in train.gears:
        yield _row(train, f"gears.{gear.name}", _gear(gear, units), gear.tolerance, gear.provenance)
    for tie in train.ties:
        text = f"tie of {tie.at}, {number(tie.stiffness_nm_rad * units.per_nm_rad, 5)} {units.stiffness}"
        yield _row(train, f"ties.{tie.name}", text, tie.tolerance, tie.provenance)


def _shaft(shaft: Shaft, units: Any) -> str:
    if shaft.stiffness_nm_rad is not None:
        text = f"{number(shaft.stiffness_nm_rad * units.per_nm_rad, 5)} {units.stiffness}"
        return text + (f", referred to {shaft.referred_to}" if shaft.referred_to else "")
    material = shaft.material.name if shaft.material else ""
    if shaft.equivalent is not None:
        length, diameter = shaft.equivalent.length_m * units.per_m, shaft.equivalent.diameter_m * units.per_m
        size = f"{length:.5g} × ⌀{diameter:.5g} {units.length}"
        return f"equal to a plain bar {size}, {material}"
    pieces = []
    for piece in shaft.pieces:
        outer = "/".join(f"{value * units.per_m:.4g}" for value in dict.fromkeys(piece.od_m))
        inner = "/".join(f"{value * units.per_m:.4g}" for value in dict.fromkeys(piece.id_m) if value)
        text = f"⌀{outer}" + (f" bore {inner}" if inner else "") + f" × {piece.length_m * units.per_m:.5g}"
        if piece.hub_m:
            text += f" + {piece.hub_rule:.3g} · {sum(piece.hub_m) * units.per_m:.4g} in hub"
        pieces.append(text)
    own = "own inertia lumped at both ends" if shaft.own_inertia == "ends" else "own inertia left out"
    return f"{material}, {units.length}: " + "; ".join(pieces) + f"; {own}"


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


def _gear(gear: GearMesh | Epicyclic, units: Any) -> str:
    if isinstance(gear, Epicyclic):
        members = f"sun {gear.sun}, ring {gear.ring}, carrier {gear.carrier}"
        teeth = f"{gear.sun_teeth} / {gear.ring_teeth} teeth, {gear.planets} planets"
        text = f"epicyclic: {members}; {teeth}"
        stiffness = gear.mesh_nm_rad
    else:
        text = f"{gear.between[0]} : {gear.between[1]} = {gear.teeth[0]} : {gear.teeth[1]} teeth"
        text += " (internal)" if gear.internal else ""
        stiffness = gear.mesh_nm_rad
        if gear.mesh_n_m is not None:
            return f"{text}, mesh {number(gear.mesh_n_m / 1e6)} N/µm"
    if stiffness is None:
        return f"{text}, rigid"
    return f"{text}, mesh {number(stiffness * units.per_nm_rad)} {units.stiffness}"


def _machine(machine: Machine) -> tuple[str, ...]:
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
    if machine.diffuser_vanes is not None:
        data.append(f"{machine.diffuser_vanes} diffuser vanes")
    if machine.cylinders:
        angles = ", ".join(f"{item.at} {item.fires_at_rad * 57.29577951308232:.4g}°" for item in machine.cylinders)
        data.append(f"{machine.strokes}-stroke, {len(machine.cylinders)} cylinders firing at {angles}")
    if machine.passes:
        data.append("passes " + ", ".join(str(count) for count in machine.passes))
    at = machine.at or machine.cylinders[0].at
    return machine.name, machine.kind, at, "; ".join(data), _where(machine.provenance)


def _materials(train: Train) -> list[Any]:
    units = SHOWN[train.units]
    used = {shaft.material.name: shaft.material for shaft in train.shafts if shaft.material}
    if not used:
        return []
    rows = [
        (
            name,
            f"{item.shear_modulus_pa * units.per_pa:.4g} {units.modulus}",
            f"{item.density_kgm3 * units.per_kgm3:.5g} {units.density}",
        )
        for name, item in used.items()
    ]
    return [data_table(("Material", "shear modulus", "density"), rows, align="lrr")]
