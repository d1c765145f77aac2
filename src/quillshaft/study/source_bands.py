"""Bands of frequency that a source takes up over the running range, and what it requires to be kept free."""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.assess.results import Screening
from quillshaft.assess.separation import judged_ranges, kept_free, required_separation
from quillshaft.sources.line import Source, frequencies_over
from quillshaft.train.basic_model import Range

TOUCHING = 3e-9
"""Relative widening where no separation is required, so that a mode at the edge does not count as met."""


def forbidden_bands(screening: Screening, source: Source, required: float) -> list[Range]:
    """Stretches of frequency [Hz] too near a source over the judged ranges, rising, overlapping ones joined."""
    train = screening.train
    joined: list[Range] = []
    touch = TOUCHING if required == 0.0 else 0.0
    bands = [frequencies_over(source, s.low_rad_s, s.high_rad_s) for s in judged_ranges(train.operation)]
    for band in sorted(bands):
        low, high = kept_free(band, required, train.criteria.margin_on)
        low, high = low * (1.0 - touch), high * (1.0 + touch)
        if joined and low <= joined[-1][1]:
            low, high = joined[-1][0], max(joined.pop()[1], high)
        joined.append((low, high))
    return joined


@dataclass(frozen=True)
class ForbiddenBand:
    """One stretch that a source takes up [Hz], and the stretch to be kept free of modes nominally."""

    source: str
    low_hz: float
    high_hz: float
    free_from_hz: float
    free_to_hz: float


def named_bands(screening: Screening, names: tuple[str, ...]) -> tuple[ForbiddenBand, ...]:
    """Bands of the named continuous sources, joined where their required separations touch."""
    out = []
    for source in screening.sources:
        if source.when != "continuous" or source.name not in names:
            continue
        required = required_separation(source, screening.train.criteria.separation)
        own = forbidden_bands(screening, source, 0.0)
        for start, end in forbidden_bands(screening, source, required):
            inside = [band for band in own if start <= band[1] and band[0] <= end]
            out.append(ForbiddenBand(source.name, inside[0][0], inside[-1][1], start, end))
    return tuple(out)
