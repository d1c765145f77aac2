"""Speeds of all stations as exact signed fractions of the speed at `speed-at`."""

from __future__ import annotations

from collections import deque
from fractions import Fraction

from quillshaft.elements.belt import belt_ratio
from quillshaft.elements.epicyclic import stage_meshes
from quillshaft.elements.gear import mesh_ratio
from quillshaft.records import dataclass
from quillshaft.train.gear_model import Epicyclic, GearMesh
from quillshaft.train.model import Train
from quillshaft.train.validate import Findings

BELT_PLAY = Fraction(1, 1000)
"""Relative disagreement of a loop's ratios that a belt's creep takes up (common practice)."""


def station_names(train: Train) -> tuple[str, ...]:
    """Stations of the graph: those of the file in its order, then those that dampers add."""
    added = (damper.added_station for damper in train.dampers if damper.swings)
    return (*(station.name for station in train.stations), *added)


@dataclass(frozen=True)
class RatioEdge:
    """Speed of `second` = ratio · speed of `first`; `gear` is None for shafts and couplings.

    play is the relative disagreement of a loop that the link takes up by slipping: a belt's, else 0.
    """

    first: int
    second: int
    ratio: Fraction
    gear: str | None
    play: Fraction = Fraction(0)


@dataclass(frozen=True)
class SpeedRow:
    """One exact equation: sum of coefficient · speed of station = 0, from a free epicyclic stage."""

    gear: str
    terms: tuple[tuple[int, Fraction], ...]


def ratio_edges(train: Train) -> tuple[list[RatioEdge], list[SpeedRow]]:
    """Every link that ties two speeds, and the equations of epicyclic stages that tie three."""
    number = {name: index for index, name in enumerate(station_names(train))}
    pairs = [*(shaft.between for shaft in train.shafts), *(coupling.between for coupling in train.couplings)]
    edges = [RatioEdge(number[first], number[second], Fraction(1), None) for first, second in pairs]
    edges += [
        RatioEdge(number[damper.at], number[damper.added_station], Fraction(1), None)
        for damper in train.dampers
        if damper.swings
    ]
    for fluid in train.fluid_couplings:
        kept = Fraction(1.0 - fluid.slip).limit_denominator(10**6)
        edges.append(RatioEdge(number[fluid.between[0]], number[fluid.between[1]], kept, None))
    rows: list[SpeedRow] = []
    for gear in train.gears:
        if isinstance(gear, GearMesh):
            first, second = (number[name] for name in gear.between)
            edges.append(RatioEdge(first, second, mesh_ratio(gear), gear.name))
        else:
            _stage(gear, number, edges, rows)
    for belt in train.belts:
        first, second = (number[name] for name in belt.between)
        play = BELT_PLAY if belt.teeth is None else Fraction(0)
        edges.append(RatioEdge(first, second, belt_ratio(belt), belt.name, play))
    return edges, rows


def _stage(gear: Epicyclic, number: dict[str, int], edges: list[RatioEdge], rows: list[SpeedRow]) -> None:
    for mesh in stage_meshes(gear):
        members = mesh.turning
        if len(members) == 2:
            (first, a), (second, b) = members
            edges.append(RatioEdge(number[first], number[second], -a / b, gear.name))
        else:
            rows.append(SpeedRow(gear.name, tuple((number[name], z) for name, z in members)))


def unconnected(count: int, start: int, edges: list[RatioEdge], rows: list[SpeedRow]) -> list[int]:
    """Stations that no chain of links joins to `start`."""
    beside: list[list[int]] = [[] for _ in range(count)]
    groups = [(edge.first, edge.second) for edge in edges]
    groups += [tuple(station for station, _ in row.terms) for row in rows]  # type: ignore[misc]
    for group in groups:
        for a in group:
            beside[a] += [b for b in group if b != a]
    seen = {start}
    queue = deque([start])
    while queue:
        for other in beside[queue.popleft()]:
            if other not in seen:
                seen.add(other)
                queue.append(other)
    return [station for station in range(count) if station not in seen]


def _spread(count: int, edges: list[RatioEdge]) -> tuple[list[int], list[Fraction], list[tuple[RatioEdge, list[str]]]]:
    """Root and factor of every station (speed = factor · root's speed), and the edges that disagree."""
    beside: list[list[tuple[int, Fraction, RatioEdge]]] = [[] for _ in range(count)]
    for edge in _without_closing_belts(count, edges):
        beside[edge.first].append((edge.second, edge.ratio, edge))
        beside[edge.second].append((edge.first, 1 / edge.ratio, edge))
    root, factor = [-1] * count, [Fraction(0)] * count
    parent: dict[int, tuple[int, RatioEdge]] = {}
    for start in range(count):
        if root[start] >= 0:
            continue
        root[start], factor[start] = start, Fraction(1)
        queue = deque([start])
        while queue:
            station = queue.popleft()
            for other, ratio, edge in beside[station]:
                if root[other] < 0:
                    root[other], factor[other] = start, factor[station] * ratio
                    parent[other] = (station, edge)
                    queue.append(other)
    wrong = [
        edge
        for edge in edges
        if abs(factor[edge.second] - edge.ratio * factor[edge.first]) > edge.play * abs(factor[edge.second])
    ]
    return root, factor, [(edge, _loop_gears(edge, parent)) for edge in wrong]


