"""Two links at once: the windows of one on a grid of the other's stiffness, and clear boxes proven in between.

On each line of the grid the windows are exact. A box of both stiffnesses is proven as a whole by two counts
for each source: frequencies rise with both stiffnesses, so that a mode stays out of a band all over the box
where it does so between the box's softest and its stiffest corner.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.torsional import GraphLink
from quillshaft.study.speed_cases import Networks, SpeedCase, speed_cases, temperature_factors
from quillshaft.study.window_bands import AskError, Orders, source_bands, sources_asked
from quillshaft.study.window_curves import with_stiffness
from quillshaft.study.window_ranges import Range, common, left_over
from quillshaft.study.window_tally import (
    Tally,
    at_speeds,
    blocked,
    find_spring,
    opened_at,
    tally,
)
from quillshaft.study.windows import check_factors, check_modes, search_range, spans, stiffness_windows

POINTS = 97
MOST_BOXES = 4
HOME_LINES = 7
"""Lines on either side of the nominal value within the clear range that holds it."""
INSET = 1e-9
"""Relative: what a box keeps from the exact edges of the lines, so that its proof cannot hang on rounding."""


Asked = tuple[Orders, Sequence[str] | None, Sequence[int] | None, Range]


@dataclass(frozen=True)
class MapLine:
    """Exact windows of the first link while the second has one stiffness [N·m/rad]."""

    other_nm_rad: float
    allowed: tuple[Range, ...]
    recommended: tuple[Range, ...]


@dataclass(frozen=True)
class ClearBox:
    """Nominal stiffnesses of both links [N·m/rad], each end included, that are clear all over the box.

    recommended   over all tolerances; else only as fitted, with everything else nominal
    """

    first_nm_rad: Range
    second_nm_rad: Range
    recommended: bool

    def holds(self, first_nm_rad: float, second_nm_rad: float) -> bool:
        """True where two stiffnesses lie in the box."""
        inside = self.first_nm_rad[0] <= first_nm_rad <= self.first_nm_rad[1]
        return inside and self.second_nm_rad[0] <= second_nm_rad <= self.second_nm_rad[1]


@dataclass(frozen=True)
class WindowMap:
    """The clear region of two links' stiffnesses, each at its first-named station [N·m/rad].

    lines   on a logarithmic grid of the second link's stiffness, rising, denser about a clear nominal value
    boxes   proven boxes that do not overlap: recommended ones, else allowed ones; one that holds both nominal
            values comes first if there is one, then the largest (in decades)
    """

    links: tuple[str, str]
    nominal_nm_rad: tuple[float, float]
    tolerance: tuple[Range, Range]
    search_nm_rad: tuple[Range, Range]
    sources: tuple[str, ...]
    lines: tuple[MapLine, ...]
    boxes: tuple[ClearBox, ...]


@dataclass(frozen=True)
class _Line:
    """A line of the map with the counts behind it, one tally for each case of speed."""

    line: MapLine
    tallies: tuple[Tally, ...]


def window_map(
    screening: Screening,
    link_a: str,
    link_b: str,
    points: int = POINTS,
    searches_nm_rad: tuple[Range | None, Range | None] = (None, None),
    orders: Orders = "all",
    sources: Sequence[str] | None = None,
    modes: Sequence[int] | None = None,
    factors: tuple[Range | None, Range | None] = (None, None),
    progress: Callable[[int, int], None] | None = None,
) -> WindowMap:
    """Exact windows of link A at `points` stiffnesses of link B and more, and the boxes of both that are clear.

    Other arguments as for `stiffness_windows`; `progress` hears how many lines are done. Raises AskError for
    what that refuses, for the same link twice and for fewer than two points.
    """
    if link_a == link_b:
        raise AskError(f"link {link_a}: a map needs two different links")
    if points < 2:
        raise AskError(f"{points} points: a map needs two at least")
    first, second = find_spring(screening, link_a), find_spring(screening, link_b)
    asked, wanted = sources_asked(screening, sources, orders), check_modes(screening, modes)
    widened = [
        temperature_factors(screening, link.name) if given is None else given
        for link, given in zip((first, second), factors, strict=True)
    ]
    for pair in widened:
        check_factors(pair)
    searches = search_range(first, searches_nm_rad[0]), search_range(second, searches_nm_rad[1])
    grid = _grid(screening, second, searches[1], points, (orders, sources, modes, widened[1]))
    lines = []
    cases = [(case, source_bands(screening, asked, case.ranges_rad_s)) for case in speed_cases(screening)]
    plans = [opened_at(case.networks.nominal, first).plan for case, _ in cases]
    for done, stiffness in enumerate(grid, start=1):
        tallies = tuple(
            at_speeds(
                tally(screening, _refitted(case, second, stiffness, widened[1]), first, bands, widened[0], plan),
                case,
                first,
            )
            for (case, bands), plan in zip(cases, plans, strict=True)
        )
        lines.append(_Line(_map_line(stiffness, tallies, searches[0], wanted), tallies))
        if progress is not None:
            progress(done, len(grid))
    nominal = (first.stiffness_nm_rad or 0.0, second.stiffness_nm_rad or 0.0)
    return WindowMap(
        links=(link_a, link_b),
        nominal_nm_rad=nominal,
        tolerance=(first.tolerance, second.tolerance),
        search_nm_rad=searches,
        sources=tuple(source.name for source in asked),
        lines=tuple(own.line for own in lines),
        boxes=_boxes(lines, True, nominal, wanted) or _boxes(lines, False, nominal, wanted),
    )


def _grid(screening: Screening, link: GraphLink, search: Range, points: int, asked: Asked) -> list[float]:
    """Stiffnesses [N·m/rad] of the lines: evenly spaced on a logarithmic axis, and denser over the clear range
    that holds the nominal value, however narrow that is."""
    grid = np.geomspace(*search, points).tolist()
    grid[0], grid[-1] = search
    own = stiffness_windows(screening, link.name, search, *asked)
    nominal = own.nominal_nm_rad
    for ranges in (own.recommended, own.allowed):
        home = [reach for reach in ranges if reach[0] < nominal < reach[1]]
        for low, high in home[:1]:
            sides = [np.geomspace(nominal, end, HOME_LINES) for end in (low * (1.0 + INSET), high * (1.0 - INSET))]
            grid += [nominal, *sides[0].tolist(), *sides[1].tolist()]
        if home:
            break
    return sorted(set(grid))


def _refitted(case: SpeedCase, link: GraphLink, stiffness_nm_rad: float, factors: Range) -> Networks:
    """The networks with another nominal stiffness [N·m/rad] of one link, its tolerance about that."""
    referred = stiffness_nm_rad * (link.referred_nm_rad or 0.0) / (link.stiffness_nm_rad or 1.0)
    low, high = ((1.0 + side) * factor for side, factor in zip(link.tolerance, factors, strict=True))
    return Networks(
        with_stiffness(case.networks.nominal, link, referred),
        with_stiffness(case.networks.soft_heavy, link, referred * low),
        with_stiffness(case.networks.stiff_light, link, referred * high),
    )


def _map_line(stiffness_nm_rad: float, tallies: Sequence[Tally], search: Range, modes: Sequence[int] | None) -> MapLine:
    fitted = [cause for own in tallies for cause in blocked(own, False, modes)[0]]
    worst = [cause for own in tallies for cause in blocked(own, True, modes)[0]]
    return MapLine(stiffness_nm_rad, left_over(search, spans(fitted)), left_over(search, spans([*fitted, *worst])))


def _boxes(
    lines: Sequence[_Line], recommended: bool, nominal: tuple[float, float], modes: Sequence[int] | None
) -> tuple[ClearBox, ...]:
    """Boxes proven clear: the largest that holds the nominal values, then the largest of the rest."""
    found = []
    for area, start, end, first in _candidates(lines, recommended):
        second = (lines[start].line.other_nm_rad, lines[end].line.other_nm_rad)
        box = ClearBox((first[0] * (1.0 + INSET), first[1] * (1.0 - INSET)), second, recommended)
        found.append((not box.holds(*nominal), -area, start, end, box))
    taken: list[ClearBox] = []
    homed = False
    for away, _, start, end, box in sorted(found, key=lambda item: item[:2]):
        if (not away and homed) or any(_overlap(box, other) for other in taken):
            continue
        if _proven(box, lines[start], lines[end], modes):
            taken.append(box)
            homed = homed or not away
        if len(taken) == MOST_BOXES:
            break
    return tuple(taken)


def _candidates(lines: Sequence[_Line], recommended: bool) -> Iterator[tuple[float, int, int, Range]]:
    """(area in squared e-folds, first line, last line, stiffnesses clear on all lines from first to last)."""
    for start in range(len(lines) - 1):
        clear: tuple[Range, ...] = ((0.0, math.inf),)
        for end in range(start, len(lines)):
            line = lines[end].line
            clear = common(clear, line.recommended if recommended else line.allowed)
            if not clear:
                break
            height = math.log(line.other_nm_rad / lines[start].line.other_nm_rad)
            if end > start:
                yield from ((height * math.log(high / low), start, end, (low, high)) for low, high in clear)


def _overlap(box: ClearBox, other: ClearBox) -> bool:
    return all(
        max(own[0], its[0]) < min(own[1], its[1])
        for own, its in ((box.first_nm_rad, other.first_nm_rad), (box.second_nm_rad, other.second_nm_rad))
    )


def _proven(box: ClearBox, soft: _Line, stiff: _Line, modes: Sequence[int] | None) -> bool:
    """True where no mode meets a band between the softest and the stiffest corner of a box."""
    return all(
        _no_mode_between(box, low, high, worst, modes)
        for low, high in zip(soft.tallies, stiff.tallies, strict=True)
        for worst in ((False, True) if box.recommended else (False,))
    )


def _no_mode_between(box: ClearBox, soft: Tally, stiff: Tally, worst: bool, modes: Sequence[int] | None) -> bool:
    scale = soft.referred_per_actual
    shares = soft.shares if worst else (1.0, 1.0)
    reached = (soft.soft_high if worst else soft.nominal_high).at(box.first_nm_rad[0] * shares[0] * scale)
    left = (stiff.stiff_low if worst else stiff.nominal_low).at(box.first_nm_rad[1] * shares[1] * scale)
    for row in np.flatnonzero(reached > left).tolist():
        for mode in range(int(left[row]) + 1, int(reached[row]) + 1):
            if (modes is None or mode in modes) and not _excused(box, soft, stiff, (soft.bands[row].source, mode)):
                return False
    return True


def _excused(box: ClearBox, soft: Tally, stiff: Tally, pair: tuple[str, int]) -> bool:
    """True where a dismissal of a pair holds from corner to corner of a box."""
    at_soft, at_stiff = soft.dismissed.get(pair), stiff.dismissed.get(pair)
    if at_soft is None or at_stiff is None:
        return False
    return at_soft[0] <= box.first_nm_rad[0] and box.first_nm_rad[1] <= at_stiff[1]
