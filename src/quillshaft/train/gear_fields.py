"""Field types of gears, belts and joints: a stiffness or the name of the rule that gives it, and small lengths."""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import Field, ValidationInfo

from quillshaft.records import dataclass
from quillshaft.train.fields import NUMBER_OR_TEXT, AnyMeasure, Measured, MeasuredPair

ISO_RULE: Literal["iso-6336"] = "iso-6336"
"""The word that stands for the simplified mesh stiffness of ISO 6336-1."""


@dataclass(frozen=True)
class MeshMeasure(AnyMeasure):
    """A mesh stiffness with its unit, or the rule that gives it: ("iso-6336", 0.0)."""

    def read(self, value: object, info: ValidationInfo) -> tuple[str, float]:
        """(measure or rule, SI value). Raises PydanticCustomError when it is neither."""
        return (ISO_RULE, 0.0) if value == ISO_RULE else super().read(value, info)

    @property
    def help(self) -> str:
        """What may stand here."""
        return f'{super().help} or "{ISO_RULE}"'


@dataclass(frozen=True)
class StageMeasure(Measured):
    """A stage's stiffness [N·m/rad] at the sun, or nan where the rule "iso-6336" is to give it."""

    def read(self, value: object, info: ValidationInfo) -> float:
        """The SI value. Raises PydanticCustomError when it is no stiffness and no rule."""
        return float("nan") if value == ISO_RULE else super().read(value, info)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        return {**NUMBER_OR_TEXT, "description": f'stiffness at the sun, such as "8 MN m/rad", or "{ISO_RULE}"'}


GearStiffness = Annotated[tuple[str, float], MeshMeasure(("mesh_stiffness_per_face", "linear_stiffness", "stiffness"))]
StageStiffness = Annotated[float, StageMeasure("stiffness")]
Backlash = Annotated[float, Measured("length", least=1e-7)]
SpanStiffness = Annotated[float, Measured("linear_stiffness")]
Shift = Annotated[float, Field(ge=-1.0, le=2.0, strict=True, allow_inf_nan=False)]
Shifts = Annotated[list[Shift], Field(min_length=2, max_length=2)]
ContactRatio = Annotated[float, Field(ge=1.0, le=3.0, strict=True, allow_inf_nan=False)]
PitchDiameters = Annotated[tuple[float, float], MeasuredPair(Measured("length", least=1e-3), alone=False)]
