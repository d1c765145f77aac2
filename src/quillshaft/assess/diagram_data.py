"""Numbers of the interference diagram: source lines over speed, frequency bands, and where pairs stand."""

from __future__ import annotations

import math
from typing import Literal

import numpy as np

from quillshaft.assess.results import Interference, ModeResult, Screening, Verdict, graver
from quillshaft.records import dataclass
from quillshaft.sources.line import Source, frequencies_over, slope

RPM = 30.0 / math.pi
_SAME = 1e-9


@dataclass(frozen=True)
class SourceLine:
    """One line of the diagram, for all sources that share it.

    names      the sources on it, in file order
    kind       order (follows speed), fixed (constant frequency) or mixed (both)
    running_hz lowest and highest nominal frequency over the running ranges
    rpm        corners of the line, rising speed of `speed-at` [rpm]
    nominal_hz, low_hz, high_hz   frequency at each corner, nominal and over the supply's variation
    minor      an engine order whose pulses do not add up
    starting   acts only at a start or a fault; it is not judged
    pairs      the pairs with a mode that are not clear, dismissed ones included
    """

    names: tuple[str, ...]
    kind: Literal["order", "fixed", "mixed"]
    running_hz: tuple[float, float]
    rpm: tuple[float, ...]
    nominal_hz: tuple[float, ...]
    low_hz: tuple[float, ...]
    high_hz: tuple[float, ...]
    minor: bool
    starting: bool
    pairs: tuple[Interference, ...]


@dataclass(frozen=True)
class ModeBand:
    """A natural frequency over speed, its range over the tolerances, and the band that sources must keep out of.

    nominal_hz                     at rated speed
    rpm                            speeds of `speed-at` [rpm] at which the rest is given, rising
    along_hz, low_hz, high_hz      nominal, lowest and highest frequency at each of them
    free                           for each running range: (rpm, from Hz, to Hz) rows of the band to keep free around
                                   the nominal frequency, for the largest separation required of a pair
    """

    mode: int
    nominal_hz: float
    rpm: tuple[float, ...]
    along_hz: tuple[float, ...]
    low_hz: tuple[float, ...]
    high_hz: tuple[float, ...]
    free: tuple[tuple[tuple[float, float, float], ...], ...]
    required: float

    @property
    def lowest_hz(self) -> float:
        """Lowest frequency of anything that belongs to the band."""
        return min(*self.low_hz, *(row[1] for rows in self.free for row in rows))

    @property
    def highest_hz(self) -> float:
        """Highest frequency of anything that belongs to the band."""
        return max(*self.high_hz, *(row[2] for rows in self.free for row in rows))


@dataclass(frozen=True)
class PairMark:
    """Where a mode and the sources on one line stand in the diagram, if they are not clear.

    pair                the worst of them; `others` are the names of the other sources on the line
    rpm, frequency_hz   on the source's line, where it comes nearest to the mode in the judged range
    shape               the graver of the two verdicts; `nominal` True where the nominal verdict is as bad
    """

    pair: Interference
    others: tuple[str, ...]
    rpm: float
    frequency_hz: float
    shape: Verdict
    nominal: bool


def top_speed_rpm(screening: Screening) -> float:
    """Speed of `speed-at` [rpm] up to which the diagram runs: trip, or 1.1 times the top of the range."""
    operation = screening.train.operation
    highest = max(high for _, high in operation.ranges_rad_s)
    top = max(1.1 * highest, operation.trip_rad_s or 0.0)
    return top * RPM


def source_lines(screening: Screening, top_rpm: float) -> tuple[SourceLine, ...]:
    """Lines of all sources from standstill to a speed [rpm], sources on the same line in one."""
    groups: dict[tuple[int, float], list[Source]] = {}
    for source in screening.sources:
        groups.setdefault(_line_key(source), []).append(source)
    pairs = screening.not_clear()
    return tuple(_line(screening, group, pairs, top_rpm) for group in groups.values())


def _line(screening: Screening, group: list[Source], pairs: tuple[Interference, ...], top_rpm: float) -> SourceLine:
    """The line of a group of sources; pairs are those not clear."""
    source = group[0]
    rise = slope(source)
    corners = {0.0, top_rpm / RPM}
    if rise and 0 < -source.frequency_hz / rise < top_rpm / RPM:
        corners.add(-source.frequency_hz / rise)
    speeds = sorted(corners)
    edges = [frequencies_over(source, speed, speed) for speed in speeds]
    names = tuple(name for member in group for name in member.origins)
    kind: Literal["order", "fixed", "mixed"] = "fixed" if not rise else "mixed" if source.frequency_hz else "order"
    return SourceLine(
        names,
        kind,
        _running_hz(screening, source),
        tuple(speed * RPM for speed in speeds),
        tuple(abs(rise * speed + source.frequency_hz) for speed in speeds),
        tuple(low for low, _ in edges),
        tuple(high for _, high in edges),
        all(member.major is False for member in group),
        all(member.when != "continuous" for member in group),
        tuple(pair for pair in pairs if any(m.name == pair.source for m in group)),
    )


