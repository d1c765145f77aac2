"""Stiffness windows: which stiffnesses of one link keep every mode clear of every source, exactly.

Nothing is scanned. One elimination at all band edges gives the stiffness that puts a mode on each of them and
the number of modes below (see `solve.link_counts`); the ranges follow in closed form.

Over the tolerances: frequencies rise with every stiffness and fall with every inertia, so that the lowest are
those of the softest, heaviest train with the link at its lowest share of nominal, and the highest those of
the stiffest, lightest one with the link at its highest (Rayleigh's theorem on stiffening and loading).
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from quillshaft.assess.results import SEVERITY, Screening, Verdict
from quillshaft.graph.torsional import GraphLink
from quillshaft.sources.line import Source
from quillshaft.study.speed_cases import speed_cases, temperature_factors
from quillshaft.study.window_bands import AskError, Orders, source_bands, sources_asked
from quillshaft.study.window_ranges import Range, covered, left_over, union
from quillshaft.study.window_tally import Blocked, at_speeds, blocked, find_spring, tally

REACH = 20.0
"""The search runs from nominal over this to nominal times this, unless told."""
NO_CHANGE = (1.0, 1.0)
CLEAR: Verdict = "clear"


@dataclass(frozen=True)
class Pair:
    """A source and a mode."""

    source: str
    mode: int


@dataclass(frozen=True)
class Forbidden:
    """A range of stiffness of which every value is forbidden, and what forbids parts of it.

    Ends are those of the causes, wherever the search ends: 0 and infinite where there is none.
    """

    from_nm_rad: float
    to_nm_rad: float
    because: tuple[Blocked, ...]


@dataclass(frozen=True)
class Windows:
    """The stiffness windows of one link; stiffnesses are actual, at its first-named station [N·m/rad].

    tolerance         of the link; factors: its lowest and highest stiffness factor over temperature
    sources, modes    what was asked about; modes None: all; only_sources: True where sources were named
    forbidden         with the link as fitted and all else nominal, by the required separation
    allowed           the rest of the search
    not_recommended   nominal stiffnesses that fail nominally or at some corner of all tolerances and factors
    recommended       the rest of the search
    dismissed         what would forbid too, but is dismissed by name (at these stiffnesses only: a dismissal
                      holds while its mode keeps number and frequency); worst case included
    nominal_verdict   of the nominal stiffness; worst_verdict over the tolerances, without `factors`
    cannot_clear      pairs of the sources that no stiffness in the search clears, nominally
    cannot_clear_worst   the same over the tolerances and factors
    over_speeds       True where the networks depend on speed, and the windows are the union over several
    """

    link: str
    nominal_nm_rad: float
    tolerance: Range
    factors: Range
    search_nm_rad: Range
    sources: tuple[str, ...]
    only_sources: bool
    modes: tuple[int, ...] | None
    orders: Orders
    forbidden: tuple[Forbidden, ...]
    allowed: tuple[Range, ...]
    not_recommended: tuple[Forbidden, ...]
    recommended: tuple[Range, ...]
    dismissed: tuple[Blocked, ...]
    nominal_verdict: Verdict
    worst_verdict: Verdict
    cannot_clear: tuple[Pair, ...]
    cannot_clear_worst: tuple[Pair, ...]
    over_speeds: bool


def stiffness_windows(
    screening: Screening,
    link: str,
    search_nm_rad: Range | None = None,
    orders: Orders = "all",
    sources: Sequence[str] | None = None,
    modes: Sequence[int] | None = None,
    factors: Range | None = None,
) -> Windows:
    """The forbidden, allowed and recommended stiffnesses [N·m/rad] of one link, for every source and mode.

    `sources` and `modes` narrow the question; `orders` = "major" leaves minor engine orders out. `factors`
    are the lowest and highest stiffness factors of the link over temperature, by default those of its own
    table; they act on `recommended`.
    Raises AskError when the link is unknown or no spring, a source or mode is unknown, or a range is reversed.
    """
    found = find_spring(screening, link)
    asked = sources_asked(screening, sources, orders)
    wanted = check_modes(screening, modes)
    factors = temperature_factors(screening, found.name) if factors is None else factors
    check_factors(factors)
    search = search_range(found, search_nm_rad)
    fitted, worst, excused, cases = _gather(screening, found, asked, wanted, factors)
    fitted, both, excused = (_inside(causes, search) for causes in (fitted, [*fitted, *worst], excused))
    verdicts = _verdicts(screening, asked, wanted)
    never = _never_clear(both, search)
    stuck = {pair.source for pair in never}
    return Windows(
        link=link,
        nominal_nm_rad=found.stiffness_nm_rad or 0.0,
        tolerance=found.tolerance,
        factors=factors,
        search_nm_rad=search,
        sources=tuple(source.name for source in asked),
        only_sources=sources is not None,
        modes=wanted,
        orders=orders,
        forbidden=_merged(fitted),
        allowed=left_over(search, spans(fitted)),
        not_recommended=_merged(both),
        recommended=left_over(search, spans(both)),
        dismissed=tuple(excused),
        nominal_verdict=verdicts[0],
        worst_verdict=verdicts[1],
        cannot_clear=_never_clear([cause for cause in fitted if cause.source in stuck], search),
        cannot_clear_worst=never,
        over_speeds=cases > 1,
    )


def _gather(
    screening: Screening,
    link: GraphLink,
    asked: Sequence[Source],
    modes: tuple[int, ...] | None,
    factors: Range,
) -> tuple[list[Blocked], list[Blocked], list[Blocked], int]:
    """What blocks stiffnesses as fitted and over the tolerances, what is dismissed, and the number of cases."""
    fitted: list[Blocked] = []
    worst: list[Blocked] = []
    excused: list[Blocked] = []
    cases = speed_cases(screening)
    for case in cases:
        bands = source_bands(screening, asked, case.ranges_rad_s)
        counted = at_speeds(tally(screening, case.networks, link, bands, factors), case, link)
        for at_worst in (False, True):
            found, forgiven = blocked(counted, at_worst, modes)
            (worst if at_worst else fitted).extend(found)
            excused += forgiven
    if len(cases) > 1:
        fitted, worst, excused = (_joined(causes) for causes in (fitted, worst, excused))
    return fitted, worst, excused, len(cases)


def _joined(causes: Sequence[Blocked]) -> list[Blocked]:
    """Causes of one source and mode joined where the speeds they come from overlap in stiffness."""
    groups: dict[tuple[str, int], list[Blocked]] = {}
    for cause in causes:
        groups.setdefault((cause.source, cause.mode), []).append(cause)
    return [
        Blocked(low, high, source, mode)
        for (source, mode), group in groups.items()
        for low, high in union(sorted(spans(group)))
    ]


def check_modes(screening: Screening, modes: Sequence[int] | None) -> tuple[int, ...] | None:
    """The modes asked about, rising. Raises AskError when there is no such mode."""
    if modes is None:
        return None
    most = len(screening.modes)
    for mode in modes:
        if not 1 <= mode <= most:
            raise AskError(f"mode {mode}: there is no such mode; this train has modes 1 to {most}")
    return tuple(sorted(set(modes)))


def check_factors(factors: Range) -> None:
    """Raises AskError unless the factors are above zero and not reversed."""
    low, high = factors
    if not 0.0 < low <= high < math.inf:
        raise AskError(f"factors {low:g} to {high:g}: they must be above zero, the lower first")


def search_range(link: GraphLink, search_nm_rad: Range | None) -> Range:
    """The stiffnesses to search [N·m/rad]. Raises AskError when the range is reversed or reaches zero."""
    if search_nm_rad is None:
        nominal = link.stiffness_nm_rad or 0.0
        return nominal / REACH, nominal * REACH
    low, high = search_nm_rad
    if not 0.0 < low < high < math.inf:
        raise AskError(
            f"search from {low:g} to {high:g} N·m/rad: the range must start above zero and end above its start"
        )
    return low, high


def spans(causes: Iterable[Blocked]) -> list[Range]:
    """The stiffness ranges of causes."""
    return [(cause.from_nm_rad, cause.to_nm_rad) for cause in causes]


def _inside(causes: Iterable[Blocked], search: Range) -> list[Blocked]:
    """Causes that reach into the search, from the softest on, each once."""
    low, high = search
    kept = [cause for cause in causes if cause.from_nm_rad < high and cause.to_nm_rad > low]
    return sorted(set(kept))


def _merged(inside: Sequence[Blocked]) -> tuple[Forbidden, ...]:
    """Causes in rising order joined to forbidden ranges."""
    merged = []
    position = 0
    for low, high in union(spans(inside)):
        start = position
        while position < len(inside) and inside[position].from_nm_rad < high:
            position += 1
        merged.append(Forbidden(low, high, tuple(inside[start:position])))
    return tuple(merged)


def _never_clear(inside: Sequence[Blocked], search: Range) -> tuple[Pair, ...]:
    """Pairs of each source that has some mode in its band at every stiffness of the search.

    Where single modes stay in it throughout, only those are named.
    """
    by_source: dict[str, dict[int, list[Range]]] = {}
    for cause in inside:
        reach = (cause.from_nm_rad, cause.to_nm_rad)
        by_source.setdefault(cause.source, {}).setdefault(cause.mode, []).append(reach)
    pairs: list[Pair] = []
    for source, by_mode in by_source.items():
        alone = [mode for mode, own in by_mode.items() if covered(search, own)]
        if alone or covered(search, [reach for own in by_mode.values() for reach in own]):
            pairs += [Pair(source, mode) for mode in alone or by_mode]
    return tuple(sorted(pairs, key=lambda pair: (pair.mode, pair.source)))


def _verdicts(screening: Screening, asked: Sequence[Source], modes: tuple[int, ...] | None) -> tuple[Verdict, Verdict]:
    """Nominal and worst-case verdict of what was asked about, as screened."""
    names = {source.name for source in asked}
    pairs = [
        pair
        for pair in screening.interferences
        if pair.source in names and (modes is None or pair.mode in modes) and pair.dismissed is None
    ]
    nominal: set[Verdict] = {pair.verdict for pair in pairs}
    worst: set[Verdict] = {pair.worst_verdict for pair in pairs}
    return max(nominal, key=SEVERITY.__getitem__, default=CLEAR), max(worst, key=SEVERITY.__getitem__, default=CLEAR)
