"""A train file with nearly every kind of row, and ways to change it and read what is said about it."""

from __future__ import annotations

import datetime
import json
from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen
from quillshaft.train.document import parse_document
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import train_of

NAME = "booster.toml"
TEXT = """\
schema = 1
[train]
title = "Raw-water booster, train B"
tag = "BP-310B"
units = "SI"
[operation]
speed-at = "motor-core"
rated = "1487 rpm"
[power]
motor-core = "1120 kW"
impeller = "balance"
[stations]
motor-core = { inertia = "19.6 kg m^2", tolerance = "5 %", source = "motor data sheet", status = "stated" }
motor-hub  = { inertia = "0.74 kg m^2" }
gear-hub   = { wr2 = "16.6 lb ft^2" }
pinion     = { inertia = "0.21 kg m^2" }
wheel      = { inertia = "3.9 kg m^2" }
pump-hub   = { gd2 = "1.8 kg m^2" }
impeller   = { inertia = "6.2 kg m^2", entrained = "15 %" }
[shafts]
motor-end   = { between = ["motor-core", "motor-hub"], stiffness = "7.9 MN m/rad" }
wheel-shaft = { between = ["wheel", "pump-hub"], flexibility = "0.23e-6 rad/(N m)" }
pump-shaft  = { between = ["pump-hub", "impeller"], equivalent = { length = "610 mm", diameter = "105 mm" } }
[shafts.pinion-shaft]
between = ["gear-hub", "pinion"]
material = "steel"
pieces = [
    { od = "95 mm", length = "180 mm", hub = "120 mm" },
    { od = "110 mm", id = "30 mm", length = "240 mm", fillet = "6 mm" },
    { od = ["110 mm", "130 mm"], length = "60 mm" },
]
[couplings]
flex-block = { between = ["motor-hub", "gear-hub"], stiffness = "0.145 MN m/rad", tolerance = "15 %", psi = 1.1 }
[gears]
reduction = { between = ["pinion", "wheel"], teeth = [29, 77] }
[machines]
motor = { kind = "induction-motor", at = "motor-core", poles = 4, supply = "50 Hz" }
pump  = { kind = "centrifugal-pump", at = "impeller", vanes = 6 }
[excitations]
process-pulse = { at = "impeller", order = 2, torque = "1.5 %" }
interharmonic = { at = "motor-core", frequency = "92 Hz" }
[excitations-off]
"pump-hub 2x" = "rigid flanges, no misalignment possible"
[criteria]
separation = "10 %"
[assumptions]
tolerances = "default"
own-inertia = "ends"
[sign-off]
document = "TA-0417"
revision = "0"
date = "2026-11-30"
status = "draft"
prepared = "…"
history = [ { revision = "0", date = "2026-11-30", what = "first issue" } ]
[cases.new-coupling]
because = "replacement element, harder grade"
couplings.flex-block = { stiffness = "0.19 MN m/rad", psi = 0.9 }
"""
MORE = """\
[ties]
grid = { at = "motor-core", stiffness = 5000, psi = 0.1 }
[materials]
own = { shear-modulus = 80, density = 7800, tensile = 500, yield = 300, endurance = 140 }
[dismissals]
v = { source = "pump vane-pass", mode = 1, frequency = 3.0, because = "far", by = "A. N.", cases = ["new-coupling"] }
[stations.sun]
inertia = 3
referred-to = "pinion"
[gears.planet-stage]
kind = "epicyclic"
sun = "sun"
carrier = "impeller"
ring = "fixed"
teeth = { sun = 21, ring = 87, planet = 33 }
planets = 3
mesh-stiffness = "3 MN m/rad"
rated-torque = "7 kN m"
[shafts.stub]
between = ["impeller", "end"]
stiffness = "4 MN m/rad"
material = "own"
permitted-stress = 28
passing-stress = 40
strength-rule = "endurance"
weakest = { od = 95, id = 20, fillet = 4, shoulder = 120, keyway = true, cross-hole = 12, stress-factor = 1.6 }
[stations.end]
inertia = 0.4
[excitations.locked]
at = "end"
order = 3
torque = "40 N m"
phase = "30 deg"
locked-with = "process-pulse"
[amplitudes]
"pump vane-pass" = "1.5 %"
"motor line-2x" = { torque = "40 N m", source = "maker" }
[criteria.strength]
mean-stress = "gerber"
safety = 1.5
[criteria.duty]
gear-share = "33 %"
electrical-angle = "3.5 deg"
[cases.louder]
amplitudes."pump vane-pass" = "3 %"
criteria.duty = { gear-share = "20 %" }
"""
"""Rows of the kinds that TEXT does not have, to be put after it."""


def edited(old: str, new: str, text: str = TEXT) -> str:
    """The text with the one place that reads `old` changed; `old` must stand in it."""
    assert old in text, old
    return text.replace(old, new, 1)


def screened(text: str, *cases: str) -> Screening:
    """Read and screen a train file's text."""
    return screen(train_of(parse_document(text, NAME), cases))


def complaint(text: str, *cases: str) -> str:
    """What is said about a text that cannot be used; "" where it can."""
    try:
        screened(text, *cases)
    except TrainFileError as error:
        return str(error)
    return ""


def as_toml(data: dict[str, Any]) -> str:
    """Plain data as TOML, one top-level key a line; floats and dates included."""
    return "".join(f"{json.dumps(key)} = {_value(value)}\n" for key, value in data.items())


def _value(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")
    if isinstance(value, list):
        return "[" + ", ".join(map(_value, value)) + "]"
    if isinstance(value, dict):
        return "{" + ", ".join(f"{json.dumps(key)} = {_value(item)}" for key, item in value.items()) + "}"
    if isinstance(value, datetime.date | datetime.time):
        return value.isoformat()
    return repr(value)