def _running_hz(screening: Screening, source: Source) -> tuple[float, float]:
    rise, speeds = slope(source), [speed for ends in screening.train.operation.ranges_rad_s for speed in ends]
    ends = [abs(rise * speed + source.frequency_hz) for speed in speeds]
    still = -source.frequency_hz / rise if rise else -1.0
    inside = any(low <= still <= high for low, high in screening.train.operation.ranges_rad_s)
    return 0.0 if inside else min(ends), max(ends)


def mode_bands(screening: Screening, top_rpm: float) -> tuple[ModeBand, ...]:
    """A band for each judged mode, rising, up to a speed [rpm]. Margins: assess.separation."""
    return tuple(_band(screening, screening.mode(number), top_rpm) for number in screening.judged_modes)


def _band(screening: Screening, mode: ModeResult, top_rpm: float) -> ModeBand:
    required = max((p.required for p in screening.interferences if p.mode == mode.mode), default=0.0)
    level = (mode.frequency_hz, *mode.bounds_hz)
    rows = mode.frequency_along or ((0.0, *level), (top_rpm, *level))
    rpm, along, low, high = (tuple(column) for column in zip(*rows, strict=True))
    free = []
    for start, end in screening.train.operation.ranges_rad_s:
        inside = [start * RPM, *(speed for speed in rpm if _within(speed, start * RPM, end * RPM)), end * RPM]
        free.append(
            tuple((speed, *_keep_free(screening, float(np.interp(speed, rpm, along)), required)) for speed in inside)
        )
    return ModeBand(mode.mode, mode.frequency_hz, rpm, along, low, high, tuple(free), required)


def _within(speed: float, start: float, end: float) -> bool:
    """True inside a range but not at its ends, rounding apart."""
    return start * (1.0 + _SAME) < speed < end * (1.0 - _SAME)


def _keep_free(screening: Screening, nominal_hz: float, required: float) -> tuple[float, float]:
    """Lowest and highest source frequency [Hz] that is nearer than the required share to a natural one."""
    if screening.train.criteria.margin_on == "excitation":
        return nominal_hz / (1.0 + required), nominal_hz / max(1.0 - required, _SAME)
    return nominal_hz * (1.0 - required), nominal_hz * (1.0 + required)


def pair_marks(screening: Screening) -> tuple[PairMark, ...]:
    """Marks of all pairs that are not clear, the governing one first; sources on the same line share a mark."""
    leading = screening.governing()
    groups: dict[tuple[object, ...], list[Interference]] = {}
    for pair in sorted(screening.not_clear(), key=lambda pair: pair is not leading):
        line = _line_key(screening.source(pair.source))
        groups.setdefault((pair.mode, pair.dismissed is None, *line), []).append(pair)
    return tuple(_mark(screening, group) for group in groups.values())


def meeting_rpm(screening: Screening, pair: Interference) -> float | None:
    """Speed of `speed-at` [rpm] in the judged range at which a pair meets nominally; None where it follows no speed.

    Of several, one outside the barred ranges where there is one, the nearest to rated. None as well for a pair that
    does not meet.
    """
    if pair.verdict not in ("crossing", "barred") or not slope(screening.source(pair.source)):
        return None
    operation = screening.train.operation
    met = [rpm for rpm in pair.critical_speeds_rpm if _in_any(rpm, operation.ranges_rad_s)]

    def later(rpm: float) -> tuple[bool, float]:
        return _in_any(rpm, operation.barred_rad_s), abs(rpm - operation.rated_rad_s * RPM)

    return min(met, key=later, default=pair.judged_at_rpm)


def _in_any(rpm: float, ranges_rad_s: tuple[tuple[float, float], ...]) -> bool:
    return any(low * RPM * (1.0 - _SAME) <= rpm <= high * RPM * (1.0 + _SAME) for low, high in ranges_rad_s)


def _line_key(source: Source) -> tuple[int, float]:
    """What sources on the same line have in common."""
    rise, fixed = slope(source), source.frequency_hz
    if rise < 0 or (rise == 0 and fixed < 0):
        rise, fixed = -rise, -fixed
    return round(rise / _SAME), round(fixed, 9)


def _mark(screening: Screening, group: list[Interference]) -> PairMark:
    pair = group[0]
    source = screening.source(pair.source)
    met = meeting_rpm(screening, pair)
    rpm = pair.judged_at_rpm if met is None else met
    if not slope(source):
        rpm = _middle_rpm(screening, rpm)
    frequency = abs(slope(source) * rpm / RPM + source.frequency_hz)
    others = tuple(member.source for member in group[1:])
    shape = graver(pair.verdict, pair.worst_verdict)
    return PairMark(pair, others, rpm, frequency, shape, pair.verdict == shape)


def _middle_rpm(screening: Screening, rpm: float) -> float:
    """Middle [rpm] of the running range that holds a speed."""
    for low, high in screening.train.operation.ranges_rad_s:
        if low * RPM - _SAME <= rpm <= high * RPM + _SAME:
            return (low + high) / 2.0 * RPM
    return rpm
