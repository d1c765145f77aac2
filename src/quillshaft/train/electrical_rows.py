"""Keys of the train file for the electrical side of machines, shared by several kinds of machine."""

from typing import Annotated, Literal, Self

from pydantic import Field, StrictInt, model_validator

from quillshaft.train.fields import Count, ExcitationTorque, Frequency, Measured, Share, Torque, complain
from quillshaft.train.rows import Row

LoadSlope = Annotated[float, Measured("viscous", closed=True)]
Multiple = Annotated[StrictInt, Field(ge=0, le=500)]
SWITCHING_HZ = (100.0, 100e3)
BANDWIDTH_HZ = 1000.0


class InterharmonicRow(Row):
    """|line · f_line ± out · f_out|: one pair of multiples of the two frequencies."""

    line: Multiple
    out: Multiple

    @model_validator(mode="after")
    def _some(self) -> Self:
        if not self.line and not self.out:
            raise complain("both multiples are 0", "{ line = 6, out = 6 }")
        return self


class ConverterKeys(Row):
    """What a frequency converter puts on the shaft."""

    pulse: Literal[6, 12, 24] | None = None
    harmonics: Count | None = None
    switching: Frequency | None = None
    interharmonics: Annotated[list[InterharmonicRow], Field(max_length=50, default_factory=list)]
    control_bandwidth: Frequency | None = None

    @model_validator(mode="after")
    def _plausible(self) -> Self:
        if self.harmonics is not None and self.harmonics < (self.pulse or 6):
            least = self.pulse or 6
            raise complain("is below the first harmonic of the bridge", f"{least} and more, such as 24", "harmonics")
        low, high = SWITCHING_HZ
        if self.switching is not None and not low <= self.switching <= high:
            raise complain("is no converter's carrier frequency", "100 Hz to 100 kHz", "switching")
        if self.control_bandwidth is not None and self.control_bandwidth > BANDWIDTH_HZ:
            raise complain("is above any drive's control bandwidth", "up to 1 kHz", "control-bandwidth")
        return self


class GridKeys(Row):
    """A machine on a network with an electrical resonance of its own."""

    grid_resonance: Frequency | None = None


def check_resonance(resonance_hz: float | None, supply_hz: float | None) -> None:
    """A network's resonance needs a supply, and lies below its frequency. Raises PydanticCustomError where not."""
    if resonance_hz is None:
        return
    if supply_hz is None:
        raise complain("needs the supply frequency", 'supply = "50 Hz"', "grid-resonance")
    if resonance_hz >= supply_hz:
        raise complain("is not below the supply frequency", f"up to {supply_hz:g} Hz", "grid-resonance")


class BreakdownKeys(Row):
    """The torque-speed curve of an induction motor about its rated point."""

    breakdown_torque: ExcitationTorque | None = None
    breakdown_slip: Share | None = None
    rated_torque: Torque | None = None

    @model_validator(mode="after")
    def _curve(self) -> Self:
        if self.breakdown_torque is None and self.breakdown_slip is not None:
            raise complain("needs the breakdown torque too", 'breakdown-torque = "250 %"', "breakdown-slip")
        if self.breakdown_slip is not None and not 0.002 <= self.breakdown_slip <= 1.0:
            raise complain("is no breakdown slip", "0.2 % to 100 %; ordinary motors have 3 % to 20 %", "breakdown-slip")
        measure, value = self.breakdown_torque or ("", 0.0)
        if measure == "share" and not 1.1 <= value <= 6.0:
            allowed = "110 % to 600 % of rated torque; ordinary motors have 180 % to 350 %"
            raise complain("is no breakdown torque", allowed, "breakdown-torque")
        if self.rated_torque is not None and self.rated_torque <= 0:
            raise complain("must be above 0", None, "rated-torque")
        return self


class LoadKeys(Row):
    """How the torque of a load rises with its speed."""

    load_slope: LoadSlope | None = None
