"""Rows of [gears], [belts] and [joints]: meshes, epicyclic and bevel stages, belts, universal joints."""

from typing import Annotated, Any, Literal, Self

from pydantic import Field, StrictBool, StrictInt, model_validator

from quillshaft.train.fields import (
    Angle,
    Between,
    Inertia,
    Length,
    Mass,
    Name,
    Ratio,
    Stiffness,
    Teeth,
    ToleranceField,
    Torque,
    Viscous,
    complain,
)
from quillshaft.train.gear_fields import (
    Backlash,
    ContactRatio,
    GearStiffness,
    PitchDiameters,
    Shifts,
    SpanStiffness,
    StageStiffness,
)
from quillshaft.train.model import FIXED
from quillshaft.train.rows import ElementRow, Row, ToleratedRow, one_loss_factor

STEEPEST_JOINT_RAD = 0.7853981633974484


class MeshRow(ToleratedRow):
    """What every gear says of its teeth and of the damping of its mesh."""

    module: Length | None = None
    helix: Angle | None = None
    pressure_angle: Angle | None = None
    face: Length | None = None
    backlash: Backlash | None = None
    rated_torque: Torque | None = None
    mesh_stiffness: Any = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None
    viscous: Viscous | None = None

    @model_validator(mode="after")
    def _damping(self) -> Self:
        one_loss_factor(self)
        if self.viscous is not None and self.mesh_stiffness is None:
            allowed = "mesh-stiffness beside it, or leave this key out"
            raise complain("a rigid mesh has no twist to damp", allowed, "viscous")
        return self


class GearRow(MeshRow):
    """[gears]: two wheels in mesh."""

    kind: Literal["mesh"] = "mesh"
    between: Between
    teeth: Annotated[list[Teeth], Field(min_length=2, max_length=2)]
    internal: StrictBool = False
    profile_shift: Shifts | None = None
    contact_ratio: ContactRatio | None = None
    mesh_stiffness: GearStiffness | None = None


class EpicyclicTeethRow(Row):
    """Teeth of an epicyclic stage."""

    sun: Teeth
    ring: Teeth
    planet: Teeth | None = None

    @model_validator(mode="after")
    def _closes(self) -> Self:
        if self.ring <= self.sun:
            raise complain(f"the ring ({self.ring} teeth) must have more teeth than the sun ({self.sun})")
        if self.planet is not None and abs(self.sun + 2 * self.planet - self.ring) > 2:
            raise complain(f"sun + 2 · planet should equal ring: {self.sun} + 2 · {self.planet} ≠ {self.ring}")
        return self


class EpicyclicRow(MeshRow):
    """[gears] kind = "epicyclic": each member is a station or "fixed"."""

    kind: Literal["epicyclic"]
    sun: Name
    ring: Name
    carrier: Name
    teeth: EpicyclicTeethRow
    planets: Annotated[StrictInt, Field(ge=1, le=20)]
    planet_inertia: Inertia | None = None
    planet_mass: Mass | None = None
    planet_radius: Length | None = None
    inertia_tolerance: ToleranceField | None = None
    fixed_through: Stiffness | None = None
    fixed_inertia: Inertia | None = None
    fixed_tolerance: ToleranceField | None = None
    mesh_stiffness: StageStiffness | None = None

    @model_validator(mode="after")
    def _members(self) -> Self:
        names = [self.sun, self.ring, self.carrier]
        if names.count("fixed") > 1:
            raise complain("at most one of sun, ring and carrier can be fixed")
        if len(set(names)) < 3:
            raise complain("sun, ring and carrier must be three different members")
        return self

    @model_validator(mode="after")
    def _planets(self) -> Self:
        """What the inertia of planets and a sprung fixed member need beside them."""
        if self.planet_mass is not None and self.planet_inertia is None:
            raise complain("needs the inertia of one planet about its own axis", 'planet-inertia = "0.2 kg m^2"')
        if self.planet_mass is not None and self.planet_radius is None and self.module is None:
            raise complain("planet-mass needs the radius it travels on", 'planet-radius = "300 mm", or the module')
        held = (self.fixed_through, self.fixed_inertia, self.fixed_tolerance)
        if self.fixed_through is None and held != (None, None, None):
            raise complain("is used only with fixed-through", 'fixed-through = "5 MN m/rad"')
        if self.fixed_through is not None and FIXED not in (self.sun, self.ring, self.carrier):
            raise complain("needs a member to hold", 'ring = "fixed" (or the sun, or the carrier)', "fixed-through")
        return self


