"""The class rule for propulsion shafts, IACS UR M68 (recalled; values recomputed from the recalled formulas)."""

from __future__ import annotations

import math
import typing

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from quillshaft.elements.propulsion_rule import (
    ENGINE_FACTOR,
    FORM_FACTORS,
    SMOOTH_FACTOR,
    PropulsionShaft,
    barred_range,
    barred_range_allowed,
    continuous_limit,
    diameter_form_factor,
    form_factor,
    minimum_diameter,
    passing_limit,
    passing_of_continuous,
    propulsion_shaft,
    size_factor,
    slot_concentration,
    slot_form_factor,
    tensile_cap,
)
from quillshaft.train.duty_model import PropulsionForm, PropulsionKind

RAD_S = math.pi / 30
INTERMEDIATE = {
    "integral-flange": 1.0,
    "shrink-fit": 1.0,
    "keyway-taper": 0.60,
    "keyway-cylindrical": 0.45,
    "radial-hole": 0.50,
    "longitudinal-slot": 0.30,
}


def shaft(tensile, factor, diameter):
    return PropulsionShaft(factor, tensile * 1e6, diameter / 1e3, "")


@pytest.mark.parametrize(
    ("diameter", "value"), [(100, 0.72023966861475), (300, 0.6472067698094), (500, 0.61834218249874)]
)
def test_size_factor(diameter, value):
    assert size_factor(diameter / 1e3) == pytest.approx(value, rel=1e-12)


@pytest.mark.parametrize(
    ("tensile", "factor", "diameter", "ratio", "continuous", "passing"),
    [
        (600, 1.0, 300, 0.5, 68.316270146547, 116.13765924913),
        (600, 1.0, 300, 0.9, 37.710581120894, 64.10798790552),
        (600, 1.0, 300, 1.0, 37.710581120894, 64.10798790552),
        (500, 0.55, 450, 0.6, 28.694127699934, 65.774961625914),
        (800, 0.6, 200, 0.3, 60.669466650539, 133.15070591113),
    ],
)
def test_continuous_and_passing_limits(tensile, factor, diameter, ratio, continuous, passing):
    one = shaft(tensile, factor, diameter)
    found = continuous_limit(one, ratio)
    assert float(found) == pytest.approx(continuous * 1e6, rel=1e-12)
    assert float(passing_of_continuous(found, factor)) == pytest.approx(passing * 1e6, rel=1e-12)
    if ratio <= 0.8:
        assert float(passing_limit(one, ratio)) == pytest.approx(passing * 1e6, rel=1e-12)
    else:
        assert np.isnan(passing_limit(one, ratio))


def test_limits_are_given_over_the_speeds_of_the_rule_only():
    ratios = np.array([-0.1, 0.0, 0.8, 0.80001, 1.05, 1.0501])
    one = shaft(600, 1.0, 300)
    assert np.isnan(continuous_limit(one, ratios)).tolist() == [True, False, False, False, False, True]
    assert np.isnan(passing_limit(one, ratios)).tolist() == [True, False, False, True, True, True]


def test_the_continuous_limit_has_no_step_at_nine_tenths():
    # 3 − 2 · 0.81 = 1.38
    below, at = continuous_limit(shaft(600, 1.0, 300), np.array([0.9 - 1e-12, 0.9]))
    assert below == pytest.approx(at, rel=1e-10)


@given(first=st.floats(0.0, 1.05), second=st.floats(0.0, 1.05), factor=st.floats(0.3, 1.0))
def test_the_continuous_limit_falls_with_speed(first, second, factor):
    low, high = sorted((first, second))
    one = shaft(500, factor, 400)
    assert continuous_limit(one, low) >= continuous_limit(one, high) * (1 - 1e-12)


@given(ratio=st.floats(0.0, 0.8), factor=st.floats(0.3, 1.0))
def test_passing_allows_more_than_continuous_running(ratio, factor):
    one = shaft(500, factor, 400)
    assert passing_limit(one, ratio) >= 1.7 * continuous_limit(one, ratio) * (1 - 1e-12)