def _without_closing_belts(count: int, edges: list[RatioEdge]) -> list[RatioEdge]:
    """The edges without belts that close a loop: exact ratios give the speeds wherever they can."""
    root = list(range(count))

    def find(a: int) -> int:
        while root[a] != a:
            root[a] = root[root[a]]
            a = root[a]
        return a

    kept = [edge for edge in edges if not edge.play]
    for edge in kept:
        root[find(edge.first)] = find(edge.second)
    for edge in (edge for edge in edges if edge.play):
        a, b = find(edge.first), find(edge.second)
        if a != b:
            root[a] = b
            kept.append(edge)
    return kept


def _loop_gears(edge: RatioEdge, parent: dict[int, tuple[int, RatioEdge]]) -> list[str]:
    def upward(station: int) -> list[RatioEdge]:
        path = []
        while station in parent:
            station, link = parent[station]
            path.append(link)
        return path

    a, b = upward(edge.first), upward(edge.second)
    loop = [link for link in a if link not in b] + [link for link in b if link not in a] + [edge]
    return [link.gear for link in loop if link.gear is not None]


def _reduce(rows: list[tuple[dict[int, Fraction], Fraction]]) -> tuple[dict[int, Fraction], bool]:
    """Gauss–Jordan over fractions: (values of the unknowns that are determined, whether it is consistent)."""
    pivots: dict[int, tuple[dict[int, Fraction], Fraction]] = {}
    for terms, right in rows:
        left, value = dict(terms), right
        for unknown, (row, row_value) in pivots.items():
            weight = left.get(unknown, Fraction(0))
            if weight:
                for key, number in row.items():
                    left[key] = left.get(key, Fraction(0)) - weight * number
                value -= weight * row_value
        left = {key: number for key, number in left.items() if number}
        if not left:
            if value:
                return {}, False
            continue
        pivot = min(left)
        scale = left[pivot]
        left = {key: number / scale for key, number in left.items()}
        value /= scale
        for other, (row, row_value) in list(pivots.items()):
            weight = row.get(pivot, Fraction(0))
            if weight:
                mixed = {key: row.get(key, Fraction(0)) - weight * left.get(key, Fraction(0)) for key in {*row, *left}}
                pivots[other] = (
                    {key: number for key, number in mixed.items() if number},
                    row_value - weight * value,
                )
        pivots[pivot] = (left, value)
    return {unknown: value for unknown, (row, value) in pivots.items() if len(row) == 1}, True


def speed_ratios(train: Train, findings: Findings) -> tuple[Fraction, ...] | None:
    """Signed speed of every station over that of `speed-at`, 0 at rest; None with the reason in `findings`.

    Ratios are exact fractions of teeth, so a loop closes exactly or not at all.
    """
    names = station_names(train)
    number = {name: index for index, name in enumerate(names)}
    start = number[train.operation.speed_at]
    edges, rows = ratio_edges(train)
    apart = unconnected(len(names), start, edges, rows)
    for station in apart:
        findings.add(("stations", names[station]), f"no link joins {names[station]} to {train.operation.speed_at}")
    root, factor, wrong = _spread(len(names), edges)
    for edge, gears in wrong:
        where = ("gears", edge.gear) if edge.gear else ("stations", names[edge.first])
        listed = " and ".join(dict.fromkeys(gears))
        message = f"this loop cannot turn: the tooth ratios of {listed} disagree, in size or in direction"
        findings.add(where, message)
    if apart or wrong:
        return None
    system = [_equation(row, root, factor) for row in rows]
    system.append(({root[start]: factor[start]}, Fraction(1)))
    for name, speed in train.operation.speeds_rad_s.items():
        share = Fraction(speed / train.operation.rated_rad_s).limit_denominator(10**7)
        system.append(({root[number[name]]: factor[number[name]]}, share))
    solved, consistent = _reduce(system)
    if not consistent:
        _inconsistent(train, findings)
        return None
    open_roots = sorted(set(root) - set(solved))
    if open_roots:
        loose = ", ".join(names[station] for station in open_roots)
        message = f"the gears leave the speed of {loose} open: a free epicyclic stage needs a second speed"
        findings.add(("operation",), message, None, f'[operation.speeds] with {names[open_roots[0]]} = "… rpm"')
        return None
    return tuple(factor[station] * solved[root[station]] for station in range(len(names)))


def _equation(row: SpeedRow, root: list[int], factor: list[Fraction]) -> tuple[dict[int, Fraction], Fraction]:
    terms: dict[int, Fraction] = {}
    for station, coefficient in row.terms:
        terms[root[station]] = terms.get(root[station], Fraction(0)) + coefficient * factor[station]
    return terms, Fraction(0)


def _inconsistent(train: Train, findings: Findings) -> None:
    stages = " and ".join(gear.name for gear in train.gears if isinstance(gear, Epicyclic))
    if train.operation.speeds_rad_s:
        given = ", ".join(train.operation.speeds_rad_s)
        message = f"the speeds given for {given} disagree with the tooth ratios"
        findings.add(("operation", "speeds"), message, None, "as many speeds as the gears leave free")
    else:
        findings.add(("gears",), f"the train cannot turn: the tooth ratios of {stages or 'its gears'} disagree")
