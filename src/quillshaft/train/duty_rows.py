"""Rows of what shafts, gears and generators may carry, and of the amplitudes of implied sources."""

from typing import Annotated, Any, Literal, Self, get_args

from pydantic import Field, StrictBool, model_validator

from quillshaft.train.duty_model import MeanStress, PropulsionForm, PropulsionKind, StrengthRule, Surface
from quillshaft.train.fields import (
    Amplitude,
    Angle,
    Edition,
    Length,
    LengthOrZero,
    Share,
    Stress,
    Torque,
    complain,
)
from quillshaft.train.rows import ElementRow, Row

StressFactor = Annotated[float, Field(ge=1, le=20, strict=True, allow_inf_nan=False)]
Safety = Annotated[float, Field(ge=1, le=10, strict=True, allow_inf_nan=False)]
TorqueRatio = Annotated[float, Field(gt=0, le=100, strict=True, allow_inf_nan=False)]
QUARTER_TURN_RAD = 1.5707963267948966
WIDEST_HOLE = 0.5
"""Diameter of a cross hole over that of its shaft, which it stays below."""
LIMITED = ("stress", "torque")


def check_hole(hole: float | None, outer: float) -> None:
    """A radial hole leaves a shaft around it. Raises PydanticCustomError where it does not."""
    if hole is not None and hole >= WIDEST_HOLE * outer:
        allowed = f"a diameter below {WIDEST_HOLE:g} · od = {WIDEST_HOLE * outer * 1e3:.4g} mm"
        raise complain("leaves no shaft around it", allowed, "cross-hole")


class WeakestRow(Row):
    """weakest: the section of a shaft at which stress is judged."""

    od: Length
    id: LengthOrZero | None = None
    fillet: Length | None = None
    shoulder: Length | None = None
    keyway: StrictBool = False
    spline: StrictBool = False
    cross_hole: Length | None = None
    stress_factor: StressFactor | None = None
    surface: Surface | None = None

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        if self.id is not None and self.id >= self.od:
            raise complain("must stay below od", f"0 to below {self.od * 1e3:.4g} mm", "id")
        if (self.fillet is None) != (self.shoulder is None):
            given, missing = ("shoulder", "fillet") if self.fillet is None else ("fillet", "shoulder")
            allowed = {"fillet": 'fillet = "6 mm", its radius', "shoulder": 'shoulder = "120 mm", the larger diameter'}
            raise complain(f"needs {missing} beside it: stress at a shoulder takes both", allowed[missing], given)
        if self.shoulder is not None and self.shoulder <= self.od:
            raise complain("is the larger diameter at the fillet", f"more than od = {self.od * 1e3:.4g} mm", "shoulder")
        check_hole(self.cross_hole, self.od)
        return self


class ShaftLimitKeys(Row):
    """What limits the vibratory stress or torque of a shaft, as amplitudes."""

    permitted_stress: Stress | None = None
    passing_stress: Stress | None = None
    permitted_torque: Torque | None = None
    passing_torque: Torque | None = None
    strength_rule: StrengthRule | None = None
    propulsion_kind: PropulsionKind | None = None
    propulsion_form: PropulsionForm | None = None
    weakest: WeakestRow | None = None


def check_limits(row: Any) -> None:
    """Limits of a shaft's row that fit together, and a section to judge. Raises PydanticCustomError where not."""
    for kind in LIMITED:
        _passing(kind, getattr(row, f"permitted_{kind}"), getattr(row, f"passing_{kind}"))
    if row.permitted_stress is not None and row.permitted_torque is not None:
        why = "stands beside permitted-stress: one of them limits the shaft"
        raise complain(why, "permitted-stress or permitted-torque", "permitted-torque")
    _propulsion(row)
    limit = "strength-rule" if row.strength_rule is not None else "permitted-stress"
    judged = row.strength_rule is not None or row.permitted_stress is not None
    if judged and row.pieces is None and row.weakest is None:
        allowed = 'weakest = { od = "95 mm", keyway = true }, or pieces; or permitted-torque, which needs no section'
        raise complain("needs a section to judge stress at, and this shaft shows none", allowed, limit)


def _passing(kind: str, permitted: float | None, passing: float | None) -> None:
    if passing is None:
        return
    key, example = f"passing-{kind}", {"stress": "28 MPa", "torque": "3.2 kN m"}[kind]
    if permitted is None:
        why = f"is the limit while a speed is passed, and permitted-{kind} for good is not given"
        raise complain(why, f'permitted-{kind} = "{example}" beside it', key)
    if passing < permitted:
        why = f"lies below permitted-{kind}: what is permitted for good is permitted in passing"
        raise complain(why, f"permitted-{kind} and more, as an amplitude", key)


def _propulsion(row: Any) -> None:
    wanted = (("propulsion_kind", PropulsionKind), ("propulsion_form", PropulsionForm))
    for attribute, words in wanted:
        key, given = attribute.replace("_", "-"), getattr(row, attribute) is not None
        if row.strength_rule == "propulsion" and not given:
            raise complain("is missing: the rule for propulsion shafts asks it", " | ".join(get_args(words)), key)
        if row.strength_rule != "propulsion" and given:
            why = "belongs to the rule for propulsion shafts, which is not asked for"
            raise complain(why, 'strength-rule = "propulsion" beside it, or leave this key out', key)
    if row.strength_rule == "propulsion" and row.throw is not None:
        why = "the rule covers intermediate, thrust and propeller shafts, and this is a crank throw"
        raise complain(why, "permitted-stress or permitted-torque of the engine's maker", "strength-rule")


class StrengthTable(Row):
    """[criteria.strength]: how shafts are judged that state no limit of their own."""

    rule: Literal["endurance", "tensile-share"] | None = None
    mean_stress: MeanStress | None = None
    safety: Safety | None = None
    notch: Literal["peterson", "neuber"] | None = None
    surface: Surface | None = None
    edition: Edition | None = None


class DutyTable(Row):
    """[criteria.duty]: limits of gears and generators."""

    gear_share: Share | None = None
    gear_reversal: Literal["refused", "allowed"] | None = None
    inertia_torque: TorqueRatio | None = None
    electrical_angle: Angle | None = None
    irregularity: Share | None = None
    edition: Edition | None = None

    @model_validator(mode="after")
    def _plausible(self) -> Self:
        if self.gear_share is not None and not 0 < self.gear_share <= 1:
            raise complain("is no share of rated torque to permit", "above 0 % and up to 100 %", "gear-share")
        if self.electrical_angle is not None and not 0 < self.electrical_angle <= QUARTER_TURN_RAD:
            allowed = "above 0 and up to 90 degrees, electrical, zero to peak"
            raise complain("is no swing that a machine holds step at", allowed, "electrical-angle")
        if self.irregularity is not None and not 0 < self.irregularity < 1:
            allowed = 'above 0 % and below 100 %, peak to peak over mean speed, such as "0.4 %"'
            raise complain("is no irregularity of a speed", allowed, "irregularity")
        return self


class AmplitudeRow(ElementRow):
    """[amplitudes]: how large a source that the train implies is; a text alone stands for its torque."""

    torque: Amplitude
