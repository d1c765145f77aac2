"""Epicyclic stages: their meshes as links over sun, ring, carrier and planets, their stiffness and planet speeds."""

from __future__ import annotations

from fractions import Fraction

from quillshaft.elements.gear import base_radius, mesh_torsional_stiffness
from quillshaft.elements.mesh_stiffness import PER_MM_UM, MeshRuleResult, rule_stiffness
from quillshaft.records import dataclass
from quillshaft.train.gear_model import Epicyclic, Planets
from quillshaft.train.model import FIXED


@dataclass(frozen=True)
class StageMesh:
    """One link of a stage.

    members     (station or "fixed", coefficient): sum(coefficient · signed angle) / sun teeth is the twist at the
                sun; the coefficients sum to zero
    at_sun      stiffness [N·m/rad] at the sun; None where rigid
    share       of the whole stage's compliance, 1 where the stage is one link
    """

    name: str
    members: tuple[tuple[str, Fraction], ...]
    at_sun: float | None
    share: float
    text: str

    @property
    def turning(self) -> tuple[tuple[str, Fraction], ...]:
        """The members that are not fixed."""
        return tuple((name, value) for name, value in self.members if name != FIXED)


def stage_meshes(stage: Epicyclic) -> tuple[StageMesh, ...]:
    """The links of a stage: one over sun, ring and carrier, or one for each mesh where planets have inertia.

    Willis for either mesh: z_s ω_s + z_p ω_p = (z_s + z_p) ω_c and z_r ω_r − z_p ω_p = (z_r − z_p) ω_c; their sum
    is z_s ω_s + z_r ω_r = (z_s + z_r) ω_c. Source: Willis, Principles of Mechanism, epicyclic trains.
    """
    sun_mesh, ring_mesh = stage_stiffness(stage)
    zs, zr = Fraction(stage.sun_teeth), Fraction(stage.ring_teeth)
    text = f"sun {stage.sun_teeth}, ring {stage.ring_teeth}, {stage.planets} planets"
    if stage.wheels is None:
        members = tuple((name, Fraction(count)) for name, count in stage.members)
        whole = None if sun_mesh is None or ring_mesh is None else 1.0 / (1.0 / sun_mesh + 1.0 / ring_mesh)
        if not stage.by_rule:
            whole = stage.mesh_nm_rad
        return (StageMesh(stage.name, members, whole, 1.0, text),)
    planets, zp = stage.wheels.station, stage.wheels.teeth
    inner = ((stage.sun, zs), (stage.carrier, -(zs + zp)), (planets, zp))
    outer = ((stage.ring, zr), (stage.carrier, zp - zr), (planets, -zp))
    share = 0.5
    if sun_mesh is not None and ring_mesh is not None:
        share = ring_mesh / (sun_mesh + ring_mesh)
    return (
        StageMesh(stage.name, inner, sun_mesh, share, f"{text} of {float(zp):g}"),
        StageMesh(
            ring_mesh_name(stage), outer, ring_mesh, 1.0 - share, f"ring {stage.ring_teeth}, planets {float(zp):g}"
        ),
    )


def ring_mesh_name(stage: Epicyclic) -> str:
    """Name of the link between planets and ring; the one between sun and planets has the stage's own."""
    return f"{stage.name} ring mesh"


def planet_teeth(stage: Epicyclic) -> Fraction:
    """Tooth number of one planet: given, or (ring − sun) / 2 (standard centre distance)."""
    if stage.planet_teeth is not None:
        return Fraction(stage.planet_teeth)
    return Fraction(stage.ring_teeth - stage.sun_teeth, 2)


def stage_stiffness(stage: Epicyclic) -> tuple[float | None, float | None]:
    """(sun mesh, ring mesh): stiffness [N·m/rad] of all planets together, both at the sun; None where rigid.

    A stiffness given for the whole stage is that of the two in series, split evenly (common practice).
    """
    if not stage.by_rule:
        return (None, None) if stage.mesh_nm_rad is None else (2.0 * stage.mesh_nm_rad, 2.0 * stage.mesh_nm_rad)
    rules = stage_rules(stage)
    if rules is None or stage.geometry is None or stage.geometry.face_m is None:
        return None, None
    radius = base_radius(stage.geometry, stage.sun_teeth)
    face = stage.geometry.face_m * PER_MM_UM * stage.planets
    inner, outer = (mesh_torsional_stiffness(rule.mean_n_mm_um * face, radius) for rule in rules)
    return inner, outer


def stage_rules(stage: Epicyclic) -> tuple[MeshRuleResult, MeshRuleResult] | None:
    """ISO 6336-1, simplified, for (sun and planet, planet and ring); None where the stiffness is stated otherwise.

    Planets share the load evenly. Raises ValueError where the teeth cannot mesh.
    """
    if not stage.by_rule or stage.geometry is None:
        return None
    planet = round(planet_teeth(stage))
    inner = rule_stiffness(stage.geometry, (stage.sun_teeth, planet))
    return inner, rule_stiffness(stage.geometry, (planet, stage.ring_teeth), internal=True)


def planet_speed(stage: Epicyclic, wheels: Planets, sun: Fraction, carrier: Fraction) -> tuple[Fraction, Fraction]:
    """(absolute, relative to the carrier) speed of the planets: ω_p − ω_c = −(z_s / z_p) (ω_s − ω_c).

    Source: Willis, Principles of Mechanism, epicyclic trains.
    """
    relative = -(sun - carrier) * stage.sun_teeth / wheels.teeth
    return carrier + relative, relative


def travelling_inertia(stage: Epicyclic) -> float:
    """Inertia [kg·m²] at the carrier of the mass of the planets: N m r², none where the carrier is fixed."""
    if stage.wheels is None or stage.carrier == FIXED:
        return 0.0
    return stage.planets * stage.wheels.mass_kg * stage.wheels.radius_m**2
