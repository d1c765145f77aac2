"""Oddities of gears, belts and universal joints worth a question (common practice figures throughout)."""

from __future__ import annotations

import math
from collections.abc import Iterator

from quillshaft.assess.results import Flag, LinkDuty
from quillshaft.train.gear_model import Belt, Epicyclic, GearMesh
from quillshaft.train.model import Train, UniversalJoint

BACKLASH_IN_MODULES = (0.005, 0.3)
LEAST_LINE_LOAD = 1e5
"""Tangential force per face [N/m] below which the rule of ISO 6336-1 lowers the stiffness (recalled)."""

BELT_TWIST_RAD = math.radians(10.0)
JOINT_RAD = math.radians(15.0)


def gear_flags(train: Train, duties: tuple[LinkDuty, ...]) -> Iterator[Flag]:
    """What is odd about gears, belts and joints, in file order."""
    by_link = {duty.link: duty for duty in duties}
    for gear in train.gears:
        yield from _backlash_flags(gear)
        if isinstance(gear, Epicyclic):
            yield from _planet_flags(gear)
        else:
            yield from _load_flags(gear, by_link.get(gear.name))
    for belt in train.belts:
        yield from _belt_flags(belt, by_link.get(belt.name))
    for joint in train.joints:
        yield from _joint_flags(joint)


def _backlash_flags(gear: GearMesh | Epicyclic) -> Iterator[Flag]:
    if gear.backlash_m is None or gear.geometry is None:
        return
    share = gear.backlash_m / gear.geometry.module_m
    low, high = BACKLASH_IN_MODULES
    if not low <= share <= high:
        text = f"a backlash of {share:.3g} modules; ordinary is {low:g} to {high:g}: is the unit right?"
        yield Flag(f"gears.{gear.name}", text)


def _planet_flags(gear: Epicyclic) -> Iterator[Flag]:
    """Planets out of proportion to their own mass, size or radius of travel."""
    wheels, where = gear.wheels, f"gears.{gear.name}"
    if wheels is None or gear.geometry is None:
        return
    across = gear.geometry.module_m / math.cos(gear.geometry.helix_rad)
    radius = 0.5 * across * float(gear.sun_teeth + wheels.teeth)
    if wheels.radius_m and abs(wheels.radius_m / radius - 1.0) > 0.03:
        text = f"planet-radius {wheels.radius_m * 1e3:.4g} mm; module and teeth give {radius * 1e3:.4g} mm"
        yield Flag(where, text)
    disc = 0.5 * wheels.mass_kg * (0.5 * across * float(wheels.teeth)) ** 2
    if disc and not 0.4 <= wheels.inertia_kgm2 / disc <= 2.2:
        share = wheels.inertia_kgm2 / disc
        text = f"a planet's inertia is {share:.3g} × that of a plain disc of its mass and pitch diameter"
        yield Flag(where, f"{text}: is it that of one planet, about its own axis, and no GD²?")


def _load_flags(gear: GearMesh, duty: LinkDuty | None) -> Iterator[Flag]:
    """A lightly loaded mesh is softer than the rule says, in proportion to its load."""
    geometry = gear.geometry
    if not gear.by_rule or geometry is None or not geometry.face_m or duty is None or duty.mean_torque_nm is None:
        return
    radius = 0.5 * gear.teeth[0] * geometry.module_m / math.cos(geometry.helix_rad)
    load = abs(duty.mean_torque_nm) / radius / geometry.face_m
    if load < LEAST_LINE_LOAD:
        text = (
            f"the tooth load of {load / 1e3:.3g} N per mm of face is below 100 N/mm, where ISO 6336-1 lowers the mesh "
            "stiffness in proportion (recalled): is a lower value known?"
        )
        yield Flag(f"gears.{gear.name}", text)


def _belt_flags(belt: Belt, duty: LinkDuty | None) -> Iterator[Flag]:
    if duty is not None and duty.wind_up_rad is not None and abs(duty.wind_up_rad) > BELT_TWIST_RAD:
        twist = math.degrees(abs(duty.wind_up_rad))
        text = f"wind-up of {twist:.3g}° at rated power; ordinary is up to {math.degrees(BELT_TWIST_RAD):.0f}°"
        yield Flag(f"belts.{belt.name}", f"{text}: is span-stiffness that of all strands together?")


def _joint_flags(joint: UniversalJoint) -> Iterator[Flag]:
    if joint.angle_rad > JOINT_RAD * (1 + 1e-9):
        text = f"bent by {math.degrees(joint.angle_rad):.3g}°; at running speed ordinary is up to 15°"
        yield Flag(f"joints.{joint.name}", text)
