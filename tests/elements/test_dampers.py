"""Optimum dampers, the undamped absorber and the centrifugal pendulum, at published and closed-form values."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.elements.damper import (
    absorber_mu,
    absorber_resonances,
    magnification,
    pendulum_effective_inertia,
    pendulum_inertia,
    pendulum_order,
    pendulum_stiffness,
    ring_dynamic_stiffness,
    tuned_optimum,
    viscous_optimum,
)

SWEEP = np.linspace(0.2, 2.0, 200_001)


# Den Hartog, Mechanical Vibrations, ch. 3, untuned viscous damper; digits recomputed from the closed form
@pytest.mark.parametrize(
    ("mu", "zeta", "on_the_disc", "ratio", "peak"),
    [
        (0.1, 0.4652421051992, 0.04652421051992, 0.9759000729485, 21.0),
        (0.2, 0.4351941398892, 0.08703882797785, 0.9534625892456, 11.0),
        (0.5, 0.3651483716701, 0.1825741858351, 0.8944271909999, 5.0),
        (1.0, 0.2886751345948, 0.2886751345948, 0.8164965809277, 3.0),
    ],
)
def test_the_best_untuned_damper_is_that_of_den_hartog(mu, zeta, on_the_disc, ratio, peak):
    found = viscous_optimum(mu)
    assert found.zeta == pytest.approx(zeta, rel=1e-12)
    assert found.zeta * mu == pytest.approx(on_the_disc, rel=1e-12)
    assert found.peak_ratio == pytest.approx(ratio, rel=1e-12)
    assert found.peak == pytest.approx(peak, rel=1e-14)
    response = magnification(SWEEP, mu, 0.0, found.zeta)
    assert response.max() == pytest.approx(peak, rel=1e-8)
    assert SWEEP[response.argmax()] == pytest.approx(ratio, abs=2e-5)


@pytest.mark.parametrize("mu", [0.05, 0.3, 1.0, 2.5])
@pytest.mark.parametrize("share", [0.9, 1.1])
def test_another_damping_than_the_best_makes_a_higher_peak(mu, share):
    best = viscous_optimum(mu)
    assert magnification(SWEEP, mu, 0.0, best.zeta * share).max() > best.peak * 1.001


# Brock, J. Appl. Mech. 1946; Den Hartog, ch. 3: ζ on ω_n, the same on the ring's own frequency, fixed points, true peak
@pytest.mark.parametrize(
    ("mu", "tuning", "zeta", "on_own", "fixed", "true"),
    [
        (0.05, 0.952380952381, 0.127267258054, 0.133630620956, 6.403124237433, 6.40844317),
        (0.1, 0.909090909091, 0.167852033154, 0.184637236469, 4.582575694956, 4.59022017),
        (0.2, 0.833333333333, 0.208333333333, 0.25, 3.316624790355, 3.32753940),
    ],
)
def test_the_best_tuned_damper_is_that_of_brock(mu, tuning, zeta, on_own, fixed, true):
    found = tuned_optimum(mu)
    assert found.tuning == pytest.approx(tuning, rel=1e-11)
    assert found.zeta == pytest.approx(zeta, rel=1e-11)
    assert found.zeta / found.tuning == pytest.approx(on_own, rel=1e-11)
    assert found.peak == pytest.approx(fixed, rel=1e-12)
    response = magnification(SWEEP, mu, found.tuning, found.zeta).max()
    assert response == pytest.approx(true, rel=1e-7)
    assert fixed < response < fixed * 1.0034


def test_the_two_fixed_points_do_not_move_with_the_damping():
    mu = 0.1
    tuning, height = tuned_optimum(mu).tuning, tuned_optimum(mu).peak
    # r² = (1 ± √(μ/(2+μ)))/(1+μ) (Den Hartog, ch. 3)
    points = np.sqrt((1.0 + np.array([-1.0, 1.0]) * math.sqrt(mu / (2.0 + mu))) / (1.0 + mu))
    for zeta in (0.02, 0.2, 0.9):
        assert magnification(points, mu, tuning, zeta) == pytest.approx([height, height], rel=1e-11)


# Grover, Mechanical Vibrations, ex. 5.7.1, recomputed
def test_an_absorber_that_keeps_resonances_a_fifth_away_is_that_of_the_worked_example():
    mu, inertia, stiffness = absorber_mu(0.8, 1.2), 0.735, 7.35e5
    assert mu == pytest.approx(0.2025, rel=1e-12)
    assert mu * inertia == pytest.approx(0.1488375, rel=1e-12)
    spring = mu * stiffness
    assert spring == pytest.approx(148837.5, rel=1e-12)
    assert spring / (4 * 0.1**2) == pytest.approx(3720937.5, rel=1e-12)
    assert 294.0 / spring == pytest.approx(0.001975308641975, rel=1e-12)
    assert absorber_resonances(mu) == pytest.approx((0.8, 1.25), rel=1e-12)
    held = ring_dynamic_stiffness(np.array([800.0, 1250.0]), mu * inertia, spring, 0.0)
    assert (stiffness - inertia * np.array([800.0, 1250.0]) ** 2 + held).real == pytest.approx([0.0, 0.0], abs=1e-6)


# Den Hartog, Mechanical Vibrations, sec. 5.7 (from memory), arithmetic recomputed
def test_a_pendulum_has_the_order_and_the_inertia_of_den_hartog():
    order = pendulum_order(0.15, 0.15 / 9.0)
    inertia = pendulum_inertia(1.2, 1, 0.15, 0.15 / 9.0)
    assert order == pytest.approx(3.0, rel=1e-14)
    assert pendulum_effective_inertia(inertia, order, 2.5) == pytest.approx(0.1090909091, rel=1e-9)
    assert pendulum_effective_inertia(inertia, order, 3.5) < 0


@pytest.mark.parametrize("at_order", [0.5, 2.5, 4.0])
def test_the_ring_and_spring_that_stand_for_a_pendulum_feel_like_it_at_every_order(at_order):
    speed, order, inertia = 157.0, 3.0, 0.03
    spring = pendulum_stiffness(inertia, order, speed)
    omega = np.array([at_order * speed])
    felt = -ring_dynamic_stiffness(omega, inertia, spring, 0.0).real / omega**2
    assert felt[0] == pytest.approx(pendulum_effective_inertia(inertia, order, at_order), rel=1e-12)
