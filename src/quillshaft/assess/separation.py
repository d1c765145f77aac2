"""Separation of natural frequencies from sources over the judged range: margins and verdicts."""

from __future__ import annotations

import math
from collections.abc import Sequence

from quillshaft.assess.results import EQUAL, Verdict
from quillshaft.records import dataclass
from quillshaft.sources.line import Source, frequencies_over, meeting_speeds, slope
from quillshaft.train.basic_model import Range
from quillshaft.train.model import Criteria, Operation

RPM = 30.0 / math.pi


@dataclass(frozen=True)
class JudgedRange:
    """A stretch of speed [rad/s] that is judged as one: free, or inside a declared barred range."""

    low_rad_s: float
    high_rad_s: float
    barred: bool


@dataclass(frozen=True)
class Separation:
    """The smallest margin (signed), where it is found [rad/s], and what it means."""

    margin: float
    at_rad_s: float
    verdict: Verdict


def judged_ranges(operation: Operation) -> tuple[JudgedRange, ...]:
    """The running ranges cut at the barred ones; the edges of a barred range are running speeds."""
    out = []
    ends = {high for _, high in operation.barred_rad_s}
    for low, high in operation.ranges_rad_s:
        edge = low
        for barred_low, barred_high in operation.barred_rad_s:
            start, end = max(barred_low, edge), min(barred_high, high)
            if start >= end:
                continue
            if start > edge or barred_low == edge == low:
                out.append(JudgedRange(edge, start, False))
            out.append(JudgedRange(start, end, True))
            edge = end
        if edge < high or edge == low or edge in ends:
            out.append(JudgedRange(edge, high, False))
    return tuple(out)


def _margin(natural: Range, band: Range, margin_on: str) -> float:
    """Smallest signed margin between two closed bands [Hz]; 0 where they overlap or touch within rounding."""
    if natural[1] < band[0]:
        gap, source, own = natural[1] - band[0], band[0], natural[1]
    elif natural[0] > band[1]:
        gap, source, own = natural[0] - band[1], band[1], natural[0]
    else:
        return 0.0
    below = source if margin_on == "excitation" else own
    margin = gap / below if below > 0 else math.inf
    return 0.0 if abs(margin) <= EQUAL else margin


def _nearest_speed(source: Source, stretch: JudgedRange, natural_hz: float) -> float:
    """Speed [rad/s] in a stretch at which the source's line is nearest a natural frequency."""
    inside = [speed for speed in meeting_speeds(source, natural_hz) if stretch.low_rad_s <= speed <= stretch.high_rad_s]
    if inside:
        return inside[0]
    low = sum(frequencies_over(source, stretch.low_rad_s, stretch.low_rad_s)) / 2.0
    high = sum(frequencies_over(source, stretch.high_rad_s, stretch.high_rad_s)) / 2.0
    return stretch.low_rad_s if abs(low - natural_hz) <= abs(high - natural_hz) else stretch.high_rad_s


def separate(
    source: Source, natural_hz: Range, ranges: tuple[JudgedRange, ...], required: float, margin_on: str
) -> Separation:
    """Judge a source against a band of natural frequency [Hz] over all judged ranges.

    Crossing: they meet in a free stretch. Barred: only inside a barred one. Close: the margin is below the
    required one. The margin is (f natural − f source) over f source, or over f natural.
    """
    best = Separation(math.inf, ranges[0].low_rad_s, "clear")
    meets_free = meets_barred = False
    middle = (natural_hz[0] + natural_hz[1]) / 2.0
    for stretch in ranges:
        band = frequencies_over(source, stretch.low_rad_s, stretch.high_rad_s)
        margin = _margin(natural_hz, band, margin_on)
        first_free = margin == 0.0 and not stretch.barred and not meets_free
        if first_free or abs(margin) < abs(best.margin):
            best = Separation(margin, _nearest_speed(source, stretch, middle), "clear")
        meets_free |= margin == 0.0 and not stretch.barred
        meets_barred |= margin == 0.0 and stretch.barred
    return judged(best, meets_free, meets_barred, required)


