"""[machines] rows of reciprocating engines and compressors: cylinders, slider-crank, gas."""

from typing import Annotated, Any, Literal, Self

from pydantic import AfterValidator, Field, StrictBool, ValidationInfo, model_validator

from quillshaft.records import dataclass
from quillshaft.train.fields import Angle, Count, Measured, Name, complain, one_line, quantity_of
from quillshaft.train.rows import ElementRow, Row


@dataclass(frozen=True)
class Ordinary(Measured):
    """A quantity within the range that machines built have; `words` says it with units."""

    high: float = 1e12
    words: str = ""

    def read(self, value: object, info: ValidationInfo) -> float:
        """The SI value. Raises PydanticCustomError when it is no such quantity or out of the ordinary range."""
        number = quantity_of(value, self.measure, info)
        if not self.low <= number <= self.high:
            raise complain("is out of the range of machines built", self.words)
        return number


Bore = Annotated[float, Ordinary("length", 0.02, True, high=2.0, words="20 mm to 2 m")]
Stroke = Annotated[float, Ordinary("length", 0.02, True, high=4.0, words="20 mm to 4 m")]
Rod = Annotated[float, Ordinary("length", 0.03, True, high=8.0, words="30 mm to 8 m, between the eyes")]
MovingMass = Annotated[float, Ordinary("mass", 0.02, True, high=2e4, words="0.02 kg to 20 t per cylinder")]
MeanPressure = Annotated[float, Ordinary("pressure", 1e4, True, high=5e6, words="0.1 to 50 bar")]
PeakPressure = Annotated[float, Ordinary("pressure", 5e5, True, high=5e7, words="5 to 500 bar")]
IntakePressure = Annotated[float, Ordinary("pressure", 2e4, True, high=1e6, words="0.2 to 10 bar absolute")]
LinePressure = Annotated[float, Ordinary("pressure", 1e3, True, high=5e8, words="0.01 bar to 5000 bar absolute")]
Clearance = Annotated[float, Ordinary("share", 0.005, True, high=3.0, words="0.5 % to 300 % of the swept volume")]
Compression = Annotated[float, Field(ge=3, le=30, strict=True, allow_inf_nan=False)]
Exponent = Annotated[float, Field(ge=1, le=1.7, strict=True, allow_inf_nan=False)]
Magnifier = Annotated[float, Field(ge=2, le=1000, strict=True, allow_inf_nan=False)]
FileName = Annotated[str, Field(min_length=1, max_length=200, strict=True), AfterValidator(one_line)]


class CylinderRow(Row):
    """One cylinder of an engine."""

    at: Name
    fires_at: Angle
    bank: Angle | None = None
    dead: StrictBool = False


class SimpleCycleRow(Row):
    """gas.cycle: a limited-pressure cycle by its three numbers."""

    compression_ratio: Compression
    imep: MeanPressure
    peak: PeakPressure
    intake: IntakePressure | None = None


class GasRow(Row):
    """gas: indicator | harmonics | cycle."""

    indicator: FileName | None = None
    dead_indicator: FileName | None = None
    pressure: Literal["absolute", "gauge"] | None = None
    harmonics: FileName | None = None
    cycle: SimpleCycleRow | None = None

    @model_validator(mode="after")
    def _one(self) -> Self:
        given = [key for key in ("indicator", "harmonics", "cycle") if getattr(self, key) is not None]
        if len(given) != 1:
            what = f"gives {' and '.join(given)}" if given else "does not say what presses on the pistons"
            raise complain(what, "one of indicator, harmonics, cycle")
        for key in ("dead_indicator", "pressure"):
            if getattr(self, key) is not None and self.indicator is None:
                raise complain("belongs to an indicator card", 'indicator = "card.csv"', key.replace("_", "-"))
        return self


def _needs(row: Any, keys: tuple[str, ...], why: str) -> None:
    for key in keys:
        if getattr(row, key) is None:
            raise complain(f"{key} is missing: {why}", f'{key} = "…"')


def _check_rod(row: Any) -> None:
    """Crank radius over rod length lies between 0.1 and 0.5 in machines built (common practice)."""
    if row.stroke is not None and row.rod is not None and not 0.1 <= 0.5 * row.stroke / row.rod <= 0.5:
        ratio = f"crank radius over rod length is {0.5 * row.stroke / row.rod:.3g}"
        raise complain(ratio, "0.1 to 0.5, ordinarily 0.2 to 0.33", "rod")


