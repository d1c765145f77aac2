"""[couplings] kind = "fluid": torque by a fluid alone, so no stiffness."""

from typing import Annotated, Literal, Self

from pydantic import model_validator

from quillshaft.train.fields import (
    Between,
    HalfInertias,
    Measured,
    Share,
    ToleranceField,
    Torque,
    complain,
)
from quillshaft.train.rows import ElementRow

MOST_SLIP = 0.6


class FluidCouplingRow(ElementRow):
    """A fluid coupling: it joins speeds over its slip, and separates the train torsionally."""

    kind: Literal["fluid"]
    between: Between
    slip: Share | None = None
    half_inertias: HalfInertias | None = None
    inertia_tolerance: ToleranceField | None = None
    rated_torque: Torque | None = None
    max_speed: Annotated[float, Measured("speed")] | None = None

    @model_validator(mode="after")
    def _slip(self) -> Self:
        if self.slip is not None and self.slip > MOST_SLIP:
            raise complain(f"a slip of {self.slip:.0%} is no coupling's", "0 % to 60 %, 2 to 4 % at rated load", "slip")
        return self
