"""Epicyclic stages: ratios by Willis, fixed members, free stages against constraint elimination, sprung rings."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
import scipy.linalg

from trains import graph_of, omegas, refusal, screening_of, train_text

SUN, RING = 24, 96
WILLIS = np.array([SUN, RING, -(SUN + RING)], dtype=float)
INERTIA = {"motor": 2.0, "sun": 0.05, "ring": 1.4, "brake": 3.0, "carrier": 6.0, "load": 40.0}
SHAFTS = {"s1": ("motor", "sun", 4e5), "s2": ("ring", "brake", 9e5), "s3": ("carrier", "load", 5e6)}


def stage(**row):
    teeth = {"sun": SUN, "ring": RING}
    members = {"sun": "sun", "ring": "ring", "carrier": "carrier"}
    return {"planetary": {"kind": "epicyclic", **members, "teeth": teeth, "planets": 3, **row}}


def fixed_train(member, stiffness=None, inertia=INERTIA):
    gone = {"sun": ("motor", "sun"), "ring": ("ring", "brake"), "carrier": ("carrier", "load")}[member]
    stations = {name: value for name, value in inertia.items() if name not in gone}
    shafts = {name: row for name, row in SHAFTS.items() if row[0] not in gone}
    row = {member: "fixed"} | ({} if stiffness is None else {"mesh-stiffness": stiffness})
    return train_text(stations, shafts=shafts, gears=stage(**row))


# z_s ω_s + z_r ω_r = (z_s + z_r) ω_c. Source: Willis, Principles of Mechanism; 24 and 96 teeth give
# sun/carrier 5 with the ring fixed, sun/ring −4 with the carrier fixed, ring/carrier 1.25 with the sun fixed.
@pytest.mark.parametrize(
    ("member", "faster", "slower", "ratio"),
    [
        ("ring", "sun", "carrier", Fraction(5)),
        ("carrier", "sun", "ring", Fraction(-4)),
        ("sun", "ring", "carrier", Fraction(5, 4)),
    ],
)
def test_a_fixed_member_leaves_the_ratio_of_willis(member, faster, slower, ratio):
    graph = graph_of(fixed_train(member))
    speed = dict(zip(graph.stations, graph.speed_ratio, strict=True))
    assert speed[faster] / speed[slower] == ratio


@pytest.mark.parametrize(
    ("member", "pair", "teeth", "internal"),
    [
        ("ring", ("sun", "carrier"), (24, 120), True),
        ("carrier", ("sun", "ring"), (24, 96), False),
        ("sun", ("ring", "carrier"), (96, 120), True),
    ],
)
@pytest.mark.parametrize("stiffness", [None, 3e6])
def test_a_stage_with_a_fixed_member_equals_a_plain_gear_of_its_ratio(member, pair, teeth, internal, stiffness):
    text = fixed_train(member, stiffness)
    graph = graph_of(text)
    stations = dict(zip(graph.stations, graph.inertia_kgm2.tolist(), strict=True))
    shafts = {name: row for name, row in SHAFTS.items() if row[0] in stations}
    row = {"between": pair, "teeth": teeth, "internal": internal}
    if stiffness is not None:
        # The stage's stiffness is stated at the sun; with the sun fixed it moves to the ring by (z_r/z_s)².
        at_first = stiffness if pair[0] == "sun" else stiffness * (RING / SUN) ** 2
        row["mesh-stiffness"] = f"{at_first!r} N m/rad"
    plain = train_text(stations, shafts=shafts, gears={"planetary": row})
    assert omegas(text) == pytest.approx(omegas(plain), rel=1e-13)
    assert len(omegas(text)) == (2 if stiffness is None else 3)


def test_masses_behind_a_fixed_ring_add_by_the_square_of_the_ratio():
    # Seen at the sun: J_s + J_c/25. A coupling of 1e5 from the motor, all rigid beyond.
    shafts = {"s1": ("motor", "sun", 1e5)}
    stations = {"motor": 2.0, "sun": 0.05, "carrier": 6.0}
    (omega,) = omegas(train_text(stations, shafts=shafts, gears=stage(ring="fixed")))
    assert omega == pytest.approx((1e5 * (1 / 2.0 + 1 / (0.05 + 6.0 / 25))) ** 0.5, rel=1e-13)


FREE = {"rated": "3000 rpm", "speeds": {"carrier": "500 rpm"}}


def free_train(**row):
    return train_text(INERTIA, shafts=SHAFTS, gears=stage(**row), operation=FREE)


def dense(stiffness=None, tie=None):
    """Frequencies [rad/s] of the free train in actual signed angles; a rigid stage by elimination of the ring."""
    names = list(INERTIA)
    mass, spring = np.diag(list(INERTIA.values())), np.zeros((6, 6))
    for a, b, k in SHAFTS.values():
        row = np.zeros(6)
        row[[names.index(a), names.index(b)]] = 1.0, -1.0
        spring += k * np.outer(row, row)
    if tie is not None:
        spring[names.index("brake"), names.index("brake")] += tie
    row = np.zeros(6)
    row[[names.index(name) for name in ("sun", "ring", "carrier")]] = WILLIS / SUN
    keep = np.eye(6)
    if stiffness is None:
        ring = names.index("ring")
        keep[ring] = -row / row[ring]
        keep[ring, ring] = 0.0
        keep = np.delete(keep, ring, axis=1)
    else:
        spring += stiffness * np.outer(row, row)
    squares = scipy.linalg.eigh(keep.T @ spring @ keep, keep.T @ mass @ keep, eigvals_only=True)
    return np.sqrt(squares[squares > 1e-6 * squares[-1]])


def test_speeds_of_a_free_stage_follow_from_two_of_them():
    # 24 · 3000 + 96 n_r = 120 · 500: n_r = −125 rpm.
    graph = graph_of(free_train())
    speed = dict(zip(graph.stations, graph.speed_ratio, strict=True))
    assert speed["carrier"] == Fraction(1, 6)
    assert speed["ring"] == speed["brake"] == Fraction(-1, 24)


def test_a_rigid_free_stage_agrees_with_elimination_of_the_constraint():
    found = omegas(free_train())
    assert len(found) == 3  # six angles, one constraint, two rigid-body motions
    assert found == pytest.approx(dense(), rel=1e-9)


@pytest.mark.parametrize("stiffness", [1e4, 1e6, 1e8])
def test_an_elastic_free_stage_agrees_with_the_dense_solution(stiffness):
    found = omegas(free_train(**{"mesh-stiffness": stiffness}))
    assert len(found) == 4
    assert found == pytest.approx(dense(stiffness), rel=1e-8)


def test_a_stiff_elastic_stage_approaches_the_rigid_one():
    rigid = omegas(free_train())
    soft, stiff = (omegas(free_train(**{"mesh-stiffness": k}))[:3] for k in (1e11, 1e12))
    assert stiff == pytest.approx(rigid, rel=1e-4)
    assert (rigid - soft) / (rigid - stiff) == pytest.approx([10.0] * 3, rel=0.01)


def test_the_shape_of_a_rigid_free_stage_satisfies_willis():
    graph = graph_of(free_train())
    sign = np.sign([float(ratio) for ratio in graph.speed_ratio])
    for mode in screening_of(free_train()).modes:
        signed = dict(zip(graph.stations, np.array(list(mode.shape.values())) * sign, strict=True))
        angles = [signed[name] for name in ("sun", "ring", "carrier")]
        assert abs(WILLIS @ angles) < 1e-11 * (np.abs(WILLIS) @ np.abs(angles))


@pytest.mark.parametrize("rated", ["2000 rpm", "700 rpm"])
def test_the_speeds_of_a_free_stage_do_not_change_its_frequencies(rated):
    # The stage is linear: only the reference of the angles moves.
    for second in ("500 rpm", "-90 rpm", "1234.5 rpm"):
        operation = {"rated": rated, "speeds": {"carrier": second}}
        text = train_text(INERTIA, shafts=SHAFTS, gears=stage(), operation=operation)
        assert omegas(text) == pytest.approx(omegas(free_train()), rel=1e-12)


def sprung(tie, **row):
    operation = {"rated": "3000 rpm", "speeds": {"ring": "0 rpm"}}
    return train_text(
        INERTIA, shafts=SHAFTS, gears=stage(**row), operation=operation, ties={"torque-arm": ("brake", tie)}
    )


@pytest.mark.parametrize("tie", [1e3, 1e6, 1e9])
def test_a_sprung_ring_at_rest_agrees_with_the_dense_solution(tie):
    graph = graph_of(sprung(tie))
    assert dict(zip(graph.stations, graph.speed_ratio, strict=True))["ring"] == 0
    found = omegas(sprung(tie))
    assert len(found) == 4  # five free angles, one rigid-body motion
    assert found == pytest.approx(dense(tie=tie), rel=1e-7)


def test_a_ring_held_ever_harder_approaches_the_fixed_ring():
    text = train_text(
        {name: value for name, value in INERTIA.items() if name not in ("brake",)},
        shafts={name: row for name, row in SHAFTS.items() if name != "s2"},
        gears=stage(),
        operation={"rated": "3000 rpm", "speeds": {"ring": "0 rpm"}},
        ties={"arm": ("ring", "STIFFNESS")},
    )
    fixed = omegas(fixed_train("ring"))
    errors = []
    for tie in (1e9, 1e10, 1e11):
        found = omegas(text.replace('"STIFFNESS"', repr(tie)))
        assert len(found) == len(fixed) + 1
        errors.append(np.abs(found[: len(fixed)] - fixed) / fixed)
    assert np.max(errors[2]) < 1e-4
    assert errors[0] / errors[1] == pytest.approx([10.0] * 2, rel=0.02)
    assert errors[1] / errors[2] == pytest.approx([10.0] * 2, rel=0.02)


def test_a_free_stage_without_a_second_speed_is_refused_and_says_how_to_give_it():
    message = refusal(train_text(INERTIA, shafts=SHAFTS, gears=stage()))
    assert "needs a second speed" in message
    assert "[operation.speeds]" in message


def test_speeds_that_disagree_with_the_teeth_are_refused():
    operation = {"rated": "3000 rpm", "speeds": {"carrier": "500 rpm", "ring": "-100 rpm"}}
    text = train_text(INERTIA, shafts=SHAFTS, gears=stage(), operation=operation)
    assert "disagree with the tooth ratios" in refusal(text)


def test_consistent_third_speeds_are_accepted():
    operation = {"rated": "3000 rpm", "speeds": {"carrier": "500 rpm", "ring": "-125 rpm"}}
    text = train_text(INERTIA, shafts=SHAFTS, gears=stage(), operation=operation)
    assert omegas(text) == pytest.approx(omegas(free_train()), rel=1e-13)


def test_two_stages_in_one_differential_gear_are_solved_together():
    # Two simple stages, suns joined, ring of the first on the carrier of the second (a compound gear): with the
    # second ring fixed, Willis twice by hand. 20/70: n_c2 = 20 n/(90); first: 24 n + 96 n_c2 = 120 n_c1.
    stations = {"sun1": 0.1, "sun2": 0.1, "ring1": 0.5, "carrier1": 2.0, "carrier2": 1.0}
    second = {"kind": "epicyclic", "sun": "sun2", "ring": "fixed", "carrier": "carrier2"}
    gears = {
        "first": {**stage()["planetary"], "sun": "sun1", "ring": "ring1", "carrier": "carrier1"},
        "second": {**second, "teeth": {"sun": 20, "ring": 70}, "planets": 3},
    }
    shafts = {"joint": ("sun1", "sun2", 1e5), "link": ("ring1", "carrier2", 2e5)}
    graph = graph_of(train_text(stations, shafts=shafts, gears=gears))
    speed = dict(zip(graph.stations, graph.speed_ratio, strict=True))
    assert speed["carrier2"] == Fraction(2, 9)
    assert speed["carrier1"] == (24 + 96 * Fraction(2, 9)) / 120
    # Five angles, two rigid stages, one rigid-body motion.
    assert len(omegas(train_text(stations, shafts=shafts, gears=gears))) == 2
