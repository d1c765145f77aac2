"""`repeat = n` on a station or a shaft: n rows of one, with numbered names, so that a crank is written once."""

from __future__ import annotations

import re
from dataclasses import replace
from typing import Any

from quillshaft.train.overlay import PathParts
from quillshaft.train.validate import Findings, Rows

NUMBERED = re.compile(r"(.*-)([0-9]{1,4})")


def expand_repeats(findings: Findings, rows: Rows) -> Rows:
    """The rows with every repeated station and shaft written out, in its place.

    A station `throw` with repeat = 6 gives throw-1 to throw-6. A shaft `crank` with repeat = 5 gives crank-1 to
    crank-5; both its ends are numbered stations, and their numbers count on by one from shaft to shaft.
    """
    keyed, declared = dict(rows.keyed), dict(rows.declared)
    for table in ("stations", "shafts"):
        out: dict[str, Any] = {}
        names: list[str] = []
        for name in declared[table]:
            row = keyed[table].get(name)
            made = {} if row is None else _written_out(findings, (table, name), row)
            for new in made:
                if new != name and new in declared[table]:
                    findings.add((table, new), f"the name {new} is taken by the repeated {name}", None, "another name")
            out |= made
            names += list(made) or [name]
        keyed[table], declared[table] = out, tuple(dict.fromkeys(names))
    return replace(rows, keyed=keyed, declared=declared)


def _written_out(findings: Findings, path: PathParts, row: Any) -> dict[str, Any]:
    table, name = str(path[0]), str(path[1])
    if row.repeat is None:
        return {name: row}
    if table == "stations":
        return {f"{name}-{number}": row for number in range(1, row.repeat + 1)}
    ends = [NUMBERED.fullmatch(end) for end in row.between]
    if not all(ends):
        message = "a repeated shaft counts on from numbered stations"
        findings.add((*path, "between"), message, row.between, '["throw-1", "throw-2"]')
        return {name: row}
    return {
        f"{name}-{step + 1}": row.model_copy(
            update={"between": [f"{end[1]}{int(end[2]) + step}" for end in ends if end is not None]}
        )
        for step in range(row.repeat)
    }
