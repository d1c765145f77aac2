"""Every key of gears, belts and joints: in the schema, in `check`, and in the report's data table."""

from __future__ import annotations

import io
import json
import tomllib

import pytest
from jsonschema import Draft202012Validator
from rich.console import Console

from quillshaft.cli.show import show_check
from quillshaft.present.gear_words import belt_text, gear_text, joint_text
from quillshaft.present.report.data import data_parts
from quillshaft.present.units import SHOWN
from quillshaft.train.gear_rows import BeltRow, BevelRow, EpicyclicRow, GearRow, JointRow
from quillshaft.train.messages import keys_of
from quillshaft.train.starters import schema_text
from trains import screening_of, train

TEXT = """\
schema = 1
[train]
title = "Gears of every kind"
units = "SI"
[operation]
speed-at = "motor"
rated = "1480 rpm"
[stations]
motor = { inertia = 4.0 }
pinion = { inertia = 0.2 }
wheel = { inertia = 0.9 }
sun = { inertia = 0.05 }
carrier = { inertia = 6.0 }
corner-in = { inertia = 0.5 }
corner-out = { inertia = 2.0 }
pulley-1 = { inertia = 1.0 }
pulley-2 = { inertia = 5.0 }
[shafts]
cardan = { between = ["motor", "pinion"], stiffness = "0.3 MN m/rad" }
quill = { between = ["wheel", "sun"], stiffness = "0.5 MN m/rad" }
low = { between = ["carrier", "corner-in"], stiffness = "4 MN m/rad" }
out = { between = ["corner-out", "pulley-1"], stiffness = "4 MN m/rad" }
[gears.first]
between = ["pinion", "wheel"]
teeth = [25, 75]
module = "5 mm"
helix = "11 deg"
pressure-angle = "20 deg"
face = "62 mm"
profile-shift = [0.31, -0.12]
contact-ratio = 1.57
backlash = "0.23 mm"
mesh-stiffness = "iso-6336"
psi = 0.1
[gears.second]
kind = "epicyclic"
sun = "sun"
carrier = "carrier"
ring = "fixed"
fixed-through = "5 MN m/rad"
fixed-inertia = "1.7 kg m^2"
fixed-tolerance = "17 %"
teeth = { sun = 24, ring = 96, planet = 36 }
planets = 3
planet-inertia = "0.21 kg m^2"
planet-mass = "41 kg"
planet-radius = "151 mm"
inertia-tolerance = "3 %"
module = "5 mm"
face = "64 mm"
backlash = "0.19 mm"
mesh-stiffness = "iso-6336"
[gears.corner]
kind = "bevel"
between = ["corner-in", "corner-out"]
teeth = [21, 43]
shaft-angle = "88 deg"
reverses = true
backlash = "0.15 mm"
mesh-stiffness = "30 MN m/rad"
[belts.drive]
between = ["pulley-1", "pulley-2"]
kind = "toothed-belt"
diameters = ["254 mm", "635 mm"]
teeth = [40, 100]
span-stiffness = "1.9 MN/m"
spans = 1
[joints]
rear = { at = "cardan", angle = "12 deg" }
"""
SHOWN_IN_TABLE = (
    *("module 5", "face 62", "helix 11°", "profile shift 0.31 and -0.12", "contact ratio 1.57", "backlash 0.23 mm"),
    *("ISO 6336-1 simplified (recalled, confirm against your edition)", "36 teeth, each 0.21", "41 kg at radius 151"),
    *("second ring (1.7", "second ring support", "backlash 0.19 mm", "bevel, shafts at 88°, reverses", "backlash 0.15"),
    *("toothed belt, pulleys ⌀254 and ⌀635 mm", "40 : 100 teeth", "one span taut", "universal joint at 12°", "cardan"),
)


def table_of(text):
    read = train(text)
    units = SHOWN[read.units]
    lines = [gear_text(gear, units) for gear in read.gears] + [belt_text(belt, units) for belt in read.belts]
    return "\n".join([*lines, *(joint_text(joint) for joint in read.joints)])


@pytest.mark.parametrize("words", SHOWN_IN_TABLE)
def test_the_data_table_states_what_the_file_does(words):
    assert words in table_of(TEXT)


def test_the_report_takes_its_rows_from_those_words():
    assert "universal joint at 12°" in repr(data_parts(screening_of(TEXT)))


def test_a_file_with_every_key_keeps_the_schema():
    errors = Draft202012Validator(json.loads(schema_text())).iter_errors(tomllib.loads(TEXT))
    assert [error.message for error in errors] == []


@pytest.mark.parametrize("row", [GearRow, EpicyclicRow, BevelRow, BeltRow, JointRow], ids=lambda row: row.__name__)
def test_every_key_of_gears_belts_and_joints_stands_in_the_schema(row):
    defined = json.loads(schema_text())["$defs"][row.__name__]["properties"]
    assert set(defined) == set(keys_of(row))


@pytest.mark.parametrize(
    "words", ["second planets", "second ring mesh", "second ring support", "21 : 43 bevel", "40 : 100", "rear 2x"]
)
def test_check_lists_what_a_gear_brings_along(words):
    out = io.StringIO()
    show_check(screening_of(TEXT), Console(file=out, width=220))
    assert words in out.getvalue()


def test_us_units_are_shown_as_the_file_declares_them():
    text = TEXT.replace('units = "SI"', 'units = "US"')
    # 5 mm = 0.1969 in; 41 kg = 90.39 lb (0.0254 m and 0.45359237 kg, exact).
    assert "module 0.1969" in table_of(text)
    assert "90.39 lb" in table_of(text)


def test_belts_and_planets_change_in_a_case():
    text = (
        TEXT
        + """
[cases.new]
belts.drive = { span-stiffness = "0.2 MN/m" }
gears.second = { planet-inertia = "0.5 kg m^2" }
"""
    )
    read = train(text, ("new",))
    assert read.belts[0].span_n_m == pytest.approx(2e5)
    assert read.gears[1].wheels.inertia_kgm2 == pytest.approx(0.5)
