"""Blocks of text of the train diagram and the heights of its rows."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Literal

from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.lanes import GROUND, Joint, Lanes
from quillshaft.present.charts.phrases import inertia, softest, stiffness
from quillshaft.present.charts.placing import Placed, Plan
from quillshaft.present.charts.symbols import disc_height

Side = Literal["above", "below"]


@dataclass(frozen=True)
class Block:
    """Lines of text (text, bold) at a column, on a side of the shaft; far ones stand beyond the near.

    Centred where `beside` is 0, else to the right (1) or left (-1) of a joint that runs through both sides.
    """

    lines: tuple[tuple[str, bool], ...]
    row: int
    column: float
    side: Side
    far: bool
    kind: Literal["station", "link"]
    beside: int = 0

    @property
    def height_mm(self) -> float:
        """Height of the block."""
        return len(self.lines) * look.line_mm() + 0.6


@dataclass
class Row:
    """Heights [mm] of a row: near and far text above and below the discs, and the gap to the next row."""

    near: dict[str, float] = field(default_factory=lambda: {"above": 0.0, "below": 0.0})
    far: dict[str, float] = field(default_factory=lambda: {"above": 0.0, "below": 0.0})
    gap: float = 3.0
    reach: float = 5.0
    shaft_y: float = 0.0

    @property
    def above(self) -> float:
        """Height above the shaft's axis."""
        return self.reach + self.near["above"] + self.far["above"]

    @property
    def below(self) -> float:
        """Height below the shaft's axis, without the gap."""
        return self.reach + self.near["below"] + self.far["below"]


def joint_sides(plan: Plan) -> dict[tuple[int, int], set[Side]]:
    """For each place (lane, bead) with straight joints: the sides they leave on."""
    sides: dict[tuple[int, int], set[Side]] = {}
    for joint in plan.straight:
        for end, other in (joint.ends, joint.ends[::-1]):
            below = plan.spot(other)[0] > plan.spot(end)[0]
            sides.setdefault(end, set()).add("below" if below else "above")
    return sides


def machine_words(screening: Screening) -> dict[str, list[str]]:
    """Names of the machines at each station; an engine's cylinders by their number."""
    words: dict[str, list[str]] = {}
    for machine in screening.train.machines:
        if machine.at is not None:
            words.setdefault(machine.at, []).append(machine.name)
        for number, cylinder in enumerate(machine.cylinders, start=1):
            words.setdefault(cylinder.at, []).append(f"{machine.name} {number}")
    return words


def text_blocks(screening: Screening, parts: Lanes, plan: Plan, pitch_mm: float, numbers: bool) -> list[Block]:
    """Every station's and link's block, on the side where no joint runs through it."""
    sides = joint_sides(plan)
    blocks = []
    for lane_number, lane in enumerate(parts.lanes):
        placed = plan.placed[lane_number]
        used = [sides.get((lane_number, k), set()) for k in range(len(lane.beads))]
        home: Side = "below" if any("above" in s for s in used) and not any("below" in s for s in used) else "above"
        away: Side = "above" if home == "below" else "below"
        for k, bead in enumerate(lane.beads):
            if bead == GROUND:
                continue
            far = home in used[k] and away not in used[k]
            lines = _station_lines(screening, bead, pitch_mm - 3.0, numbers)
            beside = _heading(placed) if len(used[k]) > 1 else 0
            side = away if far else home
            blocks.append(Block(lines, placed.row, placed.columns[k], side, far, "station", beside))
        for k, link in enumerate(lane.links):
            column = (placed.columns[k] + placed.columns[k + 1]) / 2
            lines = _link_lines(screening, link, pitch_mm - 3.0, numbers)
            blocks.append(Block(lines, placed.row, column, away, False, "link"))
    return [*blocks, *_cut_blocks(screening, parts, plan, pitch_mm, numbers)]


def _cut_blocks(screening: Screening, parts: Lanes, plan: Plan, pitch_mm: float, numbers: bool) -> Iterable[Block]:
    """The label of a shaft that goes on in the next row stands at its first half."""
    for joint in parts.joints:
        if joint.cut:
            row, column = plan.spot(joint.ends[0])
            forward = _direction(plan, joint.ends[0])
            lines = _link_lines(screening, joint.link, pitch_mm - 3.0, numbers)
            home = any("above" in sides for end, sides in joint_sides(plan).items() if end[0] == joint.ends[0][0])
            yield Block(lines, row, column + 0.5 * forward, "above" if home else "below", False, "link")


