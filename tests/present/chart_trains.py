"""Trains of many kinds for the charts, all invented; screened once and kept."""

from __future__ import annotations

import tempfile
from functools import cache
from itertools import pairwise
from pathlib import Path

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen
from quillshaft.train.read import load

HEAD = 'schema = 1\n[train]\ntitle = "Chart sample"\ntag = "C-1"\nunits = "SI"\n'

PUMP = """
[operation]
speed-at = "motor-core"
rated = "1487 rpm"
[stations]
motor-core = { inertia = "19.6 kg m^2" }
motor-hub = { inertia = "0.74 kg m^2" }
gear-hub = { inertia = "0.70 kg m^2" }
pinion = { inertia = "0.21 kg m^2" }
wheel = { inertia = "3.9 kg m^2" }
pump-hub = { inertia = "0.45 kg m^2" }
impeller = { inertia = "6.2 kg m^2", entrained = "15 %" }
[shafts]
motor-end = { between = ["motor-core", "motor-hub"], stiffness = "7.9 MN m/rad" }
pinion-shaft = { between = ["gear-hub", "pinion"], stiffness = "1.69 MN m/rad" }
wheel-shaft = { between = ["wheel", "pump-hub"], stiffness = "4.35 MN m/rad" }
pump-shaft = { between = ["pump-hub", "impeller"], stiffness = "1.565 MN m/rad" }
[couplings]
flex-block = { between = ["motor-hub", "gear-hub"], stiffness = "0.145 MN m/rad", kind = "elastomer" }
[gears]
reduction = { between = ["pinion", "wheel"], teeth = [29, 77] }
[machines]
motor = { kind = "induction-motor", at = "motor-core", poles = 4, supply = "50 Hz" }
pump = { kind = "centrifugal-pump", at = "impeller", vanes = 6 }
[excitations]
interharmonic = { at = "motor-core", frequency = "92 Hz" }
"""

CLEAR = """
[operation]
speed-at = "rotor"
rated = "990 rpm"
[stations]
rotor = { inertia = "12 kg m^2" }
fan-wheel = { inertia = "31 kg m^2" }
[shafts]
main = { between = ["rotor", "fan-wheel"], stiffness = "2.4 MN m/rad" }
[machines]
fan = { kind = "fan", at = "fan-wheel", blades = 11 }
"""

FIRING = (0, 480, 240, 600, 120, 360)


def _genset() -> str:
    names = ["nose", *(f"throw-{n}" for n in range(1, 7)), "flywheel", "generator-hub", "generator"]
    inertia = [0.9, 0.42, 0.40, 0.42, 0.42, 0.40, 0.42, 11.0, 0.8, 24.0]
    stations = "".join(f'{n} = {{ inertia = "{j} kg m^2" }}\n' for n, j in zip(names, inertia, strict=True))
    pairs = list(pairwise(names[:8]))
    shafts = "".join(
        f'crank-{i} = {{ between = ["{a}", "{b}"], stiffness = "3.1 MN m/rad" }}\n' for i, (a, b) in enumerate(pairs)
    )
    cylinders = ", ".join(
        f'{{ at = "throw-{n}", fires-at = "{angle} deg" }}' for n, angle in enumerate(FIRING, start=1)
    )
    return f"""
[operation]
speed-at = "flywheel"
rated = "1500 rpm"
range = ["700 rpm", "1500 rpm"]
idle = "600 rpm"
trip = "1725 rpm"
barred = [["770 rpm", "930 rpm"]]
barred-because = "order 3 in the first mode"
[stations]
{stations}
[shafts]
{shafts}
generator-shaft = {{ between = ["generator-hub", "generator"], stiffness = "5.2 MN m/rad" }}
[couplings]
ring = {{ between = ["flywheel", "generator-hub"], stiffness = "0.78 MN m/rad", kind = "elastomer" }}
[machines.engine]
kind = "reciprocating-engine"
strokes = 4
cylinders = [ {cylinders} ]
[machines.alternator]
kind = "generator"
at = "generator"
poles = 4
"""


ENGINE = _genset()

