"""Mean torque and wind-up under the rated power flow, by hand and against a dense solution."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from random_trains import free_motions, random_draft
from trains import duty, graph_of, refusal, screening_of, train_text

CHAIN = {"motor": 10.0, "hub": 1.0, "pinion": 0.3, "wheel": 3.0, "pump": 6.0}
SHAFTS = {"stub": ("motor", "hub", 5e6), "slow": ("wheel", "pump", 3e6)}
COUPLINGS = {"flex": ("hub", "pinion", 2e5)}
GEARS = {"mesh": ("pinion", "wheel", 25, 75)}


def chain(power, **tables):
    every = {"shafts": SHAFTS, "couplings": COUPLINGS, "gears": GEARS, **tables}
    return train_text(CHAIN, power=power, **every)


def torque(result, link):
    return duty(result, link).mean_torque_nm


def test_torque_and_wind_up_along_a_geared_chain_by_hand():
    # T = 9549.2965855137201 · P[kW]/N[rpm]: 1000 kW at 1500 rpm is 6366.19772368 N·m; at 500 rpm three times.
    result = screening_of(chain({"motor": "1000 kW", "pump": "balance"}))
    for link, expected in (("stub", 6366.19772368), ("flex", 6366.19772368), ("slow", 3 * 6366.19772368)):
        assert torque(result, link) == pytest.approx(expected, rel=1e-11)
    assert duty(result, "flex").wind_up_rad == pytest.approx(6366.19772368 / 2e5, rel=1e-11)
    assert duty(result, "slow").wind_up_rad == pytest.approx(3 * 6366.19772368 / 3e6, rel=1e-11)
    # A rigid mesh carries the torque of its first-named wheel and does not wind up.
    assert torque(result, "mesh") == pytest.approx(6366.19772368, rel=1e-11)
    assert duty(result, "mesh").wind_up_rad == 0.0


def test_torque_is_positive_where_the_first_named_end_drives():
    turned = {**SHAFTS, "slow": ("pump", "wheel", 3e6)}
    result = screening_of(chain({"motor": "1000 kW", "pump": "balance"}, shafts=turned))
    assert torque(result, "slow") == pytest.approx(-3 * 6366.19772368, rel=1e-11)
    generating = screening_of(chain({"motor": "balance", "pump": "1000 kW"}))
    assert torque(generating, "flex") == pytest.approx(-6366.19772368, rel=1e-11)


def test_branches_carry_what_their_machines_take():
    stations = {"motor": 10.0, "gear": 2.0, "p1": 0.1, "pump1": 1.0, "p2": 0.1, "pump2": 1.0}
    shafts = {"quill": ("motor", "gear", 1e6), "s1": ("p1", "pump1", 2e5), "s2": ("p2", "pump2", 2e5)}
    gears = {"m1": ("gear", "p1", 60, 20), "m2": ("gear", "p2", 60, 20)}
    power = {"motor": "balance", "pump1": "-600 kW", "pump2": "-400 kW"}
    result = screening_of(train_text(stations, shafts=shafts, gears=gears, power=power))
    base = 6366.19772368
    expected = {"quill": base, "m1": 0.6 * base, "m2": 0.4 * base, "s1": 0.6 * base / 3, "s2": 0.4 * base / 3}
    assert {item.link: item.mean_torque_nm for item in result.duties} == pytest.approx(expected, rel=1e-11)


def test_power_taken_at_a_gear_wheel_itself_is_counted_in_its_mesh():
    power = {"motor": "1000 kW", "wheel": "-250 kW", "pump": "balance"}
    result = screening_of(chain(power))
    assert torque(result, "mesh") == pytest.approx(6366.19772368, rel=1e-11)
    assert torque(result, "slow") == pytest.approx(0.75 * 3 * 6366.19772368, rel=1e-11)


SPLIT = {"motor": 8.0, "in": 0.1, "up": 0.9, "low": 0.8, "up-out": 0.2, "low-out": 0.25, "bull": 9.0, "screw": 60.0}
SPLIT_SHAFTS = {
    "input": ("motor", "in", 3e6),
    "upper": ("up", "up-out", 1e6),
    "lower": ("low", "low-out", 1.5e6),
    "output": ("bull", "screw", 2e7),
}
SPLIT_GEARS = {
    "m1": ("in", "up", 21, 63),
    "m2": ("in", "low", 21, 84),
    "m3": ("up-out", "bull", 20, 120),
    "m4": ("low-out", "bull", 20, 90),
}


def test_an_elastic_loop_splits_the_torque_by_stiffness_without_preload():
    power = {"motor": "1000 kW", "screw": "balance"}
    text = train_text(SPLIT, shafts=SPLIT_SHAFTS, gears=SPLIT_GEARS, power=power)
    result = screening_of(text)
    graph = graph_of(text)
    ratio = dict(zip(graph.stations, [abs(float(value)) for value in graph.speed_ratio], strict=True))
    nodes = {"motor": 0, "in": 1, "up": 1, "low": 1, "up-out": 2, "low-out": 2, "bull": 2, "screw": 3}
    spring = np.zeros((4, 4))
    for a, b, k in SPLIT_SHAFTS.values():
        row = np.zeros(4)
        row[nodes[a]] += 1.0
        row[nodes[b]] -= 1.0
        spring += k * ratio[a] ** 2 * np.outer(row, row)
    base = 1e6 / (1500 * math.pi / 30)
    angle = np.linalg.lstsq(spring, np.array([base, 0, 0, -base]), rcond=None)[0]
    for name, (a, b, k) in SPLIT_SHAFTS.items():
        expected = k * ratio[a] * (angle[nodes[a]] - angle[nodes[b]])
        assert torque(result, name) == pytest.approx(expected, rel=1e-9)
    # The meshes pass on what their quills carry.
    assert torque(result, "m1") * 3 == pytest.approx(torque(result, "upper"), rel=1e-9)
    assert torque(result, "m4") == pytest.approx(torque(result, "lower"), rel=1e-9)
    assert torque(result, "m1") + torque(result, "m2") == pytest.approx(base, rel=1e-9)


def test_a_rigid_loop_has_no_unique_split_and_prints_no_number():
    # Two rigid meshes side by side between the same two shafts, the shafts themselves rigid pairs.
    stations = {"motor": 5.0, "a": 1.0, "idler1": 0.2, "idler2": 0.2, "b": 1.0, "load": 9.0}
    shafts = {"in": ("motor", "a", 1e6), "out": ("b", "load", 1e6)}
    gears = {
        "a1": ("a", "idler1", 20, 30),
        "a2": ("a", "idler2", 20, 35),
        "b1": ("idler1", "b", 30, 40),
        "b2": ("idler2", "b", 35, 40),
    }
    power = {"motor": "1000 kW", "load": "balance"}
    result = screening_of(train_text(stations, shafts=shafts, gears=gears, power=power))
    for name in gears:
        assert duty(result, name).mean_torque_nm is None
        assert duty(result, name).wind_up_rad is None
        assert all(mode.link_torque[name] is None for mode in result.modes)
    assert torque(result, "in") == pytest.approx(6366.19772368, rel=1e-11)
    assert torque(result, "out") == pytest.approx(2 * 6366.19772368, rel=1e-11)
    mesh = next(pair for pair in result.interferences if pair.source.startswith("a1 mesh"))
    assert mesh.excitability is None is mesh.worst_excitability


def test_a_rigid_mesh_outside_the_rigid_loop_keeps_its_number():
    stations = {"motor": 5.0, "first": 0.1, "a": 1.0, "idler1": 0.2, "idler2": 0.2, "b": 1.0}
    gears = {
        "entry": ("first", "a", 20, 60),
        "a1": ("a", "idler1", 20, 30),
        "a2": ("a", "idler2", 20, 35),
        "b1": ("idler1", "b", 30, 40),
        "b2": ("idler2", "b", 35, 40),
    }
    text = train_text(
        stations, shafts={"in": ("motor", "first", 1e6)}, gears=gears, power={"motor": "1000 kW", "b": "balance"}
    )
    result = screening_of(text)
    assert torque(result, "entry") == pytest.approx(6366.19772368, rel=1e-11)
    assert duty(result, "a1").mean_torque_nm is None


def test_a_tie_to_the_grid_carries_no_mean_torque():
    ties = {"grid": ("motor", 6e5)}
    result = screening_of(chain({"motor": "balance", "pump": "-1000 kW"}, ties=ties))
    assert torque(result, "grid") == 0.0
    assert torque(result, "flex") == pytest.approx(6366.19772368, rel=1e-11)
    assert len(result.modes) == 4


def test_powers_that_do_not_close_are_refused_with_what_is_left_over():
    message = refusal(chain({"motor": "1000 kW", "pump": "-950 kW"}))
    assert "do not close" in message
    assert "+50 kW" in message


def test_powers_that_close_within_a_tenth_of_a_percent_are_accepted():
    result = screening_of(chain({"motor": "1000 kW", "pump": "-999.5 kW"}))
    assert torque(result, "flex") == pytest.approx(6366.19772368, rel=6e-4)


@pytest.mark.parametrize(
    "power", [{"motor": "balance", "pump": "balance"}, {"motor": "balance", "hub": "balance", "pump": "-1 kW"}]
)
def test_more_than_one_balance_in_an_ordinary_train_is_refused(power):
    assert '1 "balance" needed' in refusal(chain(power))


def test_without_power_no_torque_is_printed():
    result = screening_of(train_text(CHAIN, shafts=SHAFTS, couplings=COUPLINGS, gears=GEARS))
    assert all(item.mean_torque_nm is None and item.wind_up_rad is None for item in result.duties)


# A free stage of 24 and 96 teeth at sun 3000, carrier 500, ring −125 rpm.
STAGE = {"kind": "epicyclic", "sun": "sun", "ring": "ring", "carrier": "carrier", "planets": 3}
FREE = {"motor": 2.0, "sun": 0.05, "ring": 1.4, "brake": 3.0, "carrier": 6.0, "load": 40.0}
FREE_SHAFTS = {"s1": ("motor", "sun", 4e5), "s2": ("ring", "brake", 9e5), "s3": ("carrier", "load", 5e6)}


def free(power, **row):
    return train_text(
        FREE,
        shafts=FREE_SHAFTS,
        gears={"stage": {**STAGE, "teeth": {"sun": 24, "ring": 96}, **row}},
        operation={"rated": "3000 rpm", "speeds": {"carrier": "500 rpm"}},
        power=power,
    )


@pytest.mark.parametrize("row", [{}, {"mesh-stiffness": 2e6}], ids=["rigid", "elastic"])
def test_a_free_stage_splits_its_torques_by_its_teeth(row):
    # T_s : T_r : T_c = z_s : z_r : −(z_s + z_r). Source: Willis with power balance. 300 kW at 3000 rpm is
    # 954.93 N·m at the sun, 4 × at the ring, 5 × at the carrier.
    result = screening_of(free({"motor": "300 kW", "brake": "balance", "load": "balance"}, **row))
    sun = 300e3 / (3000 * math.pi / 30)
    assert torque(result, "s1") == pytest.approx(sun, rel=1e-11)
    assert torque(result, "stage") == pytest.approx(sun, rel=1e-11)
    assert abs(torque(result, "s2")) == pytest.approx(4 * sun, rel=1e-10)
    assert torque(result, "s3") == pytest.approx(5 * sun, rel=1e-10)
    # 250 kW leave at the carrier (5 T at 500 rpm); the ring runs backwards at 125 rpm and its brake takes 50 kW.
    assert torque(result, "s2") == pytest.approx(50e3 / (125 * math.pi / 30), rel=1e-10)


@pytest.mark.parametrize("power", [
    {"motor": "300 kW", "load": "balance"},
    {"motor": "balance", "brake": "balance", "load": "balance"},
    {"motor": "300 kW", "ring": "balance", "brake": "balance"},
])  # fmt: skip
def test_a_free_stage_needs_exactly_two_balances_in_places_that_fix_both_motions(power):
    assert '2 "balance" needed' in refusal(free(power))


def test_powers_of_a_free_stage_that_close_but_do_not_fit_its_teeth_are_refused():
    # 300 − 100 − 200 = 0 kW, but the teeth ask for 50 and 250.
    message = refusal(free({"motor": "300 kW", "brake": "-100 kW", "load": "-200 kW"}))
    assert "not in the split that the teeth of the epicyclic gears ask for" in message
    assert '2 stations with "balance"' in message


def test_powers_of_a_free_stage_that_fit_its_teeth_are_accepted_without_balance():
    result = screening_of(free({"motor": "300 kW", "brake": "-50 kW", "load": "-250 kW"}))
    assert torque(result, "s3") == pytest.approx(5 * 300e3 / (3000 * math.pi / 30), rel=1e-10)


def test_the_arm_of_a_resting_ring_carries_the_reaction():
    # Ring held by a tie at rest: reaction 4 T at the ring; it takes no power.
    text = train_text(
        {"sun": 0.05, "ring": 1.4, "carrier": 6.0},
        gears={"stage": {**STAGE, "teeth": {"sun": 24, "ring": 96}}},
        operation={"rated": "3000 rpm", "speeds": {"ring": "0 rpm"}},
        ties={"arm": ("ring", 1e6)},
        power={"sun": "300 kW", "carrier": "balance"},
    )
    result = screening_of(text)
    assert abs(torque(result, "arm")) == pytest.approx(4 * 300e3 / (3000 * math.pi / 30), rel=1e-11)
    assert "does not turn" in refusal(text.replace('"carrier" = "balance"', '"ring" = "balance"'))


def dense_torques(draft, graph, load_nm):
    """Torque [N·m] of every shaft and coupling in its first end's own rotation, by a dense solution.

    Actual signed angles; rigid gears by elimination, ties at turning stations left out.
    """
    names = list(draft.stations)
    ratio = np.array([float(graph.speed_ratio[graph.number(name)]) for name in names])
    draft.ties = {name: row for name, row in draft.ties.items() if ratio[names.index(row[0])] == 0}
    twists, stiffness, basis = free_motions(draft)
    reduced = twists @ basis
    spring = reduced.T @ (stiffness[:, None] * reduced)
    torque = np.array([load_nm.get(name, 0.0) for name in names])
    angle = basis @ np.linalg.lstsq(spring, basis.T @ torque, rcond=1e-12)[0]
    links = {**draft.springs, **draft.flexible}
    sign = {name: 1.0 if value >= 0 else -1.0 for name, value in zip(names, ratio, strict=True)}
    return {
        name: sign[row[0]] * k * float(twist @ angle)
        for (name, row), twist, k in zip(links.items(), twists, stiffness, strict=False)
    }


@given(st.integers(0, 2**32))
@settings(max_examples=120, deadline=None, derandomize=True)
def test_torques_of_any_train_agree_with_a_dense_solution(seed):
    draft = random_draft(seed)
    graph = graph_of(draft.text())
    turning = [name for name in draft.stations if graph.speed_ratio[graph.number(name)] != 0]
    resting_only = all(value == "0 rpm" for value in draft.speeds.values())
    assume(len(turning) > 1 and resting_only)
    result = screening_of(draft.text(power={turning[0]: "100 kW", turning[-1]: "balance"}))
    speed = 1500 * math.pi / 30
    ends = {turning[0]: 1.0, turning[-1]: -1.0}
    load = {name: sign * 1e5 / speed / float(graph.speed_ratio[graph.number(name)]) for name, sign in ends.items()}
    expected = dense_torques(draft, graph, load)
    largest = max((abs(value) for value in expected.values()), default=0.0)
    for name, value in expected.items():
        assert duty(result, name).mean_torque_nm == pytest.approx(value, rel=1e-7, abs=1e-8 * largest + 1e-9)