def test_form_factors_are_those_of_the_rule():
    # IACS UR M68, recalled (1.0, 1.0 and 0.6 seen in a class rule that carries the same set)
    assert {form: form_factor("intermediate", form) for form in INTERMEDIATE} == INTERMEDIATE
    assert form_factor("thrust") == form_factor("thrust", "integral-flange") == 0.85
    assert [form_factor("propeller", form) for form in ("integral-flange", "keyless", "keyway-taper")] == [0.55] * 3
    assert [diameter_form_factor("intermediate", form) for form in INTERMEDIATE] == [1.0, 1.0, 1.1, 1.1, 1.1, 1.2]
    assert [diameter_form_factor("propeller", form) for form in ("keyless", "keyway-taper")] == [1.22, 1.26]
    assert diameter_form_factor("thrust") == 1.1


@pytest.mark.parametrize("kind", typing.get_args(PropulsionKind))
@pytest.mark.parametrize("form", [*typing.get_args(PropulsionForm), None])
def test_a_form_that_the_rule_does_not_give_is_refused_with_those_it_has(kind, form):
    if (kind, form) in FORM_FACTORS:
        assert 0.3 <= form_factor(kind, form) <= 1.0
        return
    for look_up in (form_factor, diameter_form_factor):
        with pytest.raises(ValueError, match=f"no factor for a {kind} shaft with .*; it has .*integral-flange"):
            look_up(kind, form)


def test_tensile_strength_counts_up_to_the_cap():
    # IACS UR M68, recalled
    assert tensile_cap("intermediate") == tensile_cap("propeller", alloy=True) == 600e6
    assert tensile_cap("intermediate", alloy=True) == tensile_cap("thrust", alloy=True) == 800e6
    capped = propulsion_shaft("propeller", "keyless", 700e6, 0.4)
    assert capped.tensile_pa == 600e6
    assert capped.words == "propeller shaft, keyless: c_K 0.55, c_D 0.631, tensile strength 700 counted as 600 N/mm²"
    plain = propulsion_shaft("thrust", None, 500e6, 0.3)
    assert (plain.tensile_pa, plain.form_factor, plain.words) == (500e6, 0.85, "thrust shaft: c_K 0.85, c_D 0.647")


def test_a_shaft_of_the_rule_has_its_limit():
    one = propulsion_shaft("intermediate", "keyway-taper", 900e6, 0.2, alloy=True)
    assert float(continuous_limit(one, 0.3)) == pytest.approx(60.669466650539e6, rel=1e-12)


def test_barred_range_about_72_of_120_revolutions_per_minute():
    assert barred_range(72.0, 120.0) == pytest.approx((66.206896551724, 78.3), rel=1e-12)


@given(critical=st.floats(1.0, 1000.0), ratio=st.floats(0.05, 0.8))
def test_a_barred_range_holds_its_critical_speed_and_is_even_on_a_logarithmic_scale(critical, ratio):
    low, high = barred_range(critical, critical / ratio)
    assert low < critical < high
    assert low * high == pytest.approx(critical**2, rel=1e-12)


def test_no_barred_range_is_allowed_from_eight_tenths_of_rated_speed():
    assert [barred_range_allowed(ratio) for ratio in (0.3, 0.799, 0.8, 0.95)] == [True, True, False, False]


def test_longitudinal_slot():
    lengths = (0.24, 0.04, 0.3, 0.1)
    assert slot_concentration(0.04, 0.04, 0.3, 0.1) == pytest.approx(2.1864197530864, rel=1e-12)
    assert slot_concentration(*lengths) == pytest.approx(3.9752741350863, rel=1e-12)
    assert slot_form_factor(*lengths) == pytest.approx(0.36475471897702, rel=1e-12)


@pytest.mark.parametrize("lengths", [(0.03, 0.04, 0.3, 0.1), (0.24, 0.0, 0.3, 0.1), (0.24, 0.04, 0.3, 0.3)])
def test_a_slot_that_cannot_be_is_refused(lengths):
    with pytest.raises(ValueError, match=r"longitudinal slot l .*: needs 0 < e ≤ l"):
        slot_form_factor(*lengths)


def test_minimum_diameter():
    engine = minimum_diameter(8e6, 110 * RAD_S, 560e6, 1.0, ENGINE_FACTOR)
    assert engine == pytest.approx(383.87009260791e-3, rel=1e-12)
    smooth = minimum_diameter(3e6, 200 * RAD_S, 600e6, diameter_form_factor("propeller", "keyless"), SMOOTH_FACTOR, 0.5)
    assert smooth == pytest.approx(263.78387377249e-3, rel=1e-12)
    # σ_B = 400 makes the strength factor 1
    assert minimum_diameter(1e3, RAD_S, 400e6, 1.0, 100.0) == pytest.approx(0.1, rel=1e-12)
