"""The rows of the train file as pydantic models: one class per table, SI floats after validation."""

from typing import Annotated, Any, Literal, Self

from pydantic import BaseModel, ConfigDict, Field, StrictBool, StrictInt, model_validator

from quillshaft.train.fields import (
    Between,
    Count,
    Date,
    Density,
    ExcitationTorque,
    FactorTable,
    Flexibility,
    Frequency,
    Gd2,
    HalfInertias,
    Heat,
    HeatRise,
    Inertia,
    Length,
    Mass,
    ModulusTable,
    Name,
    Poles,
    Ratio,
    Share,
    SignedAngle,
    SignedFrequency,
    SignedViscous,
    Speed,
    Stiffness,
    StiffnessTable,
    Stress,
    Synchronizing,
    Temperature,
    TemperaturePair,
    Text,
    ToleranceField,
    Torque,
    Viscous,
    Wr2,
    complain,
    kebab,
)

WHOLE_TURN_RAD = 6.283185307179587
AIR_K = (213.15, 393.15)
"""Coldest and hottest air that a coupling may stand in: -60 to 120 degC."""
LOCKED = 'locked-with = "engine" beside it: a reciprocating machine or another excitation'


class Row(BaseModel):
    """A table of the file: unknown keys are refused, keys are kebab-case."""

    model_config = ConfigDict(extra="forbid", alias_generator=kebab, frozen=True, defer_build=True)


class ElementRow(Row):
    """What any element may carry: where its number comes from."""

    source: Text | None = None
    document: Text | None = None
    date: Date | None = None
    status: Literal["stated", "calculated", "assumed"] | None = None
    note: Text | None = None


class ToleratedRow(ElementRow):
    """An element with a relative tolerance on its main number; those of one group deviate together."""

    tolerance: ToleranceField | None = None
    group: Name | None = None


def exactly_one(row: Row, keys: tuple[str, ...], help_text: str = "") -> None:
    """Refuse a row that gives none of the keys, or several. Raises PydanticCustomError."""
    given = [key for key in keys if getattr(row, key) is not None]
    if len(given) != 1:
        names = " | ".join(kebab(key) for key in keys)
        seen = " and ".join(kebab(key) for key in given) or "none of them"
        raise complain(f"give exactly one of {names}; this has {seen}{help_text}")


def one_loss_factor(row: Any) -> None:
    """Refuse psi beside loss-factor. Raises PydanticCustomError where both are given."""
    if row.psi is not None and row.loss_factor is not None:
        raise complain("give psi or loss-factor, not both (loss-factor = psi / 2π)")
    if row.viscous is not None and (row.psi is not None or row.loss_factor is not None):
        raise complain("give viscous, or psi, or loss-factor: one statement of the damping")


class RunningGearRow(Row):
    """What runs on a crankpin: masses that add their mean inertia to the throw's station."""

    reciprocating_mass: Mass
    rotating_mass: Mass | None = None
    radius: Length
    rod: Length
    cylinders: Annotated[StrictInt, Field(ge=1, le=8)] = 1

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        if self.rod <= 1.5 * self.radius:
            allowed = f"more than 1.5 · radius = {1.5e3 * self.radius:.4g} mm; ordinary is 3 to 6 times"
            raise complain("is too short for its crank", allowed, "rod")
        return self


class StationRow(ToleratedRow):
    """[stations]: a polar inertia; 0 is a massless station."""

    inertia: Inertia | None = None
    wr2: Wr2 | None = None
    gd2: Gd2 | None = None
    referred_to: Name | None = None
    entrained: Share | None = None
    wet: StrictBool | None = None
    mass: Mass | None = None
    diameter: Length | None = None
    running_gear: RunningGearRow | None = None
    repeat: Count | None = None
    viscous: SignedViscous | None = None
    viscous_because: Annotated[Text, Field(min_length=3)] | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        exactly_one(self, ("inertia", "wr2", "gd2"), " (inertia = 0 for a massless station)")
        if self.viscous is not None and self.viscous < 0 and self.viscous_because is None:
            reason = 'viscous-because = "falling torque–speed curve" beside it'
            raise complain("negative damping feeds energy in: say why", reason, "viscous")
        if self.viscous is None and self.viscous_because is not None:
            raise complain("gives a reason for viscous, which is not there", "viscous beside it", "viscous-because")
        if self.wet and self.entrained:
            raise complain("wet = true says that the inertia holds its water already", "one of the two", "entrained")
        return self


class SpringRow(ToleratedRow):
    """A spring between two stations: damping words shared by shafts and couplings."""

    between: Between
    referred_to: Name | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None
    viscous: Viscous | None = None
    inertia_tolerance: ToleranceField | None = None


CouplingKind = Literal[
    "elastomer", "elastomer-shear", "elastomer-blocks", "disc", "diaphragm", "gear", "steel-spring", "grid", "fluid"
]


