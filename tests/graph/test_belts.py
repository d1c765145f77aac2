"""Belts and chains: a ratio and a spring, alone, beside gears and in loops; right-angle gears and their direction."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
import scipy.linalg

from trains import graph_of, omegas, refusal, screening_of, sources_of, train, train_text

PULLEYS = {"motor": 1.2, "fan": 9.0}
SIZES = {"between": ["motor", "fan"], "diameters": ["250 mm", "630 mm"]}


def belt(stations=PULLEYS, **row):
    return train_text(stations, belts={"drive": {**SIZES, **row}})


def two_discs(k, j1=1.2, j2=9.0, ratio=250 / 630):
    """Geared two discs, stiffness at the first: ω² = k (1/J1 + 1/(n² J2)) (Thomson, sec. 12.10, from memory)."""
    return (k * (1 / j1 + 1 / (j2 * ratio**2))) ** 0.5


@pytest.mark.parametrize(("spans", "row"), [(2, {}), (2, {"spans": 2}), (1, {"spans": 1}), (1, {"kind": "chain"})])
def test_each_taut_span_adds_its_stiffness_times_the_square_of_the_pitch_radius(spans, row):
    # A span stretches by r1 θ1 − r2 θ2: k = spans · k_span · r1² at the first pulley.
    (omega,) = omegas(belt(**{"span-stiffness": "1.9 MN/m"}, **row))
    assert omega == pytest.approx(two_discs(spans * 1.9e6 * 0.125**2), rel=1e-12)


def test_a_belt_agrees_with_the_energy_of_its_spans():
    # V = ½ · 2 k (r1 θ1 − r2 θ2)² in actual angles, assembled dense with a shaft on either side.
    stations = {"rotor": 4.0, "motor": 1.2, "fan": 9.0, "wheel": 50.0}
    shafts = {"s1": ("rotor", "motor", 3e5), "s2": ("fan", "wheel", 8e5)}
    text = train_text(stations, shafts=shafts, belts={"drive": {**SIZES, "span-stiffness": "1.9 MN/m"}})
    rows = [(3e5, [1, -1, 0, 0]), (8e5, [0, 0, 1, -1]), (2 * 1.9e6, [0, 0.125, -0.315, 0])]
    spring = sum(k * np.outer(row, row) for k, row in rows)
    squares = scipy.linalg.eigh(spring, np.diag(list(stations.values())), eigvals_only=True)
    assert omegas(text) == pytest.approx(np.sqrt(squares[1:]), rel=1e-9)


def test_a_stiffness_at_the_first_pulley_says_the_same():
    (omega,) = omegas(belt(stiffness=5e4))
    assert omega == pytest.approx(two_discs(5e4), rel=1e-12)


def test_a_belt_without_stiffness_is_rigid_and_says_so():
    assert len(omegas(belt())) == 0
    assert any(item.element == "belts.drive" and item.value == "rigid" for item in train(belt()).assumed)


def test_the_ratio_of_a_belt_is_that_of_its_pitch_diameters_in_the_same_direction():
    assert graph_of(belt()).speed_ratio[1] == Fraction(25, 63)
    assert graph_of(belt(crossed=True)).speed_ratio[1] == Fraction(-25, 63)


def test_the_ratio_of_a_chain_is_that_of_its_teeth():
    row = {"kind": "chain", "teeth": [21, 53], "diameters": ["250 mm", "630 mm"]}
    assert graph_of(belt(**row)).speed_ratio[1] == Fraction(21, 53)


def looped(second):
    """Two belts side by side between two shafts."""
    belts = {"left": {**SIZES, "span-stiffness": "1.9 MN/m"}, "right": {**SIZES, "diameters": second}}
    belts["right"]["span-stiffness"] = "1.1 MN/m"
    return train_text(PULLEYS, belts=belts)


def test_belts_in_a_loop_may_differ_by_a_tenth_of_a_per_cent():
    (omega,) = omegas(looped(["250 mm", "630.6 mm"]))
    assert omega == pytest.approx(two_discs(2 * (1.9e6 + 1.1e6) * 0.125**2), rel=1e-12)


def test_belts_in_a_loop_that_differ_by_more_are_refused_by_name():
    message = refusal(looped(["250 mm", "631 mm"]))
    assert "cannot turn" in message
    assert "left" in message
    assert "right" in message


def test_a_crossed_belt_beside_an_open_one_is_refused():
    belts = {"left": dict(SIZES), "right": {**SIZES, "crossed": True}}
    assert "direction" in refusal(train_text(PULLEYS, belts=belts))


@pytest.mark.parametrize("first", ["belt", "gear"])
def test_teeth_and_not_belts_give_the_speeds_of_a_loop(first):
    # Motor to countershaft by a mesh 40 : 101, and by a belt 0.05 % off; an idler pair turns it back.
    stations = {"motor": 1.0, "idler": 0.2, "fan": 9.0}
    gears = {"m1": ("motor", "idler", 40, 50), "m2": ("idler", "fan", 50, 101)}
    belts = {"drive": {"between": ["motor", "fan"], "diameters": ["400.2 mm", "1010 mm"], "span-stiffness": "1 MN/m"}}
    tables = {"belts": belts, "gears": gears} if first == "belt" else {"gears": gears, "belts": belts}
    assert graph_of(train_text(stations, **tables)).speed_ratio[2] == Fraction(40, 101)


def test_a_chain_in_a_loop_is_exact():
    stations = {"motor": 1.0, "idler": 0.2, "fan": 9.0}
    gears = {"m1": ("motor", "idler", 40, 50), "m2": ("idler", "fan", 50, 100)}
    row = {"kind": "chain", "between": ["motor", "fan"], "teeth": [2000, 4999], "diameters": ["400 mm", "1000 mm"]}
    assert "cannot turn" in refusal(train_text(stations, gears=gears, belts={"drive": row}))


def test_a_belt_takes_the_tolerance_of_a_mesh_and_its_default_spans_are_listed():
    text = belt(**{"span-stiffness": "1.9 MN/m"}).replace('"none"', '"default"')
    listed = {item.key: item.value for item in train(text).assumed if item.element == "belts.drive"}
    assert listed["tolerance"] == "±20 %"
    assert listed["spans"] == "2"


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"spans": 2}, "counts the spans"),
        ({"stiffness": 1e5, "span-stiffness": "1 MN/m"}, "not both"),
        ({"teeth": [20, 50]}, "plain belt has none"),
        ({"kind": "chain", "teeth": [20, 60]}, "disagree with the ratio"),
        ({"kind": "chain", "crossed": True}, "only a plain belt"),
        ({"viscous": 10.0}, "rigid belt"),
        ({"span-stiffness": "1.9 MN m/rad"}, "N/m"),
        ({"diameters": ["250 mm"]}, "list of two"),
        ({"between": ["motor", "fann"]}, "fan"),
    ],
)
def test_a_belt_that_cannot_be_is_refused(row, words):
    assert words in refusal(belt(**row))


BEVEL = {"kind": "bevel", "between": ["a", "b"], "teeth": [21, 43]}


def test_a_bevel_stage_has_the_frequencies_of_a_plain_mesh_of_its_ratio():
    stations, shafts = {"m": 3.0, "a": 0.2, "b": 0.9, "l": 7.0}, {"s1": ("m", "a", 1e6), "s2": ("b", "l", 2e6)}
    for row in ({}, {"mesh-stiffness": "30 MN m/rad"}, {"mesh-stiffness": "1.2e9 N/m", "module": "6 mm"}):
        bevel = train_text(stations, shafts=shafts, gears={"corner": {**BEVEL, **row}})
        plain = train_text(stations, shafts=shafts, gears={"corner": {**BEVEL, "kind": "mesh", **row}})
        assert omegas(bevel) == pytest.approx(omegas(plain), rel=1e-13)


@pytest.mark.parametrize(("row", "sign"), [({}, 1), ({"reverses": True}, -1)])
def test_a_bevel_stage_turns_as_its_file_says(row, sign):
    text = train_text({"a": 1.0, "b": 1.0}, gears={"corner": {**BEVEL, **row}})
    assert graph_of(text).speed_ratio[1] == sign * Fraction(21, 43)


def test_the_direction_of_a_bevel_stage_closes_a_loop():
    stations = dict.fromkeys("abc", 1.0)
    gears = {"m1": ("a", "b", 20, 40), "m2": ("b", "c", 40, 40)}
    corner = {"kind": "bevel", "between": ["a", "c"], "teeth": [21, 42]}
    assert len(omegas(train_text(stations, gears={**gears, "corner": corner}))) == 0
    message = refusal(train_text(stations, gears={**gears, "corner": {**corner, "reverses": True}}))
    assert "direction" in message


def test_a_bevel_stage_excites_at_its_tooth_frequency():
    text = train_text({"a": 1.0, "b": 1.0}, gears={"corner": {**BEVEL, "mesh-stiffness": "1 MN m/rad"}})
    source = next(item for item in sources_of(text).active if item.name == "corner mesh")
    assert (source.order, source.at) == (21, "corner")


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"mesh-stiffness": "iso-6336"}, "cylindrical gears"),
        ({"shaft-angle": "190 deg"}, "below 180 degrees"),
        ({"internal": True}, "not a key"),
    ],
)
def test_a_bevel_stage_that_cannot_be_is_refused(row, words):
    assert words in refusal(train_text({"a": 1.0, "b": 1.0}, gears={"corner": {**BEVEL, **row}}))


def test_a_split_path_through_an_idler_and_an_internal_gear_shares_torque_by_stiffness():
    # Two paths from one pinion to one bull gear, quills of 1 and 3 MN·m/rad behind equal ratios: at the same twist
    # they carry 1/4 and 3/4 of the torque (statics of springs in parallel).
    stations = {"in": 1.0, "p1": 0.1, "p2": 0.1, "q1": 0.1, "q2": 0.1, "out": 5.0}
    gears = {"a1": ("in", "p1", 20, 60), "a2": ("in", "p2", 20, 60)}
    gears |= {"b1": ("q1", "out", 20, 80), "b2": ("q2", "out", 20, 80)}
    shafts = {"u1": ("p1", "q1", 1e6), "u2": ("p2", "q2", 3e6)}
    text = train_text(stations, shafts=shafts, gears=gears, power={"in": "100 kW", "out": "balance"})
    torque = {duty.link: duty.mean_torque_nm for duty in screening_of(text).duties}
    assert torque["u2"] / torque["u1"] == pytest.approx(3.0, rel=1e-9)


def test_an_idler_passes_on_torque_and_adds_its_inertia_by_the_square_of_its_ratio():
    stations = {"m": 2.0, "a": 0.1, "idler": 0.4, "b": 0.9}
    gears = {"g1": ("a", "idler", 20, 35), "g2": ("idler", "b", 35, 60)}
    (omega,) = omegas(train_text(stations, shafts={"s": ("m", "a", 1e5)}, gears=gears))
    behind = 0.1 + 0.4 * (20 / 35) ** 2 + 0.9 * (20 / 60) ** 2
    assert omega == pytest.approx((1e5 * (1 / 2.0 + 1 / behind)) ** 0.5, rel=1e-13)
    speeds = graph_of(train_text(stations, shafts={"s": ("m", "a", 1e5)}, gears=gears)).speed_ratio
    assert speeds[3] == Fraction(1, 3)