BRANCHES = """
[operation]
speed-at = "bull"
rated = "1180 rpm"
range = [["840 rpm", "960 rpm"], ["1040 rpm", "1250 rpm"]]
[stations]
turbine = { inertia = "8.5 kg m^2" }
turbine-hub = { inertia = "0.9 kg m^2" }
bull-hub = { inertia = "1.4 kg m^2" }
bull = { inertia = "22 kg m^2" }
bull-tail = { inertia = "0.6 kg m^2" }
oil-gear = { inertia = "0.12 kg m^2" }
hp-pinion = { inertia = "0.08 kg m^2" }
hp-impeller = { inertia = "0.11 kg m^2" }
hp-impeller-2 = { inertia = "0.09 kg m^2" }
lp-pinion = { inertia = "0.19 kg m^2" }
lp-impeller = { inertia = "0.34 kg m^2" }
oil-wheel = { inertia = "0.05 kg m^2" }
oil-pump = { inertia = "0.02 kg m^2" }
[shafts]
turbine-shaft = { between = ["turbine", "turbine-hub"], stiffness = "3.8 MN m/rad" }
bull-shaft = { between = ["bull-hub", "bull"], stiffness = "6.1 MN m/rad" }
tail-shaft = { between = ["bull", "bull-tail"], stiffness = "1.2 MN m/rad" }
tail-end = { between = ["bull-tail", "oil-gear"], stiffness = "0.8 MN m/rad" }
hp-left = { between = ["hp-impeller", "hp-pinion"], stiffness = "0.21 MN m/rad" }
hp-right = { between = ["hp-pinion", "hp-impeller-2"], stiffness = "0.23 MN m/rad" }
lp-shaft = { between = ["lp-pinion", "lp-impeller"], stiffness = "0.35 MN m/rad" }
oil-shaft = { between = ["oil-wheel", "oil-pump"], stiffness = "15 kN m/rad" }
[couplings]
disc-pack = { between = ["turbine-hub", "bull-hub"], stiffness = "1.1 MN m/rad", kind = "disc" }
[gears]
hp-mesh = { between = ["bull", "hp-pinion"], teeth = [211, 31] }
lp-mesh = { between = ["bull", "lp-pinion"], teeth = [211, 47] }
oil-mesh = { between = ["oil-gear", "oil-wheel"], teeth = [40, 33] }
[machines]
drive = { kind = "other", at = "turbine", passes = [3] }
hp-stage = { kind = "compressor", at = "hp-impeller", vanes = 17 }
lp-stage = { kind = "compressor", at = "lp-impeller", vanes = 15 }
"""

EPICYCLIC = """
[operation]
speed-at = "rotor"
rated = "1780 rpm"
range = ["900 rpm", "1780 rpm"]
[stations]
rotor = { inertia = "14 kg m^2" }
hub-in = { inertia = "0.6 kg m^2" }
sun = { inertia = "0.05 kg m^2" }
carrier = { inertia = "2.3 kg m^2" }
hub-out = { inertia = "0.9 kg m^2" }
mill = { inertia = "88 kg m^2" }
[shafts]
rotor-shaft = { between = ["rotor", "hub-in"], stiffness = "1.9 MN m/rad" }
carrier-shaft = { between = ["carrier", "hub-out"], stiffness = "8.8 MN m/rad" }
mill-shaft = { between = ["hub-out", "mill"], stiffness = "5.4 MN m/rad" }
[couplings]
gear-pair = { between = ["hub-in", "sun"], stiffness = "0.9 MN m/rad", kind = "gear" }
[gears.first-stage]
kind = "epicyclic"
sun = "sun"
carrier = "carrier"
ring = "fixed"
teeth = { sun = 21, ring = 87 }
planets = 3
[machines]
drive = { kind = "converter-fed-motor", at = "rotor", poles = 4 }
"""

SPRUNG_RING = (
    EPICYCLIC.replace('ring = "fixed"', 'ring = "ring-gear"').replace(
        'mill = { inertia = "88 kg m^2" }',
        'mill = { inertia = "88 kg m^2" }\nring-gear = { inertia = "4.1 kg m^2" }',
    )
    + """
[ties]
torque-arm = { at = "ring-gear", stiffness = "9.5 MN m/rad" }
[operation.speeds]
ring-gear = "0 rpm"
"""
)

GRID = CLEAR.replace(
    "[machines]",
    """[ties]
grid = { at = "rotor", stiffness = "0.3 MN m/rad" }
[machines]""",
)


