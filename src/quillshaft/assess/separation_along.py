"""Separation where natural frequencies follow speed: both sides are taken at the same speed."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.along import Track
from quillshaft.assess.separation import JudgedRange, Separation, in_rpm, judged
from quillshaft.graph.network import Floats
from quillshaft.sources.line import Source, slope
from quillshaft.train.model import Operation

SECANT_STEPS = 6


def _source_band(source: Source, speed_rad_s: Floats) -> tuple[Floats, Floats]:
    """Lowest and highest frequency [Hz] of a source at each speed, its supply's variation included."""
    edges = np.array(
        [slope(source) * speed_rad_s + source.frequency_hz * (1.0 + side * source.band) for side in (-1.0, 1.0)]
    )
    folded = np.abs(edges)
    low = np.where(edges[0] * edges[1] <= 0.0, 0.0, folded.min(axis=0))
    return low, folded.max(axis=0)


def _at(track_rad_s: Floats, values: Floats, stretch: JudgedRange) -> tuple[Floats, Floats]:
    """Speeds of a stretch, its ends included, and the track's values there."""
    inside = (track_rad_s > stretch.low_rad_s) & (track_rad_s < stretch.high_rad_s)
    speeds = np.concatenate([[stretch.low_rad_s], track_rad_s[inside], [stretch.high_rad_s]])
    return speeds, np.interp(speeds, track_rad_s, values)


def _stretch_margin(
    source: Source, track: Track, band: tuple[Floats, Floats], stretch: JudgedRange, margin_on: str
) -> tuple[float, float]:
    """Smallest signed margin over a stretch and the speed [rad/s] of it; 0 where they meet between two points."""
    speeds, low = _at(track.speed_rad_s, band[0], stretch)
    high = np.interp(speeds, track.speed_rad_s, band[1])
    source_low, source_high = _source_band(source, speeds)
    below, above = high - source_low, low - source_high
    touching = (below >= 0.0) & (above <= 0.0)
    side = np.where(touching, 0, np.where(above > 0.0, 1, -1))
    flips = np.flatnonzero(side[1:] * side[:-1] <= 0)
    if len(flips) or touching.any():
        first = int(np.argmax(touching)) if touching.any() else int(flips[0])
        return 0.0, float(speeds[first])
    gap = np.where(side > 0, above, below)
    base = np.where(side > 0, source_high, source_low)
    if margin_on == "natural":
        base = np.where(side > 0, low, high)
    margin = np.divide(gap, base, out=np.full_like(gap, math.inf), where=base > 0)
    best = int(np.argmin(np.abs(margin)))
    return float(margin[best]), float(speeds[best])


def separate_along(
    source: Source,
    track: Track,
    band: tuple[Floats, Floats],
    ranges: tuple[JudgedRange, ...],
    required: float,
    margin_on: str,
) -> Separation:
    """Judge a source against a natural frequency that follows speed: `band` is (low, high) (speeds,) [Hz].

    Between the speeds of the track both are taken as straight.
    """
    best = Separation(math.inf, ranges[0].low_rad_s, "clear")
    meets: set[bool] = set()
    for stretch in ranges:
        margin, speed = _stretch_margin(source, track, band, stretch, margin_on)
        first_free = margin == 0.0 and not stretch.barred and False not in meets
        if margin == 0.0:
            meets.add(stretch.barred)
        if first_free or abs(margin) < abs(best.margin):
            best = Separation(margin, speed, "clear")
    return judged(best, False in meets, True in meets, required)


def critical_speeds_along(
    source: Source, track: Track, column: int, operation: Operation
) -> tuple[tuple[float, ...], float | None]:
    """Speeds [rpm] where a mode that follows speed meets a source, and the one in range nearest rated, else nearest.

    Each is found between two speeds of the track and refined on exact solutions.
    """
    natural = track.nominal_hz[:, column]
    gap = natural - np.abs(slope(source) * track.speed_rad_s + source.frequency_hz)
    flips = np.flatnonzero(gap[1:] * gap[:-1] <= 0.0)
    speeds = [_refined(source, track, natural, int(position)) for position in flips]
    if not speeds:
        return (), None

    return in_rpm(speeds, operation)


def _refined(source: Source, track: Track, natural: Floats, position: int) -> float:
    """Bracketed secant steps on exact natural frequencies between two speeds of the track."""
    low, high = (float(track.speed_rad_s[position + side]) for side in (0, 1))

    def gap(speed: float) -> float:
        near = float(np.interp(speed, track.speed_rad_s, natural))
        exact = track.exact_hz(speed)
        own = exact[int(np.argmin(np.abs(exact - near)))]
        return float(own - abs(slope(source) * speed + source.frequency_hz))

    gap_low, gap_high = gap(low), gap(high)
    for _ in range(SECANT_STEPS):
        if gap_high == gap_low:
            break
        middle = low - gap_low * (high - low) / (gap_high - gap_low)
        middle = min(max(middle, low), high)
        found = gap(middle)
        if abs(found) <= 1e-12 * abs(natural[position]):
            return middle
        if found * gap_low > 0:
            low, gap_low = middle, found
        else:
            high, gap_high = middle, found
    return low if abs(gap_low) < abs(gap_high) else high
