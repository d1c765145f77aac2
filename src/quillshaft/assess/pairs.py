"""One source against one mode: margins, critical speeds, what a barred range leaves, verdicts."""

from __future__ import annotations

import math

from quillshaft.assess.along import Track
from quillshaft.assess.results import Interference, ModeResult
from quillshaft.assess.separation import (
    RPM,
    JudgedRange,
    Separation,
    bar_needed,
    critical_speeds,
    required_separation,
    separate,
)
from quillshaft.assess.separation_along import critical_speeds_along, separate_along
from quillshaft.records import dataclass
from quillshaft.sources.line import Source
from quillshaft.train.model import Dismissal, Operation, Train


def lowest_frequency(mode: ModeResult, operation: Operation) -> float:
    """Lowest frequency [Hz] of a mode over the tolerances and, where it follows speed, over the judged range."""
    if mode.frequency_along is None:
        return mode.bounds_hz[0]
    low, high = operation.ranges_rad_s[0][0] * RPM, operation.ranges_rad_s[-1][1] * RPM
    inside = [row[2] for row in mode.frequency_along if low * (1 - 1e-9) <= row[0] <= high * (1 + 1e-9)]
    return min(inside, default=mode.bounds_hz[0])


@dataclass(frozen=True)
class Seen:
    """A pair as judged: nominal and over the tolerances, over the free stretches alone, and where they meet."""

    nominal: Separation
    worst: Separation
    free: tuple[Separation, Separation] | None
    speeds_rpm: tuple[float, ...]
    chosen_rpm: float | None


def seen(mode: ModeResult, source: Source, train: Train, ranges: tuple[JudgedRange, ...], track: Track | None) -> Seen:
    """Judge a pair over all stretches of the range, along the speed where the mode follows it."""
    on = train.criteria.margin_on
    required = required_separation(source, train.criteria.separation)
    worst_required = required_separation(source, train.criteria.worst_case)

    def both(stretches: tuple[JudgedRange, ...]) -> tuple[Separation, Separation]:
        if track is None:
            own = (mode.frequency_hz, mode.frequency_hz)
            nominal = separate(source, own, stretches, required, on)
            return nominal, separate(source, mode.bounds_hz, stretches, worst_required, on)
        column = mode.mode - 1
        middle, low, high = (values[:, column] for values in (track.nominal_hz, track.low_hz, track.high_hz))
        nominal = separate_along(source, track, (middle, middle), stretches, required, on)
        return nominal, separate_along(source, track, (low, high), stretches, worst_required, on)

    nominal, worst = both(ranges)
    barred = "barred" in (nominal.verdict, worst.verdict)
    free = both(tuple(stretch for stretch in ranges if not stretch.barred)) if barred else None
    if track is None:
        speeds, chosen = critical_speeds(source, mode.frequency_hz, train.operation)
    else:
        speeds, chosen = critical_speeds_along(source, track, mode.mode - 1, train.operation)
    return Seen(nominal, worst, free, speeds, chosen)


def _bar(mode: ModeResult, source: Source, train: Train, how: Seen) -> tuple[float, float] | None:
    """The barred range [rpm] that nominal and worst-case requirements together ask for."""
    if mode.frequency_along is not None:
        return None
    on, inside = train.criteria.margin_on, how.nominal.at_rad_s
    required = required_separation(source, train.criteria.separation)
    worst_required = required_separation(source, train.criteria.worst_case)
    first = bar_needed(source, (mode.frequency_hz, mode.frequency_hz), required, on, inside)
    second = bar_needed(source, mode.bounds_hz, worst_required, on, inside)
    if first is None or second is None:
        return None
    return min(first[0], second[0]), max(first[1], second[1])


def _where(how: Seen, operation: Operation) -> float:
    """Speed [rpm] of the smallest margin; where they meet in range, the critical speed."""
    meets = how.nominal.margin == 0.0 and how.chosen_rpm is not None
    if meets and any(low <= (how.chosen_rpm or 0.0) / RPM <= high for low, high in operation.ranges_rad_s):
        return how.chosen_rpm or 0.0
    return how.nominal.at_rad_s * RPM


def judged_pair(
    train: Train,
    mode: ModeResult,
    source: Source,
    how: Seen,
    excitable: tuple[float, float],
    applied: tuple[Dismissal, ...],
) -> Interference:
    """The record of a judged pair; `excitable` is its excitability, nominal and the largest over the corners."""
    criteria = train.criteria
    required = required_separation(source, criteria.separation)
    worst_required = required_separation(source, criteria.worst_case)
    dismissed = next((item for item in applied if item.mode == mode.mode and source.answers_to(item.source)), None)
    own, largest = (None if math.isnan(value) else float(value) for value in excitable)
    return Interference(
        source.name,
        mode.mode,
        how.chosen_rpm,
        how.speeds_rpm,
        how.nominal.margin,
        how.worst.margin,
        _where(how, train.operation),
        required,
        worst_required,
        own,
        largest,
        how.nominal.verdict,
        how.worst.verdict,
        dismissed,
        None if how.free is None else how.free[0].margin,
        None if how.free is None else how.free[1].margin,
        None if how.free is None else _bar(mode, source, train, how),
    )