def _direction(plan: Plan, end: tuple[int, int]) -> int:
    return _heading(plan.placed[end[0]]) * (1 if end[1] else -1)


def _heading(placed: Placed) -> int:
    """1 for a lane drawn to the right, -1 for one drawn to the left."""
    return -1 if placed.columns[-1] < placed.columns[0] else 1


def _station_lines(screening: Screening, station: int, limit_mm: float, numbers: bool) -> tuple[tuple[str, bool], ...]:
    name = screening.graph.stations[station]
    lines = [
        (line, True)
        for machine in machine_words(screening).get(name, [])
        for line in look.wrap_name(machine, limit_mm, bold=True)
    ]
    lines += [(line, False) for line in look.wrap_name(name, limit_mm)]
    if numbers:
        lines.append((inertia(float(screening.graph.inertia_kgm2[station]), screening.train.units), False))
    return tuple(lines)


def _link_lines(screening: Screening, number: int, limit_mm: float, numbers: bool) -> tuple[tuple[str, bool], ...]:
    link = screening.graph.links[number]
    bold = link == softest(screening.graph)
    lines = [(line, bold) for line in look.wrap_name(link.name, limit_mm, bold=bold)]
    if numbers and link.stiffness_nm_rad is not None:
        text = stiffness(link.stiffness_nm_rad, screening.train.units)
        lines += [(line, False) for line in look.wrap(text, limit_mm)]
    return tuple(lines)


def row_heights(
    screening: Screening, parts: Lanes, plan: Plan, blocks: list[Block], gap_lines: dict[int, int]
) -> list[Row]:
    """Heights of all rows; `gap_lines` is the number of text lines in the gap under a row."""
    rows = [Row() for _ in range(plan.rows)]
    inertia_kgm2 = screening.graph.inertia_kgm2
    for lane, placed in zip(parts.lanes, plan.placed, strict=True):
        tallest = max((float(inertia_kgm2[bead]) for bead in lane.beads if bead != GROUND), default=0.0)
        half = disc_height(tallest, float(max(inertia_kgm2))) / 2 + 0.8
        rows[placed.row].reach = max(rows[placed.row].reach, half)
    for block in blocks:
        store = rows[block.row].far if block.far else rows[block.row].near
        store[block.side] = max(store[block.side], block.height_mm)
    for row, lines in gap_lines.items():
        rows[row].gap = max(rows[row].gap, lines * look.line_mm() + 2.6)
    y = 0.0
    for row_ in rows:
        row_.shaft_y = y - row_.above
        y = row_.shaft_y - row_.below - row_.gap
    return rows


def joint_text(screening: Screening, joint: Joint, joints: tuple[Joint, ...]) -> str:
    """Name, teeth and ratio of a gear between rows; name and stiffness of anything else."""
    graph = screening.graph
    link = graph.links[joint.link]
    if joint is not next(other for other in joints if other.link == joint.link):
        return f"{link.name} (the same stage)"
    words = [link.name]
    if link.ratio_text:
        words.append(link.ratio_text + _fixed_member(screening, link.name))
    speeds = sorted(abs(float(graph.speed_ratio[station])) for station in _joint_stations(screening, joint))
    if link.kind in ("mesh", "epicyclic", "belt") and speeds and speeds[0] > 0:
        words.append(f"ratio {speeds[-1] / speeds[0]:.4g}")
    if link.stiffness_nm_rad is not None:
        words.append(stiffness(link.stiffness_nm_rad, screening.train.units))
    return ", ".join(words)


def _joint_stations(screening: Screening, joint: Joint) -> tuple[int, ...]:
    stations = screening.graph.links[joint.link].stations
    return stations if len(stations) == 2 else ()


def _fixed_member(screening: Screening, name: str) -> str:
    for gear in screening.train.gears:
        if gear.name == name and hasattr(gear, "carrier"):
            fixed = [word for word in ("sun", "ring", "carrier") if getattr(gear, word) == "fixed"]
            return f", {fixed[0]} fixed" if fixed else ""
    return ""
