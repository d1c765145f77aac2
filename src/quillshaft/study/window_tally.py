"""Which stiffnesses of one link put which mode into which band, from the counts at the band edges."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np

from quillshaft.assess.dismissals import MATCH
from quillshaft.assess.results import EQUAL, Screening
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import GraphLink
from quillshaft.solve.link_counts import LinkCounts, OpenLink, link_counts, open_link
from quillshaft.solve.plan import Plan
from quillshaft.study.speed_cases import Networks, SpeedCase
from quillshaft.study.window_bands import AskError, Band
from quillshaft.study.window_ranges import Range, common, left_over
from quillshaft.train.model import Dismissal
from quillshaft.train.problems import did_you_mean

TWO_PI = 2.0 * math.pi


class Blocked(NamedTuple):
    """Stiffnesses of a link, at its first-named station, that put one mode into one source's band.

    from_nm_rad is 0 and to_nm_rad infinite where there is no such end. A mode stands on the edge of the band
    at either end, which is not in it.
    """

    from_nm_rad: float
    to_nm_rad: float
    source: str
    mode: int


@dataclass(frozen=True)
class Tally:
    """Counts of modes at the edges of all bands for every stiffness of one link.

    bands                     the bands, and for each of them
    nominal_low, nominal_high counts at the edges of its nominal band, everything else nominal
    soft_high                 count at the upper edge of its worst-case band, everything else soft and heavy
    stiff_low                 count at the lower edge of it, everything else stiff and light
    dismissed                 (source, mode) -> nominal stiffnesses at which a dismissal of theirs holds
    referred_per_actual       referred over actual stiffness of the link
    shares                    lowest and highest stiffness of the link over its nominal one
    """

    bands: tuple[Band, ...]
    nominal_low: LinkCounts
    nominal_high: LinkCounts
    soft_high: LinkCounts
    stiff_low: LinkCounts
    dismissed: dict[tuple[str, int], Range]
    referred_per_actual: float
    shares: Range


@dataclass(frozen=True)
class _Known:
    """Proven natural frequencies (modes,) [Hz] of a train whose link has a referred stiffness [N·m/rad]."""

    frequency_hz: Floats
    stiffness_nm_rad: float


def find_spring(screening: Screening, name: str) -> GraphLink:
    """A link whose stiffness can be asked about. Raises AskError when there is none of this name or it is rigid."""
    links = screening.graph.links
    for link in links:
        if link.name != name:
            continue
        if link.stiffness_nm_rad is None:
            word = {"mesh": "gear mesh", "epicyclic": "epicyclic stage"}.get(link.kind, link.kind)
            raise AskError(f"link {name}: this {word} is rigid, not a spring; give it mesh-stiffness to ask about it")
        if link.slot == "cut":
            raise AskError(
                f"link {name}: its inertia is distributed, so that its stiffness cannot change by itself; "
                'ask with own-inertia = "ends"'
            )
        if link.slot == "slack":
            raise AskError(f"link {name}: rigid gears hold both its ends together, so that it never twists")
        return link
    hint = did_you_mean(name, [link.name for link in links]) or "."
    springs = ", ".join(link.name for link in spring_links(screening))
    raise AskError(f"link {name}: there is none of this name{hint} Springs of this train: {springs}")


def spring_links(screening: Screening) -> tuple[GraphLink, ...]:
    """All links that are springs, in file order."""
    return tuple(
        link for link in screening.graph.links if link.slot in ("spring", "tie", "torque") if link.referred_nm_rad
    )


def opened_at(network: Network, link: GraphLink, plan: Plan | None = None) -> OpenLink:
    """The network with the stiffness of one spring link open. Raises AskError for a link that is no spring."""
    if link.slot not in ("spring", "tie", "torque"):
        raise AskError(f"link {link.name}: it is not a spring")
    return open_link(network, link.slot, link.index, plan)


def tally(
    screening: Screening,
    networks: Networks,
    link: GraphLink,
    bands: tuple[Band, ...],
    factors: Range,
    plan: Plan | None = None,
) -> Tally:
    """Count at all band edges: one elimination for each of the three networks, the link's stiffness open.

    The counts must agree with the proven modes of the screening, else they are made again in long arithmetic.
    `factors` widen the link's tolerance: its lowest and highest stiffness factors over temperature.
    """
    nominal = np.array([band.nominal_hz for band in bands]).reshape(-1, 2)
    worst = np.array([band.worst_hz for band in bands]).reshape(-1, 2)
    kept = _dismissals(screening, bands)
    held = np.array([(item.frequency_hz * (1.0 - MATCH), item.frequency_hz * (1.0 + MATCH)) for item in kept])
    known = _known_modes(screening, networks, link)
    opened = opened_at(networks.nominal, link, plan)
    low, high, held_low, held_high = _counts_of(opened, [*nominal.T, *held.reshape(-1, 2).T], known[0])
    (soft_high,) = _counts_of(opened_at(networks.soft_heavy, link, opened.plan), [worst[:, 1]], known[1])
    (stiff_low,) = _counts_of(opened_at(networks.stiff_light, link, opened.plan), [worst[:, 0]], known[2])
    scale = (link.referred_nm_rad or 0.0) / (link.stiffness_nm_rad or 1.0)
    dismissed = {
        (screening.source(item.source).name, item.mode): reach
        for row, mode, reach in _reaches(held_low, held_high, (scale, scale))
        for item in (kept[row],)
        if mode == item.mode
    }
    shares = ((1.0 + link.tolerance[0]) * factors[0], (1.0 + link.tolerance[1]) * factors[1])
    return Tally(bands, low, high, soft_high, stiff_low, dismissed, scale, shares)


def at_speeds(counted: Tally, case: SpeedCase, link: GraphLink) -> Tally:
    """The counts for a link that itself follows torque: its stiffness at rated torque stands for the curve."""
    if link.name not in case.link_share:
        return counted
    here, low, high = case.link_share[link.name]
    shares = (counted.shares[0] * low / here, counted.shares[1] * high / here)
    return replace(counted, referred_per_actual=counted.referred_per_actual * here, shares=shares)


def _dismissals(screening: Screening, bands: Sequence[Band]) -> list[Dismissal]:
    """Dismissals that these cases state, of sources asked about."""
    asked = {band.source for band in bands}
    return [
        item
        for item in screening.train.dismissals
        if set(screening.train.cases) <= set(item.cases)
        and any(source.answers_to(item.source) and source.name in asked for source in screening.sources)
    ]


def _known_modes(screening: Screening, networks: Networks, link: GraphLink) -> list[_Known | None]:
    """The proven modes of the three networks as screened, to check the counts by; None for other networks."""
    graph, referred = screening.graph, link.referred_nm_rad or 0.0
    columns = [[mode.frequency_hz for mode in screening.modes]]
    columns += [[mode.bounds_hz[side] for mode in screening.modes] for side in (0, 1)]
    pairs = (
        (networks.nominal is graph.network, 0.0),
        (networks.soft_heavy is graph.soft_heavy, link.tolerance[0]),
        (networks.stiff_light is graph.stiff_light, link.tolerance[1]),
    )
    return [
        _Known(np.array(hz), referred * (1.0 + side)) if same else None
        for (same, side), hz in zip(pairs, columns, strict=True)
    ]


def _counts_of(opened: OpenLink, edges_hz: list[Floats], known: _Known | None) -> list[LinkCounts]:
    """Counts at several sets of frequencies by one elimination; in long arithmetic if known modes disagree."""
    points = np.concatenate(edges_hz)
    omega2 = (TWO_PI * points) ** 2
    counts = link_counts(opened, omega2)
    if known is not None and not _agree(counts, points, known):
        counts = link_counts(replace(opened, plan=replace(opened.plan, precisely=True)), omega2)
    ends = np.cumsum([len(part) for part in edges_hz]).tolist()
    cuts = [slice(end - len(part), end) for end, part in zip(ends, edges_hz, strict=True)]
    return [LinkCounts(counts.base[cut], counts.turn_nm_rad[cut]) for cut in cuts]


def _agree(counts: LinkCounts, points_hz: Floats, known: _Known) -> bool:
    """True where the counts at a known stiffness are those of the modes known there; modes on a point aside."""
    below = np.searchsorted(known.frequency_hz, points_hz * (1.0 - EQUAL))
    above = np.searchsorted(known.frequency_hz, points_hz * (1.0 + EQUAL))
    counted = counts.at(known.stiffness_nm_rad)
    return bool(np.all((below <= counted) & (counted <= above) | (points_hz <= 0)))


def _reaches(low: LinkCounts, high: LinkCounts, per_actual: Range) -> Iterator[tuple[int, int, Range]]:
    """(row, mode, actual stiffnesses) for every mode that stands between two frequencies at some stiffness.

    Mode i is below the upper one where i ≤ base + (k < turn) there, and above the lower one where i exceeds
    that count there. per_actual: referred stiffness in the lower and in the upper count over the actual one.
    """
    starts, ends = (low.turn_nm_rad / per_actual[0]).tolist(), (high.turn_nm_rad / per_actual[1]).tolist()
    rows = zip(low.base.tolist(), high.base.tolist(), starts, ends, strict=True)
    for row, (below_low, below_high, start, end) in enumerate(rows):
        first, last = below_low + 1, below_high + 1
        for mode in range(first, last + 1):
            reach = (start if mode == first else 0.0, end if mode == last else math.inf)
            if reach[0] < reach[1]:
                yield row, mode, reach


def blocked(counted: Tally, worst: bool, modes: Sequence[int] | None) -> tuple[list[Blocked], list[Blocked]]:
    """Stiffnesses that put a mode into a band, and those of them that dismissals excuse.

    With `worst`, stiffnesses are nominal ones at which the mode enters the worst-case band at some corner of
    the tolerances.
    """
    scale = counted.referred_per_actual
    low, high, per_actual = counted.nominal_low, counted.nominal_high, (scale, scale)
    if worst:
        low, high = counted.stiff_low, counted.soft_high
        per_actual = (scale * counted.shares[1], scale * counted.shares[0])
    counts: list[Blocked] = []
    excused: list[Blocked] = []
    for row, mode, reach in _reaches(low, high, per_actual):
        if modes is not None and mode not in modes:
            continue
        source = counted.bands[row].source
        held = counted.dismissed.get((source, mode))
        if held is None:
            counts.append(Blocked(*reach, source, mode))
            continue
        counts += [Blocked(*part, source, mode) for part in left_over(reach, [held])]
        excused += [Blocked(*part, source, mode) for part in common([reach], [held])]
    return counts, excused
