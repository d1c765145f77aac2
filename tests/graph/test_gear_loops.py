"""Closed loops of gears: they turn only where the ratios agree, exactly and in direction."""

from __future__ import annotations

import numpy as np
import pytest
import scipy.linalg

from trains import graph_of, omegas, refusal, screening_of, train_text

# Two countershafts between one pinion and one wheel, a torque-splitting gear.
STATIONS = {
    "motor": 8.0,
    "pinion": 0.1,
    "upper": 0.9,
    "lower": 0.8,
    "upper-pinion": 0.2,
    "lower-pinion": 0.25,
    "bull": 9.0,
    "screw": 60.0,
}
SHAFTS = {
    "input": ("motor", "pinion", 3e6),
    "upper-quill": ("upper", "upper-pinion", 1e6),
    "lower-quill": ("lower", "lower-pinion", 1.5e6),
    "output": ("bull", "screw", 2e7),
}
GEARS = {
    "upper-in": ("pinion", "upper", 21, 63),
    "lower-in": ("pinion", "lower", 21, 84),
    "upper-out": ("upper-pinion", "bull", 20, 120),
    "lower-out": ("lower-pinion", "bull", 20, 90),
}


def test_a_loop_whose_ratios_agree_is_accepted_and_agrees_with_the_dense_solution():
    # (21/63)(20/120) = (21/84)(20/90) = 1/18: both paths turn the bull gear at one speed, in one direction.
    text = train_text(STATIONS, shafts=SHAFTS, gears=GEARS)
    graph = graph_of(text)
    ratio = np.array([float(value) for value in graph.speed_ratio])
    assert ratio[-1] == pytest.approx(1 / 18, rel=1e-15)
    names = list(STATIONS)
    merged = {"motor": 0, "pinion": 1, "upper": 1, "lower": 1, "upper-pinion": 2, "lower-pinion": 2, "bull": 2}
    place = [merged.get(name, 3) for name in names]
    mass, spring = np.zeros((4, 4)), np.zeros((4, 4))
    for name, node, n in zip(names, place, ratio, strict=True):
        mass[node, node] += STATIONS[name] * n**2
    for a, b, k in SHAFTS.values():
        row = np.zeros(4)
        row[place[names.index(a)]] += 1
        row[place[names.index(b)]] -= 1
        spring += k * ratio[names.index(a)] ** 2 * np.outer(row, row)
    exact = np.sqrt(scipy.linalg.eigh(spring, mass, eigvals_only=True)[1:])
    assert omegas(text) == pytest.approx(exact, rel=1e-11)


def test_a_loop_whose_ratios_disagree_is_refused_and_names_its_gears():
    gears = {**GEARS, "lower-out": ("lower-pinion", "bull", 20, 91)}
    message = refusal(train_text(STATIONS, shafts=SHAFTS, gears=gears))
    assert "cannot turn" in message
    for gear in GEARS:
        assert gear in message


def test_only_the_gears_of_the_bad_loop_are_named():
    stations = {**STATIONS, "oil-pump": 0.01}
    gears = {"pump-drive": ("pinion", "oil-pump", 21, 40), **GEARS, "lower-out": ("lower-pinion", "bull", 20, 91)}
    message = refusal(train_text(stations, shafts=SHAFTS, gears=gears))
    assert "pump-drive" not in message


def test_a_triangle_of_external_gears_is_refused():
    gears = {"m1": ("a", "b", 20, 30), "m2": ("b", "c", 30, 40), "m3": ("c", "a", 40, 20)}
    message = refusal(train_text({"a": 1.0, "b": 1.0, "c": 1.0}, gears=gears))
    assert "cannot turn" in message
    assert "direction" in message
    assert all(name in message for name in gears)


def test_an_equal_mesh_in_a_loop_of_four_external_gears_can_turn():
    gears = {
        "m1": ("a", "b", 20, 30),
        "m2": ("b", "c", 30, 40),
        "m3": ("c", "d", 40, 50),
        "m4": ("d", "a", 50, 20),
    }
    result = screening_of(train_text({"a": 1.0, "b": 1.0, "c": 1.0, "d": 1.0}, gears=gears))
    assert result.modes == ()


