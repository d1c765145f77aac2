"""Numbers of the interference diagram: source lines over speed, frequency bands, and where pairs stand."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from quillshaft.assess.results import Interference, ModeResult, Screening, Verdict
from quillshaft.sources.line import Source, frequencies_over, slope

RPM = 30.0 / math.pi
_SAME = 1e-9


@dataclass(frozen=True)
class SourceLine:
    """One line of the diagram, for all sources that share it.

    names      the sources on it, in file order
    kind       order (follows speed), fixed (constant frequency) or mixed (both)
    rpm        corners of the line, rising speed of `speed-at` [rpm]
    nominal_hz, low_hz, high_hz   frequency at each corner, nominal and over the supply's variation
    minor      an engine order whose pulses do not add up
    starting   acts only at a start or a fault; it is not judged
    pairs      the pairs with a mode that are not clear, dismissed ones included
    """

    names: tuple[str, ...]
    kind: Literal["order", "fixed", "mixed"]
    rpm: tuple[float, ...]
    nominal_hz: tuple[float, ...]
    low_hz: tuple[float, ...]
    high_hz: tuple[float, ...]
    minor: bool
    starting: bool
    pairs: tuple[Interference, ...]


@dataclass(frozen=True)
class ModeBand:
    """A natural frequency, its range over the tolerances, and the band [Hz] that sources must keep out of.

    The band to keep free is that around the nominal frequency, for the largest separation required of a pair.
    """

    mode: int
    nominal_hz: float
    low_hz: float
    high_hz: float
    free_from_hz: float
    free_to_hz: float
    required: float


@dataclass(frozen=True)
class PairMark:
    """Where a mode and the sources on one line stand in the diagram, if they are not clear.

    pair                the worst of them; `others` are the names of the other sources on the line
    rpm, frequency_hz   on the source's line, where it comes nearest to the mode in the judged range
    shape               the verdict over the tolerances; `nominal` True where the nominal verdict is as bad
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
    return tuple(_line(screening, group, top_rpm) for group in groups.values())


def _line(screening: Screening, group: list[Source], top_rpm: float) -> SourceLine:
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
        tuple(speed * RPM for speed in speeds),
        tuple(abs(rise * speed + source.frequency_hz) for speed in speeds),
        tuple(low for low, _ in edges),
        tuple(high for _, high in edges),
        all(member.major is False for member in group),
        all(member.when != "continuous" for member in group),
        tuple(pair for pair in screening.not_clear() if any(m.name == pair.source for m in group)),
    )


def mode_bands(screening: Screening) -> tuple[ModeBand, ...]:
    """A band for each judged mode, rising. Margins: assess.separation."""
    on_excitation = screening.train.criteria.margin_on == "excitation"
    bands = []
    for number in screening.judged_modes:
        mode: ModeResult = screening.mode(number)
        required = max((p.required for p in screening.interferences if p.mode == number), default=0.0)
        nominal = mode.frequency_hz
        if on_excitation:
            low, high = nominal / (1.0 + required), nominal / max(1.0 - required, _SAME)
        else:
            low, high = nominal * (1.0 - required), nominal * (1.0 + required)
        bands.append(ModeBand(number, nominal, *mode.bounds_hz, low, high, required))
    return tuple(bands)


def pair_marks(screening: Screening) -> tuple[PairMark, ...]:
    """Marks of all pairs that are not clear, the worst first; sources on the same line share a mark."""
    groups: dict[tuple[object, ...], list[Interference]] = {}
    for pair in screening.not_clear():
        line = _line_key(screening.source(pair.source))
        groups.setdefault((pair.mode, pair.dismissed is None, *line), []).append(pair)
    return tuple(_mark(screening, group) for group in groups.values())


def _line_key(source: Source) -> tuple[int, float]:
    """What sources on the same line have in common."""
    rise, fixed = slope(source), source.frequency_hz
    if rise < 0 or (rise == 0 and fixed < 0):
        rise, fixed = -rise, -fixed
    return round(rise / _SAME), round(fixed, 9)


def _mark(screening: Screening, group: list[Interference]) -> PairMark:
    pair = group[0]
    source, mode = screening.source(pair.source), screening.mode(pair.mode)
    rpm = pair.judged_at_rpm
    if pair.verdict in ("crossing", "barred") and pair.critical_speed_rpm is not None:
        rpm = pair.critical_speed_rpm
    elif not slope(source):
        rpm = _middle_rpm(screening, rpm)
    frequency = abs(slope(source) * rpm / RPM + source.frequency_hz)
    if pair.verdict in ("crossing", "barred") and pair.critical_speed_rpm is not None:
        frequency = mode.frequency_hz
    others = tuple(member.source for member in group[1:])
    return PairMark(pair, others, rpm, frequency, pair.worst_verdict, pair.verdict == pair.worst_verdict)


def _middle_rpm(screening: Screening, rpm: float) -> float:
    """Middle [rpm] of the running range that holds a speed."""
    for low, high in screening.train.operation.ranges_rad_s:
        if low * RPM - _SAME <= rpm <= high * RPM + _SAME:
            return (low + high) / 2.0 * RPM
    return rpm
