"""Mesh stiffness by ISO 6336-1, simplified, and the geometry it needs. The rule's constants are from memory."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from quillshaft.elements.mesh_stiffness import (
    contact_ratio,
    inverse_involute,
    involute,
    mean_stiffness,
    rule_stiffness,
    single_stiffness,
    tooth_flexibility,
)
from quillshaft.train.gear_model import GearGeometry
from trains import graph_of, omegas, refusal, screening_of, train, train_text

ALPHA = math.radians(20.0)
SPUR = GearGeometry(0.005, 0.0, ALPHA, 0.06)


# ISO 6336-1, single stiffness and mesh stiffness (recalled); the digits are its formulas worked out by hand.
def test_flexibility_of_25_and_75_teeth():
    assert tooth_flexibility(25, 75) == pytest.approx(0.0568892, rel=1e-12)
    assert 1 / tooth_flexibility(25, 75) == pytest.approx(17.578028870155, rel=1e-13)


def test_flexibility_of_20_and_40_teeth():
    assert tooth_flexibility(20, 40) == pytest.approx(0.06145325, rel=1e-12)
    assert 1 / tooth_flexibility(20, 40) == pytest.approx(16.272532372169, rel=1e-13)


def test_the_rule_lands_on_14_for_a_pair_of_teeth_and_on_20_for_the_mesh():
    single = single_stiffness(17.578028870155)
    assert single == pytest.approx(14.062423096124, rel=1e-13)
    assert mean_stiffness(single, 1.5) == pytest.approx(19.33583175717, rel=1e-12)


def test_profile_shift_enters_with_each_of_its_terms():
    # x1 = 0.4, x2 = 0.1 at 25/75: −0.00254 − 0.00186464 − 0.000193 − 0.000322507 + 0.0008464 + 0.0000182, by hand.
    change = -0.00635 * 0.4 - 0.11654 * 0.4 / 25 - 0.00193 * 0.1 - 0.24188 * 0.1 / 75 + 0.00529 * 0.16 + 0.00182 * 0.01
    assert tooth_flexibility(25, 75, 0.4, 0.1) - tooth_flexibility(25, 75) == pytest.approx(change, rel=1e-12)


def test_a_ring_counts_as_infinitely_many_teeth():
    internal = rule_stiffness(replace(SPUR, contact_ratio=1.6), (30, 90), internal=True)
    assert internal.flexibility_mm_um_n == pytest.approx(0.04723 + 0.15551 / 30, rel=1e-12)


def test_the_smaller_wheel_is_the_first_whatever_the_order():
    shifted = replace(SPUR, profile_shift=(0.3, -0.1))
    swapped = replace(SPUR, profile_shift=(-0.1, 0.3))
    one, other = rule_stiffness(shifted, (25, 75)), rule_stiffness(swapped, (75, 25))
    assert one.mean_n_mm_um == pytest.approx(other.mean_n_mm_um, rel=1e-13)


def test_helical_teeth_use_virtual_tooth_numbers_and_the_cosine_of_the_helix():
    # β = 15°: sin β_b = sin β cos α_n, z_v = z / (cos² β_b cos β), c' ∝ cos β (ISO 6336-1, recalled).
    beta = math.radians(15)
    found = rule_stiffness(replace(SPUR, helix_rad=beta, contact_ratio=1.5), (25, 75))
    base = math.asin(math.sin(beta) * math.cos(ALPHA))
    virtual = [z / (math.cos(base) ** 2 * math.cos(beta)) for z in (25, 75)]
    expected = 0.8 * math.cos(beta) / tooth_flexibility(*virtual)
    assert found.single_n_mm_um == pytest.approx(expected, rel=1e-12)


def test_the_involute_function_is_inverted():
    # inv 20° = 0.0149044 (tables of the involute function, common practice).
    assert involute(ALPHA) == pytest.approx(0.0149044, abs=5e-8)
    assert inverse_involute(involute(0.4)) == pytest.approx(0.4, abs=1e-14)


def by_tip_angles(z1, z2, internal=False):
    """ε = [z1 (tan α_a1 − tan α) ± z2 (tan α_a2 − tan α)] / 2π (gear geometry by tip pressure angles)."""
    side = -1 if internal else 1
    tip1, tip2 = (math.acos(z * math.cos(ALPHA) / (z + 2 * way)) for z, way in ((z1, 1), (z2, side)))
    return (z1 * (math.tan(tip1) - math.tan(ALPHA)) + side * z2 * (math.tan(tip2) - math.tan(ALPHA))) / (2 * math.pi)


@pytest.mark.parametrize(("teeth", "internal"), [((25, 75), False), ((40, 40), False), ((36, 96), True)])
def test_contact_ratio_equals_that_by_tip_pressure_angles(teeth, internal):
    assert contact_ratio(SPUR, teeth, internal) == pytest.approx(by_tip_angles(*teeth, internal), rel=1e-11)


def test_contact_ratio_of_many_teeth_approaches_that_of_two_racks():
    # Limit of full-depth teeth: 4 / (π sin 2α) = 1.9809 at 20° (common practice).
    assert contact_ratio(SPUR, (4000, 4000)) == pytest.approx(4 / (math.pi * math.sin(2 * ALPHA)), rel=1e-2)
    assert contact_ratio(SPUR, (4000, 4000)) < 4 / (math.pi * math.sin(2 * ALPHA))


def test_equal_and_opposite_shifts_leave_the_working_angle():
    # x1 + x2 = 0: centre distance and working angle stay; only the tips move. Path by hand.
    x = 0.3
    tip = [5 * (25 / 2 + 1 + x), 5 * (75 / 2 + 1 - x)]
    base = [5 * z / 2 * math.cos(ALPHA) for z in (25, 75)]
    path = sum(math.sqrt(a * a - b * b) for a, b in zip(tip, base, strict=True)) - 250 * math.sin(ALPHA)
    expected = path / (5 * math.pi * math.cos(ALPHA))
    assert contact_ratio(replace(SPUR, profile_shift=(x, -x)), (25, 75)) == pytest.approx(expected, rel=1e-11)


STATIONS = {"driver": 1.0, "pinion": 0.2, "wheel": 0.9, "load": 4.0}
SHAFTS = {"s1": ("driver", "pinion", 2e6), "s2": ("wheel", "load", 3e6)}
BY_RULE = {"module": "5 mm", "face": "60 mm", "mesh-stiffness": "iso-6336"}


def mesh(between=("pinion", "wheel"), teeth=(25, 75), **row):
    geared = {"mesh": {"between": list(between), "teeth": list(teeth), "module": "5 mm", **row}}
    return train_text(STATIONS, shafts=SHAFTS, gears=geared)


def test_the_rule_in_a_file_is_the_stiffness_it_gives():
    text = mesh(**{**BY_RULE, "contact-ratio": 1.5})
    given = mesh(**{"face": "60 mm", "mesh-stiffness": "19.33583175717 N/(mm um)"})
    assert omegas(text) == pytest.approx(omegas(given), rel=1e-12)
    # c_γ b r_b²: 19.3358 N/(mm µm) · 60 mm · (62.5 mm cos 20°)².
    stiffness = 19.33583175717e9 * 0.06 * (0.0625 * math.cos(ALPHA)) ** 2
    assert graph_of(text).link("mesh").stiffness_nm_rad == pytest.approx(stiffness, rel=1e-12)


def test_naming_the_wheel_first_is_the_same_train_by_the_rule():
    shifted = {**BY_RULE, "profile-shift": [0.3, -0.1]}
    swapped = {**BY_RULE, "profile-shift": [-0.1, 0.3]}
    other = mesh(("wheel", "pinion"), (75, 25), **swapped)
    assert omegas(mesh(**shifted)) == pytest.approx(omegas(other), rel=1e-12)


@pytest.mark.parametrize("internal_first", [False, True])
def test_an_internal_mesh_by_the_rule_knows_its_ring(internal_first):
    between, teeth = (("wheel", "pinion"), (90, 30)) if internal_first else (("pinion", "wheel"), (30, 90))
    text = mesh(between, teeth, internal=True, **BY_RULE)
    rule = rule_stiffness(SPUR, (30, 90), internal=True)
    radius = 0.0025 * teeth[0] * math.cos(ALPHA)
    expected = rule.mean_n_mm_um * 1e9 * 0.06 * radius**2
    assert graph_of(text).link("mesh").stiffness_nm_rad == pytest.approx(expected, rel=1e-12)


def test_the_rule_is_listed_as_recalled():
    said = {(item.key, item.value): item.why for item in train(mesh(**BY_RULE)).assumed}
    assert "confirm against your edition" in said["mesh stiffness by rule", "iso-6336"]
    assert ("contact-ratio", "from the teeth") in said
    assert ("profile-shift", "0 and 0") in said


def test_what_the_rule_alone_uses_is_listed_as_not_used_beside_a_given_stiffness():
    given = mesh(**{"mesh-stiffness": "1e9 N/m", "profile-shift": [0.1, 0.1]})
    said = {item.key: item.value for item in train(given).assumed if item.element == "gears.mesh"}
    assert said["profile-shift, contact-ratio"] == "not used"


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"mesh-stiffness": "iso-6336"}, "needs face"),
        ({**BY_RULE, "profile-shift": [1.9, 0.4]}, "sum of profile shifts"),
        ({**BY_RULE, "contact-ratio": 0.8}, "must be at least 1"),
        ({"mesh-stiffness": "iso-6363", "face": "60 mm"}, 'or "iso-6336"'),
    ],
)
def test_what_the_rule_cannot_use_is_refused(row, words):
    assert words in refusal(mesh(**row))


def test_teeth_that_cannot_mesh_are_refused_by_name():
    # A ring of 30 teeth has its tips inside its base circle (30/2 − 1 < 30/2 · cos 20°).
    message = refusal(mesh(teeth=(20, 30), internal=True, **BY_RULE))
    assert "base circle" in message
    assert "gears" in message
    assert "mesh" in message


def test_a_lightly_loaded_mesh_is_asked_about_and_a_loaded_one_is_not():
    def flags(power):
        text = mesh(**BY_RULE) + f'[power]\ndriver = "{power}"\nload = "balance"\n'
        return [flag.text for flag in screening_of(text).flags if flag.element == "gears.mesh"]

    # 100 N/mm on 60 mm at 62.5 mm: 375 N·m, at 1500 rpm 58.9 kW.
    assert any("below 100 N/mm" in text for text in flags("58 kW"))
    assert not any("below 100 N/mm" in text for text in flags("60 kW"))
