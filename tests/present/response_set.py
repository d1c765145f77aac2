"""A small generator set with a synthetic response, and ways to give it other findings and closings; all invented."""

from __future__ import annotations

import tempfile
from dataclasses import replace
from functools import cache
from pathlib import Path

from response_records import build

from quillshaft.assess.response_results import BarredSpan, Closing, ClosingStatus, DeadLoad, Finding, Response
from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen
from quillshaft.train.read import load

TEXT = """
schema = 1
[train]
title = "Sample set"
units = "SI"
[operation]
speed-at = "flywheel"
rated = "1500 rpm"
idle = "700 rpm"
trip = "1725 rpm"
[power]
throw-1 = "40 kW"
throw-2 = "40 kW"
throw-3 = "40 kW"
rotor = "balance"
law = "constant-torque"
[assumptions]
tolerances = "none"
[stations]
throw-1 = { inertia = "0.3 kg m^2" }
throw-2 = { inertia = "0.3 kg m^2" }
throw-3 = { inertia = "0.3 kg m^2" }
flywheel = { inertia = "5 kg m^2" }
ring-hub = { inertia = "0.6 kg m^2" }
rotor = { inertia = "8 kg m^2" }
[shafts]
crank-12 = { between = ["throw-1", "throw-2"], stiffness = "0.80 MN m/rad" }
crank-23 = { between = ["throw-2", "throw-3"], stiffness = "0.80 MN m/rad" }
crank-end = { between = ["throw-3", "flywheel"], stiffness = "1.2 MN m/rad" }
rotor-shaft = { between = ["ring-hub", "rotor"], stiffness = "4.0 MN m/rad" }
[couplings.ring]
kind = "elastomer"
between = ["flywheel", "ring-hub"]
stiffness = "40 kN m/rad"
psi = 1.13
rated-torque = "3 kN m"
permitted-heat = "620 W"
heat-rise = "70 K"
[machines]
generator = { kind = "generator", at = "rotor", poles = 4, supply = "50 Hz" }
[machines.engine]
kind = "reciprocating-engine"
strokes = 4
cylinders = [
    { at = "throw-1", fires-at = "0 deg" },
    { at = "throw-2", fires-at = "480 deg" },
    { at = "throw-3", fires-at = "240 deg" },
]
[cases.soft]
because = "softer ring"
couplings.ring = { stiffness = "30 kN m/rad" }
"""

KEPT = Finding(
    element="ring",
    check="vibratory torque",
    value=800.0,
    limit=1000.0,
    unit="N·m",
    at_speed_rpm=1480.4,
    case="normal",
    zone="continuous",
    verdict="pass",
    basis="the maker's rating",
)
FAILED = replace(KEPT, value=1500.0, verdict="fail")
SILENT = replace(KEPT, limit=None, verdict="no limit given")
BAR = BarredSpan(1117.0, 1286.0, "first mode, order 0.5")


@cache
def screening() -> Screening:
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "train.toml"
        path.write_text(TEXT, encoding="utf-8")
        return screen(load(path))


@cache
def generator() -> Response:
    """The set with every synthetic record filled, one range barred."""
    response = build(screening(), speeds=121)
    dead = DeadLoad("engine", "engine cylinder 3 dead", 0.6, "heat of the coupling")
    restrictions = replace(response.restrictions, barred=(BAR,), lowest_idle_rpm=1286.0, dead_loads=(dead,))
    return replace(response, restrictions=restrictions)


def settled(
    findings: tuple[Finding, ...] = (KEPT,), status: ClosingStatus = "cleared by response", barred: bool = False
) -> Response:
    """The set with these findings, and every open interference closed in this way."""
    response = generator()
    restrictions = replace(response.restrictions, lowest_idle_rpm=None)
    restrictions = restrictions if barred else replace(restrictions, barred=())
    finding = None if status.startswith("not judged") else KEPT
    closings = tuple(
        Closing(source, mode, status, f"mode {mode} with {source}: 80 % of the limit in ring", finding)
        for source, mode in open_pairs()
    )
    return replace(response, findings=findings, closings=closings, restrictions=restrictions)


def open_pairs() -> list[tuple[str, int]]:
    """(source, mode) of what the screening leaves open, the worst first."""
    return [(pair.source, pair.mode) for pair in screening().not_clear() if pair.dismissed is None]


def in_us_units(response: Response) -> Response:
    train = replace(response.screening.train, units="US")
    return replace(response, screening=replace(response.screening, train=train))
