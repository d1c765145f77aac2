"""The train laid out along strips for mode shapes: the longest run first, each branch on a strip of its own."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.present.charts.lanes import link_between, pair_neighbours
from quillshaft.present.charts.phrases import train_paths


@dataclass(frozen=True)
class Strip:
    """A run of stations and the links between them.

    lead      the first station stands on an earlier strip and is repeated here
    caption   how the run joins an earlier one; empty for the first
    """

    stations: tuple[int, ...]
    links: tuple[int, ...]
    lead: bool
    caption: str


def strips(graph: TorsionalGraph) -> tuple[Strip, ...]:
    """All stations along strips, in file order of where they branch off."""
    around = pair_neighbours(enumerate(graph.links))
    done: set[int] = set()
    out = []
    for path in train_paths(graph):
        out.append(_strip(graph, around, path, done))
        done |= set(path)
    return tuple(out)


def _strip(graph: TorsionalGraph, around: dict[int, list[tuple[int, int]]], path: list[int], done: set[int]) -> Strip:
    joins = [
        (place, other, link)
        for place, station in enumerate(path)
        for other, link in around.get(station, [])
        if other in done
    ]
    ends = [join for join in joins if join[0] in (0, len(path) - 1)]
    lead = bool(ends)
    if ends:
        place, other, _ = ends[0]
        path = [other, *(path if place == 0 else path[::-1])]
    links = tuple(link_between(around, a, b) for a, b in pairwise(path))
    return Strip(tuple(path), links, lead, _caption(graph, path, joins, ends))


def _caption(
    graph: TorsionalGraph,
    path: list[int],
    joins: list[tuple[int, int, int]],
    ends: list[tuple[int, int, int]],
) -> str:
    """How a run joins what was drawn before; `joins` and `ends` hold (place, other station, link)."""
    home = ends[:1] or joins[:1]
    texts = [
        f"branch from {graph.stations[other]} by {graph.links[link].name}"
        if ends
        else f"joined from {graph.stations[path[place]]} to {graph.stations[other]} by {graph.links[link].name}"
        for place, other, link in home
    ]
    texts += [
        f"also joined to {graph.stations[other]} by {graph.links[link].name}"
        for _, other, link in joins
        if (link, other) not in {(known, station) for _, station, known in home}
    ]
    texts += [
        f"part of stage {link.name} at {graph.stations[station]}"
        for link in graph.links
        if len(link.stations) > 2
        for station in link.stations
        if station in path
    ]
    return "; ".join(texts)
