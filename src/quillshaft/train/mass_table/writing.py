"""A mass-elastic table as the text of a train file: springs, and a gear mesh wherever the speed changes."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from typing import Any

from quillshaft.records import dataclass
from quillshaft.train.mass_table.cells import MassTableError
from quillshaft.train.mass_table.reading import Entry, MassTable

MOST_TEETH = 200
LEAST_TEETH = 17
SAME_SPEED = 1e-9


@dataclass(frozen=True)
class Written:
    """The train file made of a table, and what was understood and assumed on the way, in sentences."""

    text: str
    said: tuple[str, ...]


@dataclass(frozen=True)
class _Link:
    """A connection of two stations: its table in the file, its name and its row."""

    table: str
    name: str
    row: dict[str, Any]
    assumed_teeth: bool = False


def nearest_teeth(ratio: float, half_low: float, half_high: float) -> tuple[int, int] | None:
    """(teeth of the first wheel, teeth of the second) for the speed of the second over that of the first.

    The fewest teeth in all, each wheel at least LEAST_TEETH and at most MOST_TEETH, whose ratio z1 / z2 lies between
    the relative bounds −half_low and +half_high that the rounding of the speeds leaves; of equal sums the nearest.
    None where there are none.
    """
    found: list[tuple[int, float, int, int]] = []
    for second in range(1, MOST_TEETH + 1):
        first = round(ratio * second)
        if first < 1 or first > MOST_TEETH:
            continue
        off = Fraction(first, second) / Fraction(ratio) - 1
        if -half_low <= off <= half_high and math.gcd(first, second) == 1:
            times = max(1, -(-LEAST_TEETH // min(first, second)))
            if max(first, second) * times <= MOST_TEETH:
                found.append(((first + second) * times, abs(float(off)), first * times, second * times))
    return min(found)[2:] if found else None


def train_file_text(table: MassTable, title: str, rated: str | None = None) -> Written:
    """The train file of a table; `rated` is the speed of the first station where the table gives none.

    Raises MassTableError with every problem found: a missing rated speed, two stations that nothing joins, a change of
    speed that no plausible teeth give.
    """
    problems: list[str] = []
    entries = _filled(table)
    speed = _rated(table, rated, problems)
    links = _links(table, entries, problems)
    if problems:
        raise MassTableError(problems)
    said = [*table.said, *_sentences(entries, links)]
    return Written(_text(table, entries, links, title, speed), tuple(said))


def _filled(table: MassTable) -> list[Entry]:
    """The rows with a blank speed taken from the row above."""
    out: list[Entry] = []
    for entry in table.entries:
        blank = entry.pace is None and out
        out.append(replace(entry, pace=out[-1].pace, half=out[-1].half) if blank else entry)
    return out


def _rated(table: MassTable, rated: str | None, problems: list[str]) -> str:
    first = table.entries[0]
    if first.pace is None and any(entry.pace is not None for entry in table.entries):
        problems.append(f"{table.name}, row {first.row}: the speed of the first station is blank, and others have one")
        return ""
    if rated is not None:
        return rated
    if first.speed is None or table.ratios:
        problems.append(f'{table.name}: no speed of the first station is given. Allowed: --rated "1487 rpm"')
    return first.speed or ""


def _links(table: MassTable, entries: list[Entry], problems: list[str]) -> list[_Link]:
    links: list[_Link] = []
    names: set[str] = set()
    for one, two in pairwise(entries):
        link = _link(table, one, two, problems)
        if link is None:
            continue
        name, count = link.name, 1
        while name in names:
            count += 1
            name = f"{link.name} {count}"
        names.add(name)
        links.append(replace(link, name=name))
    if entries[-1].spring is not None:
        problems.append(
            f"{table.name}, row {entries[-1].row}: the last station has a stiffness to the next, and there is none. "
            "Allowed: a blank cell; a spring to ground is written as a tie in the train file"
        )
    return links


def _link(table: MassTable, one: Entry, two: Entry, problems: list[str]) -> _Link | None:
    where = f"{table.name}, rows {one.row} and {two.row} ({one.station}, {two.station})"
    row: dict[str, Any] = {"between": [one.station, two.station]}
    note = {"document": f"{table.name}, row {one.row}"}
    changes = one.pace is not None and two.pace is not None and abs(two.pace / one.pace - 1.0) > SAME_SPEED
    if not changes:
        if one.spring is None:
            problems.append(f"{where}: no stiffness and no change of speed between them. Allowed: a stiffness above 0")
            return None
        coupling = "coupling" in f"{one.link or ''} {one.remark}".lower()
        name = one.link or f"{one.station} to {two.station}"
        return _Link("couplings" if coupling else "shafts", name[:80], {**row, one.spring[0]: one.spring[1], **note})
    if one.spring is not None and one.spring[0] == "flexibility":
        problems.append(
            f"{where}: the flexibility of a mesh is not read. Allowed: a stiffness, or a blank cell (rigid)"
        )
        return None
    stiff = {} if one.spring is None else {"mesh-stiffness": one.spring[1]}
    name = (one.link or f"{one.station} / {two.station}")[:80]
    if one.teeth and two.teeth:
        return _given_teeth(where, name, {**row, "teeth": [one.teeth, two.teeth], **stiff, **note}, one, two, problems)
    return _assumed_teeth(where, name, {**row, **stiff}, note, one, two, problems)


def _bounds(one: Entry, two: Entry) -> tuple[float, float, float]:
    """Speed ratio, and its relative bounds down and up from the rounding of both speeds."""
    low, high = one.half / (one.pace or 1.0), two.half / (two.pace or 1.0)
    ratio = (two.pace or 1.0) / (one.pace or 1.0)
    return ratio, 1.0 - (1.0 - high) / (1.0 + low), (1.0 + high) / max(1.0 - low, 1e-9) - 1.0


def _given_teeth(
    where: str, name: str, row: dict[str, Any], one: Entry, two: Entry, problems: list[str]
) -> _Link | None:
    ratio, _, _ = _bounds(one, two)
    teeth = row["teeth"][0] / row["teeth"][1]
    if abs(teeth / ratio - 1.0) > 0.005:
        problems.append(
            f"{where}: the teeth {row['teeth'][0]} : {row['teeth'][1]} give a speed ratio of {teeth:.5g}, "
            f"the speeds one of {ratio:.5g}. Allowed: teeth and speeds that agree within 0.5 %"
        )
        return None
    return _Link("gears", name, row)


def _assumed_teeth(
    where: str, name: str, row: dict[str, Any], note: dict[str, str], one: Entry, two: Entry, problems: list[str]
) -> _Link | None:
    ratio, low, high = _bounds(one, two)
    teeth = nearest_teeth(ratio, low, high)
    if teeth is None:
        problems.append(
            f"{where}: the speed changes by {ratio:.6g}, and no two wheels of {LEAST_TEETH} to {MOST_TEETH} teeth give "
            "that. Allowed: a column of teeth with the numbers of both wheels"
        )
        return None
    text = f"teeth not given: the nearest fraction for a speed ratio of {ratio:.6g}; state the real numbers"
    row = {"between": row["between"], "teeth": list(teeth), **row, **note, "status": "assumed", "note": text}
    return _Link("gears", name, row, assumed_teeth=True)


def _sentences(entries: list[Entry], links: list[_Link]) -> list[str]:
    counts = {name: sum(1 for link in links if link.table == name) for name in ("shafts", "couplings", "gears")}
    parts = ", ".join(f"{count} {name if count != 1 else name[:-1]}" for name, count in counts.items() if count)
    said = [f"{len(entries)} stations in one chain, joined by {parts}."]
    if counts["shafts"]:
        said.append("A stiffness is taken as that of a shaft unless its name or remark says coupling.")
    for link in links:
        if link.table != "gears":
            continue
        teeth = f"{link.row['teeth'][0]} : {link.row['teeth'][1]}"
        where = f"{link.row['between'][0]} and {link.row['between'][1]}"
        how = "ASSUMED, the nearest fraction; its tooth mesh is switched off" if link.assumed_teeth else "as given"
        mesh = "" if "mesh-stiffness" in link.row else ", rigid"
        said.append(f"The speed changes between {where}: an external gear mesh {teeth} ({how}{mesh}).")
    return said


def _text(table: MassTable, entries: list[Entry], links: list[_Link], title: str, speed: str) -> str:
    lines = [
        f"# Made from {_comment(table.name)}. What was understood:",
        *(f"#   {_comment(sentence)}" for sentence in (*table.said, *_sentences(entries, links))),
        "schema = 1",
        "",
        "[train]",
        f"title = {_toml(title)}",
        'units = "SI"',
        "",
        "[operation]",
        f"speed-at = {_toml(entries[0].station)}",
        f"rated = {_toml(speed)}",
        "",
        "[stations]",
        *(
            f"{_key(entry.station)} = {{ {entry.key} = {_toml(entry.inertia)}, "
            f"document = {_toml(f'{table.name}, row {entry.row}')} }}"
            for entry in entries
        ),
    ]
    for name in ("shafts", "couplings", "gears"):
        rows = [f"{_key(link.name)} = {_toml(link.row)}" for link in links if link.table == name]
        lines += ["", f"[{name}]", *rows] if rows else []
    off = [f"{_key(f'{link.name} mesh')} = {_toml('the teeth are assumed')}" for link in links if link.assumed_teeth]
    return "\n".join(lines + (["", "[excitations-off]", *off] if off else [])) + "\n"


def _comment(text: str) -> str:
    return "".join(letter if letter.isprintable() else " " for letter in text)


def _key(name: str) -> str:
    bare = name.replace("-", "a").replace("_", "a")
    return name if bare.isascii() and bare.isalnum() else _toml(name)


def _toml(value: Any) -> str:
    """A value on one line, as TOML spells it."""
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{key} = {_toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(_toml(item) for item in value) + "]"
    return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")