class ReciprocatingEngineRow(ElementRow):
    """A reciprocating engine by its cylinders; with slider-crank, mass and gas its torques are worked out."""

    kind: Literal["reciprocating-engine"]
    strokes: Literal[2, 4]
    cylinders: Annotated[list[CylinderRow], Field(min_length=1, max_length=64)]
    dead_cylinders: Annotated[list[Count], Field(max_length=64, default_factory=list)]
    bore: Bore | None = None
    stroke: Stroke | None = None
    rod: Rod | None = None
    reciprocating_mass: MovingMass | None = None
    gas: GasRow | None = None
    magnifier: Magnifier | None = None

    @model_validator(mode="after")
    def _complete(self) -> Self:
        _check_rod(self)
        if self.gas is not None:
            _needs(self, ("bore", "stroke", "rod"), "the gas acts on the bore, through the slider-crank")
        if self.reciprocating_mass is not None:
            _needs(self, ("stroke", "rod"), "the reciprocating mass moves on a slider-crank")
        for number in self.dead_cylinders:
            if number > len(self.cylinders):
                raise complain(f"there is no cylinder {number}", f"1 to {len(self.cylinders)}", "dead-cylinders")
        return self


class CompressorEndRow(Row):
    """One side of a compressor's piston: indicator | clearance with suction and discharge."""

    indicator: FileName | None = None
    pressure: Literal["absolute", "gauge"] | None = None
    clearance: Clearance | None = None
    suction: LinePressure | None = None
    discharge: LinePressure | None = None
    exponent: Exponent | None = None

    @model_validator(mode="after")
    def _one(self) -> Self:
        ideal = [key for key in ("clearance", "suction", "discharge", "exponent") if getattr(self, key) is not None]
        if (self.indicator is not None) == bool(ideal):
            raise complain("wants a card, or the ideal card's numbers", "indicator; or clearance, suction, discharge")
        if ideal:
            _needs(self, ("clearance", "suction", "discharge"), "the ideal card has all three")
        if self.pressure is not None and self.indicator is None:
            raise complain("belongs to an indicator card", 'indicator = "card.csv"', "pressure")
        if self.suction is not None and self.discharge is not None and self.discharge <= self.suction:
            raise complain("is not above the suction pressure", "a higher pressure, absolute", "discharge")
        return self


class CompressorCylinderRow(Row):
    """One cylinder of a reciprocating compressor; `dead-centre` is the crank angle of its outer dead centre."""

    at: Name
    dead_centre: Angle
    bore: Bore | None = None
    piston_rod: Annotated[float, Ordinary("length", 0.005, True, high=0.5, words="5 mm to 500 mm")] | None = None
    reciprocating_mass: MovingMass | None = None
    head_end: CompressorEndRow | None = None
    crank_end: CompressorEndRow | None = None
    dead: StrictBool = False

    @model_validator(mode="after")
    def _complete(self) -> Self:
        if self.head_end is not None or self.crank_end is not None:
            _needs(self, ("bore",), "the gas acts on the bore")
        if self.piston_rod is not None and self.bore is not None and self.piston_rod > 0.8 * self.bore:
            raise complain("is nearly as thick as the bore", "less than 0.8 of the bore", "piston-rod")
        return self


class ReciprocatingCompressorRow(ElementRow):
    """A reciprocating compressor by its cylinders, single- or double-acting."""

    kind: Literal["reciprocating-compressor"]
    cylinders: Annotated[list[CompressorCylinderRow], Field(min_length=1, max_length=32)]
    dead_cylinders: Annotated[list[Count], Field(max_length=32, default_factory=list)]
    stroke: Stroke | None = None
    rod: Rod | None = None
    magnifier: Magnifier | None = None

    @model_validator(mode="after")
    def _complete(self) -> Self:
        _check_rod(self)
        moving = any(item.head_end or item.crank_end or item.reciprocating_mass is not None for item in self.cylinders)
        if moving:
            _needs(self, ("stroke", "rod"), "gas and mass act through the slider-crank")
        for number in self.dead_cylinders:
            if number > len(self.cylinders):
                raise complain(f"there is no cylinder {number}", f"1 to {len(self.cylinders)}", "dead-cylinders")
        return self
