"""Gear geometry: base radius, mesh stiffness as a torsional spring, ratios."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest

from quillshaft.elements.gear import base_radius, mesh_ratio
from quillshaft.train.gear_model import GearGeometry, GearMesh
from trains import graph_of, omegas, train_text

# c = 20 N/(mm·µm), face 60 mm, pitch radius 100 mm (40 teeth of module 5), 20°: k = c b r_b². Derived:
# 1.2e9 N/m · (0.093969262078591 m)² = 10596266.658714 N·m/rad.
AT_THE_40_TEETH = 10596266.658714
STATIONS = {"driver": 1.0, "pinion": 0.2, "wheel": 0.9, "load": 4.0}
SHAFTS = {"s1": ("driver", "pinion", 2e6), "s2": ("wheel", "load", 3e6)}


def mesh(**row):
    geared = {"mesh": {"between": ["pinion", "wheel"], "teeth": [40, 60], "module": "5 mm", **row}}
    return train_text(STATIONS, shafts=SHAFTS, gears=geared)


def test_mesh_stiffness_per_face_becomes_a_spring_at_the_first_named_wheel():
    link = graph_of(mesh(**{"mesh-stiffness": "20 N/(mm um)", "face": "60 mm"})).link("mesh")
    assert link.stiffness_nm_rad == pytest.approx(AT_THE_40_TEETH, rel=1e-12)


def test_total_mesh_stiffness_and_one_already_torsional_say_the_same():
    total = graph_of(mesh(**{"mesh-stiffness": "1.2e9 N/m"})).link("mesh")
    torsional = graph_of(mesh(**{"mesh-stiffness": f"{AT_THE_40_TEETH} N m/rad"})).link("mesh")
    assert total.stiffness_nm_rad == pytest.approx(AT_THE_40_TEETH, rel=1e-12)
    assert torsional.stiffness_nm_rad == pytest.approx(AT_THE_40_TEETH, rel=1e-15)


def test_naming_the_wheel_first_states_the_same_mesh():
    row = {"module": "5 mm", "mesh-stiffness": "1.2e9 N/m"}
    swapped = {"mesh": {"between": ["wheel", "pinion"], "teeth": [60, 40], **row}}
    text = train_text(STATIONS, shafts=SHAFTS, gears=swapped)
    assert graph_of(text).link("mesh").stiffness_nm_rad == pytest.approx(AT_THE_40_TEETH * 1.5**2, rel=1e-12)
    assert omegas(text) == pytest.approx(omegas(mesh(**{"mesh-stiffness": "1.2e9 N/m"})), rel=1e-12)


def test_a_stiff_mesh_approaches_the_rigid_one_with_one_mode_more():
    rigid = omegas(mesh())
    soft, stiff = (omegas(mesh(**{"mesh-stiffness": f"{k} N/m"}))[:2] for k in (1e12, 1e13))
    assert len(omegas(mesh(**{"mesh-stiffness": "1e12 N/m"}))) == len(rigid) + 1 == 3
    assert stiff == pytest.approx(rigid, rel=1e-3)
    # The error of a stiff link falls as 1/k.
    assert (rigid - soft) / (rigid - stiff) == pytest.approx([10.0, 10.0], rel=0.02)


def test_base_radius_of_helical_teeth_uses_the_transverse_pressure_angle():
    # r_b = z m_n cos α_t / (2 cos β), tan α_t = tan α_n / cos β. Source: ISO 21771 (from memory).
    # β = 30°, α_n = 20°: tan α_t = 0.36397023/0.86602540 = 0.42027663, α_t = 22.79588°, r_b by hand.
    geometry = GearGeometry(0.006, math.radians(30), math.radians(20))
    alpha_t = math.atan(math.tan(math.radians(20)) / math.cos(math.radians(30)))
    assert math.degrees(alpha_t) == pytest.approx(22.79588, abs=5e-6)
    assert base_radius(geometry, 31) == pytest.approx(31 * 6e-3 * math.cos(alpha_t) / math.sqrt(3), rel=1e-14)


def test_an_external_mesh_reverses_and_an_internal_one_does_not():
    assert mesh_ratio(GearMesh("m", ("a", "b"), (29, 77))) == Fraction(-29, 77)
    assert mesh_ratio(GearMesh("m", ("a", "b"), (29, 77), internal=True)) == Fraction(29, 77)


def test_the_direction_of_a_mesh_does_not_change_frequencies():
    assert omegas(mesh(internal=True)) == pytest.approx(omegas(mesh()), rel=1e-14)
