"""Rows of bevel stages, belts and universal joints: right-angle gears in [gears], then [belts] and [joints]."""

from typing import Annotated, Literal, Self

from pydantic import Field, StrictBool, StrictInt, model_validator

from quillshaft.train.fields import (
    Angle,
    Between,
    Name,
    Ratio,
    Stiffness,
    Teeth,
    Viscous,
    complain,
)
from quillshaft.train.gear_fields import GearStiffness, PitchDiameters, SpanStiffness
from quillshaft.train.rows import ElementRow, MeshRow, ToleratedRow, one_loss_factor

STEEPEST_JOINT_RAD = 0.7853981633974484


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