def judged(best: Separation, meets_free: bool, meets_barred: bool, required: float) -> Separation:
    """The smallest margin with its verdict: where they meet decides, else whether the margin suffices."""
    verdict: Verdict = "clear"
    if meets_free:
        verdict = "crossing"
    elif meets_barred:
        verdict = "barred"
    elif abs(best.margin) < required - EQUAL:
        verdict = "close"
    return Separation(best.margin, best.at_rad_s, verdict)


def required_separation(source: Source, table: dict[str, float]) -> float:
    """Required share: the most specific entry for each origin, the largest over merged origins."""
    return max(next(table[label] for label in (*chain, "default") if label in table) for chain in source.labels)


def kept_free(band_hz: Range, required: float, margin_on: str) -> Range:
    """The band [Hz] that natural frequencies must stay out of: a source's own, with the required share beside it.

    f (1 − m) to f (1 + m) where the margin is on the source, f / (1 + m) to f / (1 − m) where it is on the
    natural frequency.
    """
    low, high = band_hz
    if margin_on == "excitation":
        return low * (1.0 - required), high * (1.0 + required)
    return low / (1.0 + required), high / (1.0 - required)


def highest_frequency(sources: tuple[Source, ...], operation: Operation, criteria: Criteria) -> float:
    """Frequency [Hz] up to which modes are judged: the highest continuous source, its margin included."""
    tops = [0.0]
    for source in sources:
        if source.when != "continuous":
            continue
        required = max(
            required_separation(source, criteria.separation), required_separation(source, criteria.worst_case)
        )
        highest = max(frequencies_over(source, low, high)[1] for low, high in operation.ranges_rad_s)
        tops.append(kept_free((highest, highest), required, criteria.margin_on)[1])
    return max(tops)


def critical_speeds(
    source: Source, frequency_hz: float, operation: Operation
) -> tuple[tuple[float, ...], float | None]:
    """All speeds [rpm] where mode and source meet, and the one in range nearest rated, else nearest it.

    A source that does not follow speed has none.
    """
    speeds = meeting_speeds(source, frequency_hz)
    if not speeds:
        return (), None

    return in_rpm(speeds, operation)


def in_rpm(speeds_rad_s: Sequence[float], operation: Operation) -> tuple[tuple[float, ...], float]:
    """Speeds in rpm, and the one in range nearest rated, else nearest the range."""

    def outside(speed: float) -> float:
        return min(
            0.0 if low <= speed <= high else min(abs(speed - low), abs(speed - high))
            for low, high in operation.ranges_rad_s
        )

    chosen = min(speeds_rad_s, key=lambda speed: (outside(speed), abs(speed - operation.rated_rad_s)))
    return tuple(speed * RPM for speed in speeds_rad_s), chosen * RPM


def bar_needed(
    source: Source, natural_hz: Range, required: float, margin_on: str, inside_rad_s: float
) -> tuple[float, float] | None:
    """Speeds [rpm] about `inside_rad_s` between which the source is nearer than required; None if it is constant.

    The nearest frequencies allowed: f (1 − m) and f (1 + m) of the source where the margin is on the natural
    frequency, f / (1 + m) and f / (1 − m) where it is on the source.
    """
    rise = slope(source)
    if rise == 0.0:
        return None
    if margin_on == "excitation":
        wanted = (natural_hz[0] / (1.0 + required), natural_hz[1] / (1.0 - required))
    else:
        wanted = (natural_hz[0] * (1.0 - required), natural_hz[1] * (1.0 + required))
    sign = math.copysign(1.0, rise * inside_rad_s + source.frequency_hz)
    speeds = sorted((sign * frequency - source.frequency_hz) / rise for frequency in wanted)
    return max(speeds[0], 0.0) * RPM, speeds[1] * RPM
