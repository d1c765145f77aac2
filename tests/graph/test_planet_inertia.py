"""Epicyclic stages whose planets have inertia, and members held by a stiffness, against dense solutions."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
import scipy.linalg

from quillshaft.elements.epicyclic import planet_speed
from trains import graph_of, omegas, refusal, screening_of, train, train_text

SUN, PLANET, RING = 24, 36, 96
COUNT, INERTIA_P, MASS, RADIUS = 3, 0.2, 40.0, 0.3
STATIONS = {"motor": 2.0, "sun": 0.05, "ring": 1.4, "brake": 3.0, "carrier": 6.0, "load": 40.0}
SHAFTS = {"s1": ("motor", "sun", 4e5), "s2": ("ring", "brake", 9e5), "s3": ("carrier", "load", 5e6)}
BEHIND = {"sun": ("motor", "sun"), "ring": ("ring", "brake"), "carrier": ("carrier", "load")}
PLANETS = {"planet-inertia": INERTIA_P, "planet-mass": MASS, "planet-radius": "300 mm"}
FREE = {"rated": "3000 rpm", "speeds": {"carrier": "500 rpm"}}


def stage(**row):
    members = {"sun": "sun", "ring": "ring", "carrier": "carrier"}
    teeth = {"sun": SUN, "ring": RING}
    return {"stage": {"kind": "epicyclic", **members, "teeth": teeth, "planets": COUNT, **PLANETS, **row}}


def fixed_train(member, **row):
    gone = BEHIND[member]
    stations = {name: value for name, value in STATIONS.items() if name not in gone}
    shafts = {name: item for name, item in SHAFTS.items() if item[0] not in gone}
    return train_text(stations, shafts=shafts, gears=stage(**{member: "fixed"}, **row))


def free_train(**row):
    return train_text(STATIONS, shafts=SHAFTS, gears=stage(**row), operation=FREE)


NAMES = [*STATIONS, "planets"]


def dense(stiffness=None, held=None, tie=None):
    """(frequencies [rad/s], modes) in actual signed angles, planets' spin included; rigid meshes by their null space.

    Kinetic energy: N J_p ω_p² and N m r² ω_c² beside the stations. Willis for each mesh.
    """
    place = {name: index for index, name in enumerate(NAMES)}
    inertia = [*STATIONS.values(), COUNT * INERTIA_P]
    mass, spring = np.diag(inertia), np.zeros((7, 7))
    mass[place["carrier"], place["carrier"]] += COUNT * MASS * RADIUS**2
    for a, b, k in SHAFTS.values():
        row = np.zeros(7)
        row[[place[a], place[b]]] = 1.0, -1.0
        spring += k * np.outer(row, row)
    if tie is not None:
        spring[place["ring"], place["ring"]] += tie
    inner, outer = np.zeros(7), np.zeros(7)
    inner[[place["sun"], place["planets"], place["carrier"]]] = SUN, PLANET, -(SUN + PLANET)
    outer[[place["ring"], place["planets"], place["carrier"]]] = RING, -PLANET, -(RING - PLANET)
    rows = [] if stiffness is not None else [inner, outer]
    if stiffness is not None:
        for row in (inner, outer):
            spring += 2 * stiffness * np.outer(row / SUN, row / SUN)
    for name in () if held is None else BEHIND[held]:
        unit = np.zeros(7)
        unit[place[name]] = 1.0
        rows.append(unit)
    keep = scipy.linalg.null_space(np.array(rows)) if rows else np.eye(7)
    squares, shapes = scipy.linalg.eigh(keep.T @ spring @ keep, keep.T @ mass @ keep)
    elastic = squares > 1e-6 * squares[-1] if len(squares) > 1 else squares > 1.0
    return np.sqrt(squares[elastic]), (keep @ shapes)[:, elastic], mass


def test_masses_behind_a_fixed_ring_with_planets_as_seen_at_the_sun():
    # J_s + N J_p (ω_p/ω_s)² + (N m r² + J_c)(ω_c/ω_s)² = 0.05 + 0.6/9 + (10.8 + 6)/25 = 0.7886666667 (Willis).
    graph = graph_of(train_text({"sun": 0.05, "carrier": 6.0}, gears=stage(ring="fixed")))
    assert float(graph.inertia_kgm2 @ graph.scale**2) == pytest.approx(0.7886666667, abs=5e-11)


def test_planet_speeds_behind_a_fixed_ring():
    # ω_p/ω_c = −5/3 in space and −8/3 in the carrier, at sun/carrier 5 (Willis).
    text = fixed_train("ring")
    graph = graph_of(text)
    speed = dict(zip(graph.stations, graph.speed_ratio, strict=True))
    assert speed["stage planets"] / speed["carrier"] == Fraction(-5, 3)
    gear = train(text).gears[0]
    absolute, relative = planet_speed(gear, gear.wheels, Fraction(5), Fraction(1))
    assert (absolute, relative) == (Fraction(-5, 3), Fraction(-8, 3))


@pytest.mark.parametrize("member", ["ring", "sun", "carrier"])
@pytest.mark.parametrize("stiffness", [None, 3e5, 3e7])
def test_a_stage_with_planets_agrees_with_the_dense_solution(member, stiffness):
    row = {} if stiffness is None else {"mesh-stiffness": stiffness}
    if member == "carrier":
        row |= {"planet-mass": MASS}
    expected = dense(stiffness, member)[0]
    found = omegas(fixed_train(member, **row))
    assert len(found) == len(expected) == (2 if stiffness is None else 4)
    assert found == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("stiffness", [None, 1e5, 1e7])
def test_a_free_stage_with_planets_agrees_with_the_dense_solution(stiffness):
    row = {} if stiffness is None else {"mesh-stiffness": stiffness}
    expected = dense(stiffness)[0]
    found = omegas(free_train(**row))
    assert len(found) == len(expected) == (3 if stiffness is None else 5)
    assert found == pytest.approx(expected, rel=1e-8)


@pytest.mark.parametrize("stiffness", [None, 1e7])
def test_planets_that_stand_still_in_space_are_solved_too(stiffness):
    # ω_p = ω_c − (z_s/z_p)(ω_s − ω_c) = 0 at ω_s = 2.5 ω_c; frequencies do not depend on the speeds.
    row = {} if stiffness is None else {"mesh-stiffness": stiffness}
    operation = {"rated": "3000 rpm", "speeds": {"carrier": "1200 rpm"}}
    text = train_text(STATIONS, shafts=SHAFTS, gears=stage(**row), operation=operation)
    assert graph_of(text).speed_ratio[-1] == 0
    assert omegas(text) == pytest.approx(dense(stiffness)[0], rel=1e-8)


def test_damping_of_a_stage_is_shared_by_its_two_meshes():
    # Two springs with dashpots in the same proportion in series are one: c stated once, planets nearly massless.
    row = {"mesh-stiffness": 3e6, "viscous": 400.0}
    without = {key: value for key, value in stage(ring="fixed", **row)["stage"].items() if key not in PLANETS}
    stations = {name: value for name, value in STATIONS.items() if name not in BEHIND["ring"]}
    shafts = {name: item for name, item in SHAFTS.items() if item[0] not in BEHIND["ring"]}
    plain = screening_of(train_text(stations, shafts=shafts, gears={"stage": without})).modes
    light = {"planet-inertia": "1e-9 kg m^2", "planet-mass": "1e-9 kg"}
    split = screening_of(fixed_train("ring", **row, **light)).modes
    for one, other in zip(plain, split, strict=False):
        assert other.damping_ratio == pytest.approx(one.damping_ratio, rel=1e-6)


def test_planets_without_inertia_change_nothing():
    light = {"planet-inertia": 0, "planet-mass": "1e-9 kg"}
    for row in ({}, {"mesh-stiffness": 3e6}):
        without = dict.fromkeys(PLANETS)
        plain = {**stage()["stage"], **without, "ring": "fixed", **row}
        gears = {"stage": {key: value for key, value in plain.items() if value is not None}}
        stations = {name: value for name, value in STATIONS.items() if name not in BEHIND["ring"]}
        shafts = {name: item for name, item in SHAFTS.items() if item[0] not in BEHIND["ring"]}
        expected = omegas(train_text(stations, shafts=shafts, gears=gears))
        assert omegas(fixed_train("ring", **light, **row)) == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("stiffness", [None, 1e7])
def test_the_kinetic_energy_of_planets_is_an_entry_of_its_own(stiffness):
    # Spin N J_p ω_p² and travel N m r² ω_c², over the whole, from the dense modes.
    row = {} if stiffness is None else {"mesh-stiffness": stiffness}
    _, shapes, mass = dense(stiffness, "ring")
    modes = screening_of(fixed_train("ring", **row)).modes
    carrier, planets = NAMES.index("carrier"), NAMES.index("planets")
    for mode, shape in zip(modes, shapes.T, strict=True):
        whole = shape @ mass @ shape
        travel = COUNT * MASS * RADIUS**2 * shape[carrier] ** 2
        share = (COUNT * INERTIA_P * shape[planets] ** 2 + travel) / whole
        assert mode.kinetic_energy["stage planets"] == pytest.approx(share, abs=1e-9)
        assert mode.kinetic_energy["carrier"] == pytest.approx(6.0 * shape[carrier] ** 2 / whole, abs=1e-9)
        assert sum(mode.kinetic_energy.values()) == pytest.approx(1.0, abs=1e-12)


def test_every_mode_of_a_stage_with_planets_is_proven():
    screening = screening_of(free_train(**{"mesh-stiffness": 1e7}))
    assert screening.self_check.all_proven


def test_torques_of_the_members_stand_as_their_teeth():
    # T_s : T_r : T_c = z_s : z_r : −(z_s + z_r) (Willis, no losses): 100 N·m at the sun, 400 held, 500 out.
    power = {"motor": f"{100 * np.pi * 50} W", "load": "balance"}
    row = {"ring": "fixed", "fixed-through": 5e6, "mesh-stiffness": 3e7}
    stations = {name: value for name, value in STATIONS.items() if name not in BEHIND["ring"]}
    shafts = {name: item for name, item in SHAFTS.items() if item[0] not in BEHIND["ring"]}
    text = train_text(stations, shafts=shafts, gears=stage(**row), power=power)
    torque = {duty.link: duty.mean_torque_nm for duty in screening_of(text).duties}
    assert torque["stage"] == pytest.approx(100.0, rel=1e-9)
    assert torque["stage ring mesh"] == pytest.approx(400.0, rel=1e-9)
    assert abs(torque["stage ring support"]) == pytest.approx(400.0, rel=1e-9)
    assert torque["s3"] == pytest.approx(500.0, rel=1e-9)


def held_train(tie, **row):
    stations = {name: value for name, value in STATIONS.items() if name not in BEHIND["ring"]}
    shafts = {name: item for name, item in SHAFTS.items() if item[0] not in BEHIND["ring"]}
    row = {"ring": "fixed", "fixed-through": tie, **row}
    return train_text(stations, shafts=shafts, gears=stage(**row))


@pytest.mark.parametrize("stiffness", [None, 3e6])
def test_a_member_fixed_through_a_stiffness_is_a_tied_station_at_rest(stiffness):
    row = {} if stiffness is None else {"mesh-stiffness": stiffness}
    stations = {name: value for name, value in STATIONS.items() if name != "brake"}
    shafts = {name: item for name, item in SHAFTS.items() if name != "s2"}
    operation = {"rated": "1500 rpm", "speeds": {"ring": "0 rpm"}}
    ties = {"arm": ("ring", 4e5)}
    tied = train_text(stations, shafts=shafts, gears=stage(**row), operation=operation, ties=ties)
    found = omegas(held_train(4e5, **{"fixed-inertia": 1.4, **row}))
    assert found == pytest.approx(omegas(tied), rel=1e-12)


@pytest.mark.parametrize("member", ["ring", "sun", "carrier"])
def test_a_member_held_ever_harder_approaches_the_fixed_one(member):
    fixed = omegas(fixed_train(member, **{"mesh-stiffness": 3e6}))
    errors = []
    for tie in (1e10, 1e11):
        found = omegas(fixed_train(member, **{"mesh-stiffness": 3e6, "fixed-through": tie}))
        errors.append(np.max(np.abs(found[: len(fixed)] - fixed) / fixed))
    assert errors[1] < 1e-2
    assert errors[0] / errors[1] == pytest.approx(10.0, rel=0.1)


def test_a_sprung_ring_without_inertia_is_a_spring_in_series():
    # The sun alone swings, the carrier so large that it stands still, planets without inertia. At the sun the support
    # counts by (z_s/z_r)²: k = tie / 16.
    stations = {"sun": 0.05, "carrier": 1e9}
    row = {key: value for key, value in stage(ring="fixed")["stage"].items() if key not in PLANETS}
    gears = {"stage": {**row, "fixed-through": 4e5}}
    (omega,) = omegas(train_text(stations, gears=gears))
    assert omega == pytest.approx((4e5 / 16 / 0.05) ** 0.5, rel=1e-8)


def test_bounds_over_the_tolerances_hold_for_every_corner_of_planets_and_support():
    def text(planets, tie):
        row = {"mesh-stiffness": 3e6, "planet-inertia": planets, "fixed-through": tie}
        return fixed_train("ring", **row)

    wide = {"inertia-tolerance": "10 %", "fixed-tolerance": "20 %"}
    row = {"mesh-stiffness": 3e6, "fixed-through": 4e5, **wide, "planet-mass": MASS}
    modes = screening_of(fixed_train("ring", **row)).modes
    for share, factor in ((0.9, 1.2), (1.1, 0.8), (1.1, 1.2), (0.9, 0.8)):
        corner = omegas(text(INERTIA_P * share, 4e5 * factor)) / (2 * np.pi)
        for mode, hz in zip(modes, corner, strict=True):
            assert mode.bounds_hz[0] - 1e-9 <= hz <= mode.bounds_hz[1] + 1e-9


def test_tooth_stiffness_by_the_rule_adds_up_over_the_planets():
    # ISO 6336-1 simplified (from memory): N · c_γ · face · r_b,sun² for each of the two meshes.
    from quillshaft.elements.mesh_stiffness import rule_stiffness
    from quillshaft.train.gear_model import GearGeometry

    sizes = {"module": "5 mm", "face": "60 mm", "mesh-stiffness": "iso-6336"}
    graph = graph_of(fixed_train("ring", **sizes))
    geometry = GearGeometry(0.005, 0.0, np.pi / 9, 0.06)
    radius = 0.06 * np.cos(np.pi / 9)
    inner = rule_stiffness(geometry, (SUN, PLANET)).mean_n_mm_um
    expected = COUNT * inner * 1e9 * 0.06 * radius**2
    assert graph.link("stage").stiffness_nm_rad == pytest.approx(expected, rel=1e-12)


def test_no_source_is_made_of_the_planets_own_turning():
    names = [source.name for source in screening_of(free_train()).sources]
    assert "stage mesh" in names
    assert "stage planet-pass" in names
    assert not any(name.startswith("stage planets") for name in names)


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"planet-mass": "40 kg", "planet-inertia": None}, "inertia of one planet"),
        ({"planet-radius": None}, "radius it travels on"),
        ({"fixed-inertia": 1.0}, "only with fixed-through"),
        ({"fixed-through": 1e6}, "needs a member to hold"),
        ({"mesh-stiffness": "iso-6336"}, "needs module and face"),
    ],
)
def test_half_stated_planets_and_supports_are_refused(row, words):
    whole = {key: value for key, value in {**stage()["stage"], **row}.items() if value is not None}
    assert words in refusal(train_text(STATIONS, shafts=SHAFTS, gears={"stage": whole}, operation=FREE))


def test_names_that_a_stage_brings_along_must_be_free():
    stations = {**STATIONS, "stage planets": 1.0}
    shafts = {**SHAFTS, "more": ("load", "stage planets", 1e5)}
    message = refusal(train_text(stations, shafts=shafts, gears=stage(), operation=FREE))
    assert 'brings "stage planets" along' in message
