"""[dampers]: one row class for each kind of damper, chosen by `kind` before it is validated."""

from typing import Annotated, Literal, Self

from pydantic import Field, model_validator

from quillshaft.train.fields import (
    Count,
    Frequency,
    Heat,
    Inertia,
    Length,
    Mass,
    Name,
    Ratio,
    Stiffness,
    ToleranceField,
    Torque,
    Viscous,
    complain,
)
from quillshaft.train.rows import ToleratedRow, one_loss_factor

DamperState = Literal["healthy", "seized", "lost", "half-damping"]


class DamperRow(ToleratedRow):
    """What every damper says: its kind, the station it sits at and the state it is in."""

    kind: str
    at: Name
    state: DamperState = "healthy"
    inertia_tolerance: ToleranceField | None = None
    viscous: Viscous | None = None
    permitted_heat: Heat | None = None
    permitted_torque: Torque | None = None

    @model_validator(mode="after")
    def _something_to_halve(self) -> Self:
        given = [getattr(self, key, None) for key in ("viscous", "psi", "loss_factor")]
        if self.state == "half-damping" and not any(given):
            raise complain("this damper states no damping to halve", 'viscous = "310 N m s/rad"', "state")
        return self


class ViscousDamperRow(DamperRow):
    """An untuned damper: a ring in a housing, joined by fluid alone."""

    kind: Literal["viscous"]
    ring_inertia: Inertia
    undamped: Literal["half", "all", "none"] | None = None

    @model_validator(mode="after")
    def _ring(self) -> Self:
        _above_zero(self.ring_inertia)
        if self.tolerance is not None:
            raise complain("has no spring to deviate", 'inertia-tolerance = "5 %" for its ring', "tolerance")
        return self


class TunedDamperRow(DamperRow):
    """A tuned damper: a ring on a spring, with or without damping."""

    kind: Literal["tuned"]
    ring_inertia: Inertia
    stiffness: Stiffness | None = None
    tuned_frequency: Frequency | None = None
    psi: Ratio | None = None
    loss_factor: Ratio | None = None

    @model_validator(mode="after")
    def _spring(self) -> Self:
        _above_zero(self.ring_inertia)
        if (self.stiffness is None) == (self.tuned_frequency is None):
            seen = "none of them" if self.stiffness is None else "both"
            raise complain(f"give exactly one of stiffness | tuned-frequency; this has {seen}")
        one_loss_factor(self)
        return self


class PendulumDamperRow(DamperRow):
    """Centrifugal pendulums: masses that swing on the rotating part, so that their frequency follows its speed."""

    kind: Literal["pendulum"]
    mass: Mass
    number: Annotated[Count, Field(le=100)]
    suspension_radius: Length
    length: Length

    @model_validator(mode="after")
    def _order(self) -> Self:
        order = (self.suspension_radius / self.length) ** 0.5
        if not 0.2 <= order <= 30.0:
            text = f"is tuned to order {order:.3g}, and pendulums are made for orders of 0.5 to 12 or so"
            raise complain(text, "length = suspension-radius / order²", "length")
        return self


def _above_zero(inertia: float) -> None:
    if inertia <= 0:
        raise complain("must be above 0", 'a ring\'s polar inertia, such as "1.9 kg m^2"', "ring-inertia")


DAMPER_ROWS: dict[str, type[DamperRow]] = {
    "viscous": ViscousDamperRow,
    "tuned": TunedDamperRow,
    "pendulum": PendulumDamperRow,
}
