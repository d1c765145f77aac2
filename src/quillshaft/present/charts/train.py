"""The train as a diagram: discs on shafts, one row for each shaft line at its own speed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening
from quillshaft.present.charts import look, symbols
from quillshaft.present.charts.blocks import Block, Row, joint_text, row_heights, text_blocks
from quillshaft.present.charts.lanes import GROUND, Joint, Lanes, take_apart
from quillshaft.present.charts.phrases import RPM, train_title
from quillshaft.present.charts.placing import Plan, place

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

SPEED_MM = 16.0
WIDEST_PITCH_MM = 26.0
LAYOUTS = (
    (8, True, False),
    (9, True, False),
    (11, False, False),
    (14, False, False),
    (9, True, True),
    (12, False, True),
)
"""Columns, whether numbers are written, whether lanes are packed close: the first that fits a page is drawn."""


@dataclass(frozen=True)
class Sheet:
    """All that the drawing needs: parts, plan, rows, text, and the width of a column [mm]."""

    parts: Lanes
    plan: Plan
    rows: list[Row]
    blocks: list[Block]
    joint_labels: list[tuple[Joint, list[str], float, str]]
    pitch_mm: float
    numbers: bool

    @property
    def height_mm(self) -> float:
        """Height of all rows."""
        last = self.rows[-1]
        return last.below - last.shaft_y

    def x(self, column: float) -> float:
        """Abscissa [mm] of a column."""
        return SPEED_MM + (column + 0.5) * self.pitch_mm


def train_diagram(screening: Screening) -> Figure:
    """The train: stations sized by inertia, shafts, couplings, gears and ties, with numbers where they fit."""
    tries = []
    for widest, numbers, packed in LAYOUTS:
        sheet = _lay_out(screening, widest, numbers, packed)
        note_lines = _note_lines(screening, sheet)
        tries.append((sheet.height_mm + len(note_lines) * look.line_mm(), sheet, note_lines))
        if tries[-1][0] < look.TALLEST_MM - 8.0:
            break
    else:
        tries.sort(key=lambda attempt: attempt[0])
        _, sheet, note_lines = tries[0]
    foot = len(note_lines) * look.line_mm() + 3.0
    made = look.frame(train_title(screening), sheet.height_mm + foot)
    axes = look.millimetre_axes(made, 0.0, made.top_mm)
    for row in sheet.rows:
        row.shaft_y += made.top_mm
    _draw(axes, screening, sheet)
    look.notes(axes, foot - 1.5, note_lines)
    return made.figure


def _lay_out(screening: Screening, widest: int, numbers: bool, packed: bool) -> Sheet:
    parts = take_apart(screening.graph, widest)
    plan = place(parts, widest, packed)
    cut = any(joint.cut for joint in parts.joints)
    room = look.WIDTH_MM - SPEED_MM
    pitch = min(WIDEST_PITCH_MM, room / (plan.columns + (0.5 if cut else 0.0)))
    blocks = text_blocks(screening, parts, plan, pitch, numbers)
    beside = max((block.column + 1.4 for block in blocks if block.beside > 0), default=0.0)
    if beside * pitch > room:
        pitch = room / beside
        blocks = text_blocks(screening, parts, plan, pitch, numbers)
    labels = _joint_labels(screening, plan, pitch)
    gaps: dict[int, int] = {}
    for joint, lines, _, _ in labels:
        row = min(plan.spot(end)[0] for end in joint.ends)
        gaps[row] = max(gaps.get(row, 0), len(lines))
    return Sheet(parts, plan, row_heights(screening, parts, plan, blocks, gaps), blocks, labels, pitch, numbers)


def _joint_labels(screening: Screening, plan: Plan, pitch: float) -> list[tuple[Joint, list[str], float, str]]:
    """(joint, lines, offset from its column [mm], alignment): right of the joint where there is room, else left."""
    labels: list[tuple[Joint, list[str], float, str]] = []
    joints = sorted(plan.straight, key=lambda joint: min(plan.spot(end) for end in joint.ends))
    places = [min(plan.spot(end) for end in joint.ends) for joint in joints]
    written = (-1, 0.0)
    for joint, (row, column) in zip(joints, places, strict=True):
        x = SPEED_MM + (column + 0.5) * pitch
        nearest = min((c for r, c in places if r == row and c > column), default=None)
        right = look.WIDTH_MM - x - 3.0 if nearest is None else (nearest - column) * pitch - 4.0
        left = x - 4.0 - (written[1] if written[0] == row else 0.0)
        text = joint_text(screening, joint, plan.straight + plan.lettered)
        to_left = look.width_mm(text) > right and left > right
        room = left if to_left else right
        lines = [look.shorten_name(line, room) for line in look.wrap(text, room)]
        labels.append((joint, lines, -2.2, "right") if to_left else (joint, lines, 2.2, "left"))
        reach = 1.0 if to_left else 2.2 + max(look.width_mm(line) for line in lines)
        written = (row, x + reach)
    return labels


def _draw(axes: Axes, screening: Screening, sheet: Sheet) -> None:
    for number in range(len(sheet.parts.lanes)):
        _draw_lane(axes, screening, sheet, number)
    for joint in sheet.plan.straight:
        _draw_joint(axes, screening, sheet, joint)
    for joint, lines, offset, align in sheet.joint_labels:
        _write_joint(axes, sheet, joint, lines, offset, align)
    corners: dict[tuple[int, int], int] = {}
    for number, joint in enumerate(sheet.plan.lettered):
        _draw_lettered(axes, screening, sheet, joint, letters(number), corners)
    for block in sheet.blocks:
        _write_block(axes, sheet, block)


def _draw_lane(axes: Axes, screening: Screening, sheet: Sheet, number: int) -> None:
    graph, lane, placed = screening.graph, sheet.parts.lanes[number], sheet.plan.placed[number]
    y = sheet.rows[placed.row].shaft_y
    spots = [(sheet.x(column), y) for column in placed.columns]
    for k, link in enumerate(lane.links):
        kinds = {"coupling": symbols.coupling, "tie": symbols.spring, "damper": symbols.spring}
        draw = kinds.get(graph.links[link].kind, symbols.shaft)
        draw(axes, spots[k], spots[k + 1])
    largest = float(max(graph.inertia_kgm2))
    geared = {s for link in graph.links if link.kind in ("mesh", "epicyclic") for s in link.stations}
    for bead, spot in zip(lane.beads, spots, strict=True):
        if bead == GROUND:
            symbols.ground(axes, spot, len(lane.beads) == 1)
            continue
        height = symbols.disc_height(float(graph.inertia_kgm2[bead]), largest)
        symbols.disc(axes, spot, height, bead in geared)
    station = next((bead for bead in lane.beads if bead != GROUND), None)
    if station is not None:
        left = sheet.x(min(placed.columns)) - sheet.pitch_mm / 2
        _write_speed(axes, screening, station, (min(left, left - 1.0), y))


def _write_speed(axes: Axes, screening: Screening, station: int, at: tuple[float, float]) -> None:
    ratio = screening.graph.speed_ratio[station]
    rpm = abs(float(ratio)) * screening.train.operation.rated_rad_s * RPM
    lines = [f"{rpm:.4g} rpm" if rpm < 1e4 else f"{rpm:.0f} rpm"] if ratio else ["at rest"]
    if ratio < 0:
        lines.append("reversed")
    for index, text in enumerate(lines):
        y = at[1] + (len(lines) - 1 - 2 * index) * look.line_mm() / 2
        look.put(
            axes,
            at[0],
            y,
            text,
            ha="right",
            color=look.ACCENT,
            fontweight="bold" if not index else "normal",
            gid="speed",
        )


def _half_height(screening: Screening, sheet: Sheet, end: tuple[int, int]) -> float:
    bead = sheet.parts.lanes[end[0]].beads[end[1]]
    if bead == GROUND:
        return 0.0
    inertia = screening.graph.inertia_kgm2
    return symbols.disc_height(float(inertia[bead]), float(max(inertia))) / 2


def _draw_joint(axes: Axes, screening: Screening, sheet: Sheet, joint: Joint) -> None:
    upper, lower = sorted(joint.ends, key=lambda end: sheet.plan.spot(end)[0])
    (row, column), (low_row, _) = sheet.plan.spot(upper), sheet.plan.spot(lower)
    x = sheet.x(column)
    start = (x, sheet.rows[row].shaft_y - _half_height(screening, sheet, upper))
    end = (x, sheet.rows[low_row].shaft_y + _half_height(screening, sheet, lower))
    kinds = {
        "mesh": symbols.teeth,
        "epicyclic": symbols.planets,
        "belt": symbols.belt,
        "tie": symbols.spring,
        "damper": symbols.spring,
        "coupling": symbols.coupling,
        "shaft": symbols.shaft,
    }
    kinds[screening.graph.links[joint.link].kind](axes, start, end)


def _write_joint(axes: Axes, sheet: Sheet, joint: Joint, lines: list[str], offset: float, align: str) -> None:
    row, column = min(sheet.plan.spot(end) for end in joint.ends)
    middle = sheet.rows[row].shaft_y - sheet.rows[row].below - sheet.rows[row].gap / 2
    for index, text in enumerate(lines):
        y = middle + (len(lines) - 1 - 2 * index) * look.line_mm() / 2
        look.put(axes, sheet.x(column) + offset, y, text, ha=align, color=look.ACCENT, gid="joint")


def _draw_lettered(
    axes: Axes, screening: Screening, sheet: Sheet, joint: Joint, name: str, corners: dict[tuple[int, int], int]
) -> None:
    """A letter at both ends; `corners` counts those already at a place, so that each takes its own corner."""
    for end, outward in zip(joint.ends, (1, -1), strict=True):
        row, column = sheet.plan.spot(end)
        x, y = sheet.x(column), sheet.rows[row].shaft_y
        if not joint.cut:
            taken = corners.get((row, column), 0)
            corners[row, column] = taken + 1
            symbols.letter(axes, _corner(x, y, taken), name)
            continue
        columns = sheet.plan.placed[end[0]].columns
        sign = -outward if columns[-1] < columns[0] else outward
        far = x + sign * min(0.42 * sheet.pitch_mm, 7.0)
        draw = symbols.coupling if _is_coupling(screening, joint) and outward > 0 else symbols.shaft
        draw(axes, (x, y), (far, y))
        symbols.letter(axes, (far, y), name)


def _corner(x: float, y: float, taken: int) -> tuple[float, float]:
    """Where the next letter stands at a place: its four corners, then on to the right."""
    if taken < 4:
        side, up = ((-1, 1), (1, 1), (-1, -1), (1, -1))[taken]
        return x + 2.9 * side, y + 2.6 * up
    return x + 2.9 + 3.3 * ((taken - 2) // 2), y + (2.6 if taken % 2 == 0 else -2.6)


def _is_coupling(screening: Screening, joint: Joint) -> bool:
    return screening.graph.links[joint.link].kind == "coupling"


def _write_block(axes: Axes, sheet: Sheet, block: Block) -> None:
    row = sheet.rows[block.row]
    reach = row.reach + (row.near[block.side] if block.far else 0.0)
    x = sheet.x(block.column) + 2.4 * block.beside
    if block.far:
        sign = 1 if block.side == "above" else -1
        symbols.line(axes, [(x, row.shaft_y), (x, row.shaft_y + sign * reach)], look.HAIR_PT, look.QUIET)
    align = {0: "center", 1: "left", -1: "right"}[block.beside]
    for index, (text, bold) in enumerate(block.lines):
        if block.side == "below":
            y = row.shaft_y - reach - (index + 0.5) * look.line_mm()
        else:
            y = row.shaft_y + reach + (len(block.lines) - index - 0.5) * look.line_mm()
        color = look.INK if block.kind == "station" else look.QUIET
        weight = "bold" if bold else "normal"
        look.put(axes, x, y, text, color=color, fontweight=weight, ha=align, gid=block.kind)


def _note_lines(screening: Screening, sheet: Sheet) -> list[str]:
    """How to read the diagram, and what the letters join."""
    graph = screening.graph
    text = (
        "Discs: height as the fourth root of inertia (solid discs of one thickness), dark where they carry teeth. "
        "Double line: shaft."
    )
    kinds = {link.kind for link in graph.links}
    if "coupling" in kinds:
        text += " Crossed box: coupling."
    if kinds & {"mesh", "epicyclic"}:
        text += " Ladder: gear mesh" + (", with rings: epicyclic." if "epicyclic" in kinds else ".")
    if "tie" in kinds:
        text += " Zigzag: tie to ground."
    if "belt" in kinds:
        text += " Two thin strands: belt or chain."
    if "damper" in kinds:
        text += " Zigzag to a disc: damper."
    for fluid in screening.train.fluid_couplings:
        text += f" {fluid.name}: a fluid coupling from {fluid.between[0]} to {fluid.between[1]}, which no spring joins."
    text += f" Speeds at rated; softest link (bold) as referred to {screening.train.operation.speed_at}."
    text += " Inertia and stiffness are actual." if sheet.numbers else " Values stand in the data tables."
    all_joints = sheet.plan.straight + sheet.plan.lettered
    for number, joint in enumerate(sheet.plan.lettered):
        if not joint.cut:
            ends = " and ".join(_bead_name(screening, sheet, end) for end in joint.ends)
            text += f" {letters(number)}: {joint_text(screening, joint, all_joints)}, joins {ends}."
    return look.wrap(text, look.WIDTH_MM - 5.0)


def letters(number: int) -> str:
    """A, B … Z, A2, B2 …: what marks the two ends of a joint that is not drawn as a line."""
    return chr(ord("A") + number % 26) + ("" if number < 26 else str(number // 26 + 1))


def _bead_name(screening: Screening, sheet: Sheet, end: tuple[int, int]) -> str:
    bead = sheet.parts.lanes[end[0]].beads[end[1]]
    return "ground" if bead == GROUND else screening.graph.stations[bead]
