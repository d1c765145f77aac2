"""Dampers in screening: each against the same train written with ordinary stations, or against a closed form."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.assess.screening import screen_alone
from quillshaft.elements.damper import absorber_resonances
from quillshaft.graph.build import build_graph
from trains import omegas, refusal, screening_of, train, train_text

STATIONS = {"pulley": 1.0, "crank": 4.0, "wheel": 20.0}
SHAFTS = {"nose": ("pulley", "crank", 1.2e6), "out": ("crank", "wheel", 2.0e6)}
VISCOUS = {"kind": "viscous", "at": "pulley", "ring-inertia": 1.9, "viscous": 310}
TUNED = {"kind": "tuned", "at": "crank", "ring-inertia": 0.4, "stiffness": 1.1e5, "psi": 0.8}
PENDULUM = {
    "kind": "pendulum",
    "at": "crank",
    "mass": "1.2 kg",
    "number": 4,
    "suspension-radius": "150 mm",
    "length": "25 mm",
}
RANGE = {"speed-at": "crank", "range": ["600 rpm", "1500 rpm"]}
MASSES = 4 * 1.2 * 0.175**2
ORDER = math.sqrt(6.0)


def engine(damper, stations=STATIONS, **tables):
    dampers = {"d": damper} if damper else {}
    return train_text(stations, shafts=SHAFTS, **({"dampers": dampers} if dampers else {}), **tables)


@pytest.mark.parametrize(("undamped", "share"), [(None, 0.5), ("half", 0.5), ("all", 1.0), ("none", 0.0)])
def test_the_share_of_a_viscous_ring_that_the_file_names_moves_with_its_station(undamped, share):
    row = VISCOUS if undamped is None else {**VISCOUS, "undamped": undamped}
    expected = omegas(engine(None, {**STATIONS, "pulley": 1.0 + 1.9 * share}))
    assert omegas(engine(row)) == pytest.approx(expected, rel=1e-13)


def test_half_of_the_ring_is_listed_as_assumed_only_where_the_file_is_silent():
    listed = [item for item in train(engine(VISCOUS)).assumed if item.key == "undamped"]
    assert [(item.element, item.value) for item in listed] == [("dampers.d", "half")]
    assert not [item for item in train(engine({**VISCOUS, "undamped": "half"})).assumed if item.key == "undamped"]


def test_a_tuned_damper_is_a_station_on_a_spring():
    by_hand = train_text({**STATIONS, "ring": 0.4}, shafts={**SHAFTS, "s": ("crank", "ring", 1.1e5)})
    assert omegas(engine(TUNED)) == pytest.approx(omegas(by_hand), rel=1e-13)
    graph = build_graph(train(engine(TUNED)))
    assert graph.stations == ("pulley", "crank", "wheel", "d ring")
    link = graph.link("d")
    assert (link.kind, link.stiffness_nm_rad, link.stations) == ("damper", 1.1e5, (1, 3))
    assert link.loss_factor == pytest.approx(0.8 / (2 * math.pi))


def test_a_tuned_frequency_is_that_of_the_ring_alone_on_its_spring():
    row = {key: value for key, value in TUNED.items() if key != "stiffness"} | {"tuned-frequency": "83 Hz"}
    read = train(engine(row))
    assert read.dampers[0].stiffness_nm_rad == pytest.approx(0.4 * (2 * math.pi * 83) ** 2, rel=1e-14)


def test_an_absorber_on_one_held_disc_splits_its_mode_into_the_two_of_the_worked_example():
    # Grover, Mechanical Vibrations, ex. 5.7.1, recomputed: resonances at 0.8 and 1.25 of 1000 rad/s
    row = {"kind": "tuned", "at": "disc", "ring-inertia": 0.1488375, "stiffness": 148837.5}
    text = train_text({"disc": 0.735}, ties={"held": ("disc", 7.35e5)}, dampers={"d": row})
    assert omegas(text) == pytest.approx([800.0, 1250.0], rel=1e-12)
    assert absorber_resonances(0.2025) == pytest.approx((0.8, 1.25), rel=1e-12)


@pytest.mark.parametrize(("row", "weight"), [(VISCOUS, 1.9), (TUNED, 0.4), (PENDULUM, MASSES)])
def test_a_seized_damper_weighs_with_its_station_and_a_lost_one_not_at_all(row, weight):
    text = engine(row)
    for state, share in (("seized", 1.0), ("lost", 0.0)):
        stations = {**STATIONS, row["at"]: STATIONS[row["at"]] + weight * share}
        found = screen_alone(train(text, (f"d {state}",)))
        expected = screen_alone(train(engine(None, stations)))
        assert [mode.omega_rad_s for mode in found.modes] == pytest.approx(
            [mode.omega_rad_s for mode in expected.modes], rel=1e-13
        )
        assert found.train.cases_because[0].startswith(("the ring or the masses of d",))


def test_half_damping_halves_what_the_file_states():
    whole, half = train(engine(VISCOUS)), train(engine(VISCOUS), ("d half-damping",))
    assert half.dampers[0].viscous_nms_rad == whole.dampers[0].viscous_nms_rad / 2 == 155.0
    whole, half = train(engine(TUNED)), train(engine(TUNED), ("d half-damping",))
    assert half.dampers[0].loss_factor == pytest.approx(whole.dampers[0].loss_factor / 2, rel=1e-15)


def test_dampers_behind_gears_count_by_the_square_of_their_speed():
    stations = {"motor": 10.0, "pinion": 0.5, "wheel": 4.0, "drum": 30.0}
    tables = {
        "shafts": {"a": ("motor", "pinion", 1e6), "b": ("wheel", "drum", 3e6)},
        "gears": {"g": ("pinion", "wheel", 20, 50)},
    }
    row = {"kind": "tuned", "at": "wheel", "ring-inertia": 2.5, "stiffness": 4e5}
    by_hand = {**tables, "shafts": {**tables["shafts"], "s": ("wheel", "ring", 4e5)}}
    found = omegas(train_text(stations, dampers={"d": row}, **tables))
    assert found == pytest.approx(omegas(train_text({**stations, "ring": 2.5}, **by_hand)), rel=1e-13)
    seized = omegas(train_text(stations, dampers={"d": {**row, "state": "seized"}}, **tables))
    assert seized == pytest.approx(omegas(train_text({**stations, "wheel": 6.5}, **tables)), rel=1e-13)


def two_disc_roots(first, second, stiffness):
    return math.sqrt(stiffness * (first + second) / (first * second)) / (2 * math.pi)


def test_a_pendulum_on_a_free_disc_follows_speed_as_its_closed_form():
    # ω² = n₀² Ω² (1 + J_p / J): two discs on a spring J_p (n₀ Ω)² (derived)
    text = train_text({"crank": 4.0}, operation=RANGE, dampers={"d": PENDULUM})
    (mode,) = screening_of(text).modes
    assert mode.frequency_along is not None
    for rpm, nominal, _, _ in mode.frequency_along:
        speed = rpm * math.pi / 30
        expected = ORDER * speed * math.sqrt(1 + MASSES / 4.0) / (2 * math.pi)
        assert nominal == pytest.approx(expected, rel=1e-12)
    rated = 157.0796326794897
    assert mode.omega_rad_s == pytest.approx(ORDER * rated * math.sqrt(1 + MASSES / 4.0), rel=1e-12)


def test_a_pendulum_behind_gears_follows_the_speed_of_its_own_shaft():
    stations = {"motor": 10.0, "fast": 3.0}
    row = {**PENDULUM, "at": "fast"}
    gears = {"g": ("motor", "fast", 60, 20)}
    text = train_text(stations, gears=gears, operation={"range": ["600 rpm", "1500 rpm"]}, dampers={"d": row})
    (mode,) = screening_of(text).modes
    whole = 3.0 + 10.0 / 9.0  # the motor referred to the fast shaft
    for rpm, nominal, _, _ in mode.frequency_along or ():
        speed = 3 * rpm * math.pi / 30
        assert nominal == pytest.approx(ORDER * speed * math.sqrt(1 + MASSES / whole) / (2 * math.pi), rel=1e-12)


def test_the_tuned_order_meets_the_train_where_it_would_vibrate_with_the_pendulums_station_held():
    # at order n₀ the masses feel like a boundless inertia: their station is a node (derived)
    text = engine(PENDULUM, operation=RANGE, excitations={"x": {"at": "crank", "order": ORDER}})
    result = screening_of(text)
    clamped = math.sqrt(2.0e6 / 20.0)
    met = sorted(speed for pair in result.interferences if pair.source == "x" for speed in pair.critical_speeds_rpm)
    assert any(abs(speed * math.pi / 30 * ORDER - clamped) < 1e-6 * clamped for speed in met)


def test_tolerance_of_the_order_bounds_the_frequency_and_is_called_a_corner_case():
    text = train_text({"crank": 4.0}, operation=RANGE, dampers={"d": {**PENDULUM, "tolerance": "3 %"}})
    result = screening_of(text)
    low, high = result.modes[0].bounds_hz
    assert low == pytest.approx(result.modes[0].frequency_hz * 0.97, rel=1e-12)
    assert high == pytest.approx(result.modes[0].frequency_hz * 1.03, rel=1e-12)
    assert any("corner cases, not proven" in flag.text for flag in result.flags if flag.element == "dampers.d")
    default = train(train_text({"crank": 4.0}, assumptions={"tolerances": "default"}, dampers={"d": PENDULUM}))
    assert any("corner cases" in item.why for item in default.assumed if item.element == "dampers.d")


def test_a_pendulum_and_a_progressive_coupling_follow_speed_together():
    tables = {
        "operation": RANGE,
        "power": {"crank": "300 kW", "wheel": "balance", "law": "square"},
        "couplings": {"c": {"between": ["crank", "wheel"], "stiffness": {"0 kN m": 2e5, "2 kN m": 6e5}}},
    }
    stations = {"crank": 4.0, "wheel": 20.0}
    result = screening_of(train_text(stations, dampers={"d": PENDULUM}, **tables))
    rpm, *_ = row = (result.modes[0].frequency_along or ())[20]
    speed, rated = rpm * math.pi / 30, 157.0796326794897
    stiffness = 2e5 + 4e5 * (300e3 / rated * (speed / rated) ** 2) / 2e3
    spring = MASSES * (ORDER * speed) ** 2
    k = np.array([[spring, -spring, 0], [-spring, spring + stiffness, -stiffness], [0, -stiffness, stiffness]])
    half = np.diag(np.array([MASSES, 4.0, 20.0]) ** -0.5)
    expected = np.sqrt(np.abs(np.linalg.eigvalsh(half @ k @ half)))[1:] / (2 * math.pi)
    found = sorted(mode.frequency_along[20][1] for mode in result.modes)
    assert found == pytest.approx(expected, rel=1e-9)
    assert len(row) == 4


def test_rings_have_no_source_of_their_own():
    names = {source.name for source in screening_of(engine(TUNED)).sources}
    assert names == {name for name in names if not name.startswith("d ring")}
    assert {"pulley 1x", "pulley 2x"} <= names


def test_pendulums_need_a_station_that_turns():
    stations = {"sun": 0.1, "carrier": 2.0, "ring": 1.0}
    gear = {"kind": "epicyclic", "sun": "sun", "ring": "ring", "carrier": "carrier"}
    gear |= {"teeth": {"sun": 21, "ring": 87}, "planets": 3}
    text = train_text(
        stations,
        operation={"speeds": {"ring": "0 rpm"}},
        gears={"stage": gear},
        ties={"held": ("ring", 1e7)},
        dampers={"d": {**PENDULUM, "at": "ring"}},
    )
    assert "pendulums need a station that turns" in refusal(text)
