"""The bands of frequency in which a natural frequency is not clear of a source."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from quillshaft.assess.results import EQUAL, Interference, Screening
from quillshaft.assess.separation import RPM, JudgedRange, judged_ranges, kept_free
from quillshaft.sources.line import Source, frequencies_over
from quillshaft.train.basic_model import Range


@dataclass(frozen=True)
class SourceBand:
    """A source over one judged stretch of speed [Hz].

    meets       lowest and highest frequency of the source itself
    not_clear   the same with the required separation on both sides
    barred      the stretch lies inside a declared barred range
    """

    meets: Range
    not_clear: Range
    barred: bool


@dataclass(frozen=True)
class Along:
    """A mode that follows speed: its nominal frequency at each speed [rad/s], rising, over that at rated speed."""

    speed_rad_s: tuple[float, ...]
    ratio: tuple[float, ...]


def source_bands(
    source: Source,
    ranges: tuple[JudgedRange, ...],
    required: float,
    margin_on: str,
    equal: float = EQUAL,
    along: Along | None = None,
) -> tuple[SourceBand, ...]:
    """The bands of a source, one for each judged stretch: inside `not_clear` a verdict is not "clear".

    `equal` is the relative difference below which a margin counts as 0, or as the required one. With `along`, the
    bands hold for the mode's frequency at rated speed, whose frequency at other speeds keeps its ratio to it.
    """
    share = max(required - equal, equal)
    bands = []
    for stretch in ranges:
        if along is None:
            low, high = frequencies_over(source, stretch.low_rad_s, stretch.high_rad_s)
        else:
            low, high = _over_speeds(source, stretch, along)
        bands.append(SourceBand((low, high), kept_free((low, high), share, margin_on), stretch.barred))
    return tuple(bands)


def _over_speeds(source: Source, stretch: JudgedRange, along: Along) -> tuple[float, float]:
    """Lowest and highest frequency [Hz] that a source has in a stretch, each over the mode's ratio there."""
    inside = [speed for speed in along.speed_rad_s if stretch.low_rad_s < speed < stretch.high_rad_s]
    speeds = [stretch.low_rad_s, *inside, stretch.high_rad_s]
    ratios = np.interp(speeds, along.speed_rad_s, along.ratio).tolist()
    ends = [frequencies_over(source, speed, speed) for speed in speeds]
    low = min(end[0] / ratio for end, ratio in zip(ends, ratios, strict=True))
    return low, max(end[1] / ratio for end, ratio in zip(ends, ratios, strict=True))


def pair_bands(screening: Screening, pair: Interference) -> tuple[SourceBand, ...]:
    """The bands of a judged pair, with the separation required over the tolerances."""
    train, mode = screening.train, screening.mode(pair.mode)
    along = None
    if mode.frequency_along:
        speeds = tuple(row[0] / RPM for row in mode.frequency_along)
        along = Along(speeds, tuple(row[1] / mode.frequency_hz for row in mode.frequency_along))
    return source_bands(
        screening.source(pair.source),
        judged_ranges(train.operation),
        pair.worst_required,
        train.criteria.margin_on,
        along=along,
    )
