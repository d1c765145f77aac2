"""[machines]: one row class for each kind of machine, chosen by `kind` before it is validated."""

from typing import Annotated, Literal, Self

from pydantic import Field, StrictBool, model_validator

from quillshaft.train.electrical_rows import BreakdownKeys, ConverterKeys, GridKeys, LoadKeys, check_resonance
from quillshaft.train.fields import Count, Frequency, Name, Poles, SignedFrequency, Torque, complain
from quillshaft.train.reciprocating_rows import ReciprocatingCompressorRow, ReciprocatingEngineRow
from quillshaft.train.rows import ElementRow


class MachineRow(ElementRow):
    """What every machine says: its kind and the station it sits at."""

    kind: str
    at: Name


class InductionMotorRow(BreakdownKeys, MachineRow):
    """An induction motor on a fixed supply."""

    kind: Literal["induction-motor"]
    poles: Poles
    supply: Frequency


class SynchronousMotorRow(GridKeys, MachineRow):
    """A synchronous motor on a fixed supply."""

    kind: Literal["synchronous-motor"]
    poles: Poles
    supply: Frequency
    start: Literal["asynchronous", "converter"] | None = None

    @model_validator(mode="after")
    def _grid(self) -> Self:
        check_resonance(self.grid_resonance, self.supply)
        return self


class ConverterFedMotorRow(ConverterKeys, MachineRow):
    """A motor fed by a frequency converter: its output frequency follows the speed."""

    kind: Literal["converter-fed-motor"]
    poles: Poles
    slip: SignedFrequency | None = None
    line_side: StrictBool = False
    supply: Frequency | None = None

    @model_validator(mode="after")
    def _line(self) -> Self:
        if self.line_side and self.supply is None:
            raise complain("needs the supply frequency", 'supply = "50 Hz"', "line-side")
        if self.interharmonics and self.supply is None:
            raise complain("needs the supply frequency", 'supply = "50 Hz"', "interharmonics")
        if self.supply is not None and not self.line_side and not self.interharmonics:
            why = "is used only with line-side = true: the shaft sees the converter's output"
            raise complain(why, "line-side = true, or no supply", "supply")
        return self


class GeneratorRow(GridKeys, MachineRow):
    """A generator; without `supply` its frequency follows its speed (island operation)."""

    kind: Literal["generator"]
    poles: Poles
    supply: Frequency | None = None
    rated_torque: Torque | None = None

    @model_validator(mode="after")
    def _grid(self) -> Self:
        check_resonance(self.grid_resonance, self.supply)
        return self


class CentrifugalPumpRow(LoadKeys, MachineRow):
    """A centrifugal pump."""

    kind: Literal["centrifugal-pump"]
    vanes: Count | None = None
    diffuser_vanes: Count | None = None


class CompressorRow(LoadKeys, MachineRow):
    """A turbo compressor or blower."""

    kind: Literal["compressor"]
    vanes: Count | None = None
    diffuser_vanes: Count | None = None


class FanRow(LoadKeys, MachineRow):
    """A fan."""

    kind: Literal["fan"]
    blades: Count | None = None


class PropellerRow(LoadKeys, MachineRow):
    """A propeller."""

    kind: Literal["propeller"]
    blades: Count | None = None


class OtherRow(LoadKeys, MachineRow):
    """Any other machine: `passes` lists its orders per turn."""

    kind: Literal["other"]
    passes: Annotated[list[Count], Field(max_length=50, default_factory=list)]


MACHINE_ROWS: dict[str, type[ElementRow]] = {
    "induction-motor": InductionMotorRow,
    "synchronous-motor": SynchronousMotorRow,
    "converter-fed-motor": ConverterFedMotorRow,
    "generator": GeneratorRow,
    "centrifugal-pump": CentrifugalPumpRow,
    "compressor": CompressorRow,
    "fan": FanRow,
    "propeller": PropellerRow,
    "reciprocating-engine": ReciprocatingEngineRow,
    "reciprocating-compressor": ReciprocatingCompressorRow,
    "other": OtherRow,
}