def _long(count: int, prefix: str = "") -> str:
    names = [f"{prefix}{'roll' if n % 3 else 'gear-rim'}-{n + 1}" for n in range(count)]
    stations = "".join(
        f'{n} = {{ inertia = "{0.4 + 0.37 * (i * 7 % 5) + (12 if i == 0 else 0):.2f} kg m^2" }}\n'
        for i, n in enumerate(names)
    )
    shafts = "".join(
        f'{prefix}span-{i + 1} = {{ between = ["{a}", "{b}"], stiffness = "{1.1 + 0.2 * (i % 4):.1f} MN m/rad" }}\n'
        for i, (a, b) in enumerate(pairwise(names))
        if i != 4
    )
    return f"""
[operation]
speed-at = "{names[0]}"
rated = "750 rpm"
range = ["300 rpm", "800 rpm"]
[stations]
{stations}
[shafts]
{shafts}
[couplings]
{prefix}flex = {{ between = ["{names[4]}", "{names[5]}"], stiffness = "0.2 MN m/rad" }}
[machines]
drive = {{ kind = "other", at = "{names[0]}", passes = [2, 3] }}
"""


LONG_25 = _long(25)
LONG_40 = _long(40)
LONG_NAMES = _long(9, prefix="intermediate-line-north-bay-")

DISMISSED = (
    PUMP
    + """
[dismissals]
tone = { source = "interharmonic", mode = 2, frequency = "89 Hz", because = "filtered", by = "A. Berg" }
"""
)

LOOP = """
[operation]
speed-at = "input"
rated = "1000 rpm"
[stations]
motor = { inertia = "5 kg m^2" }
input = { inertia = "1 kg m^2" }
left-wheel = { inertia = "2 kg m^2" }
right-wheel = { inertia = "2.1 kg m^2" }
left-pinion = { inertia = "0.3 kg m^2" }
right-pinion = { inertia = "0.3 kg m^2" }
output = { inertia = "9 kg m^2" }
drum = { inertia = "60 kg m^2" }
[shafts]
motor-shaft = { between = ["motor", "input"], stiffness = "0.4 MN m/rad" }
left-shaft = { between = ["left-wheel", "left-pinion"], stiffness = "0.9 MN m/rad" }
right-shaft = { between = ["right-wheel", "right-pinion"], stiffness = "0.8 MN m/rad" }
drum-shaft = { between = ["output", "drum"], stiffness = "3 MN m/rad" }
[gears]
left-first = { between = ["input", "left-wheel"], teeth = [23, 71] }
right-first = { between = ["input", "right-wheel"], teeth = [23, 71] }
left-last = { between = ["left-pinion", "output"], teeth = [19, 83] }
right-last = { between = ["right-pinion", "output"], teeth = [19, 83] }
[machines]
hoist = { kind = "other", at = "drum", passes = [4] }
"""

FOLLOWS_TORQUE = (
    BRANCHES.replace(
        'stiffness = "1.1 MN m/rad", kind = "disc"',
        'kind = "elastomer", stiffness = { "0 kN m" = "0.2 MN m/rad", "4 kN m" = "0.9 MN m/rad" }',
    )
    + """
[power]
turbine = "480 kW"
hp-impeller = "-240 kW"
lp-impeller = "-200 kW"
oil-pump = "balance"
law = "square"
"""
)

ALONE = """
[operation]
speed-at = "rotor"
rated = "1000 rpm"
[stations]
rotor = { inertia = "1 kg m^2" }
"""

TRAINS = {
    "pump": PUMP,
    "clear": CLEAR,
    "engine": ENGINE,
    "branches": BRANCHES,
    "epicyclic": EPICYCLIC,
    "sprung-ring": SPRUNG_RING,
    "grid": GRID,
    "long-25": LONG_25,
    "long-40": LONG_40,
    "long-names": LONG_NAMES,
    "dismissed": DISMISSED,
    "loop": LOOP,
    "follows-torque": FOLLOWS_TORQUE,
}


@cache
def screened(name: str) -> Screening:
    """The screening of one of the trains."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "train.toml"
        path.write_text(HEAD + {**TRAINS, "alone": ALONE}[name], encoding="utf-8")
        return screen(load(path))
