"""[gears], [belts] and [joints] with every default filled in and listed, and the stations and ties they bring."""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction
from typing import Any

from quillshaft.train.assumptions import DEFAULT_TOLERANCE, Assumptions, damping, provenance
from quillshaft.train.basic_model import Tolerance
from quillshaft.train.gear_fields import ISO_RULE
from quillshaft.train.gear_model import Belt, Epicyclic, GearGeometry, GearMesh, HeldMember, Planets
from quillshaft.train.model import FIXED, Operation, Station, Tie, UniversalJoint
from quillshaft.train.validate import Rows

DEFAULT_PRESSURE_ANGLE = math.pi / 9.0
RULE_SOURCE = "ISO 6336-1, simplified; recalled, confirm against your edition"


def gears(rows: Rows, said: Assumptions) -> tuple[GearMesh | Epicyclic, ...]:
    """[gears]: rigid meshes have no tolerance; an elastic one takes the mesh default."""
    return tuple(
        _epicyclic(name, row, said) if row.kind == "epicyclic" else _mesh(name, row, said)
        for name, row in rows.keyed["gears"].items()
    )


def _mesh_tolerance(row: Any, element: str, said: Assumptions) -> Tolerance:
    if row.mesh_stiffness is None:
        said.add(element, "mesh-stiffness", "rigid", "not given")
        return (0.0, 0.0)
    return said.tolerance(row.tolerance, element, "a gear mesh", DEFAULT_TOLERANCE["mesh"])


def _geometry(row: Any, element: str, used: bool, by_rule: bool, said: Assumptions) -> GearGeometry | None:
    """Geometry of a mesh; what a stiffness uses of it and the file leaves out is listed."""
    if row.module is None:
        return None
    helix, angle = row.helix, row.pressure_angle
    if used and helix is None:
        said.add(element, "helix", "0 deg", "not given: spur teeth")
    if used and angle is None:
        said.add(element, "pressure-angle", "20 deg", "not given")
    shift, ratio = getattr(row, "profile_shift", None), getattr(row, "contact_ratio", None)
    if by_rule:
        said.add(element, "mesh stiffness by rule", ISO_RULE, RULE_SOURCE)
        said.add(
            element, "blanks and rack", "solid, dedendum 1.2 modules", f"steel on steel, C_R = C_B = 1 ({ISO_RULE})"
        )
        if shift is None and hasattr(row, "profile_shift"):
            said.add(element, "profile-shift", "0 and 0", "not given")
        if ratio is None:
            said.add(element, "contact-ratio", "from the teeth", "not given: addendum of one module, no tip relief")
    elif shift is not None or ratio is not None:
        said.add(element, "profile-shift, contact-ratio", "not used", f'only mesh-stiffness = "{ISO_RULE}" needs them')
    shifts = (0.0, 0.0) if shift is None else (shift[0], shift[1])
    return GearGeometry(row.module, helix or 0.0, angle or DEFAULT_PRESSURE_ANGLE, row.face, shifts, ratio)


def _mesh(name: str, row: Any, said: Assumptions) -> GearMesh:
    element = f"gears.{name}"
    measure, value = row.mesh_stiffness or (None, 0.0)
    linear = {"linear_stiffness": 1.0, "mesh_stiffness_per_face": row.face}.get(measure or "")
    by_rule = measure == ISO_RULE
    geometry = _geometry(row, element, linear is not None or by_rule, by_rule, said)
    return GearMesh(
        name,
        (row.between[0], row.between[1]),
        (row.teeth[0], row.teeth[1]),
        getattr(row, "internal", False),
        geometry,
        None if linear is None else value * linear,
        value if measure == "stiffness" else None,
        damping(row),
        _mesh_tolerance(row, element, said),
        provenance(row, element, said),
        row.group,
        viscous_nms_rad=row.viscous,
        kind=row.kind,
        by_rule=by_rule,
        backlash_m=row.backlash,
        reverses=getattr(row, "reverses", False),
        shaft_angle_rad=getattr(row, "shaft_angle", None),
        rated_torque_nm=row.rated_torque,
    )


def _epicyclic(name: str, row: Any, said: Assumptions) -> Epicyclic:
    element = f"gears.{name}"
    wheels = _planets(name, row, said)
    by_rule = row.mesh_stiffness is not None and math.isnan(row.mesh_stiffness)
    if wheels is not None and row.mesh_stiffness is not None and not by_rule:
        why = "mesh-stiffness is that of both in series: each of the two takes half of the yielding"
        said.add(element, "sun and ring mesh", "alike", why)
    held = _held(name, row, said)
    members = {key: getattr(row, key) for key in ("sun", "ring", "carrier")}
    if held is not None:
        members = {key: held.station if member == FIXED else member for key, member in members.items()}
    return Epicyclic(
        name,
        members["sun"],
        members["ring"],
        members["carrier"],
        row.teeth.sun,
        row.teeth.ring,
        row.planets,
        None if by_rule else row.mesh_stiffness,
        damping(row),
        _mesh_tolerance(row, element, said),
        provenance(row, element, said),
        row.group,
        viscous_nms_rad=row.viscous,
        geometry=_geometry(row, element, by_rule, by_rule, said),
        by_rule=by_rule,
        backlash_m=row.backlash,
        wheels=wheels,
        planet_teeth=row.teeth.planet,
        held=held,
        rated_torque_nm=row.rated_torque,
    )


