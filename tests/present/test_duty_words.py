"""Limits as the report's data table words them, in the units of the file; nothing where the file states none."""

from __future__ import annotations

import pytest

from quillshaft.present.duty_words import damper_limit_words, limit_words, stress_words
from quillshaft.present.gear_words import gear_text
from quillshaft.present.report.reciprocating_data import reciprocating_words
from quillshaft.present.report.shaft_data import shaft_words
from quillshaft.present.units import SHOWN
from quillshaft.train.duty_model import ShaftStrength
from trains import train, train_text

STATIONS = {"a": 2.0, "b": 3.0}
OWN = {"own": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3", "tensile": "850 MPa"}}


def limits(units: str = "SI", **shaft) -> str:
    row = {"between": ["a", "b"], **({} if "pieces" in shaft else {"stiffness": 1e5}), **shaft}
    read = train(train_text(STATIONS, units, shafts={"s": row}, materials=OWN)).shafts[0]
    return limit_words(read, SHOWN[units])  # type: ignore[index]


def test_a_shaft_without_limits_says_nothing():
    assert limits() == ""


def test_limits_of_a_shaft():
    torque = {"permitted-torque": "3.2 kN m", "passing-torque": "6 kN m"}
    assert limits(**torque) == "; permitted ±3200 N·m for good; permitted ±6000 N·m in passing"
    weakest = {"od": 95, "id": 20, "fillet": 4, "shoulder": 120, "keyway": True, "spline": True}
    weakest |= {"cross-hole": 12, "stress-factor": 1.6, "surface": "ground"}
    section = "⌀95 bore 20, fillet 4 to ⌀120, keyway, splines, cross hole 12, stress concentration 1.6, ground"
    words = limits(weakest=weakest, material="own", **{"permitted-stress": 28})
    assert words == f"; permitted ±28 MPa for good; weakest section of own, mm: {section}"


def test_rules_are_named_with_what_they_ask():
    keys = {"strength-rule": "propulsion", "propulsion-kind": "thrust", "propulsion-form": "keyless"}
    words = limits(pieces=[{"od": 100, "length": 400}], material="own", **keys)
    assert words == "; judged by the rule for propulsion shafts, thrust, keyless"


def test_us_units():
    assert limits("US", **{"weakest": {"od": 4}, "permitted-stress": 4000}) == (
        "; permitted ±4000 psi for good; weakest section, in: ⌀4"
    )
    assert stress_words(28e6, SHOWN["SI"]) == "28 MPa"


def test_stress_raisers_of_a_piece():
    piece = {"od": 100, "length": 400, "cross-hole": 10, "stress-factor": 2, "surface": "forged"}
    shafts = {"s": {"between": ["a", "b"], "pieces": [piece]}}
    words = shaft_words(train(train_text(STATIONS, shafts=shafts)).shafts[0], SHOWN["SI"])
    assert "⌀100 × 400, cross hole 10, stress concentration 2, forged" in words


def test_dampers_gears_and_cylinders():
    damper = {"kind": "viscous", "at": "a", "ring-inertia": 0.5, "permitted-heat": "1.2 kW", "permitted-torque": 900}
    engine = {"kind": "reciprocating-engine", "strokes": 4, "magnifier": 40}
    engine["cylinders"] = [{"at": "a", "fires-at": 0}]
    gear = {"between": ["a", "b"], "teeth": [20, 61], "rated-torque": "5 kN m"}
    read = train(train_text(STATIONS, gears={"g": gear}, dampers={"n": damper}, machines={"e": engine}))
    assert damper_limit_words(read.dampers[0], SHOWN["SI"]) == ", permitted heat 1200 W, permitted torque ±900 N·m"
    assert gear_text(read.gears[0], SHOWN["SI"]).endswith(", rated 5000 N·m at a")
    assert "magnifier 40 of each cylinder" in reciprocating_words(read.machines[0], SHOWN["SI"])


@pytest.mark.parametrize("rule", ["endurance", "tensile-share"])
def test_every_rule_has_words(rule):
    shaft = train(train_text(STATIONS, shafts={"s": ("a", "b", 1e5)})).shafts[0]
    made = type(shaft)(shaft.name, shaft.between, shaft.tolerance, 1e5, strength=ShaftStrength(rule=rule))
    assert limit_words(made, SHOWN["SI"]).startswith("; judged by ")
