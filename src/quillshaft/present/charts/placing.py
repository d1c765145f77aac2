"""Where the lanes of a train stand: rows and columns, joints straight above each other where they can be.

A joint is drawn as a line where its two ends stand in one column of neighbouring rows; any other joint is
told by the same letter at both ends. So no line ever crosses a lane or a label.
"""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.present.charts.lanes import Joint, Lanes

WIDE_COLUMNS = 9
"""Up to so many columns, one of them has room for a speed between two lanes of a row."""
ROOMY = 7
"""Up to so many columns a lane rather goes on to the right than back under its neighbour."""


@dataclass(frozen=True)
class Placed:
    """A lane in its row: column of each bead."""

    lane: int
    row: int
    columns: tuple[int, ...]


@dataclass(frozen=True)
class Plan:
    """All lanes placed, rows from 0 at the top, columns from 0; joints drawn straight, and those by letter."""

    rows: int
    columns: int
    placed: tuple[Placed, ...]
    straight: tuple[Joint, ...]
    lettered: tuple[Joint, ...]

    def spot(self, end: tuple[int, int]) -> tuple[int, int]:
        """(row, column) of a place in a lane."""
        lane = self.placed[end[0]]
        return lane.row, lane.columns[end[1]]


def place(parts: Lanes, widest: int, packed: bool = False) -> Plan:
    """Rows and columns for all lanes, no wider than `widest` columns where lanes allow it.

    With `packed`, lanes fill rows in turn and most joints are lettered: for trains of many short shaft lines.
    """
    placed: dict[int, Placed] = {}
    while len(placed) < len(parts.lanes):
        joint = _next_joint(parts.joints, placed)
        if joint is None or packed:
            lane = min(set(range(len(parts.lanes))) - set(placed))
            placed[lane] = _anywhere(lane, parts, placed, widest)
            continue
        known, new = joint.ends if joint.ends[0][0] in placed else joint.ends[::-1]
        placed[new[0]] = _beside(joint, known, new, parts, placed, widest)
    return _settled(parts, placed)


def _next_joint(joints: tuple[Joint, ...], placed: dict[int, Placed]) -> Joint | None:
    """The next joint from a placed lane to a new one; cuts first, so that a shaft stays together."""
    open_joints = [joint for joint in joints if (joint.ends[0][0] in placed) != (joint.ends[1][0] in placed)]
    return min(open_joints, key=lambda joint: not joint.cut, default=None)


def _stretched(lane: int, parts: Lanes) -> list[int]:
    """Column offsets of a lane's beads; a bead with joints on both sides gets room beside it."""
    busy = [end for joint in parts.joints if not joint.cut for end in joint.ends]
    offsets, at = [], 0
    for index in range(len(parts.lanes[lane].beads)):
        offsets.append(at)
        at += 2 if busy.count((lane, index)) > 1 else 1
    return offsets


def _anywhere(lane: int, parts: Lanes, placed: dict[int, Placed], widest: int) -> Placed:
    """The first free stretch of a row, from the top; else a row of its own at the bottom."""
    offsets = _stretched(lane, parts)
    left = min((min(other.columns) for other in placed.values()), default=0)
    rows = sorted({other.row for other in placed.values()})
    for row in rows:
        for start in range(left, left + widest - offsets[-1]):
            columns = tuple(start + offset for offset in offsets)
            if not _taken(row, columns, placed, widest):
                return Placed(lane, row, columns)
    return _new_row(lane, parts, placed, left)


def _new_row(lane: int, parts: Lanes, placed: dict[int, Placed], left: int) -> Placed:
    row = max((other.row for other in placed.values()), default=-1) + 1
    return Placed(lane, row, tuple(left + offset for offset in _stretched(lane, parts)))


def _beside(
    joint: Joint,
    known: tuple[int, int],
    new: tuple[int, int],
    parts: Lanes,
    placed: dict[int, Placed],
    widest: int,
) -> Placed:
    """The new lane under or over the known end, either way round; else in a row of its own at the bottom."""
    home = placed[known[0]]
    left = min(min(lane.columns) for lane in placed.values())
    right = max(max(lane.columns) for lane in placed.values())
    if joint.cut:
        return _new_row(new[0], parts, placed, left)
    offsets = _stretched(new[0], parts)
    best: tuple[int, Placed] | None = None
    for row in (home.row + 1, home.row - 1):
        for turned in (False, True):
            columns = _aligned(offsets, new[1], home.columns[known[1]], turned)
            low, high = min(left, *columns), max(right, *columns)
            if high - low + 1 > widest or _taken(row, columns, placed, widest):
                continue
            growth = 1 if high - low < ROOMY else 3
            cost = growth * (high - low - (right - left)) + 2 * (row < home.row) + 8 * turned
            if best is None or cost < best[0]:
                best = cost, Placed(new[0], row, columns)
    return best[1] if best else _anywhere(new[0], parts, placed, widest)


def _aligned(offsets: list[int], index: int, column: int, turned: bool) -> tuple[int, ...]:
    sign = -1 if turned else 1
    return tuple(column + sign * (offset - offsets[index]) for offset in offsets)


def _taken(row: int, columns: tuple[int, ...], placed: dict[int, Placed], widest: int) -> bool:
    """True where another lane of the row leaves no room for the speed between the two."""
    low, high = min(columns), max(columns)
    gap = 1 if widest <= WIDE_COLUMNS else 2
    return any(
        other.row == row and low <= max(other.columns) + gap and min(other.columns) - gap <= high
        for other in placed.values()
    )


def _settled(parts: Lanes, placed: dict[int, Placed]) -> Plan:
    """Rows and columns counted from 0; joints sorted into straight and lettered ones."""
    top = min(lane.row for lane in placed.values())
    left = min(min(lane.columns) for lane in placed.values())
    moved = tuple(
        Placed(index, placed[index].row - top, tuple(column - left for column in placed[index].columns))
        for index in range(len(parts.lanes))
    )
    plan = Plan(1 + max(lane.row for lane in moved), 1 + max(max(lane.columns) for lane in moved), moved, (), ())
    straight: list[Joint] = []
    lettered: list[Joint] = []
    taken: set[tuple[int, int]] = set()
    for joint in parts.joints:
        (row, column), (other_row, other_column) = (plan.spot(end) for end in joint.ends)
        channel = (min(row, other_row), column)
        fits = column == other_column and abs(row - other_row) == 1 and not joint.cut and channel not in taken
        (straight if fits else lettered).append(joint)
        if fits:
            taken.add(channel)
    return Plan(plan.rows, plan.columns, moved, tuple(straight), tuple(lettered))