def test_a_loop_over_shafts_without_gears_is_a_plain_elastic_loop():
    shafts = {"s1": ("a", "b", 1e5), "s2": ("b", "c", 1e5), "s3": ("a", "c", 1e5)}
    # Equal triangle: ω² = 3 k/J twice.
    assert omegas(train_text({"a": 2.0, "b": 2.0, "c": 2.0}, shafts=shafts)) == pytest.approx(
        [(3e5 / 2) ** 0.5] * 2, rel=1e-13
    )


def test_parallel_springs_add():
    shafts = {"outer": ("a", "b", 1e5), "inner": ("a", "b", 3e5)}
    (mode,) = screening_of(train_text({"a": 2.0, "b": 2.0}, shafts=shafts)).modes
    assert mode.omega_rad_s == pytest.approx((4e5) ** 0.5, rel=1e-14)
    assert mode.strain_energy == pytest.approx({"outer": 0.25, "inner": 0.75}, rel=1e-13)


def test_a_spring_whose_ends_are_rigidly_one_stores_nothing():
    # Two wheels of one ratio on two wheels of one ratio: the shafts between them cannot twist.
    gears = {"m1": ("a", "b", 20, 40), "m2": ("c", "d", 25, 50)}
    shafts = {"fast": ("a", "c", 1e5), "slow": ("b", "d", 1e5), "out": ("d", "load", 1e5)}
    gears_tight = {**gears, "m3": ("a", "d", 20, 40), "m4": ("b", "c", 40, 20)}
    stations = {"a": 1.0, "b": 1.0, "c": 1.0, "d": 1.0, "load": 5.0}
    result = screening_of(train_text(stations, shafts=shafts, gears=gears_tight))
    (mode,) = result.modes
    assert mode.strain_energy["fast"] == mode.strain_energy["slow"] == 0.0
    assert mode.strain_energy["out"] == pytest.approx(1.0, rel=1e-14)


@pytest.mark.parametrize("order", range(12))
def test_a_resting_gear_loop_is_solved_whatever_the_order_of_rows(order):
    # The ring of a stage stands still on a spring and carries a torque-splitting gear: the last wheel hangs on
    # two rigid meshes and nothing else. Checked against elimination of the constraints.
    stations = {
        "sun": 0.4,
        "carrier": 5.0,
        "ring": 2.0,
        "up": 0.3,
        "up-out": 0.9,
        "low": 0.4,
        "low-out": 0.2,
        "last": 3,
    }
    shafts = {"upper": ("up", "up-out", 2e5), "lower": ("low", "low-out", 4e5)}
    stage = {"kind": "epicyclic", "sun": "sun", "ring": "ring", "carrier": "carrier", "planets": 3}
    meshes = {
        "m1": ("ring", "up", 20, 40),
        "m2": ("up-out", "last", 20, 60),
        "m3": ("ring", "low", 20, 60),
        "m4": ("low-out", "last", 20, 40),
    }
    names = np.random.default_rng(order).permutation(list(stations)).tolist()
    text = train_text(
        {name: float(stations[name]) for name in names},
        operation={"speed-at": "sun", "speeds": {"ring": "0 rpm"}},
        shafts=shafts,
        gears={"stage": {**stage, "teeth": {"sun": 24, "ring": 96}}, **meshes},
        ties={"arm": ("ring", 3e5)},
    )

    def row(*terms):
        return np.array([dict(terms).get(name, 0.0) for name in stations])

    rigid = [row(("sun", 24), ("ring", 96), ("carrier", -120))]
    rigid += [row((a, z1), (b, z2)) for a, b, z1, z2 in meshes.values()]
    twists = [(row((a, 1.0), (b, -1.0)), k) for a, b, k in shafts.values()] + [(row(("ring", 1.0)), 3e5)]
    free = scipy.linalg.null_space(np.array(rigid))
    spring = free.T @ sum(k * np.outer(twist, twist) for twist, k in twists) @ free
    mass = free.T @ np.diag(list(stations.values())) @ free
    exact = np.sqrt(scipy.linalg.eigh(spring, mass, eigvals_only=True)[1:])
    assert omegas(text) == pytest.approx(exact, rel=1e-9)