class CouplingRow(SpringRow):
    """[couplings]: stiffness | flexibility."""

    kind: CouplingKind | None = None
    stiffness: StiffnessTable | None = None
    flexibility: Flexibility | None = None
    half_inertias: HalfInertias | None = None
    shaft_in_hub: Literal["included", "excluded"] | None = None
    rated_torque: Torque | None = None
    peak_torque: Torque | None = None
    vibratory_torque: Torque | None = None
    reference_frequency: Frequency | None = None
    permitted_heat: Heat | None = None
    heat_rise: HeatRise | None = None
    ambient: Temperature | None = None
    max_speed: Speed | None = None
    temperature: FactorTable | None = None
    damping_temperature: FactorTable | None = None
    operating_temperature: TemperaturePair | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        exactly_one(self, ("stiffness", "flexibility"))
        one_loss_factor(self)
        if self.damping_temperature is not None and self.psi is self.loss_factor is self.viscous is None:
            raise complain("damping-temperature needs psi, loss-factor or viscous to multiply")
        if self.operating_temperature is not None:
            if self.temperature is None:
                raise complain("operating-temperature needs the temperature table that it is read in")
            if self.operating_temperature[0] >= self.operating_temperature[1]:
                raise complain("operating-temperature wants the cold value first, then the hot one")
        if self.ambient is not None and not AIR_K[0] <= self.ambient <= AIR_K[1]:
            raise complain("is no temperature of the air about a coupling", "-60 degC to 120 degC", "ambient")
        self._ratings()
        return self

    def _ratings(self) -> None:
        if self.reference_frequency is not None and self.vibratory_torque is None:
            raise complain("is the frequency of vibratory-torque, which is not given", None, "reference-frequency")
        if self.heat_rise is not None and self.permitted_heat is None:
            raise complain("is the rise at permitted-heat, which is not given", None, "heat-rise")
        rated, peak = self.rated_torque, self.peak_torque
        if rated is not None and peak is not None and peak < rated:
            raise complain("lies below rated-torque", "the largest torque allowed for a short time", "peak-torque")
        if rated is not None and self.vibratory_torque is not None and self.vibratory_torque > rated:
            text = "lies above rated-torque: makers permit 0.2 to 0.5 of it, as an amplitude"
            raise complain(text, "half the peak-to-peak torque", "vibratory-torque")


class TieRow(ToleratedRow):
    """[ties]: a spring to ground."""

    at: Name
    stiffness: Stiffness | None = None
    synchronizing: Synchronizing | None = None
    poles: Poles | None = None
    supply: Frequency | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None
    viscous: Viscous | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        exactly_one(self, ("stiffness", "synchronizing"))
        one_loss_factor(self)
        if self.synchronizing is None and (self.poles is not None or self.supply is not None):
            raise complain("poles and supply go with synchronizing power; a stiffness needs neither")
        return self


class MaterialRow(ElementRow):
    """[materials]: a material of the user's own."""

    shear_modulus: ModulusTable
    density: Density
    tensile: Stress | None = None
    yield_: Stress | None = None
    endurance: Stress | None = None

    @model_validator(mode="after")
    def _strengths(self) -> Self:
        tensile, limited = self.tensile, self.yield_
        if tensile is not None and limited is not None and limited > tensile:
            raise complain("lies above tensile", f"up to {tensile / 1e6:.5g} MPa", "yield")
        if tensile is not None and self.endurance is not None and self.endurance >= tensile:
            allowed = "in fully reversed shear, of a plain polished bar: about 0.29 of tensile for steel"
            raise complain("is not below tensile", allowed, "endurance")
        return self


class ExcitationRow(ElementRow):
    """[excitations]: order, frequency, or both."""

    at: Name
    order: Annotated[float, Field(ge=-1000, le=1000, allow_inf_nan=False, strict=True)] | None = None
    frequency: SignedFrequency | None = None
    torque: ExcitationTorque | None = None
    when: Literal["continuous", "start", "fault"] = "continuous"
    phase: SignedAngle | None = None
    locked_with: Name | None = None

    @model_validator(mode="after")
    def _line(self) -> Self:
        if not self.order and not self.frequency:
            raise complain("give order, frequency, or both, other than zero")
        return self

    @model_validator(mode="after")
    def _locked(self) -> Self:
        if self.phase is not None and abs(self.phase) > WHOLE_TURN_RAD:
            raise complain("is more than a turn", "-360 to 360 degrees", "phase")
        if self.locked_with is None:
            if self.phase is not None:
                raise complain("is that to what it is locked with, which is not given", LOCKED, "phase")
            return self
        if self.frequency:
            raise complain("a constant frequency keeps its phase to no shaft", "order alone", "frequency")
        if self.torque is None:
            raise complain("needs an amplitude, which is not given", 'torque = "1.5 %" beside it', "locked-with")
        if (self.order or 0.0) < 0:
            raise complain("is below 0, and its phase is counted with the shaft", "an order above 0", "order")
        return self


class DismissalRow(Row):
    """[dismissals]: an interference an engineer accepts."""

    source: Name
    mode: Count
    frequency: Frequency
    because: Annotated[Text, Field(min_length=3)]
    by: Annotated[Text, Field(min_length=1)]
    cases: list[Name] = []
