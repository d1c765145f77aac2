"""Train files for tests: a builder that writes TOML from plain values, and the way to a screening."""

from __future__ import annotations

import json
import math
from typing import Any

import numpy as np
import pytest

from quillshaft.assess.results import LinkDuty, Screening
from quillshaft.assess.screening import screen
from quillshaft.graph.build import build_graph
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.collect import SourceSet, collect_sources
from quillshaft.train.document import parse_document
from quillshaft.train.model import Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import train_of

RPM = math.pi / 30.0


def toml(value: Any) -> str:
    """A value on one line, as TOML spells it."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False)
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{json.dumps(key)} = {toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(toml(item) for item in value) + "]"
    return repr(value)


def _row(table: str, row: Any) -> Any:
    """Short forms: a station as its inertia, a spring as (a, b, k), a gear as (a, b, z1, z2), a tie as (at, k)."""
    if table == "stations" and not isinstance(row, dict):
        return {"inertia": row}
    if table in ("shafts", "couplings") and isinstance(row, tuple):
        return {"between": row[:2], "stiffness": row[2]}
    if table == "gears" and isinstance(row, tuple):
        return {"between": row[:2], "teeth": row[2:]}
    if table == "ties" and isinstance(row, tuple):
        return {"at": row[0], "stiffness": row[1]}
    return row


def train_text(stations: dict[str, Any], units: str = "SI", **tables: Any) -> str:
    """A train file. Tables are keyword arguments (excitations_off for [excitations-off]).

    Unless told, the speeds are those of the first station, rated 1500 rpm, and no tolerances are assumed.
    """
    operation = {"speed-at": next(iter(stations), ""), "rated": "1500 rpm", **tables.pop("operation", {})}
    assumptions = {"tolerances": "none", **tables.pop("assumptions", {})}
    every = {"operation": operation, "assumptions": assumptions, "stations": stations, **tables}
    lines = ["schema = 1", f'[train]\ntitle = "test train"\nunits = "{units}"']
    for table, rows in every.items():
        name = table.replace("_", "-")
        lines.append(f"[{name}]")
        lines += [f"{json.dumps(key)} = {toml(_row(table, row))}" for key, row in rows.items()]
    return "\n".join(lines) + "\n"


def train(text: str, cases: tuple[str, ...] = ()) -> Train:
    """The Train that a text states."""
    return train_of(parse_document(text, "train.toml"), cases)


def graph_of(text: str) -> TorsionalGraph:
    """The torsional graph of a text."""
    return build_graph(train(text))


def sources_of(text: str, cases: tuple[str, ...] = ()) -> SourceSet:
    """The sources of a text."""
    read = train(text, cases)
    return collect_sources(read, build_graph(read))


def screening_of(text: str, cases: tuple[str, ...] = ()) -> Screening:
    """The screening of a text; every mode must be proven by counting."""
    result = screen(train(text, cases))
    assert result.self_check.all_proven
    assert result.self_check.largest_energy_error < 1e-12
    return result


def omegas(text: str) -> np.ndarray:
    """All natural frequencies [rad/s] of a text."""
    return np.array([mode.omega_rad_s for mode in screening_of(text).modes])


def duty(result: Screening, link: str) -> LinkDuty:
    """Mean torque and wind-up of one link."""
    return next(item for item in result.duties if item.link == link)


def refusal(text: str, cases: tuple[str, ...] = ()) -> str:
    """The message with which a text is refused; the test fails where it is accepted."""
    with pytest.raises(TrainFileError) as caught:
        screen(train(text, cases))
    return str(caught.value)
