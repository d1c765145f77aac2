"""A train taken apart into lanes: runs of stations along one shaft, and what joins the lanes.

A lane holds stations joined by shafts and couplings. Gears, side branches of a shaft and ties in the middle
of a lane are joints between lanes. A lane longer than the page allows is cut, and the cut is a joint too.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise

from quillshaft.graph.torsional import GraphLink, TorsionalGraph

GROUND = -1
"""Stands for the ground as a bead of a lane."""


@dataclass(frozen=True)
class Lane:
    """Station numbers (or GROUND) in drawing order and the number of the link between each two of them."""

    beads: tuple[int, ...]
    links: tuple[int, ...]


@dataclass(frozen=True)
class Joint:
    """A link between two lanes: (lane, place in the lane) at both ends; `cut` where one shaft goes on."""

    link: int
    ends: tuple[tuple[int, int], tuple[int, int]]
    cut: bool = False


@dataclass(frozen=True)
class Lanes:
    """All lanes and joints of a train."""

    lanes: tuple[Lane, ...]
    joints: tuple[Joint, ...]


def longest_path(neighbours: dict[int, list[tuple[int, int]]], inside: set[int]) -> list[int]:
    """A longest shortest path between two stations of a connected set, the lowest number first.

    `neighbours` gives (station, link) pairs. Found by two breadth-first searches, exact on a tree.
    """
    far = _farthest(neighbours, inside, min(inside))[-1]
    path = _farthest(neighbours, inside, far)
    return path if path[0] <= path[-1] else path[::-1]


def _farthest(neighbours: dict[int, list[tuple[int, int]]], inside: set[int], start: int) -> list[int]:
    before: dict[int, int | None] = {start: None}
    queue, last = deque([start]), start
    while queue:
        last = queue.popleft()
        for other, _ in neighbours.get(last, []):
            if other in inside and other not in before:
                before[other] = last
                queue.append(other)
    path: list[int] = []
    step: int | None = last
    while step is not None:
        path.append(step)
        step = before[step]
    return path[::-1]


def pair_neighbours(links: Iterable[tuple[int, GraphLink]]) -> dict[int, list[tuple[int, int]]]:
    """(station, link) pairs around each station, over links with two stations."""
    around: dict[int, list[tuple[int, int]]] = {}
    for index, link in links:
        if len(link.stations) == 2:
            first, second = link.stations
            around.setdefault(first, []).append((second, index))
            around.setdefault(second, []).append((first, index))
    return around


def paths_over(count: int, around: dict[int, list[tuple[int, int]]]) -> list[list[int]]:
    """All stations as disjoint paths along links: each time a longest one of a connected remainder."""
    left, paths = set(range(count)), []
    while left:
        connected = _reach(around, left, min(left))
        path = longest_path(around, connected)
        paths.append(path)
        left -= set(path)
    return paths


def _reach(around: dict[int, list[tuple[int, int]]], inside: set[int], start: int) -> set[int]:
    seen, queue = {start}, [start]
    while queue:
        for other, _ in around.get(queue.pop(), []):
            if other in inside and other not in seen:
                seen.add(other)
                queue.append(other)
    return seen


def link_between(around: dict[int, list[tuple[int, int]]], first: int, second: int) -> int:
    """Number of the first link between two neighbouring stations. Raises StopIteration where there is none."""
    return next(link for other, link in around[first] if other == second)


def take_apart(graph: TorsionalGraph, longest: int) -> Lanes:
    """Lanes of at most `longest` beads, and their joints; the lane of the lowest station first."""
    shafts = [(i, link) for i, link in enumerate(graph.links) if link.kind in ("shaft", "coupling", "damper")]
    around = pair_neighbours(shafts)
    lanes = []
    for path in paths_over(len(graph.stations), around):
        links = [link_between(around, a, b) for a, b in pairwise(path)]
        lanes.append(Lane(tuple(path), tuple(links)))
    lanes = [_with_ground(lane, graph) for lane in lanes]
    pieces, cuts = _cut(lanes, longest)
    used = {link for lane in lanes for link in lane.links}
    return Lanes(*_joined(graph, pieces, cuts, used))


def _with_ground(lane: Lane, graph: TorsionalGraph) -> Lane:
    """The lane with the ground as a bead at an end that is tied to it."""
    for end in (0, -1):
        tie = next(
            (
                i
                for i, link in enumerate(graph.links)
                if link.kind == "tie" and link.stations[0] == lane.beads[end] and i not in lane.links
            ),
            None,
        )
        if tie is None or lane.beads[end] == GROUND:
            continue
        if end == 0:
            lane = Lane((GROUND, *lane.beads), (tie, *lane.links))
        else:
            lane = Lane((*lane.beads, GROUND), (*lane.links, tie))
    return lane


def _cut(lanes: list[Lane], longest: int) -> tuple[list[Lane], list[Joint]]:
    """Lanes cut into equal lengths of at most `longest` beads; the link at a cut is a joint."""
    pieces: list[Lane] = []
    cuts = []
    for lane in lanes:
        parts = -(-len(lane.beads) // longest)
        size = -(-len(lane.beads) // parts)
        for start in range(0, len(lane.beads), size):
            end = min(start + size, len(lane.beads))
            if start:
                last = len(pieces) - 1
                ends = ((last, len(pieces[last].beads) - 1), (last + 1, 0))
                cuts.append(Joint(lane.links[start - 1], ends, cut=True))
            pieces.append(Lane(lane.beads[start:end], lane.links[start : end - 1]))
    return pieces, cuts


def _joined(
    graph: TorsionalGraph, pieces: list[Lane], cuts: list[Joint], used: set[int]
) -> tuple[tuple[Lane, ...], tuple[Joint, ...]]:
    """Every link not inside a lane as a joint; a tie in mid-lane gets a lane of the ground alone."""
    place = {bead: (n, k) for n, lane in enumerate(pieces) for k, bead in enumerate(lane.beads)}
    joints, lanes = list(cuts), list(pieces)
    for index, link in enumerate(graph.links):
        if index in used:
            continue
        if link.kind == "tie":
            joints.append(Joint(index, (place[link.stations[0]], (len(lanes), 0))))
            lanes.append(Lane((GROUND,), ()))
            continue
        first = _hub(link)
        joints += [Joint(index, (place[first], place[station])) for station in link.stations if station != first]
    return tuple(lanes), tuple(joints)


def _hub(link: GraphLink) -> int:
    """The station of a link that the others are drawn to: a stage's last (its carrier), a pair's first."""
    return link.stations[-1] if len(link.stations) > 2 else link.stations[0]
