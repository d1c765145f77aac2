"""Field types of the train file's rows: quantities, pairs, ranges and tolerances, read into SI floats.

The validation context is `{"system": "SI" | "US", "notes": list[tuple[str, str]]}`; readings that need saying
(lb read as lbf) are appended to `notes` with the key they belong to.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Annotated, Any

from pydantic import AfterValidator, BeforeValidator, Field, StrictInt, ValidationInfo
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from quillshaft.records import dataclass
from quillshaft.train.measures import MEASURES
from quillshaft.train.problems import shown
from quillshaft.train.quantity import (
    QuantityError,
    measure_help,
    read_quantity,
    read_tolerance,
    which_measure,
)

LEAST_LENGTH_M = 1e-4
NUMBER_OR_TEXT: dict[str, Any] = {"anyOf": [{"type": "string"}, {"type": "number"}]}


def complain(message: str, allowed: str | None = None, key: str | None = None) -> PydanticCustomError:
    """A validation error in our words, about one `key` of the table where that is known."""
    return PydanticCustomError("train_file", "{message}", {"message": message, "allowed": allowed, "key": key})


def printable(text: str) -> str:
    """The text as it is. Raises PydanticCustomError where it holds characters that do not print."""
    bad = next((letter for letter in text if not letter.isprintable() and letter not in "\n\t"), None)
    if bad is not None:
        raise complain(f"holds a character that does not print (U+{ord(bad):04X})", "text that prints")
    return text


def one_line(text: str) -> str:
    """The text as it is. Raises PydanticCustomError where it runs over lines or holds what does not print."""
    if "\n" in text or "\t" in text:
        raise complain("holds a line end or a tab", "text on one line")
    return printable(text)


def kebab(name: str) -> str:
    """A field's name as the file spells it; an underscore at its end only keeps it apart from Python's words."""
    return name.rstrip("_").replace("_", "-")


def quantity_of(value: object, measure: str, info: ValidationInfo) -> float:
    """`value` read as a quantity in SI. Raises PydanticCustomError with the reason."""
    context: dict[str, Any] = info.context or {"system": "SI", "notes": []}
    try:
        reading = read_quantity(value, measure, context["system"])
    except QuantityError as error:
        raise complain(error.message, error.allowed) from None
    if reading.note:
        context["notes"].append((kebab(info.field_name or ""), f"{value}: {reading.note}"))
    return reading.value


@dataclass(frozen=True)
class Measured:
    """A quantity of a measure: above `low`, or at least `low` where `closed`; its size is 0 or at least `least`.

    `least`, in the SI unit, is far below any part of a drivetrain: it keeps slips of the unit and numbers that
    arithmetic cannot hold from being screened.
    """

    measure: str
    low: float = 0.0
    closed: bool = False
    least: float = 1e-12

    def read(self, value: object, info: ValidationInfo) -> float:
        """The SI value. Raises PydanticCustomError when it is no such quantity or too low."""
        number = quantity_of(value, self.measure, info)
        if number < self.low or (number == self.low and not self.closed):
            raise complain(f"must be {'at least' if self.closed else 'above'} {self.low:g}")
        if 0 < abs(number) < self.least:
            zero = "0 or " if self.closed else ""
            least = f"{self.least:g} {MEASURES[self.measure].si_unit}"
            raise complain("is smaller than any part of a train", f"{zero}{least} and more")
        return number

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        return {**NUMBER_OR_TEXT, "description": measure_help(self.measure, "SI")}


@dataclass(frozen=True)
class MeasuredPair:
    """A list of two quantities; where `alone`, one value stands for both."""

    item: Measured
    alone: bool = True

    def read(self, value: object, info: ValidationInfo) -> tuple[float, float]:
        """The two SI values. Raises PydanticCustomError when there are not two."""
        if not isinstance(value, list) and self.alone:
            value = [value, value]
        if not isinstance(value, list) or len(value) != 2:
            wanted = "one value, or a list of two" if self.alone else "a list of two values"
            raise complain(f"has {len(value)} members" if isinstance(value, list) else "is not a list", wanted)
        return self.item.read(value[0], info), self.item.read(value[1], info)

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        one = {**NUMBER_OR_TEXT, "description": measure_help(self.item.measure, "SI")}
        two = {"type": "array", "items": one, "minItems": 2, "maxItems": 2}
        return {"anyOf": [one, two]} if self.alone else two


@dataclass(frozen=True)
class AnyMeasure:
    """A quantity with its unit, of whichever of several measures the unit belongs to: above 0, or 0 where `closed`."""

    measures: tuple[str, ...]
    closed: bool = False

    def read(self, value: object, info: ValidationInfo) -> tuple[str, float]:
        """(measure, SI value). Raises PydanticCustomError when it is of none of them, or bare."""
        if not isinstance(value, str):
            raise complain("is not a text with a number and its unit", self.help)
        measure = which_measure(value, self.measures)
        if measure is None:
            raise complain(self._why(value), self.help)
        number = quantity_of(value, measure, info)
        if number < 0 or (number == 0 and not self.closed):
            raise complain(f"must be {'at least' if self.closed else 'above'} 0")
        return measure, number

    @property
    def help(self) -> str:
        """What may stand here: an example of every measure."""
        return " or ".join(f'"{MEASURES[name].example_si}" ({name.replace("_", " ")})' for name in self.measures)

    def _why(self, value: str) -> str:
        """What is wrong with the number, where that is the same for every measure; else the unit is."""
        reasons = set()
        for measure in self.measures:
            try:
                read_quantity(value, measure, "SI")
            except QuantityError as error:
                reasons.add(error.message)
        return reasons.pop() if len(reasons) == 1 else "is a quantity of another kind, or has no unit"

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        return {"type": "string", "description": self.help}


@dataclass(frozen=True)
class Separation:
    """Required separation: one share for all, or a table of shares per kind of source."""

    def read(self, value: object, info: ValidationInfo) -> dict[str, float]:
        """Share by kind; one share alone is {"default": share}. Raises PydanticCustomError otherwise."""
        table = value if isinstance(value, dict) else {"default": value}
        if not table:
            raise complain("is an empty table", '{ default = "10 %", engine = "5 %" }')
        return {str(kind): self._share(kind if table is value else None, share, info) for kind, share in table.items()}

    @staticmethod
    def _share(kind: str | None, value: object, info: ValidationInfo) -> float:
        try:
            share = quantity_of(value, "share", info)
        except PydanticCustomError as error:
            context = error.context or {}
            raise complain(context["message"], context["allowed"], kind) from None
        if share >= 1:
            raise complain(f"a separation of {share:.0%} is out of range", "0 % up to below 100 %", kind)
        return share

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        table = {"type": "object", "additionalProperties": NUMBER_OR_TEXT}
        return {"anyOf": [*NUMBER_OR_TEXT["anyOf"], table], "description": "a share, or shares per kind"}


@dataclass(frozen=True)
class MeasuredTable:
    """A table { "argument" = value, … }: at least two points, read into (argument, value) pairs rising.

    `alone` says that one value without a table is allowed: it becomes a table of one point at argument 0.
    """

    argument: str
    value: Measured
    alone: bool = False

    def read(self, value: object, info: ValidationInfo) -> tuple[tuple[float, float], ...]:
        """(argument, value) pairs in SI. Raises PydanticCustomError when it is no such table."""
        if not isinstance(value, dict):
            if self.alone:
                return ((0.0, self.value.read(value, info)),)
            raise complain("a table is wanted", '{ "30 degC" = 1.0, "60 degC" = 0.83 }')
        points = sorted(
            (quantity_of(argument, self.argument, info), self.value.read(item, info))
            for argument, item in value.items()
        )
        if len(points) < 2:
            raise complain("a table of one point says nothing about the rest", "two points or more")
        for (low, _), (high, _) in pairwise(points):
            if high <= low:
                raise complain("two points of this table have the same argument")
        return tuple(points)

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        described = f"{measure_help(self.argument, 'SI')} = {measure_help(self.value.measure, 'SI')}"
        table = {"type": "object", "additionalProperties": NUMBER_OR_TEXT, "description": described}
        return {"anyOf": [*NUMBER_OR_TEXT["anyOf"], table]} if self.alone else table


@dataclass(frozen=True)
class Hubs:
    """Hub engagements of a piece [m]: one length, or a list with one for each end."""

    def read(self, value: object, info: ValidationInfo) -> tuple[float, ...]:
        """One or two SI lengths. Raises PydanticCustomError otherwise."""
        items = value if isinstance(value, list) else [value]
        if not 1 <= len(items) <= 2:
            raise complain(f"has {len(items)} members", "a hub engagement, or a list with one for each end")
        return tuple(Measured("length", least=LEAST_LENGTH_M).read(item, info) for item in items)

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        return {"anyOf": [*NUMBER_OR_TEXT["anyOf"], {"type": "array", "maxItems": 2}]}


@dataclass(frozen=True)
class SpeedRanges:
    """One range ["900 rpm", "1487 rpm"], or a list of such, read into rad/s and sorted."""

    def read(self, value: object, info: ValidationInfo) -> tuple[tuple[float, float], ...]:
        """The ranges [rad/s]. Raises PydanticCustomError when one does not rise or is not a pair."""
        if not isinstance(value, list) or not value:
            raise complain("is not a range", '["900 rpm", "1487 rpm"], or a list of such pairs')
        pairs = value if isinstance(value[0], list) else [value]
        return tuple(sorted(self._pair(pair, info) for pair in pairs))

    @staticmethod
    def _pair(pair: Any, info: ValidationInfo) -> tuple[float, float]:
        if not isinstance(pair, list) or len(pair) != 2:
            raise complain(f"{shown(pair)} is not a range", 'two speeds, for example ["900 rpm", "1487 rpm"]')
        low, high = (quantity_of(end, "speed", info) for end in pair)
        if not 0 < low < high:
            rise = f"the range {shown(pair[0])} to {shown(pair[1])} does not rise"
            raise complain(rise, "the lower speed first, above 0")
        return low, high

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        return {"type": "array", "description": '["900 rpm", "1487 rpm"], or a list of such pairs'}


@dataclass(frozen=True)
class RelativeTolerance:
    """A relative tolerance: "5 %", 0.05 or ["-5 %", "+20 %"]."""

    def read(self, value: object, _info: ValidationInfo) -> tuple[float, float]:
        """(low, high) as fractions. Raises PydanticCustomError otherwise."""
        try:
            return read_tolerance(value)
        except QuantityError as error:
            raise complain(error.message, error.allowed) from None

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, _schema: Any, _handler: Any) -> dict[str, Any]:
        two = {"type": "array", "items": NUMBER_OR_TEXT, "minItems": 2, "maxItems": 2}
        return {"anyOf": [*NUMBER_OR_TEXT["anyOf"], two], "description": '"5 %" or ["-5 %", "+20 %"]'}


def _iso(value: Any) -> Any:
    return value.isoformat() if hasattr(value, "isoformat") else value


Inertia = Annotated[float, Measured("inertia", closed=True)]
Wr2 = Annotated[float, Measured("wr2", closed=True)]
Gd2 = Annotated[float, Measured("gd2", closed=True)]
Stiffness = Annotated[float, Measured("stiffness")]
Flexibility = Annotated[float, Measured("flexibility", least=0.0)]
Torque = Annotated[float, Measured("torque")]
Length = Annotated[float, Measured("length", least=LEAST_LENGTH_M)]
LengthOrZero = Annotated[float, Measured("length", closed=True, least=LEAST_LENGTH_M)]
Angle = Annotated[float, Measured("angle", closed=True)]
SignedAngle = Annotated[float, Measured("angle", low=-1e9)]
SpeedRate = Annotated[float, Measured("speed_rate")]
SeparationField = Annotated[dict[str, float], Separation()]
SignedSpeed = Annotated[float, Measured("signed_speed", low=-1e9)]
Speed = Annotated[float, Measured("speed", closed=True)]
Frequency = Annotated[float, Measured("frequency")]
SignedFrequency = Annotated[float, Measured("signed_frequency", low=-1e9)]
Mass = Annotated[float, Measured("mass")]
Heat = Annotated[float, Measured("heat")]
HeatRise = Annotated[float, Measured("temperature_rise")]
Viscous = Annotated[float, Measured("viscous")]
Synchronizing = Annotated[float, Measured("synchronizing")]
SignedViscous = Annotated[float, Measured("signed_viscous", low=-1e12, closed=True)]
Modulus = Annotated[float, Measured("modulus")]
Density = Annotated[float, Measured("density")]
Temperature = Annotated[float, Measured("temperature")]
Stress = Annotated[float, Measured("stress")]
Share = Annotated[float, Measured("share", closed=True)]
Points = tuple[tuple[float, float], ...]
StiffnessTable = Annotated[Points, MeasuredTable("torque", Measured("stiffness"), alone=True)]
FactorTable = Annotated[Points, MeasuredTable("temperature", Measured("number"))]
ModulusTable = Annotated[Points, MeasuredTable("temperature", Measured("modulus"), alone=True)]
TemperaturePair = Annotated[tuple[float, float], MeasuredPair(Measured("temperature"), alone=False)]
ExcitationTorque = Annotated[tuple[str, float], AnyMeasure(("share", "torque"))]
Amplitude = Annotated[tuple[str, float], AnyMeasure(("share", "torque"), closed=True)]
Ratio = Annotated[float, Field(gt=0, le=50, strict=True, allow_inf_nan=False)]
Diameters = Annotated[tuple[float, float], MeasuredPair(Measured("length", least=LEAST_LENGTH_M))]
Bores = Annotated[tuple[float, float], MeasuredPair(Measured("length", closed=True, least=LEAST_LENGTH_M))]
HalfInertias = Annotated[tuple[float, float], MeasuredPair(Measured("inertia", closed=True), alone=False)]
HubLengths = Annotated[tuple[float, ...], Hubs()]
Ranges = Annotated[tuple[tuple[float, float], ...], SpeedRanges()]
ToleranceField = Annotated[tuple[float, float], RelativeTolerance()]
Name = Annotated[str, Field(min_length=1, max_length=80, strict=True)]
Text = Annotated[str, Field(max_length=2000, strict=True), AfterValidator(printable)]
Line = Annotated[str, Field(max_length=200, strict=True), AfterValidator(one_line)]
Edition = Annotated[str, Field(min_length=1, max_length=200, strict=True), AfterValidator(one_line)]
Date = Annotated[str, BeforeValidator(_iso), Field(max_length=40, strict=True), AfterValidator(one_line)]
Between = Annotated[list[Name], Field(min_length=2, max_length=2)]
Teeth = Annotated[StrictInt, Field(ge=3, le=5000)]
Count = Annotated[StrictInt, Field(ge=1, le=500)]
Poles = Annotated[StrictInt, Field(ge=2, le=200, multiple_of=2)]
