"""The best damper on a mode: rules at their published values, and direct minimisation against them."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.elements.damper import tuned_optimum, viscous_optimum
from quillshaft.graph.build import build_graph
from quillshaft.solve.modes import natural_modes
from quillshaft.study.damper_optimum import DamperError, suggest
from quillshaft.study.dampers import study_dampers
from quillshaft.study.modal_response import modal_receptance, with_ring
from trains import omegas, train, train_text

DISC, SPRING = 2.0, 2.0e5


def one_disc(kind, mu, **keys):
    row = {"kind": kind, "at": "disc", "ring-inertia": mu * DISC, **keys}
    ties = {"k": {"at": "disc", "stiffness": SPRING, "loss-factor": 1e-7}}
    return train(train_text({"disc": DISC}, ties=ties, dampers={"d": row}))


@pytest.mark.parametrize("mu", [0.1, 0.2, 0.5, 1.0])
def test_on_one_disc_the_best_viscous_damping_is_that_of_the_rule(mu):
    # Den Hartog, Mechanical Vibrations, ch. 3: peak 1 + 2/μ
    found = suggest(one_disc("viscous", mu, viscous=50), "d")
    assert found.mu == pytest.approx(mu, rel=1e-12)
    assert found.rule.zeta == pytest.approx(viscous_optimum(mu).zeta, rel=1e-12)
    assert found.rule.peak == pytest.approx(1 + 2 / mu, rel=1e-4)
    assert found.direct.zeta == pytest.approx(found.rule.zeta, rel=2e-3)
    assert found.direct.peak == pytest.approx(1 + 2 / mu, rel=1e-4)


@pytest.mark.parametrize(("mu", "true"), [(0.05, 6.40844317), (0.1, 4.59022017), (0.2, 3.32753940)])
def test_on_one_disc_minimisation_betters_the_rule_of_brock_by_less_than_0_3_percent(mu, true):
    # Brock, J. Appl. Mech. 1946: fixed points √(1+2/μ); the true maximum recomputed
    found = suggest(one_disc("tuned", mu, stiffness=3e4, viscous=20), "d")
    assert found.rule.peak == pytest.approx(true, rel=1e-5)
    assert found.rule_peak == pytest.approx(math.sqrt(1 + 2 / mu), rel=1e-12)
    assert math.sqrt(1 + 2 / mu) * 0.999 < found.direct.peak < true
    assert found.direct.peak == pytest.approx(found.rule_peak, rel=3e-3)
    assert found.direct.tuned_hz == pytest.approx(
        tuned_optimum(mu).tuning * math.sqrt(SPRING / DISC) / (2 * math.pi), rel=2e-3
    )


def test_a_lossy_spring_is_judged_by_its_complex_stiffness():
    # |1 − r² + D| at the peak of the disc with a ring k(1+jη), searched on a fine grid (own calculation)
    found = suggest(one_disc("tuned", 0.1, stiffness=16000, psi=1.0), "d").stated
    ratio = np.linspace(0.5, 1.5, 400_001)
    spring = 16000 / SPRING * (1 + 1j / (2 * math.pi))
    peak = np.abs(1 / (1 - ratio**2 - spring * 0.1 * ratio**2 / (spring - 0.1 * ratio**2))).max()
    assert found.peak == pytest.approx(peak, rel=1e-4)
    assert found.viscous_nms_rad is None


STATIONS = {"pulley": 1.0, "crank": 4.0, "fly": 20.0, "pinion": 0.5, "wheel": 6.0}
TABLES = {
    "shafts": {"nose": ("pulley", "crank", 1.2e6), "out": ("crank", "fly", 2e6), "long": ("fly", "pinion", 4e5)},
    "gears": {"g": ("pinion", "wheel", 20, 50)},
}


def test_the_inertia_of_a_mode_at_a_station_behind_a_gear_is_actual():
    row = {"kind": "viscous", "at": "wheel", "ring-inertia": 3.0, "viscous": 100}
    found = suggest(train(train_text(STATIONS, dampers={"d": row}, **TABLES)), "d", 1)
    bare = build_graph(train(train_text(STATIONS, **TABLES)))
    angle = natural_modes(bare.network).angle[0][bare.node] * bare.scale
    expected = float(bare.inertia_kgm2 @ angle**2) / angle[4] ** 2
    assert found.inertia_kgm2 == pytest.approx(expected, rel=1e-10)
    assert found.mu == pytest.approx(3.0 / expected, rel=1e-10)


def test_a_ring_laid_on_the_answers_is_the_train_solved_with_the_ring():
    ring = {"kind": "tuned", "at": "pulley", "ring-inertia": 0.4, "stiffness": 9e4, "loss-factor": 0.2}
    bare, whole = (build_graph(train(train_text(STATIONS, dampers=d, **TABLES))) for d in ({}, {"d": ring}))
    shape = natural_modes(bare.network).angle[1]
    omega = np.array([180.0, 333.0, 501.0, 640.0])
    answers = modal_receptance(bare, shape, 0, omega, 0.01)
    spring = 9e4 * (1 + 0.2j)
    found = with_ring(answers, -spring * 0.4 * omega**2 / (spring - 0.4 * omega**2))
    padded = np.zeros(whole.network.nodes)
    padded[: len(shape)] = shape
    inertia = whole.network.inertia_kgm2.copy()
    inertia[len(shape) :] = 0.0
    for position, value in enumerate(omega):
        stiffness = np.zeros((whole.network.nodes,) * 2, dtype=complex)
        for link in whole.links:
            if link.slot == "spring":
                a, b = whole.network.spring_ends[link.index]
                k = link.referred_nm_rad * (1 + 1j * (0.02 if link.loss_factor is None else link.loss_factor))
                stiffness[[a, b, a, b], [a, b, b, a]] += [k, k, -k, -k]
        angle = np.linalg.solve(stiffness - value**2 * np.diag(whole.network.inertia_kgm2), inertia * padded)
        assert abs(angle @ (inertia * padded)) == pytest.approx(found[position], rel=1e-9)


def test_minimisation_never_does_worse_than_the_rule_on_a_whole_train():
    for kind, keys in (("viscous", {"viscous": 300}), ("tuned", {"stiffness": 2e5, "viscous": 40})):
        row = {"kind": kind, "at": "pulley", "ring-inertia": 0.5, **keys}
        found = suggest(train(train_text(STATIONS, dampers={"d": row}, **TABLES)), "d")
        assert found.direct.peak <= found.rule.peak * (1 + 1e-6)
        assert found.direct.peak < found.bare_peak
        assert found.half.viscous_nms_rad == found.stated.viscous_nms_rad / 2


def test_half_damping_of_a_damper_below_its_best_is_worse():
    found = suggest(one_disc("viscous", 0.2, viscous=40), "d")
    assert found.stated.zeta < found.direct.zeta
    assert found.half.peak > found.stated.peak > found.direct.peak


def test_what_cannot_be_suggested_is_refused_with_the_reason():
    pendulum = {"kind": "pendulum", "at": "crank", "mass": 1.0, "number": 2, "suspension-radius": 150, "length": 20}
    still = {"kind": "viscous", "at": "mid", "ring-inertia": 1.0, "viscous": 10}
    node = train(
        train_text(
            {"a": 1.0, "mid": 1.0, "b": 1.0},
            shafts={"s": ("a", "mid", 1e5), "t": ("mid", "b", 1e5)},
            dampers={"d": still},
        )
    )
    read = train(train_text(STATIONS, dampers={"p": pendulum}, **TABLES))
    with pytest.raises(DamperError, match="no damper x"):
        suggest(read, "x")
    with pytest.raises(DamperError, match="tuned to an order"):
        suggest(read, "p")
    with pytest.raises(DamperError, match="mid is a node of mode 1"):
        suggest(node, "d", 1)
    with pytest.raises(DamperError, match="modes 1 to 2, not 7"):
        suggest(node, "d", 7)
    with pytest.raises(DamperError, match="no \\[dampers\\]"):
        study_dampers(train(train_text(STATIONS, **TABLES)))


def test_a_study_screens_every_state_of_the_damper():
    row = {"kind": "tuned", "at": "pulley", "ring-inertia": 0.5, "stiffness": 2e5, "viscous": 40}
    (study,) = study_dampers(train(train_text(STATIONS, dampers={"d": row}, **TABLES)))
    assert [case.name for case in study.cases] == ["as stated", "d seized", "d lost", "d half-damping"]
    lost = next(case.screening for case in study.cases if case.name == "d lost")
    assert [mode.omega_rad_s for mode in lost.modes] == pytest.approx(omegas(train_text(STATIONS, **TABLES)), rel=1e-12)


def test_a_pendulum_is_held_against_the_nearest_order_and_told_the_length_that_meets_it():
    row = {"kind": "pendulum", "at": "crank", "mass": 1.0, "number": 2, "suspension-radius": 150, "length": "20 mm"}
    shaker = {"x": {"at": "crank", "order": 2.5}}
    read = train(
        train_text(STATIONS, operation={"speed-at": "crank"}, dampers={"p": row}, excitations=shaker, **TABLES)
    )
    (study,) = study_dampers(read)
    order, inertia = math.sqrt(7.5), 2 * 0.17**2
    assert (study.tuning.source, study.tuning.order) == ("x", 2.5)
    assert study.tuning.exact_length_m == pytest.approx(0.15 / 6.25, rel=1e-12)
    assert study.tuning.felt_kgm2 == pytest.approx(inertia / (1 - (2.5 / order) ** 2), rel=1e-12)