class BevelRow(MeshRow):
    """[gears] kind = "bevel": two wheels on shafts that are not parallel; sizes are those at mid-face."""

    kind: Literal["bevel"]
    between: Between
    teeth: Annotated[list[Teeth], Field(min_length=2, max_length=2)]
    shaft_angle: Angle | None = None
    reverses: StrictBool = False
    mesh_stiffness: GearStiffness | None = None

    @model_validator(mode="after")
    def _fits(self) -> Self:
        if self.shaft_angle is not None and not 0 < self.shaft_angle < 3.14159:
            raise complain("lies outside what two shafts can make", "above 0 and below 180 degrees", "shaft-angle")
        if self.mesh_stiffness is not None and self.mesh_stiffness[0] == "iso-6336":
            words = "the rule stands for cylindrical gears, not for bevel ones"
            raise complain(words, 'a stiffness, such as "1.2e9 N/m"', "mesh-stiffness")
        return self


class BeltRow(ToleratedRow):
    """[belts]: a belt, toothed belt or chain between two pulleys."""

    between: Between
    kind: Literal["belt", "toothed-belt", "chain"] = "belt"
    diameters: PitchDiameters
    teeth: Annotated[list[Teeth], Field(min_length=2, max_length=2)] | None = None
    span_stiffness: SpanStiffness | None = None
    spans: Annotated[StrictInt, Field(ge=1, le=2)] | None = None
    stiffness: Stiffness | None = None
    crossed: StrictBool = False
    psi: Ratio | None = None
    loss_factor: Ratio | None = None
    viscous: Viscous | None = None

    @model_validator(mode="after")
    def _fits(self) -> Self:
        one_loss_factor(self)
        if self.stiffness is not None and (self.span_stiffness is not None or self.spans is not None):
            raise complain("give span-stiffness with its spans, or stiffness at the first pulley, not both")
        if self.spans is not None and self.span_stiffness is None:
            raise complain(
                "counts the spans of span-stiffness, which is not there", 'span-stiffness = "1.9 MN/m"', "spans"
            )
        if self.teeth is not None and self.kind == "belt":
            raise complain("a plain belt has none", 'kind = "toothed-belt" or "chain"', "teeth")
        if self.crossed and self.kind != "belt":
            raise complain("only a plain belt can be crossed", "crossed = false", "crossed")
        if self.viscous is not None and self.span_stiffness is None and self.stiffness is None:
            raise complain("a rigid belt has no stretch to damp", "span-stiffness beside it", "viscous")
        if (
            self.teeth is not None
            and abs(self.teeth[0] * self.diameters[1] / (self.teeth[1] * self.diameters[0]) - 1) > 0.03
        ):
            raise complain("disagree with the ratio of the pitch diameters", "teeth in the ratio of diameters", "teeth")
        return self


class JointRow(ElementRow):
    """[joints]: a universal joint in a shaft or coupling, bent by an angle: a source at twice the speed."""

    at: Name
    angle: Angle

    @model_validator(mode="after")
    def _bent(self) -> Self:
        if not 0 < self.angle <= STEEPEST_JOINT_RAD:
            raise complain("is no angle that a universal joint runs at", "above 0 and up to 45 degrees", "angle")
        return self