def _planets(name: str, row: Any, said: Assumptions) -> Planets | None:
    """The planets where their inertia is given; what is left out of them is listed."""
    element = f"gears.{name}"
    if row.planet_inertia is None:
        said.add(element, "planet inertia", "0", "planets turn and travel without inertia of their own")
        return None
    teeth = Fraction(row.teeth.ring - row.teeth.sun, 2)
    if row.teeth.planet is not None:
        teeth = Fraction(row.teeth.planet)
    else:
        said.add(element, "planet teeth", f"{float(teeth):g}", "not given: (ring − sun) / 2")
    radius = row.planet_radius
    if row.planet_mass is None and row.carrier != FIXED:
        said.add(element, "planet-mass", "0 kg", "not given: the carrier's inertia is taken to hold the planets' mass")
    elif radius is None and row.planet_mass is not None:
        radius = 0.5 * row.module * float(row.teeth.sun + teeth) / math.cos(row.helix or 0.0)
        said.add(element, "planet-radius", f"{radius * 1e3:.5g} mm", "not given: from module, sun and planet teeth")
    share = DEFAULT_TOLERANCE["station"] if said.tolerances else 0.0
    tolerance = row.inertia_tolerance
    if tolerance is None:
        said.add(element, "inertia-tolerance", f"±{share * 100:.3g} %", "default for planets")
        tolerance = (-share, share)
    station = planets_station(name)
    return Planets(station, teeth, row.planet_inertia, row.planet_mass or 0.0, radius or 0.0, tolerance)


def planets_station(gear: str) -> str:
    """Name of the station that stands for the planets of a stage."""
    return f"{gear} planets"


def _held(name: str, row: Any, said: Assumptions) -> HeldMember | None:
    if row.fixed_through is None:
        return None
    member = next(key for key in ("sun", "ring", "carrier") if getattr(row, key) == FIXED)
    element = f"gears.{name}"
    share = DEFAULT_TOLERANCE["station"] if said.tolerances else 0.0
    if row.fixed_inertia is None:
        said.add(element, "fixed-inertia", "0", f"not given: the {member} yields without inertia of its own")
    else:
        said.add(element, "fixed-inertia tolerance", f"±{share * 100:.3g} %", "default for a station")
    return HeldMember(f"{name} {member}", f"{name} {member} support", row.fixed_inertia or 0.0, (-share, share))


def stations_brought(made: tuple[GearMesh | Epicyclic, ...]) -> tuple[Station, ...]:
    """Stations that stages bring along: planets, and a member that a stiffness holds. Their inertia is the gear's."""
    names = [
        (part.station, gear)
        for gear in made
        if isinstance(gear, Epicyclic)
        for part in (gear.wheels, gear.held)
        if part is not None
    ]
    return tuple(
        Station(name, 0.0, (0.0, 0.0), provenance=gear.provenance, made_by=f"gears.{gear.name}") for name, gear in names
    )


def ties_brought(rows: Rows, made: tuple[GearMesh | Epicyclic, ...], said: Assumptions) -> tuple[Tie, ...]:
    """The springs that hold a "fixed" member of a stage to the housing."""
    out = []
    for gear in made:
        if not isinstance(gear, Epicyclic) or gear.held is None:
            continue
        row = rows.keyed["gears"][gear.name]
        element = f"gears.{gear.name}"
        tolerance = row.fixed_tolerance
        if tolerance is None:
            share = DEFAULT_TOLERANCE["tie"] if said.tolerances else 0.0
            said.add(element, "fixed-tolerance", f"±{share * 100:.3g} %", "default for a tie: the member's support")
            tolerance = (-share, share)
        out.append(Tie(gear.held.tie, gear.held.station, row.fixed_through, tolerance, provenance=gear.provenance))
    return tuple(out)


def with_held_members(operation: Operation, made: tuple[GearMesh | Epicyclic, ...]) -> Operation:
    """The operating map with the members that a stiffness holds at rest: they are second speeds of 0."""
    held = [gear.held.station for gear in made if isinstance(gear, Epicyclic) and gear.held is not None]
    speeds = {**operation.speeds_rad_s, **dict.fromkeys(held, 0.0)}
    return replace(operation, speeds_rad_s=speeds) if held else operation


def belts(rows: Rows, said: Assumptions) -> tuple[Belt, ...]:
    """[belts]; without a stiffness a belt is rigid, with one it takes the default of a mesh."""
    return tuple(_belt(name, row, said) for name, row in rows.keyed["belts"].items())


def _belt(name: str, row: Any, said: Assumptions) -> Belt:
    element, spans = f"belts.{name}", row.spans
    tolerance: Tolerance = (0.0, 0.0)
    if row.span_stiffness is None and row.stiffness is None:
        said.add(element, "span-stiffness", "rigid", "not given")
    else:
        tolerance = said.tolerance(row.tolerance, element, "a belt or chain", DEFAULT_TOLERANCE["mesh"])
    if spans is None:
        spans = 1 if row.kind == "chain" else 2
        if row.span_stiffness is not None:
            words = "a chain pulls in one span" if spans == 1 else "a tensioned belt: both spans stay taut"
            said.add(element, "spans", f"{spans}", f"not given: {words}")
    if row.kind == "belt":
        said.add(element, "creep", "0 %", "a belt's creep and slip are left out: ratio of the pitch diameters")
    return Belt(
        name,
        (row.between[0], row.between[1]),
        row.diameters,
        row.kind,
        None if row.teeth is None else (row.teeth[0], row.teeth[1]),
        row.span_stiffness,
        spans,
        row.stiffness,
        row.crossed,
        damping(row),
        row.viscous,
        tolerance,
        provenance(row, element, said),
        row.group,
    )


def joints(rows: Rows, said: Assumptions) -> tuple[UniversalJoint, ...]:
    """[joints] in file order."""
    return tuple(
        UniversalJoint(name, row.at, row.angle, provenance(row, f"joints.{name}", said))
        for name, row in rows.keyed["joints"].items()
    )
