"""Gears, epicyclic stages and belts, as the user wrote them."""

from __future__ import annotations

from fractions import Fraction
from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.basic_model import Provenance, Tolerance


@dataclass(frozen=True)
class GearGeometry:
    """Normal module [m], helix and normal pressure angles [rad], face width [m].

    profile_shift   coefficients x1, x2; contact_ratio the transverse one where it is given
    """

    module_m: float
    helix_rad: float
    pressure_angle_rad: float
    face_m: float | None = None
    profile_shift: tuple[float, float] = (0.0, 0.0)
    contact_ratio: float | None = None


@dataclass(frozen=True)
class GearMesh:
    """Two wheels in mesh. Rigid unless `mesh_n_m` (along the base tangent) or `mesh_nm_rad` is given.

    kind            "bevel" for any stage whose shafts are not parallel; its geometry is that at mid-face
    by_rule         the stiffness follows from teeth, module and face by ISO 6336-1, simplified
    backlash_m      circumferential at the pitch circles; stored, without effect on linear results
    reverses        of a bevel stage: its ratio counts as negative in a closed loop
    rated_torque_nm at the first-named station
    """

    name: str
    between: tuple[str, str]
    teeth: tuple[int, int]
    internal: bool = False
    geometry: GearGeometry | None = None
    mesh_n_m: float | None = None
    mesh_nm_rad: float | None = None
    loss_factor: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None
    viscous_nms_rad: float | None = None
    kind: Literal["mesh", "bevel"] = "mesh"
    by_rule: bool = False
    backlash_m: float | None = None
    reverses: bool = False
    shaft_angle_rad: float | None = None
    rated_torque_nm: float | None = None


@dataclass(frozen=True)
class Planets:
    """The planets of a stage, each: tooth number, polar inertia [kg·m²], mass [kg], radius of its centre [m]."""

    station: str
    teeth: Fraction
    inertia_kgm2: float
    mass_kg: float = 0.0
    radius_m: float = 0.0
    tolerance: Tolerance = (0.0, 0.0)


@dataclass(frozen=True)
class HeldMember:
    """A member that a stiffness holds to the housing: its station and inertia [kg·m²], and the tie's name."""

    station: str
    tie: str
    inertia_kgm2: float = 0.0
    tolerance: Tolerance = (0.0, 0.0)


@dataclass(frozen=True)
class Epicyclic:
    """A planetary stage; each member is a station or "fixed". Rigid unless `mesh_nm_rad` (at the sun).

    geometry, by_rule   the stiffness of both meshes follows from teeth, module and face by ISO 6336-1
    wheels              the planets with inertia of their own; None where that is left out
    planet_teeth        of one planet, where given
    held                the member that is fixed through a stiffness, if one is
    rated_torque_nm     at the sun
    """

    name: str
    sun: str
    ring: str
    carrier: str
    sun_teeth: int
    ring_teeth: int
    planets: int
    mesh_nm_rad: float | None = None
    loss_factor: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None
    viscous_nms_rad: float | None = None
    geometry: GearGeometry | None = None
    by_rule: bool = False
    backlash_m: float | None = None
    wheels: Planets | None = None
    planet_teeth: int | None = None
    held: HeldMember | None = None
    rated_torque_nm: float | None = None

    @property
    def members(self) -> tuple[tuple[str, int], ...]:
        """(station or "fixed", Willis coefficient) of sun, ring and carrier: the coefficients sum to zero."""
        return (
            (self.sun, self.sun_teeth),
            (self.ring, self.ring_teeth),
            (self.carrier, -(self.sun_teeth + self.ring_teeth)),
        )


@dataclass(frozen=True)
class Belt:
    """A belt or chain between two pulleys of pitch diameters [m]. Rigid unless a stiffness is given.

    span_n_m     axial stiffness [N/m] of one span between the pulleys; `spans` of them hold
    belt_nm_rad  torsional stiffness [N·m/rad] at the first-named station, where that is given
    teeth        tooth numbers of a toothed belt or chain: the exact ratio, in place of the diameters
    crossed      the second pulley turns the other way
    """

    name: str
    between: tuple[str, str]
    diameters_m: tuple[float, float]
    kind: Literal["belt", "toothed-belt", "chain"] = "belt"
    teeth: tuple[int, int] | None = None
    span_n_m: float | None = None
    spans: int = 2
    belt_nm_rad: float | None = None
    crossed: bool = False
    loss_factor: float | None = None
    viscous_nms_rad: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None
