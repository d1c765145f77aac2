"""Gears, belts and universal joints as the data table states them."""

from __future__ import annotations

import math

from quillshaft.elements.belt import belt_ratio
from quillshaft.elements.epicyclic import stage_rules
from quillshaft.elements.gear import mesh_by_rule
from quillshaft.elements.mesh_stiffness import MeshRuleResult
from quillshaft.present.units import ShownUnits
from quillshaft.present.words import number
from quillshaft.sources.joints import joint_words
from quillshaft.train.gear_model import Belt, Epicyclic, GearGeometry, GearMesh, HeldMember, Planets
from quillshaft.train.model import UniversalJoint

LB_KG = 0.45359237
RULE = "by ISO 6336-1 simplified (recalled, confirm against your edition)"


def gear_text(gear: GearMesh | Epicyclic, units: ShownUnits) -> str:
    """Members, teeth and stiffness of a gear, then what else is stored of it."""
    text = _stage(gear, units) if isinstance(gear, Epicyclic) else _mesh(gear, units)
    if gear.backlash_m is not None:
        text += f", backlash {gear.backlash_m * units.per_m:.3g} {units.length} (stored, not used)"
    if gear.rated_torque_nm is not None:
        where = "the sun" if isinstance(gear, Epicyclic) else gear.between[0]
        text += f", rated {number(gear.rated_torque_nm * units.per_nm)} {units.torque} at {where}"
    return text


def _mesh(gear: GearMesh, units: ShownUnits) -> str:
    text = f"{gear.between[0]} : {gear.between[1]} = {gear.teeth[0]} : {gear.teeth[1]} teeth"
    text += " (internal)" if gear.internal else ""
    if gear.kind == "bevel":
        angle = "" if gear.shaft_angle_rad is None else f", shafts at {math.degrees(gear.shaft_angle_rad):.4g}°"
        text += f" (bevel{angle}{', reverses' if gear.reverses else ''})"
    rule = mesh_by_rule(gear)
    if rule is not None and gear.geometry is not None:
        return f"{text}, {_geometry(gear.geometry, units)}, mesh {_rule(rule)} {RULE}"
    if gear.mesh_n_m is not None:
        return f"{text}, mesh {number(gear.mesh_n_m / 1e6)} N/µm"
    return text + _stiffness(gear.mesh_nm_rad, units)


def _stage(gear: Epicyclic, units: ShownUnits) -> str:
    members = f"sun {gear.sun}, ring {gear.ring}, carrier {gear.carrier}"
    text = f"epicyclic: {members}; {gear.sun_teeth} / {gear.ring_teeth} teeth, {gear.planets} planets"
    text += _planets(gear.wheels, units) + _held(gear.held, units)
    rules = stage_rules(gear)
    if rules is not None and gear.geometry is not None:
        inner, outer = rules
        text += f", {_geometry(gear.geometry, units)}, sun mesh {_rule(inner)}, ring mesh {_rule(outer)}"
        return f"{text} for each planet, {RULE}"
    return text + _stiffness(gear.mesh_nm_rad, units)


def _planets(wheels: Planets | None, units: ShownUnits) -> str:
    if wheels is None:
        return ""
    own = f"{number(wheels.inertia_kgm2 * units.per_kgm2)} {units.inertia}"
    text = f" of {float(wheels.teeth):g} teeth, each {own}"
    if not wheels.mass_kg:
        return text
    mass = f"{wheels.mass_kg:.4g} kg" if units.length == "mm" else f"{wheels.mass_kg / LB_KG:.4g} lb"
    return f"{text} and {mass} at radius {wheels.radius_m * units.per_m:.5g} {units.length}"


def _held(held: HeldMember | None, units: ShownUnits) -> str:
    if held is None:
        return ""
    own = f"{number(held.inertia_kgm2 * units.per_kgm2)} {units.inertia}" if held.inertia_kgm2 else "no inertia"
    return f"; {held.station} ({own}) held by {held.tie}"


def _stiffness(stiffness_nm_rad: float | None, units: ShownUnits) -> str:
    if stiffness_nm_rad is None:
        return ", rigid"
    return f", mesh {number(stiffness_nm_rad * units.per_nm_rad)} {units.stiffness}"


def _geometry(geometry: GearGeometry, units: ShownUnits) -> str:
    helix, angle = math.degrees(geometry.helix_rad), math.degrees(geometry.pressure_angle_rad)
    sizes = f"module {geometry.module_m * units.per_m:.4g}, face {(geometry.face_m or 0.0) * units.per_m:.4g}"
    text = f"{sizes} {units.length}, helix {helix:.4g}°, pressure angle {angle:.4g}°"
    x1, x2 = geometry.profile_shift
    return text + (f", profile shift {x1:g} and {x2:g}" if x1 or x2 else "")


def _rule(rule: MeshRuleResult) -> str:
    return f"{rule.mean_n_mm_um:.4g} N/(mm·µm) at contact ratio {rule.contact_ratio:.4g}"


def belt_text(belt: Belt, units: ShownUnits) -> str:
    """Pulleys, ratio and stiffness of a belt or chain."""
    kind = {"belt": "belt", "toothed-belt": "toothed belt", "chain": "chain"}[belt.kind]
    first, second = (f"{value * units.per_m:.5g}" for value in belt.diameters_m)
    text = f"{kind}, pulleys ⌀{first} and ⌀{second} {units.length}"
    if belt.teeth is not None:
        text += f", {belt.teeth[0]} : {belt.teeth[1]} teeth"
    text += f", ratio {abs(float(1 / belt_ratio(belt))):.5g}" + (", crossed" if belt.crossed else "")
    if belt.span_n_m is not None:
        taut = "one span taut" if belt.spans == 1 else "both spans taut"
        return f"{text}, {number(belt.span_n_m / 1e6)} N/µm for a span, {taut}"
    if belt.belt_nm_rad is not None:
        return f"{text}, {number(belt.belt_nm_rad * units.per_nm_rad)} {units.stiffness} at {belt.between[0]}"
    return f"{text}, rigid"


def joint_text(joint: UniversalJoint) -> str:
    """A universal joint: where it is and how unevenly it turns."""
    return f"universal {joint_words(joint)}, in {joint.at}"
