"""Limits, criteria, amplitudes and phases: what is read, what is refused, what a case replaces."""

from __future__ import annotations

import io
import json
import math
import tomllib

import pytest
from jsonschema import Draft202012Validator

from quillshaft.cli.output import Console
from quillshaft.cli.show import show_check
from quillshaft.train.duty_model import Amplitude, DutyCriteria, ShaftStrength, StrengthCriteria, StressSection
from quillshaft.train.problems import TrainFileError
from quillshaft.train.starters import schema_text
from trains import RPM, refusal, screening_of, train, train_text

PSI = 6894.757293168361  # lbf/in²: lb = 0.45359237 kg, in = 0.0254 m, standard gravity: exact definitions
LBF_IN = 0.1129848290276167
STATIONS = {"a": 2.0, "b": 3.0, "c": 4.0}
PIECES = [{"od": "100 mm", "length": "400 mm", "hub": "50 mm"}]
OWN = {"own": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3", "tensile": "850 MPa", "yield": "640 MPa"}}
WEAK = {"od": "95 mm", "id": "20 mm", "fillet": "4 mm", "shoulder": "120 mm", "keyway": True}
WEAK |= {"cross-hole": "12 mm", "stress-factor": 1.6, "surface": "ground"}
ENGINE = {"kind": "reciprocating-engine", "strokes": 4, "cylinders": [{"at": "a", "fires-at": "0 deg"}]}


def text(shaft: dict | None = None, units: str = "SI", cases: str = "", **tables) -> str:
    """A train of three stations whose shaft s, a stiffness unless told, takes the keys given."""
    given = shaft or {}
    geometry = {} if given.keys() & {"pieces", "throw", "equivalent"} else {"stiffness": 1e5}
    shafts = {"s": {"between": ["a", "b"], **geometry, **given}, "t": ("b", "c", 1e5)}
    return train_text(STATIONS, units, shafts=shafts, **tables) + cases


def strength(shaft: dict, **more) -> ShaftStrength | None:
    return train(text(shaft, materials=OWN, **more)).shafts[0].strength


def test_a_file_that_states_none_of_it_takes_defaults_and_lists_none():
    read = train(text())
    assert (read.strength, read.duty) == (StrengthCriteria(), DutyCriteria())
    assert (read.amplitudes, read.ordinary_amplitudes) == ((), False)
    operation = read.operation
    assert (operation.tachometer, operation.light_load, operation.ramp_rad_s2) == (0.02, 0.25, None)
    assert not operation.tachometer_given
    assert not operation.light_load_given
    assert read.shafts[0].strength is None
    assert not read.assumed or not {item.key for item in read.assumed} & {
        "tachometer",
        "light-load",
        "strength",
        "duty",
    }


def test_operation_reads_tachometer_ramp_and_light_load():
    for units in ("SI", "US"):
        for ramp in ("60 rpm/s", 60, "3600 rpm/min", "1 r/s^2"):
            operation = train(
                text(units=units, operation={"tachometer": "0 %", "ramp": ramp, "light-load": 0.3})
            ).operation
            assert operation.ramp_rad_s2 == pytest.approx(60 * RPM, rel=1e-14)
            assert (operation.tachometer, operation.tachometer_given) == (0.0, True)
            assert (operation.light_load, operation.light_load_given) == (0.3, True)


@pytest.mark.parametrize(
    ("operation", "said"),
    [
        ({"tachometer": "20 %"}, "is no error that a tachometer may have"),
        ({"tachometer": "2 rpm"}, 'a share such as "15 %"'),
        ({"ramp": 0}, "must be above 0"),
        ({"ramp": "-60 rpm/s"}, "out of bounds for a speed rate"),
        ({"ramp": "60 rpm"}, '"rpm" is a speed, a speed rate is wanted'),
        ({"ramp": "1 Hz/s"}, "the angle is missing"),
        ({"light-load": "0 %"}, "is no light load"),
        ({"light-load": "100 %"}, "above 0 % and below 100 %"),
        ({"lightload": "20 %"}, 'did you mean "light-load"?'),
    ],
)
def test_operation_refuses(operation, said):
    message = refusal(text(operation=operation))
    assert said in message
    assert "[operation]" in message


def test_limits_of_a_shaft_in_both_systems():
    torque = strength({"permitted-torque": "3.2 kN m", "passing-torque": "6 kN m"})
    assert torque == ShaftStrength(permitted_torque_nm=3200.0, passing_torque_nm=6000.0)
    bare = strength({"pieces": PIECES, "permitted-stress": 28, "passing-stress": 28})
    assert bare == ShaftStrength(permitted_stress_pa=28e6, passing_stress_pa=28e6)
    us = train(text({"pieces": [{"od": 4, "length": 16}], "permitted-stress": 4000}, "US")).shafts[0].strength
    assert us is not None
    assert us.permitted_stress_pa == pytest.approx(4000 * PSI, rel=1e-14)
    us = train(text({"permitted-torque": 30000}, "US")).shafts[0].strength
    assert us is not None
    assert us.permitted_torque_nm == pytest.approx(30000 * LBF_IN, rel=1e-14)


def test_the_weakest_section_and_its_material_beside_a_stiffness():
    made = strength({"weakest": WEAK, "material": "own", "strength-rule": "endurance"})
    section = StressSection(0.095, 0.02, 0.004, 0.12, True, False, 0.012, 1.6, "ground")
    assert made == ShaftStrength(rule="endurance", weakest=section)
    shaft = train(text({"weakest": {"od": 95}, "material": "own"}, materials=OWN)).shafts[0]
    assert shaft.material is not None
    assert (shaft.material.tensile_pa, shaft.material.yield_pa) == (850e6, 640e6)
    assert shaft.strength == ShaftStrength(weakest=StressSection(0.095))
    assert train(text({"weakest": {"od": 95}})).shafts[0].material is None
    inches = train(text({"weakest": {"od": 4, "spline": True}}, "US")).shafts[0].strength
    assert inches == ShaftStrength(weakest=StressSection(4 * 0.0254, spline=True))


def test_a_section_changes_no_frequency():
    plain = screening_of(text()).modes
    judged = screening_of(text({"weakest": WEAK, "material": "own", "permitted-stress": 28}, materials=OWN)).modes
    assert [mode.omega_rad_s for mode in plain] == [mode.omega_rad_s for mode in judged]


def test_the_rule_for_propulsion_shafts():
    keys = {"strength-rule": "propulsion", "propulsion-kind": "thrust", "propulsion-form": "radial-hole"}
    made = strength({"pieces": PIECES, "material": "own", **keys})
    assert made == ShaftStrength(rule="propulsion", propulsion_kind="thrust", propulsion_form="radial-hole")


@pytest.mark.parametrize(
    ("shaft", "said", "key"),
    [
        ({"passing-stress": 30, "weakest": WEAK}, "permitted-stress for good is not given", "passing-stress"),
        ({"passing-torque": 30}, "permitted-torque for good is not given", "passing-torque"),
        ({"permitted-torque": 30, "passing-torque": 29}, "lies below permitted-torque", "passing-torque = 29"),
        ({"permitted-stress": 30, "passing-stress": 29, "weakest": WEAK}, "lies below", "passing-stress = 29"),
        ({"permitted-stress": 30, "permitted-torque": 5, "weakest": WEAK}, "one of them limits", "permitted-torque"),
        ({"permitted-stress": 0, "weakest": WEAK}, "must be above 0", "permitted-stress"),
        ({"permitted-torque": "30 MPa"}, "a torque is wanted", "permitted-torque"),
        ({"permitted-stress": 30}, "needs a section to judge stress at", "permitted-stress = 30"),
        ({"strength-rule": "endurance"}, "weakest = { od", 'strength-rule = "endurance"'),
        ({"equivalent": {"length": 600, "diameter": 100}, "permitted-stress": 30}, "needs a section", "permitted-st"),
        ({"strength-rule": "goodman", "weakest": WEAK}, "endurance | propulsion | tensile-share", "strength-rule"),
        ({"propulsion-kind": "thrust"}, 'strength-rule = "propulsion" beside it', "propulsion-kind"),
        ({"propulsion-form": "keyless"}, 'strength-rule = "propulsion" beside it', "propulsion-form"),
        ({"strength-rule": "propulsion", "weakest": WEAK}, "intermediate | thrust | propeller", "propulsion-kind"),
        (
            {"strength-rule": "propulsion", "weakest": WEAK, "propulsion-kind": "thrust"},
            "integral-flange | shrink-fit | keyway-taper | keyway-cylindrical | radial-hole | longitudinal-slot",
            "propulsion-form: is missing",
        ),
        ({"weakest": {"id": 10}}, "weakest.od: is missing", "a number with a unit of length"),
        ({"weakest": {"od": 95, "id": 95}}, "must stay below od", "weakest.id = 95"),
        ({"weakest": {"od": 95, "fillet": 4}}, "needs shoulder beside it", "weakest.fillet = 4"),
        ({"weakest": {"od": 95, "shoulder": 120}}, "needs fillet beside it", "weakest.shoulder = 120"),
        ({"weakest": {"od": 95, "shoulder": 95, "fillet": 4}}, "the larger diameter", "weakest.shoulder = 95"),
        ({"weakest": {"od": 95, "stress-factor": 0.9}}, "must be at least 1", "weakest.stress-factor"),
        ({"weakest": {"od": 95, "cross-hole": 50}}, "leaves no shaft around it", "weakest.cross-hole = 50"),
        ({"weakest": {"od": 95, "keyway": "28 mm"}}, "true or false, without quotes", "weakest.keyway"),
        ({"weakest": {"od": 95, "surface": "polished"}}, "ground | machined | hot-rolled | forged", "weakest.surface"),
        ({"weakest": {"od": 95, "fillett": 4}}, 'did you mean "fillet"?', "weakest.fillett"),
        ({"weakest": "95 mm"}, '{ od = "95 mm", fillet = "4 mm", shoulder = "120 mm" }', "weakest"),
        ({"permited-stress": 30}, 'did you mean "permitted-stress"?', "permited-stress"),
        ({"material": "own"}, "only the strength of weakest does", "material"),
    ],
)
def test_a_shaft_refuses(shaft, said, key):
    message = refusal(text(shaft, materials=OWN))
    assert said in message
    assert key in message
    assert "[shafts.s]" in message


THROW = {"journal": 100, "journal-length": 60, "pin": 90, "pin-length": 60, "web-thickness": 30, "web-width": 150}
PROPULSION = {"strength-rule": "propulsion", "propulsion-kind": "intermediate", "propulsion-form": "integral-flange"}


def test_the_rule_for_propulsion_shafts_is_refused_at_cranks_and_at_driving_machines():
    crank = {"throw": {**THROW, "radius": 95}, "weakest": WEAK, "material": "own", **PROPULSION}
    assert "and this is a crank throw" in refusal(text(crank, materials=OWN))
    line = {"weakest": WEAK, "material": "own", **PROPULSION}
    for name, row in (
        ("engine", ENGINE),
        ("motor", {"kind": "induction-motor", "at": "b", "poles": 4, "supply": 50}),
        ("alternator", {"kind": "generator", "at": "a", "poles": 4}),
    ):
        message = refusal(text(line, materials=OWN, machines={name: row}))
        assert 'strength-rule = "propulsion": the rule covers intermediate, thrust and propeller shafts only' in message
        assert f"{name} ({row['kind']}) sits at " in message
    propeller = {"p": {"kind": "propeller", "at": "b", "blades": 4}, "engine": {**ENGINE, "cylinders": []}}
    propeller["engine"]["cylinders"] = [{"at": "c", "fires-at": 0}]
    assert train(text(line, materials=OWN, machines=propeller)).shafts[0].strength is not None


def test_a_rule_asks_for_the_strengths_it_needs_and_names_the_material_key():
    rule = {"strength": {"rule": "endurance"}}
    for shaft in ({"pieces": PIECES}, {"pieces": PIECES, "material": "bronze"}):
        message = refusal(text(shaft, criteria=rule))
        assert "[shafts.s] material" in message
        assert f"the built-in material {shaft.get('material', 'steel')} states none" in message
        assert 'tensile = "850 MPa"' in message
    assert "[shafts.s] material: is missing" in refusal(text({"weakest": WEAK, "strength-rule": "tensile-share"}))
    soft = {"own": {key: value for key, value in OWN["own"].items() if key not in ("tensile", "yield")}}
    message = refusal(text({"pieces": PIECES, "material": "own"}, materials=soft, criteria=rule))
    assert '[materials.own] tensile: is missing: the rule "endurance" needs the tensile strength for shaft s' in message
    no_yield = {"own": {key: value for key, value in OWN["own"].items() if key != "yield"}}
    for line in ("soderberg", "elliptic"):
        criteria = {"strength": {"rule": "endurance", "mean-stress": line}}
        message = refusal(text({"pieces": PIECES, "material": "own"}, materials=no_yield, criteria=criteria))
        assert "[materials.own] yield: is missing" in message


def test_a_rule_for_all_leaves_alone_what_it_cannot_or_need_not_judge():
    rule = {"strength": {"rule": "endurance"}}
    assert train(text(criteria=rule)).strength.rule == "endurance"
    assert train(text({"pieces": PIECES, "permitted-stress": 30}, criteria=rule)).shafts[0].strength is not None


def test_pieces_state_their_stress_raisers():
    given = [{**PIECES[0], "cross-hole": "12 mm", "stress-factor": 2, "surface": "hot-rolled"}]
    piece = train(text({"pieces": given})).shafts[0].pieces[0]
    assert (piece.cross_hole_m, piece.stress_factor, piece.surface) == (0.012, 2.0, "hot-rolled")
    plain = train(text({"pieces": PIECES})).shafts[0].pieces[0]
    assert (plain.cross_hole_m, plain.stress_factor, plain.surface) == (None, None, None)


@pytest.mark.parametrize(
    ("piece", "said"),
    [
        ({"od": 100, "length": 100, "cross-hole": 50}, "a diameter below 0.5 · od = 50 mm"),
        ({"od": 100, "length": 100, "stress-factor": 25}, "must be at most 20"),
        ({"od": 100, "length": 100, "surface": "rough"}, "ground | machined | hot-rolled | forged"),
        ({"section": {"square": 60}, "length": 100, "cross-hole": 5}, "a radial hole needs a round piece"),
        ({"flange": 200, "length": 20, "stress-factor": 2}, "no stress is judged in it"),
    ],
)
def test_a_piece_refuses(piece, said):
    message = refusal(text({"pieces": [PIECES[0], piece]}))
    assert said in message
    assert "pieces[2]" in message


def test_materials_state_yield_and_endurance():
    steel = {"shear-modulus": 11.6e6, "density": 0.284, "tensile": 123000, "yield": 90000, "endurance": "36 ksi"}
    shaft = {"pieces": [{"od": 4, "length": 16}], "material": "own"}
    material = train(text(shaft, "US", materials={"own": steel})).shafts[0].material
    assert material is not None
    assert material.yield_pa == pytest.approx(90000 * PSI, rel=1e-14)
    assert material.endurance_pa == pytest.approx(36000 * PSI, rel=1e-14)
    high = {"own": {**OWN["own"], "yield": "900 MPa"}}
    assert "[materials.own] yield" in refusal(text(materials=high))
    assert "lies above tensile" in refusal(text(materials=high))
    tired = {"own": {**OWN["own"], "endurance": "850 MPa"}}
    assert "[materials.own] endurance" in refusal(text(materials=tired))
    assert 'did you mean "yield"?' in refusal(text(materials={"own": {**OWN["own"], "yeild": 1}}))
    assert '"mm" is a length' in refusal(text(materials={"own": {**OWN["own"], "yield": "600 mm"}}))


def test_ratings_of_couplings_dampers_gears_and_machines():
    damper = {"kind": "viscous", "at": "a", "ring-inertia": 0.5, "permitted-heat": "1.2 kW", "permitted-torque": 900}
    read = train(
        train_text(
            {"a": 2.0, "b": 3.0, "c": 4.0, "d": 4.0, "e": 5.0},
            couplings={"k": {"between": ["a", "b"], "stiffness": 1e5, "ambient": "45 degC"}},
            gears={
                "g": {"between": ["b", "c"], "teeth": [20, 61], "rated-torque": "5 kN m"},
                "p": {"kind": "epicyclic", "sun": "c", "ring": "fixed", "carrier": "d", "planets": 3,
                      "teeth": {"sun": 21, "ring": 87}, "rated-torque": 700},
                "v": {"kind": "bevel", "between": ["d", "e"], "teeth": [20, 41], "rated-torque": 800},
            },
            dampers={"nose": damper},
            machines={
                "engine": {**ENGINE, "magnifier": 40},
                "pump": {"kind": "reciprocating-compressor", "magnifier": 2.5,
                         "cylinders": [{"at": "b", "dead-centre": 0}]},
                "alternator": {"kind": "generator", "at": "e", "poles": 4, "rated-torque": "6 kN m"},
            },
        )
    )  # fmt: skip
    assert read.couplings[0].ambient_k == pytest.approx(318.15)
    assert [gear.rated_torque_nm for gear in read.gears] == [5000.0, 700.0, 800.0]
    assert (read.dampers[0].permitted_heat_w, read.dampers[0].permitted_torque_nm) == (1200.0, 900.0)
    assert [machine.magnifier for machine in read.machines] == [40.0, 2.5, None]
    assert read.machines[2].electrical.rated_torque_nm == 6000.0


@pytest.mark.parametrize(
    ("tables", "said"),
    [
        ({"machines": {"e": {**ENGINE, "magnifier": 1.5}}}, "magnifier = 1.5: must be at least 2"),
        ({"machines": {"e": {**ENGINE, "magnifier": 1001}}}, "must be at most 1000"),
        ({"machines": {"e": {**ENGINE, "magnifier": "40"}}}, "a number from 2 to 1000 without quotes"),
        ({"machines": {"f": {"kind": "fan", "at": "a", "magnifier": 40}}}, "magnifier: is not a key of this table"),
        ({"couplings": {"k": {"between": ["b", "c"], "stiffness": 1e5, "ambient": "45 K m"}}}, "ambient"),
        ({"couplings": {"k": {"between": ["b", "c"], "kind": "fluid", "ambient": 45}}}, "is not a key of this table"),
        ({"gears": {"g": {"between": ["b", "c"], "teeth": [20, 61], "rated-torque": 0}}}, "must be above 0"),
        (
            {"machines": {"g": {"kind": "generator", "at": "a", "poles": 4, "rated-torqe": 5}}},
            'did you mean "rated-torque"?',
        ),
    ],
)
def test_ratings_refuse(tables, said):
    assert said in refusal(text(**tables))


def test_criteria_of_strength_and_duty():
    strength_table = {"rule": "tensile-share", "mean-stress": "gerber", "safety": 2, "notch": "neuber"}
    strength_table |= {"surface": "forged", "edition": "2015"}
    duty = {"gear-share": "25 %", "gear-reversal": "allowed", "inertia-torque": 1.5, "electrical-angle": "3 deg"}
    duty |= {"irregularity": "0.4 %", "edition": "2020"}
    read = train(text(criteria={"strength": strength_table, "duty": duty}))
    assert read.strength == StrengthCriteria(
        "tensile-share", "gerber", 2.0, "neuber", "forged", "2015", tuple(strength_table)
    )
    angle = math.radians(3.0)
    assert read.duty == DutyCriteria(0.25, "allowed", 1.5, pytest.approx(angle), 0.004, "2020", tuple(duty))
    some = train(text(criteria={"strength": {"safety": 1.5}, "duty": {"gear-share": 0.2}}))
    assert (some.strength.given, some.strength.rule) == (("safety",), None)
    assert (some.duty.given, some.duty.inertia_torque) == (("gear-share",), 2.0)
    assert some.criteria == train(text()).criteria


@pytest.mark.parametrize(
    ("criteria", "said"),
    [
        ({"strength": {"rule": "propulsion"}}, "endurance | tensile-share"),
        ({"strength": {"mean-stress": "goodmann"}}, 'did you mean "goodman"?'),
        ({"strength": {"safety": 0.9}}, "strength.safety = 0.9: must be at least 1"),
        ({"strength": {"safety": 11}}, "must be at most 10"),
        ({"strength": {"notch": "kuhn"}}, "peterson | neuber"),
        ({"strength": {"surface": "cast"}}, "ground | machined | hot-rolled | forged"),
        ({"strength": {"edition": 2015}}, "strength.edition = 2015: is not text"),
        ({"strength": {"edition": ""}}, "strength.edition"),
        ({"duty": {"edition": ""}}, "duty.edition"),
        ({"strength": {"sefety": 2}}, 'did you mean "safety"?'),
        ({"strength": "endurance"}, '{ rule = "endurance", safety = 1.5 }'),
        ({"duty": {"gear-share": "0 %"}}, "above 0 % and up to 100 %"),
        ({"duty": {"gear-share": "120 %"}}, "duty.gear-share"),
        ({"duty": {"gear-reversal": True}}, "refused | allowed"),
        ({"duty": {"inertia-torque": 0}}, "must be above 0"),
        ({"duty": {"inertia-torque": "2"}}, "a number above 0 without quotes or unit"),
        ({"duty": {"electrical-angle": "0 deg"}}, "above 0 and up to 90 degrees"),
        ({"duty": {"electrical-angle": "95 deg"}}, "duty.electrical-angle"),
        ({"duty": {"irregularity": "100 %"}}, "is no irregularity"),
        ({"duties": {}}, 'did you mean "duty"?'),
    ],
)
def test_criteria_refuse(criteria, said):
    message = refusal(text(criteria=criteria))
    assert said in message
    assert "[criteria]" in message


def test_amplitudes_alone_or_with_where_they_come_from():
    given = {"a 1x": "1.5 %", "motor line-1x": "40 N m", "pump vane-pass 2x": "0 %", "e.x": "0 N m"}
    given["s"] = {"torque": "350 lbf in", "source": "maker", "note": "measured", "status": "assumed"}
    read = train(text(amplitudes=given, assumptions={"amplitudes": "ordinary"}))
    assert read.amplitudes == (
        Amplitude("a 1x", None, 0.015),
        Amplitude("motor line-1x", 40.0, None),
        Amplitude("pump vane-pass 2x", None, 0.0),
        Amplitude("e.x", 0.0, None),
        Amplitude("s", pytest.approx(350 * LBF_IN, rel=1e-14), None, "measured"),
    )
    assert read.ordinary_amplitudes
    assert [(item.element, item.key) for item in read.assumed if "amplitudes" in item.element] == [
        ("amplitudes.s", "status")
    ]
    assert not train(text(assumptions={"amplitudes": "none"})).ordinary_amplitudes


@pytest.mark.parametrize(
    ("given", "said"),
    [
        ("1.5", '[amplitudes] "a 1x" = "1.5": a bare share above 1: write it with %'),
        (40, '[amplitudes] "a 1x" = 40: is not a text with a number and its unit'),
        (True, '[amplitudes] "a 1x" = true: is not a row of keys and values'),
        ([1], '"1.5 %" of mean torque, "40 N m", or { torque'),
        ("-1 %", "out of bounds for a share"),
        ("-1 N m", '[amplitudes] "a 1x" = "-1 N m": must be at least 0'),
        ({"torque": "5 mm"}, '[amplitudes."a 1x"] torque = "5 mm"'),
        ({"note": "no amplitude"}, "torque: is missing"),
        ({"torque": "1 %", "soruce": "x"}, 'did you mean "source"?'),
    ],
)
def test_amplitudes_refuse_at_the_line_where_they_are_written(given, said):
    written = text(amplitudes={"a 1x": given})
    line = next(number for number, row in enumerate(written.splitlines(), 1) if row.startswith('"a 1x"'))
    message = refusal(written)
    assert said in message
    assert f"train.toml:{line}: " in message


def test_the_setting_of_amplitudes_is_one_of_two_words():
    assert "none | ordinary" in refusal(text(assumptions={"amplitudes": "typical"}))
    assert 'did you mean "amplitudes"?' in refusal(text(amplitude={"a 1x": "1 %"}))


def test_excitations_are_locked_with_a_machine_or_another():
    rows = {
        "first": {"at": "b", "order": 2, "torque": "40 N m", "phase": "-30 deg", "locked-with": "engine"},
        "second": {"at": "s", "order": 1, "torque": "1 %", "phase": 90, "locked-with": "first"},
        "third": {"at": "b", "order": 3, "torque": "1 %", "locked-with": "second"},
        "free": {"at": "b", "order": 3},
    }
    read = train(text(excitations=rows, machines={"engine": ENGINE}))
    expected = [("engine", -math.pi / 6), ("first", math.pi / 2), ("second", None), (None, None)]
    for excitation, (partner, phase) in zip(read.excitations, expected, strict=True):
        assert excitation.locked_with == partner
        assert excitation.phase_rad == (None if phase is None else pytest.approx(phase, rel=1e-14))


LINE = {"at": "b", "order": 2, "torque": "40 N m"}


@pytest.mark.parametrize(
    ("row", "said"),
    [
        ({**LINE, "phase": "30 deg"}, "is that to what it is locked with, which is not given"),
        ({**LINE, "phase": "400 deg", "locked-with": "engine"}, "is more than a turn"),
        ({**LINE, "phase": "30 rpm", "locked-with": "engine"}, "phase"),
        ({**LINE, "frequency": "5 Hz", "locked-with": "engine"}, "a constant frequency keeps its phase to no shaft"),
        ({"at": "b", "frequency": "5 Hz", "torque": "1 %", "locked-with": "engine"}, "a constant frequency"),
        ({"at": "b", "order": 2, "locked-with": "engine"}, "needs an amplitude"),
        ({**LINE, "locked-with": "x"}, "is the excitation itself"),
        ({**LINE, "locked-with": "engin"}, 'there is no such machine or excitation; did you mean "engine"?'),
        ({**LINE, "locked-with": "pump"}, "no phase is known of a machine of kind centrifugal-pump"),
        ({**LINE, "locked-with": "hum"}, "has a constant frequency"),
        ({**LINE, "locked-with": "ring"}, "locked with each other in a circle"),
        ({**LINE, "lock-with": "engine"}, 'did you mean "locked-with"?'),
    ],
)
def test_locked_excitations_refuse(row, said):
    others = {"hum": {"at": "b", "frequency": "92 Hz"}, "ring": {**LINE, "locked-with": "x"}}
    machines = {"engine": ENGINE, "pump": {"kind": "centrifugal-pump", "at": "c", "vanes": 6}}
    rows = {"x": row, "hum": others["hum"]} | ({"ring": others["ring"]} if row.get("locked-with") == "ring" else {})
    message = refusal(text(excitations=rows, machines=machines))
    assert said in message
    assert "[excitations.x]" in message


def test_a_case_changes_one_key_of_the_criteria_and_keeps_the_others():
    base = {"strength": {"rule": "endurance", "safety": 1.5}, "duty": {"gear-share": "25 %"}}
    changed = train(
        text(criteria=base, cases="[cases.x.criteria]\nstrength.safety = 2\nduty.gear-reversal = 'allowed'\n"), ("x",)
    )
    assert (changed.strength.rule, changed.strength.safety) == ("endurance", 2.0)
    assert (changed.duty.gear_share, changed.duty.gear_reversal) == (0.25, "allowed")
    dropped = train(text(criteria=base, cases="[cases.x.criteria]\nstrength = { omit = true }\n"), ("x",))
    assert (dropped.strength, dropped.duty.gear_share) == (StrengthCriteria(), 0.25)


def test_a_case_with_the_other_kind_of_limit_replaces_the_first():
    base = {"pieces": PIECES, "permitted-stress": 28, "passing-stress": 40}
    case = "[cases.x.shafts]\ns = { permitted-torque = 5000 }\n"
    assert train(text(base, cases=case), ("x",)).shafts[0].strength == ShaftStrength(permitted_torque_nm=5000.0)
    case = "[cases.x.shafts]\ns = { passing-stress = 50 }\n"
    assert train(text(base, cases=case), ("x",)).shafts[0].strength == ShaftStrength(28e6, 50e6)
    case = "[cases.x.shafts]\ns = { strength-rule = 'endurance' }\n"
    line = {"pieces": PIECES, "material": "own", **PROPULSION}
    assert train(text(line, materials=OWN, cases=case), ("x",)).shafts[0].strength == ShaftStrength(rule="endurance")


@pytest.mark.parametrize(
    ("base", "over", "expected"),
    [
        ("1.5 %", "'40 N m'", Amplitude("a 1x", 40.0)),
        ("1.5 %", "{ note = 'why' }", Amplitude("a 1x", None, 0.015, "why")),
        ({"torque": "1.5 %", "note": "why"}, "'2 %'", Amplitude("a 1x", None, 0.02, "why")),
        ({"torque": "1.5 %"}, "{ omit = true }", None),
        ("1.5 %", "{ omit = true }", None),
    ],
)
def test_a_case_changes_an_amplitude(base, over, expected):
    read = train(text(amplitudes={"a 1x": base}, cases=f'[cases.x.amplitudes]\n"a 1x" = {over}\n'), ("x",))
    assert read.amplitudes == (() if expected is None else (expected,))


def test_a_wrong_amplitude_of_a_case_is_named_where_the_case_writes_it():
    written = text(amplitudes={"a 1x": "1 %"}, cases='[cases.x.amplitudes]\n"a 1x" = "1 mm"\n"b 1x" = "2"\n')
    with pytest.raises(TrainFileError) as caught:
        train(written, ("x",))
    paths = [problem.path for problem in caught.value.problems]
    assert paths == [("cases", "x", "amplitudes", name) for name in ("a 1x", "b 1x")]


def test_cases_change_operation_materials_machines_and_excitations():
    case = """[cases.x]
operation = { ramp = "90 rpm/s", tachometer = "3 %" }
materials.own = { tensile = "900 MPa" }
machines.engine = { magnifier = 60 }
excitations.e = { phase = "45 deg" }
"""
    shaft = {"pieces": PIECES, "material": "own"}
    rows = {"e": {**LINE, "phase": "30 deg", "locked-with": "engine"}}
    read = train(
        text(shaft, materials=OWN, machines={"engine": ENGINE}, excitations=rows, operation={"ramp": 60}, cases=case),
        ("x",),
    )
    assert read.operation.ramp_rad_s2 == pytest.approx(90 * RPM, rel=1e-14)
    assert read.operation.tachometer == 0.03
    assert read.shafts[0].material is not None
    assert read.shafts[0].material.tensile_pa == 900e6
    assert read.machines[0].magnifier == 60.0
    assert read.excitations[0].phase_rad == pytest.approx(math.pi / 4, rel=1e-14)


def test_check_shows_amplitudes_with_where_they_come_from():
    given = {"a 1x": "1.5 %", "b 1x": {"torque": "40 N m", "source": "maker's letter"}}
    shown = io.StringIO()
    show_check(screening_of(text(amplitudes=given)), Console(file=shown, width=400, highlight=False, markup=False))
    said = " ".join(shown.getvalue().split())
    assert 'amplitudes.a 1x torque = "1.5 %"' in said
    assert 'amplitudes.b 1x torque = "40 N m"; source = "maker\'s letter"' in said


def test_the_schema_takes_both_ways_to_write_an_amplitude():
    validator = Draft202012Validator(json.loads(schema_text()))
    case = '[cases.x.amplitudes]\n"a 1x" = "2 %"\n"b 1x" = { note = "why" }\n'
    sound = text(amplitudes={"a 1x": "1.5 %", "b 1x": {"torque": "40 N m"}}, cases=case)
    assert validator.is_valid(tomllib.loads(sound))
    for wrong in ({"a 1x": 5}, {"a 1x": {"note": "x"}}, {"a 1x": {"torque": "1 %", "x": 1}}):
        assert not validator.is_valid(tomllib.loads(text(amplitudes=wrong)))
