"""Where one link's stiffness cannot help: which other link's could."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from quillshaft.assess.results import Screening
from quillshaft.study.window_ranges import Range, left_over
from quillshaft.study.window_tally import spring_links
from quillshaft.study.windows import Windows, spans, stiffness_windows


@dataclass(frozen=True)
class OtherLink:
    """Another link that clears, by its own stiffness alone, what the first one cannot.

    clears            sources of the question that some stiffness of this link clears together
    ranges_nm_rad     where it clears them, rising, at its first-named station
    recommended_nm_rad   where it clears every source asked about, over all tolerances; often empty
    change            factor on its nominal stiffness to the nearest end of `ranges_nm_rad`, 1 inside
    """

    link: str
    nominal_nm_rad: float
    clears: tuple[str, ...]
    ranges_nm_rad: tuple[Range, ...]
    recommended_nm_rad: tuple[Range, ...]
    change: float


def links_that_clear(
    screening: Screening, windows: Windows, progress: Callable[[int, int], None] | None = None
) -> tuple[OtherLink, ...]:
    """Other links that clear the sources which no stiffness of the first link clears, the least change first.

    Where that link clears each source somewhere, but never all together, every source asked about is meant.
    A link that clears all of them comes in once; where none does, each link comes in for each single source.
    Each is tried from nominal/20 to 20 × nominal with all else nominal; `progress` hears how many are done.
    Nothing is returned where the first link has an allowed stiffness.
    """
    if windows.allowed:
        return ()
    wanted = tuple(dict.fromkeys(pair.source for pair in windows.cannot_clear)) or windows.sources
    others = [link.name for link in spring_links(screening) if link.name != windows.link]
    tried = []
    for done, name in enumerate(others, start=1):
        tried.append(stiffness_windows(screening, name, None, windows.orders, windows.sources, windows.modes))
        if progress is not None:
            progress(done, len(others))
    found = _helpful(tried, wanted) or [other for source in wanted for other in _helpful(tried, (source,))]
    return tuple(sorted(found, key=lambda other: (not other.recommended_nm_rad, abs(math.log(other.change)))))


def _helpful(tried: list[Windows], wanted: tuple[str, ...]) -> list[OtherLink]:
    """The links of which some stiffness clears all of the wanted sources together."""
    found = []
    for own in tried:
        causes = [cause for forbidden in own.forbidden for cause in forbidden.because if cause.source in wanted]
        ranges = left_over(own.search_nm_rad, spans(causes))
        if not ranges:
            continue
        nominal = own.nominal_nm_rad
        nearest = min((min(max(nominal, low), high) for low, high in ranges), key=lambda k: abs(math.log(k / nominal)))
        found.append(OtherLink(own.link, nominal, wanted, ranges, own.recommended, nearest / nominal))
    return found
