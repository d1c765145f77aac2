"""Nominal shear and stress concentration of round shafts in torsion against handbooks, charts and closed forms."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from quillshaft.elements.stress import (
    FILLET_CURVES,
    HOLE,
    KEYWAY,
    SHARP_SHOULDER,
    SPLINE,
    fillet_curve,
    fillet_factor,
    high_shoulder_factor,
    hole_factor,
    nominal_shear,
    section_concentration,
    section_modulus,
    torque_of_shear,
)
from quillshaft.train.duty_model import StressSection

LENGTHS = st.floats(1e-3, 2.0)


def test_shear_of_a_solid_shaft_is_sixteen_torques_over_pi_d_cubed():
    # Timoshenko, Strength of Materials, Part I (from memory)
    assert nominal_shear(1000.0, 0.05) == pytest.approx(16e3 / (math.pi * 0.05**3), rel=1e-14)


def test_a_bore_of_half_the_diameter_raises_the_shear_by_a_fifteenth():
    assert nominal_shear(1.0, 0.1, 0.05) == pytest.approx(nominal_shear(1.0, 0.1) * 16 / 15, rel=1e-14)


@given(od=LENGTHS, share=st.floats(0.0, 0.98), torque=st.floats(1.0, 1e7))
def test_torque_and_shear_are_each_the_reverse_of_the_other(od, share, torque):
    assert torque_of_shear(nominal_shear(torque, od, share * od), od, share * od) == pytest.approx(torque, rel=1e-13)


@pytest.mark.parametrize(
    ("large", "small", "radius", "pilkey", "roark"),
    [
        (60, 50, 3, 1.4997082142, 1.46236800996),
        (100, 80, 5, 1.51077260873, 1.47099250267),
        (55, 50, 2, 1.52589458704, 1.49172657017),
        (120, 80, 8, 1.41257612714, 1.37520375057),
    ],
)
def test_fillet_curves_give_the_values_recomputed_from_both_handbooks(large, small, radius, pilkey, roark):
    # Pilkey, Peterson's Stress Concentration Factors, chart 3.12; Roark's Formulas, table 17.1 (from memory)
    lengths = (small / 1e3, large / 1e3, radius / 1e3)
    assert fillet_factor(*lengths).value == pytest.approx(roark, rel=1e-11)
    assert fillet_factor(*lengths, "pilkey").value == pytest.approx(pilkey, rel=1e-11)


@pytest.mark.parametrize(
    ("small", "radius", "chart", "roark", "pilkey"),
    [
        (0.7, 0.15, 1.20, 1.200032, 1.220072),
        (0.8, 0.10, 1.29, 1.294528, 1.318048),
        (0.9, 0.05, 1.41, 1.419616, 1.447416),
    ],
)
def test_a_quarter_round_fillet_has_the_factor_of_the_chart(small, radius, chart, roark, pilkey):
    # Gere, Mechanics of Materials, problem 3.11-3: values read from its chart
    found = fillet_factor(small, 1.0, radius)
    assert found.value == pytest.approx(chart, abs=0.0101)
    assert found.value == pytest.approx(roark, abs=1e-6)
    assert fillet_factor(small, 1.0, radius, "pilkey").value == pytest.approx(pilkey, abs=1e-6)
    assert found.words == ""


def test_the_coefficients_of_roarks_curves_add_up_to_one_nought_nought():
    for power, total in enumerate((1.0, 0.0, 0.0)):
        assert sum(curve[power] for curve in FILLET_CURVES["roark"]) == pytest.approx(total, abs=1e-12)


@given(sharpness=st.floats(0.25, 4.0))
def test_the_factor_goes_to_one_as_the_shoulder_takes_up_the_whole_shaft(sharpness):
    assert fillet_curve(1.0, sharpness) == pytest.approx(1.0, abs=1e-12)
    assert fillet_curve(1.0, sharpness, "pilkey") == pytest.approx(1.0, abs=0.15)


@given(small=st.floats(0.01, 1.0), share=st.floats(0.002, 0.1), first=st.floats(0.1, 40.0), second=st.floats(0.1, 40.0))
def test_a_higher_shoulder_never_lowers_the_factor_of_a_sharp_fillet(small, share, first, second):
    low, high = sorted((first, second))
    radius = share * small
    before = fillet_factor(small, small + 2 * low * radius, radius).value
    assert fillet_factor(small, small + 2 * high * radius, radius).value >= before * (1 - 1e-9)


@given(small=st.floats(0.01, 1.0), share=st.floats(0.002, 0.5), sharpness=st.floats(0.0, 200.0))
def test_a_fillet_factor_is_at_least_one_and_says_when_it_leaves_the_curves(small, share, sharpness):
    radius = share * small
    found = fillet_factor(small, small + 2 * sharpness * radius, radius)
    assert 1.0 <= found.value <= high_shoulder_factor(small, radius) * (1 + 1e-9) + 0.01
    if 0.26 < sharpness < 3.99:
        assert found.words == ""
    if 1e-6 < sharpness < 0.24 or sharpness > 4.01:
        assert "h/r" in found.words


@pytest.mark.parametrize("share", [0.005, 0.01, 0.02, 0.05, 0.1])
@pytest.mark.parametrize("sharpness", [0.25, 4.0])
def test_the_factor_is_continuous_where_the_curves_end(share, sharpness):
    below, above = (fillet_factor(1.0, 1.0 + 2 * s * share, share).value for s in (sharpness - 1e-6, sharpness + 1e-6))
    assert below == pytest.approx(above, abs=1e-5)


@pytest.mark.parametrize(
    ("step", "scale", "power"), [(2.0, 0.86331, -0.23865), (1.33, 0.84897, -0.23161), (1.2, 0.83425, -0.21649)]
)
@pytest.mark.parametrize("share", [0.005, 0.01, 0.02, 0.03])
def test_beyond_the_curves_the_factor_is_not_below_a_second_handbook(step, scale, power, share):
    # Norton, Machine Design, appendix, shaft with shoulder fillet in torsion (from memory); 5 % between handbooks
    found = fillet_factor(1.0, step, share)
    assert found.value >= 0.95 * scale * share**power


def test_a_shoulder_of_no_height_raises_nothing():
    assert fillet_factor(0.1, 0.1, 0.005).value == 1.0


@pytest.mark.parametrize("lengths", [(0.1, 0.12, 0.0), (0.1, 0.09, 0.005), (0.1, 0.12, math.nan)])
def test_a_fillet_that_cannot_be_is_refused_with_what_was_given(lengths):
    with pytest.raises(ValueError, match=r"fillet radius .* from 0\.1 to"):
        fillet_factor(*lengths)


def test_a_small_hole_in_pure_shear_carries_four_times_the_shear_in_tension():
    # Kirsch: tension σ along and −σ across add 3σ and σ at the edge; distortion energy compares with √3 τ
    assert math.sqrt(3.0) * HOLE == pytest.approx(3.0 + 1.0, rel=1e-14)
    factor, net = hole_factor(1.0, 1e-6)
    assert factor * net == pytest.approx(2.3094010767585, rel=1e-5)


def test_net_modulus_of_a_drilled_shaft_is_that_of_the_handbook():
    # Shigley, table A-16 (from memory): π D³/16 − d D²/6
    _, net = hole_factor(0.1, 0.015)
    left = math.pi * 0.1**3 / 16 - 0.015 * 0.1**2 / 6
    assert section_modulus(0.1) / net == pytest.approx(left, rel=1e-13)


@given(hole=st.floats(0.01, 0.3), bore=st.floats(0.0, 0.5))
def test_the_hole_factor_is_not_below_that_in_the_class_rule(hole, bore):
    # IACS UR M68, recalled, on the plain section: 2.3 − 3 e/d + 15 (e/d)² + 10 (e/d)² (di/d)²
    factor, net = hole_factor(1.0, hole, bore)
    assert factor * net >= 2.3 - 3 * hole + 15 * hole**2 + 10 * (hole * bore) ** 2


@given(hole=st.floats(0.01, 0.99), bore=st.floats(0.0, 0.95))
def test_a_hole_always_leaves_some_of_the_section(hole, bore):
    assert 1.0 < hole_factor(1.0, hole, bore)[1] < 10.0


@pytest.mark.parametrize("hole", [0.0, 0.1, 0.2])
def test_a_hole_as_wide_as_the_shaft_is_refused(hole):
    with pytest.raises(ValueError, match=r"radial hole .* in a shaft of 0\.1 m"):
        hole_factor(0.1, hole)


def test_a_plain_section_raises_nothing():
    found = section_concentration(StressSection(0.1, 0.03))
    assert (found.theoretical, found.net, found.radius_m, found.words) == (1.0, 1.0, None, "plain section: 1")


def test_a_fillet_is_named_with_its_lengths_and_factor():
    found = section_concentration(StressSection(0.11, fillet_m=0.006, shoulder_m=0.13))
    assert found.words == "fillet r 6 mm from 110 to 130 mm: 1.48"
    assert found.radius_m == 0.006
    assert found.theoretical == fillet_factor(0.11, 0.13, 0.006).value


def test_pilkeys_form_is_used_where_it_is_asked_for():
    section = StressSection(0.05, fillet_m=0.003, shoulder_m=0.06)
    assert section_concentration(section, "pilkey").theoretical == pytest.approx(1.4997082142, rel=1e-10)


def test_a_fillet_outside_the_curves_says_so():
    words = section_concentration(StressSection(0.1, fillet_m=0.001, shoulder_m=0.2)).words
    assert words == "fillet r 1 mm from 100 to 200 mm: 2.59 (h/r 50 is above 4: extrapolated)"


def test_a_shoulder_without_fillet_is_counted_as_sharp_and_its_notch_in_full():
    # common practice: Shigley, first estimate for a sharp shoulder (from memory); Norton's fit at r/d 0.02 agrees
    found = section_concentration(StressSection(0.1, shoulder_m=0.12))
    assert (found.theoretical, found.radius_m) == (SHARP_SHOULDER, None)
    assert high_shoulder_factor(0.1, 0.002) == pytest.approx(SHARP_SHOULDER, abs=0.01)
    assert "120 mm without a stated fillet" in found.words


@given(large=st.floats(0.1, 0.5))
def test_a_fillet_whose_shoulder_is_not_stated_has_the_factor_of_the_worst_one(large):
    found = section_concentration(StressSection(0.1, fillet_m=0.003))
    assert found.theoretical >= section_concentration(StressSection(0.1, fillet_m=0.003, shoulder_m=large)).theoretical
    assert "shoulder not stated" in found.words


def test_keyway_spline_and_stated_factor_have_the_customary_values():
    # common practice: Shigley ch. 7 (keyway, r/d 0.02, seen); Peterson (spline, from memory)
    keyway = section_concentration(StressSection(0.1, keyway=True))
    assert (keyway.theoretical, keyway.radius_m) == (KEYWAY, pytest.approx(0.002, rel=1e-12))
    spline = section_concentration(StressSection(0.1, spline=True))
    assert (spline.theoretical, spline.radius_m) == (SPLINE, None)
    stated = section_concentration(StressSection(0.1, keyway=True, cross_hole_m=0.01, stress_factor=1.8))
    assert (stated.theoretical, stated.net, stated.radius_m) == (1.8, 1.0, None)
    assert stated.words == "stress concentration as given: 1.8"


def test_the_greatest_of_fillet_and_keyway_governs_and_the_other_is_named():
    found = section_concentration(StressSection(0.11, fillet_m=0.006, shoulder_m=0.13, keyway=True))
    assert found.theoretical == KEYWAY
    assert found.words.endswith("governs over fillet r 6 mm from 110 to 130 mm: 1.48")


def test_a_keyway_and_a_hole_at_one_section_are_taken_to_meet():
    found = section_concentration(StressSection(0.11, keyway=True, cross_hole_m=0.012))
    assert found.theoretical == pytest.approx(KEYWAY * HOLE, rel=1e-14)
    assert found.whole == pytest.approx(KEYWAY * HOLE * hole_factor(0.11, 0.012)[1], rel=1e-14)
    assert found.radius_m == 0.006
    assert "taken to meet" in found.words
    assert section_concentration(StressSection(0.11, spline=True, cross_hole_m=0.012)).radius_m is None


def test_a_stated_factor_below_one_is_refused():
    with pytest.raises(ValueError, match=r"stress concentration factor 0\.9: must be at least 1"):
        section_concentration(StressSection(0.1, stress_factor=0.9))
