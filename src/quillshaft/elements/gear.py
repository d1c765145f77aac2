"""Gear geometry and what a mesh stiffness means as a torsional spring."""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction

from quillshaft.elements.mesh_stiffness import PER_MM_UM, MeshRuleResult, rule_stiffness
from quillshaft.train.gear_model import Epicyclic, GearGeometry, GearMesh
from quillshaft.train.model import FIXED


def base_radius(geometry: GearGeometry, teeth: int) -> float:
    """Base circle radius [m]: z m cos α_t / (2 cos β), with tan α_t = tan α_n / cos β.

    Source: ISO 21771 gear geometry, transverse pressure angle and base diameter (from memory).
    """
    transverse = math.atan(math.tan(geometry.pressure_angle_rad) / math.cos(geometry.helix_rad))
    return teeth * geometry.module_m * math.cos(transverse) / (2.0 * math.cos(geometry.helix_rad))


def mesh_torsional_stiffness(mesh_n_m: float, base_radius_m: float) -> float:
    """Stiffness [N·m/rad] at a wheel of a mesh stiffness [N/m] along the base tangent: k r_b²."""
    return mesh_n_m * base_radius_m**2


def mesh_stiffness_at_first(gear: GearMesh) -> float | None:
    """Stiffness [N·m/rad] of a mesh at its first-named station; None where the mesh is rigid."""
    if gear.mesh_nm_rad is not None:
        return gear.mesh_nm_rad
    linear = mesh_linear_stiffness(gear)
    if linear is None or gear.geometry is None:
        return None
    return mesh_torsional_stiffness(linear, base_radius(gear.geometry, gear.teeth[0]))


def mesh_linear_stiffness(gear: GearMesh) -> float | None:
    """Stiffness [N/m] of a mesh along the base tangent, given or by the rule; None where neither says so."""
    if not gear.by_rule:
        return gear.mesh_n_m
    rule = mesh_by_rule(gear)
    if rule is None or gear.geometry is None or gear.geometry.face_m is None:
        return None
    return rule.mean_n_mm_um * PER_MM_UM * gear.geometry.face_m


def mesh_by_rule(gear: GearMesh) -> MeshRuleResult | None:
    """What ISO 6336-1, simplified, gives for a mesh; None where its stiffness is stated otherwise.

    The ring of an internal mesh is its larger wheel. Raises ValueError where the teeth cannot mesh.
    """
    if not gear.by_rule or gear.geometry is None:
        return None
    if not gear.internal or gear.teeth[0] < gear.teeth[1]:
        return rule_stiffness(gear.geometry, gear.teeth, gear.internal)
    x1, x2 = gear.geometry.profile_shift
    return rule_stiffness(replace(gear.geometry, profile_shift=(x2, x1)), (gear.teeth[1], gear.teeth[0]), True)


def mesh_ratio(gear: GearMesh) -> Fraction:
    """Signed speed of the second wheel over that of the first: −z1/z2, + in an internal mesh.

    Shafts of a bevel stage have no common sense of rotation: + unless the file says that it reverses.
    """
    ratio = Fraction(gear.teeth[0], gear.teeth[1])
    positive = not gear.reverses if gear.kind == "bevel" else gear.internal
    return ratio if positive else -ratio


def turning_members(stage: Epicyclic) -> tuple[tuple[str, int], ...]:
    """(station, Willis coefficient) of the members that are not fixed.

    z_s ω_s + z_r ω_r = (z_s + z_r) ω_c. Source: Willis, Principles of Mechanism, epicyclic trains.
    """
    return tuple((name, coefficient) for name, coefficient in stage.members if name != FIXED)
