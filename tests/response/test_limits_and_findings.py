"""Limits of shafts, couplings, gears and generators, and the findings against them."""

from __future__ import annotations

import math

import numpy as np
import pytest
from response_trains import RPM, engine_text, place, plain_text, response_of

from quillshaft.assess.response_standing import standing
from quillshaft.elements.endurance import permitted_alternating, shear_strength, tensile_share_limits
from trains import screening_of

GEOMETRY = {
    "between": ["driver", "load"],
    "material": "shaft-steel",
    "own-inertia": "none",
    "loss-factor": 0.02,
    "pieces": [{"od": "60 mm", "length": "400 mm"}],
}
STEEL = {"shaft-steel": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3", "tensile": "690 MPa"}}
POWER = {"driver": 100, "load": "balance", "law": "constant-torque"}


def finding(response, element, check, zone="continuous", kind=None):
    found = [
        item
        for item in response.findings
        if item.element == element and item.check == check and item.zone == zone and kind in (None, item.case_kind)
    ]
    assert found, [(item.element, item.check) for item in response.findings]
    return found[0]


def test_endurance_limit_of_a_plain_shaft_is_that_of_the_criterion_at_its_mean_stress():
    """Goodman with the endurance factors worked out by themselves; 16 T / π d³ (Shigley, fluctuating stresses)."""
    text = plain_text(
        shafts={"shaft": GEOMETRY}, materials=STEEL, power=POWER, criteria={"strength": {"rule": "endurance"}}
    )
    response = response_of(text)
    modulus = math.pi * 0.06**3 / 16
    mean = 100e3 / (1500 * RPM) / modulus
    strength = shear_strength(690e6, 0.06, "machined")
    limit = float(permitted_alternating("goodman", mean, 1.5, strength)) / 1e6
    item = finding(response, "shaft", "alternating stress")
    assert item.limit == pytest.approx(limit, rel=1e-9)
    at = int(np.argmin(np.abs(response.speed_rad_s / RPM - item.at_speed_rpm)))
    torque = max(case.alternating_torque_nm[0, at] for case in response.cases if case.judged)
    assert item.value == pytest.approx(torque / modulus / 1e6, rel=1e-9)


def test_a_share_of_tensile_strength_is_the_limit_where_that_rule_is_chosen():
    """Tensile / 25, 1.75 times that in passing (MIL-STD-167-2, from memory)."""
    text = plain_text(shafts={"shaft": GEOMETRY}, materials=STEEL, criteria={"strength": {"rule": "tensile-share"}})
    response = response_of(text)
    steady, quick = tensile_share_limits(690e6)
    curve = response.limits[0]
    modulus = math.pi * 0.06**3 / 16
    assert curve.continuous_nm == pytest.approx(steady * modulus)
    assert curve.passing_nm == pytest.approx(quick * modulus)


def test_a_propulsion_shaft_is_judged_by_the_class_rule_over_the_speed_ratio():
    """IACS UR M68 from memory: σ_B 600, d 300, c_K 1: τ_C 68.316270146547 at λ 0.5, 37.710581120894 at 1."""
    shaft = {
        **GEOMETRY,
        "material": "line-steel",
        "pieces": [{"od": "300 mm", "length": "4000 mm"}],
        "strength-rule": "propulsion",
        "propulsion-kind": "intermediate",
        "propulsion-form": "integral-flange",
    }
    steel = {"line-steel": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3", "tensile": "600 MPa"}}
    response = response_of(plain_text(shafts={"shaft": shaft}, materials=steel))
    curve, ratio = response.limits[0], response.speed_rad_s / (1500 * RPM)
    stress = curve.continuous_nm * curve.mpa_per_nm
    assert np.interp(0.5, ratio, stress) == pytest.approx(68.316270146547, rel=1e-4)
    assert np.interp(1.0, ratio, stress) == pytest.approx(37.710581120894, rel=1e-6)
    assert "recalled, confirm against your edition" in curve.basis


def test_the_weakest_piece_governs_and_a_fillet_costs_strength():
    plain = {**GEOMETRY, "pieces": [{"od": "60 mm", "length": "200 mm"}, {"od": "90 mm", "length": "200 mm"}]}
    soft = {**plain, "pieces": [{**plain["pieces"][0], "fillet": "8 mm"}, plain["pieces"][1]]}
    limits = []
    for shaft in (plain, soft):
        text = plain_text(
            shafts={"shaft": shaft}, materials=STEEL, power=POWER, criteria={"strength": {"rule": "endurance"}}
        )
        limits.append(response_of(text).limits[0])
    assert limits[0].continuous_nm[0] < limits[1].continuous_nm[0]
    assert "piece 1, 60 mm" in limits[0].basis
    assert "without a stated fillet" in limits[0].basis


def test_a_stated_torque_limit_passes_and_fails_on_its_own_figure():
    for limit, verdict in ((1e5, "pass"), (100.0, "fail")):
        shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": limit}
        item = finding(response_of(plain_text(shafts={"shaft": shaft})), "shaft", "alternating torque")
        assert (item.verdict, item.limit) == (verdict, limit)


def test_without_a_limit_a_shaft_says_so_and_is_never_passed():
    response = response_of(plain_text())
    item = finding(response, "shaft", "alternating torque")
    assert item.verdict == "no limit given"
    assert item.limit is None
    assert item.use is None
    assert {closing.status for closing in response.closings} <= {"not judged: no limit", "not judged: no amplitude"}


def test_couplings_are_held_against_all_their_ratings():
    ratings = {
        "rated-torque": 500,
        "peak-torque": 1500,
        "vibratory-torque": 150,
        "reference-frequency": "10 Hz",
        "permitted-heat": "200 W",
    }
    response = response_of(engine_text(couplings={"rubber": {**RUBBER, **ratings}}))
    checks = {item.check for item in response.findings if item.element == "rubber"}
    assert {"mean torque", "peak torque", "vibratory torque", "heat"} <= checks
    case, at = response.normal, place(response, "rubber")
    assert (case.weighted_torque_nm[at] >= case.alternating_torque_nm[at] * (1 - 1e-9)).all()


RUBBER = {"between": ["flywheel", "generator"], "stiffness": 2e4, "psi": 1.0}


def test_vibratory_torque_of_one_order_is_weighed_by_the_root_of_its_frequency():
    """S_f = √(f / 10 Hz) above 10 Hz (DIN 740-2, from memory): one excitation at 2x of 1500 rpm is 50 Hz."""
    text = plain_text(
        shafts={},
        couplings={"rubber": {"between": ["driver", "load"], "stiffness": 1e4, "psi": 1.0}},
    ).replace('"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n', "")
    response = response_of(text)
    at = int(np.argmin(np.abs(response.speed_rad_s - 1500 * RPM)))
    case = response.normal
    frequency = 2 * response.speed_rad_s[at] / (2 * math.pi)
    expected = case.alternating_torque_nm[0, at] * math.sqrt(frequency / 10)
    assert case.weighted_torque_nm[0, at] == pytest.approx(expected, rel=1e-12)


def test_generator_duty_follows_from_the_motion_of_its_rotor():
    """Inertia torque J ω² θ, irregularity 2 ω θ / Ω, electrical angle p θ: one order only (definitions)."""
    text = plain_text(machines={"set": {"kind": "generator", "at": "load", "poles": 6}}, power=POWER)
    response = response_of(text)
    at = int(np.argmin(np.abs(response.speed_rad_s - 1000 * RPM)))
    case, speed = response.normal, response.speed_rad_s[at]
    theta = math.radians(case.angle_deg[1, at])
    assert case.inertia_torque_nm[1, at] == pytest.approx(3.0 * (2 * speed) ** 2 * theta, rel=1e-9)
    assert case.irregularity[1, at] == pytest.approx(2 * 2 * speed * theta / speed, rel=1e-9)
    item = finding(response, "set", "electrical angle")
    where = int(np.argmin(np.abs(response.speed_rad_s / RPM - item.at_speed_rpm)))
    largest = max(case.angle_deg[1, where] for case in response.cases if case.judged)
    assert item.value == pytest.approx(3 * largest, rel=1e-9)
    assert item.limit == pytest.approx(3.5)


def test_teeth_separate_where_alternating_torque_exceeds_the_mean():
    text = plain_text("50 N m", order=2, power={"driver": 5, "load": "balance", "law": "constant-torque"})
    text = text.replace('"load" = { "inertia" = 3.0 }', '"load" = { "inertia" = 3.0 }\n"wheel" = { "inertia" = 0.4 }')
    text += '[gears]\n"mesh" = { "between" = ["load", "wheel"], "teeth" = [20, 40] }\n'
    text += '[cases.x]\nbecause = "none"\n'
    text = text.replace('"load" = "balance"', '"wheel" = "balance"')
    response = response_of(text)
    at, gear = place(response, "mesh"), response.maps[0]
    case = response.normal
    last = gear.ratio[-1]
    assert last == pytest.approx(case.alternating_torque_nm[at] / np.abs(case.mean_torque_nm[at]), rel=1e-9)
    half = int(np.argmin(np.abs(gear.load_share - 0.5)))
    assert gear.ratio[half] == pytest.approx(last / 0.5, rel=1e-9)
    item = finding(response, "mesh", "tooth separation")
    assert (item.verdict == "fail") == (item.value > 1.0)


def test_without_power_neither_peak_torque_nor_endurance_is_passed():
    """A mean torque that is not known is not zero."""
    text = plain_text(shafts={"shaft": GEOMETRY}, materials=STEEL, criteria={"strength": {"rule": "endurance"}})
    response = response_of(text)
    assert finding(response, "shaft", "alternating stress").verdict == "no limit given"
    assert "mean torque" in response.limits[0].basis
    rubber = {**RUBBER, "between": ["driver", "load"], "stiffness": 1e5, "peak-torque": 5000, "rated-torque": 2000}
    text = plain_text(couplings={"rubber": rubber}).replace(
        '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n', ""
    )
    item = finding(response_of(text), "rubber", "peak torque")
    assert item.verdict == "no limit given"
    assert "mean torque is not known" in item.basis


def test_above_the_speeds_of_the_class_rule_a_propulsion_shaft_is_not_judged():
    """IACS UR M68 gives limits up to 1.05 of rated speed (from memory)."""
    shaft = {
        **GEOMETRY,
        "pieces": [{"od": "300 mm", "length": "4000 mm"}],
        "strength-rule": "propulsion",
        "propulsion-kind": "intermediate",
        "propulsion-form": "integral-flange",
    }
    operation = {"range": ["1400 rpm", "1620 rpm"]}
    response = response_of(plain_text(shafts={"shaft": shaft}, materials=STEEL, operation=operation))
    assert response.unlimited == ("shaft",)
    assert response.verdict == "not judged"
    texts = [item.basis for item in response.findings if item.limit is None]
    assert any("gives no limit at these speeds" in text for text in texts)


def test_unlocked_sources_of_one_frequency_heat_a_coupling_by_amplitude():
    """Twice the torque at one frequency is four times the heat; the squares alone would give twice."""
    shaft = '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n'
    rubber = {"rubber": {"between": ["driver", "load"], "stiffness": 1e4, "psi": 1.0}}
    one = response_of(plain_text(couplings=rubber).replace(shaft, ""))
    more = {"twin": {"at": "driver", "order": 2, "torque": "100 N m", "note": "not locked"}}
    two = response_of(plain_text(couplings=rubber, excitations=more).replace(shaft, ""))
    speeds = one.speed_rad_s
    doubled = np.interp(speeds, two.speed_rad_s, two.normal.heat_w[0])
    assert doubled[200] == pytest.approx(4.0 * one.normal.heat_w[0][200], rel=1e-2)


@pytest.mark.parametrize("damper", ["tuned", "pendulum"])
def test_a_train_with_a_swinging_damper_responds_with_the_damper_lost_too(damper):
    """The link of a lost damper is not there: its rows are nan, all others stay at their links."""
    rows = {
        "tuned": {"kind": "tuned", "at": "load", "ring-inertia": 0.2, "tuned-frequency": "46 Hz", "viscous": 20},
        "pendulum": {
            "kind": "pendulum",
            "at": "load",
            "mass": 2,
            "number": 2,
            "suspension-radius": "160 mm",
            "length": "40 mm",
            "viscous": 0.5,
        },
    }
    response = response_of(plain_text(dampers={"tamer": rows[damper]}))
    lost = next(case for case in response.cases if case.name == "normal, tamer lost")
    assert np.isnan(lost.alternating_torque_nm[place(response, "tamer")]).all()
    at = int(np.argmin(np.abs(response.speed_rad_s - 1000 * RPM)))
    omega = 2 * response.speed_rad_s[at]
    expected = 60 * np.hypot(1, 0.02) / np.hypot(1 - omega**2 / (1e5 * 5 / 6), 0.02)
    assert lost.alternating_torque_nm[place(response, "shaft"), at] == pytest.approx(expected, rel=1e-9)


NECK = {
    "between": ["driver", "load"],
    "material": "steel-x",
    "loss-factor": 0.02,
    "pieces": [{"od": "150 mm", "length": "400 mm"}, {"section": {"square": "70 mm"}, "length": "60 mm"}],
}


def test_a_square_neck_is_judged_by_its_own_modulus():
    """τ = T / (0.208 a³) at the middle of a side (Timoshenko and Goodier, torsion of rectangular bars, from memory)."""
    materials = {
        "steel-x": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3", "tensile": "650 MPa", "yield": "400 MPa"}
    }
    criteria = {"strength": {"rule": "endurance"}}
    for kilowatts, verdict in ((2000, "fail"), (1, "pass")):
        power = {"driver": kilowatts, "load": "balance", "law": "constant-torque"}
        text = plain_text("10 N m", shafts={"shaft": NECK}, materials=materials, criteria=criteria, power=power)
        response = response_of(text)
        item = finding(response, "shaft", "alternating stress")
        assert item.verdict == verdict
        assert "piece 2, rectangle 70 by 70 mm" in item.basis
        modulus = 0.2081652601191 * 0.07**3
        assert response.limits[0].mpa_per_nm == pytest.approx(1e-6 / modulus, rel=1e-9)
        if kilowatts == 2000:  # 12.7 kN·m of mean torque: 178 N/mm², above 0.577 · 400 / 1.5
            assert item.limit == 0.0


def test_teeth_of_an_idle_gear_separate():
    """No mean torque holds the teeth together: any alternating torque separates them."""
    stations = '"load" = { "inertia" = 3.0 }\n"wheel" = { "inertia" = 0.4 }'
    power = {"driver": 5, "load": "balance", "law": "constant-torque"}
    text = plain_text("50 N m", power=power).replace('"load" = { "inertia" = 3.0 }', stations)
    text += '[gears]\n"mesh" = { "between" = ["load", "wheel"], "teeth" = [20, 40], "rated-torque" = 500.0 }\n'
    response = response_of(text)
    item = finding(response, "mesh", "tooth separation")
    assert (item.limit, item.verdict, item.use) == (0.0, "fail", math.inf)
    assert item.value == pytest.approx(response.normal.alternating_torque_nm[1][response.continuous].max(), rel=1e-9)
    assert response.governing.element == "mesh"
    assert response.verdict == "fail"


def test_rated_speed_in_a_range_to_be_barred_is_no_pass():
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": 900.0}
    operation = {"rated": "1400 rpm", "range": ["900 rpm", "1600 rpm"]}
    found = standing(response_of(plain_text(shafts={"shaft": shaft}, operation=operation)))
    assert found.rated_barred
    assert found.verdict == "fail"


def test_the_basis_of_a_stated_limit_names_the_one_in_passing_too():
    shaft = {**GEOMETRY, "permitted-torque": 900.0, "passing-torque": 1800.0}
    response = response_of(plain_text(shafts={"shaft": shaft}, materials=STEEL))
    assert response.limits[0].basis == "torque amplitude stated: 900 N·m, 1800 N·m in passing"


def test_an_engine_of_which_no_cylinder_works_is_asked_about_its_power():
    dead = engine_text(machines={}).replace('"cylinders" = ', '"dead-cylinders" = [1, 2, 3], "cylinders" = ')
    for text, asked in ((engine_text(), False), (dead, True)):
        flags = [flag.text for flag in screening_of(text).flags]
        assert any("none of its cylinders works" in said for said in flags) == asked
