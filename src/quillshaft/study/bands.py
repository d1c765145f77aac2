"""The bands of frequency in which a natural frequency is not clear of a source."""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.assess.results import EQUAL
from quillshaft.assess.separation import JudgedRange
from quillshaft.sources.line import Source, frequencies_over
from quillshaft.train.model import Range


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


def source_bands(
    source: Source, ranges: tuple[JudgedRange, ...], required: float, margin_on: str, equal: float = EQUAL
) -> tuple[SourceBand, ...]:
    """The bands of a source, one for each judged stretch: inside `not_clear` a verdict is not "clear".

    `equal` is the relative difference below which a margin counts as 0, or as the required one.
    """
    share = max(required - equal, equal)
    bands = []
    for stretch in ranges:
        low, high = frequencies_over(source, stretch.low_rad_s, stretch.high_rad_s)
        around = (low * (1.0 - share), high * (1.0 + share))
        if margin_on == "natural":
            around = (low / (1.0 + share), high / (1.0 - share))
        bands.append(SourceBand((low, high), around, stretch.barred))
    return tuple(bands)
