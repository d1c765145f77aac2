"""The plain tables of the train file (no named rows): train, operation, power, criteria and the like."""

from typing import Annotated, Literal, Self

from pydantic import Field, model_validator

from quillshaft.train.duty_rows import DutyTable, StrengthTable
from quillshaft.train.fields import (
    Date,
    Line,
    Name,
    Ranges,
    SeparationField,
    Share,
    SignedSpeed,
    Speed,
    SpeedRate,
    Text,
    complain,
)
from quillshaft.train.rows import Row

WORST_TACHOMETER = 0.2


MOST_ZETA = 0.2


class TrainTable(Row):
    """[train]: identification and what bare numbers mean."""

    title: Annotated[Line, Field(min_length=1)]
    tag: Line | None = None
    units: Literal["SI", "US"]


class OperationTable(Row):
    """[operation]: the operating map; speeds are those of `speed-at`."""

    speed_at: Name
    rated: Speed
    range: Ranges | None = None
    idle: Speed | None = None
    trip: Speed | None = None
    barred: Ranges | None = None
    barred_because: Text | None = None
    speed_band: Share | None = None
    supply_band: Share | None = None
    tachometer: Share | None = None
    ramp: SpeedRate | None = None
    light_load: Share | None = None
    speeds: Annotated[dict[Name, SignedSpeed], Field(default_factory=dict)]

    @model_validator(mode="after")
    def _order(self) -> Self:
        if self.rated <= 0:
            raise complain("must be above zero", 'a speed, such as "1487 rpm"', "rated")
        top = max(high for _, high in self.range) if self.range else self.rated
        if self.trip is not None and self.trip < max(top, self.rated) * (1 - 1e-9):
            raise complain("lies below the rated speed or the top of the range", "a higher speed", "trip")
        if self.idle is not None and self.idle > max(top, self.rated) * (1 + 1e-9):
            raise complain("lies above the rated speed and the range", "a speed below them, or in the range", "idle")
        if self.barred is not None and not self.barred_because:
            why = "a barred range needs a reason"
            raise complain(why, 'barred-because = "who holds the train out of it, and why"', "barred")
        for band, key in ((self.speed_band, "speed-band"), (self.supply_band, "supply-band")):
            if band is not None and band >= 0.5:
                raise complain(f"{band:.0%} is no band about a speed", "a share well below 50 %", key)
        if self.tachometer is not None and self.tachometer >= WORST_TACHOMETER:
            allowed = f"0 % up to below {WORST_TACHOMETER:.0%}, such as 2 %"
            raise complain("is no error that a tachometer may have", allowed, "tachometer")
        if self.light_load is not None and not 0 < self.light_load < 1:
            raise complain("is no light load", "above 0 % and below 100 % of full load", "light-load")
        return self


class AssumptionsTable(Row):
    """[assumptions]: where a default of the tool may be set for the whole train."""

    tolerances: Literal["default", "none"] | None = None
    own_inertia: Literal["ends", "none", "distributed"] | None = None
    hub_rule: Share | None = None
    zeta: Annotated[list[Share], Field(min_length=2, max_length=2)] | None = None
    amplitudes: Literal["none", "ordinary"] | None = None

    @model_validator(mode="after")
    def _rising(self) -> Self:
        if self.zeta is not None and self.zeta[1] > MOST_ZETA:
            raise complain(
                "is no damping of steel and rubber", "damping ratios up to 20 %, ordinary 0.5 to 4 %", "zeta"
            )
        if self.zeta is not None and not 0 < self.zeta[0] <= self.zeta[1]:
            raise complain("the two values do not rise from above zero", '["1 %", "2 %"]', "zeta")
        return self


class CriteriaTable(Row):
    """[criteria]: required separation, one share or a share per kind of source; strength and duty."""

    separation: SeparationField | None = None
    worst_case_separation: SeparationField | None = None
    margin_on: Literal["excitation", "natural"] | None = None
    strength: StrengthTable | None = None
    duty: DutyTable | None = None


class RevisionRow(Row):
    """One line of the history."""

    revision: Line
    date: Date
    what: Text
    by: Line | None = None


class SignOffTable(Row):
    """[sign-off]: what the report is called and who signs it."""

    document: Line | None = None
    revision: Line | None = None
    date: Date | None = None
    status: Literal["draft", "checked", "issued"] = "draft"
    prepared: Line | None = None
    checked: Line | None = None
    approved: Line | None = None
    client: Line | None = None
    history: Annotated[list[RevisionRow], Field(max_length=100, default_factory=list)]
