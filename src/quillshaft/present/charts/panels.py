"""Panels of the interference diagram: which frequencies each shows, and where lines leave it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from quillshaft.assess.diagram_data import ModeBand, PairMark, SourceLine

WIDE_SPAN = 8.0
MARK_ROOM = 0.03
"""Share of a panel's frequencies kept free beyond the outermost mark."""


@dataclass(frozen=True)
class Panel:
    """One plot: frequencies [Hz] shown, the bands in it, and its height [mm]."""

    low_hz: float
    high_hz: float
    bands: tuple[ModeBand, ...]
    height_mm: float


def panels(bands: Sequence[ModeBand], lines: Sequence[SourceLine], marks: Sequence[PairMark] = ()) -> tuple[Panel, ...]:
    """One panel from zero, or two where judged frequencies span more than 8 to 1; the low one first.

    Each holds the bands of its modes and their marks; where the marks ask for it, the two overlap.
    """
    if not bands:
        highest = max((max(line.nominal_hz) for line in lines), default=1.0)
        return (Panel(0.0, 1.05 * highest or 1.0, (), 80.0),)
    low, high = bands[0].nominal_hz, bands[-1].nominal_hz
    if high <= WIDE_SPAN * low or len(bands) == 1:
        only = _holding(Panel(0.0, 1.08 * _top(bands), tuple(bands), 98.0), marks)
        return (replace(only, high_hz=_roomy(only.high_hz, lines)),)
    cut = min(range(1, len(bands)), key=lambda i: (_crowded(bands, i), bands[i - 1].nominal_hz / bands[i].nominal_hz))
    below, above = tuple(bands[:cut]), tuple(bands[cut:])
    share = 30.0 + 55.0 * len(below) / len(bands)
    foot = 0.97 * min(band.lowest_hz for band in above)
    upper = _holding(Panel(foot, 1.03 * _top(above), above, 115.0 - share), marks)
    lower = _holding(Panel(0.0, min(foot, 1.12 * _top(below)), below, share), marks)
    roomy = min(upper.low_hz, _roomy(lower.high_hz, lines))
    return replace(lower, high_hz=max(lower.high_hz, roomy)), upper


def _holding(panel: Panel, marks: Sequence[PairMark]) -> Panel:
    """The panel, its frequencies extended so that every mark of its modes lies inside with room for its number."""
    own = {band.mode for band in panel.bands}
    heights = [mark.frequency_hz for mark in marks if mark.pair.mode in own]
    room = MARK_ROOM * (panel.high_hz - panel.low_hz)
    low = min([panel.low_hz, *(height - room for height in heights)])
    return replace(panel, low_hz=max(0.0, low), high_hz=max([panel.high_hz, *(height + room for height in heights)]))


def _crowded(bands: Sequence[ModeBand], cut: int) -> int:
    """Modes pressed together at the foot of either panel, if the bands are cut there."""
    low = [band.nominal_hz for band in bands[:cut]]
    high = [band.nominal_hz - bands[cut].nominal_hz for band in bands[cut + 1 :]]
    return sum(f < low[-1] / WIDE_SPAN for f in low) + sum(f < high[-1] / WIDE_SPAN for f in high)


def shrunk(plots: tuple[Panel, ...], room_mm: float) -> tuple[Panel, ...]:
    """The panels lower in proportion where they do not fit a height [mm], down to 60 per cent."""
    share = max(0.6, min(1.0, room_mm / sum(panel.height_mm for panel in plots)))
    return tuple(replace(panel, height_mm=share * panel.height_mm) for panel in plots)


def _roomy(high_hz: float, lines: Sequence[SourceLine]) -> float:
    """The upper end raised by up to a quarter where a line then ends at the right edge instead of the top."""
    ends = [1.02 * line.nominal_hz[-1] for line in lines]
    return max((end for end in ends if high_hz < end <= 1.25 * high_hz), default=high_hz)


def _top(bands: Sequence[ModeBand]) -> float:
    return max(band.highest_hz for band in bands)


def leaves(line: SourceLine, panel: Panel) -> tuple[float, float] | None:
    """(rpm, Hz) where a line was last inside a panel, looking from the right; None where it never was."""
    corners = list(zip(line.rpm, line.nominal_hz, strict=True))
    for (x0, y0), (x1, y1) in zip(corners[-2::-1], corners[::-1], strict=False):
        found = _last_inside((x0, y0), (x1, y1), panel)
        if found is not None:
            return found
    return None


def _last_inside(start: tuple[float, float], end: tuple[float, float], panel: Panel) -> tuple[float, float] | None:
    """The last point of a segment between the panel's lowest and highest frequency."""
    (x0, y0), (x1, y1) = start, end
    if panel.low_hz <= y1 <= panel.high_hz:
        return end
    edge = panel.high_hz if y1 > panel.high_hz else panel.low_hz
    if y0 == y1 or (y0 - edge) * (y1 - edge) > 0:
        return None
    return x0 + (edge - y0) / (y1 - y0) * (x1 - x0), edge
