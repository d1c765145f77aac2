"""The rows of the train file as pydantic models: one class per table, SI floats after validation."""

from typing import Annotated, Any, Literal, Self

from pydantic import BaseModel, ConfigDict, Field, StrictBool, StrictInt, model_validator

from quillshaft.train.fields import (
    Angle,
    Between,
    Bores,
    Count,
    Date,
    Density,
    Diameters,
    ExcitationTorque,
    FactorTable,
    Flexibility,
    Frequency,
    Gd2,
    HalfInertias,
    HubLengths,
    Inertia,
    Length,
    LengthOrZero,
    Mass,
    MeshStiffness,
    Modulus,
    Name,
    Ratio,
    Share,
    SignedFrequency,
    Stiffness,
    StiffnessTable,
    Stress,
    Teeth,
    TemperaturePair,
    Text,
    ToleranceField,
    Torque,
    Wr2,
    complain,
    kebab,
)


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


def _exactly_one(row: Row, keys: tuple[str, ...], help_text: str = "") -> None:
    given = [key for key in keys if getattr(row, key) is not None]
    if len(given) != 1:
        names = " | ".join(kebab(key) for key in keys)
        seen = " and ".join(kebab(key) for key in given) or "none of them"
        raise complain(f"give exactly one of {names}; this has {seen}{help_text}")


def _loss_factor(row: Any) -> None:
    if row.psi is not None and row.loss_factor is not None:
        raise complain("give psi or loss-factor, not both (loss-factor = psi / 2π)")


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

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        _exactly_one(self, ("inertia", "wr2", "gd2"), " (inertia = 0 for a massless station)")
        if self.wet and self.entrained:
            raise complain("wet = true says that the inertia holds its water already", "one of the two", "entrained")
        return self


class SpringRow(ToleratedRow):
    """A spring between two stations: damping words shared by shafts and couplings."""

    between: Between
    referred_to: Name | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None
    inertia_tolerance: ToleranceField | None = None


class PieceRow(Row):
    """One length of a shaft given by its geometry."""

    od: Diameters
    id: Bores | None = None
    length: LengthOrZero
    hub: HubLengths | None = None
    hub_rule: Share | None = None
    fillet: Length | None = None

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        if min(self.od) <= 0:
            raise complain("must be above zero at both ends", None, "od")
        if self.id is not None and any(bore >= outer for bore, outer in zip(self.id, self.od, strict=True)):
            raise complain("must stay below od at both ends", None, "id")
        if self.length <= 0 and self.hub is None:
            raise complain("must be above zero, unless the piece is all in a hub", None, "length")
        return self


class EquivalentRow(Row):
    """A plain round bar of the same stiffness."""

    length: Length
    diameter: Length


class ShaftRow(SpringRow):
    """[shafts]: stiffness | flexibility | equivalent | pieces."""

    stiffness: Stiffness | None = None
    flexibility: Flexibility | None = None
    equivalent: EquivalentRow | None = None
    pieces: Annotated[list[PieceRow], Field(min_length=1, max_length=200)] | None = None
    material: Name | None = None
    own_inertia: Literal["ends", "none"] | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        _exactly_one(self, ("stiffness", "flexibility", "equivalent", "pieces"))
        _loss_factor(self)
        if self.pieces is None and self.own_inertia == "ends":
            raise complain("needs the geometry", "pieces, or leave this key out", "own-inertia")
        return self


CouplingKind = Literal["elastomer", "disc", "diaphragm", "gear", "steel-spring", "grid"]


class CouplingRow(SpringRow):
    """[couplings]: stiffness | flexibility."""

    kind: CouplingKind | None = None
    stiffness: StiffnessTable | None = None
    flexibility: Flexibility | None = None
    half_inertias: HalfInertias | None = None
    shaft_in_hub: Literal["included", "excluded"] | None = None
    rated_torque: Torque | None = None
    temperature: FactorTable | None = None
    damping_temperature: FactorTable | None = None
    operating_temperature: TemperaturePair | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        _exactly_one(self, ("stiffness", "flexibility"))
        _loss_factor(self)
        if self.damping_temperature is not None and self.psi is None and self.loss_factor is None:
            raise complain("damping-temperature needs psi or loss-factor to multiply")
        if self.operating_temperature is not None:
            if self.temperature is None:
                raise complain("operating-temperature needs the temperature table that it is read in")
            if self.operating_temperature[0] >= self.operating_temperature[1]:
                raise complain("operating-temperature wants the cold value first, then the hot one")
        return self


class GearRow(ToleratedRow):
    """[gears]: two wheels in mesh."""

    kind: Literal["mesh"] = "mesh"
    between: Between
    teeth: Annotated[list[Teeth], Field(min_length=2, max_length=2)]
    internal: StrictBool = False
    module: Length | None = None
    helix: Angle | None = None
    pressure_angle: Angle | None = None
    face: Length | None = None
    mesh_stiffness: MeshStiffness | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None

    @model_validator(mode="after")
    def _damping(self) -> Self:
        _loss_factor(self)
        return self


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


class EpicyclicRow(ToleratedRow):
    """[gears] kind = "epicyclic": each member is a station or "fixed"."""

    kind: Literal["epicyclic"]
    sun: Name
    ring: Name
    carrier: Name
    teeth: EpicyclicTeethRow
    planets: Annotated[StrictInt, Field(ge=1, le=20)]
    mesh_stiffness: Stiffness | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None

    @model_validator(mode="after")
    def _members(self) -> Self:
        _loss_factor(self)
        names = [self.sun, self.ring, self.carrier]
        if names.count("fixed") > 1:
            raise complain("at most one of sun, ring and carrier can be fixed")
        if len(set(names)) < 3:
            raise complain("sun, ring and carrier must be three different members")
        return self


class TieRow(ToleratedRow):
    """[ties]: a spring to ground."""

    at: Name
    stiffness: Stiffness
    psi: Ratio | None = None
    loss_factor: Ratio | None = None

    @model_validator(mode="after")
    def _damping(self) -> Self:
        _loss_factor(self)
        return self


class MaterialRow(ElementRow):
    """[materials]: a material of the user's own."""

    shear_modulus: Modulus
    density: Density
    tensile: Stress | None = None


class ExcitationRow(ElementRow):
    """[excitations]: order, frequency, or both."""

    at: Name
    order: Annotated[float, Field(ge=-1000, le=1000, allow_inf_nan=False, strict=True)] | None = None
    frequency: SignedFrequency | None = None
    torque: ExcitationTorque | None = None
    when: Literal["continuous", "start", "fault"] = "continuous"

    @model_validator(mode="after")
    def _line(self) -> Self:
        if not self.order and not self.frequency:
            raise complain("give order, frequency, or both, other than zero")
        return self


class DismissalRow(Row):
    """[dismissals]: an interference an engineer accepts."""

    source: Name
    mode: Count
    frequency: Frequency
    because: Annotated[Text, Field(min_length=3)]
    by: Annotated[Text, Field(min_length=1)]
    cases: list[Name] = []
