"""Gear geometry and what a mesh stiffness means as a torsional spring."""

from __future__ import annotations

import math
from fractions import Fraction

from quillshaft.train.model import FIXED, Epicyclic, GearGeometry, GearMesh


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
    if gear.mesh_n_m is None or gear.geometry is None:
        return None
    return mesh_torsional_stiffness(gear.mesh_n_m, base_radius(gear.geometry, gear.teeth[0]))


def mesh_ratio(gear: GearMesh) -> Fraction:
    """Signed speed of the second wheel over that of the first: −z1/z2, + in an internal mesh."""
    ratio = Fraction(gear.teeth[0], gear.teeth[1])
    return ratio if gear.internal else -ratio


def turning_members(stage: Epicyclic) -> tuple[tuple[str, int], ...]:
    """(station, Willis coefficient) of the members that are not fixed.

    z_s ω_s + z_r ω_r = (z_s + z_r) ω_c. Source: Willis, Principles of Mechanism, epicyclic trains.
    """
    return tuple((name, coefficient) for name, coefficient in stage.members if name != FIXED)
