"""Gas torque: harmonics of the lever, of a synthetic pressure, of the simple cycle and the ideal compressor card."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.sources.gas import (
    AMBIENT_PA,
    CycleError,
    card_pressure,
    cut_off_ratio,
    cycle_angles,
    cycle_pressure,
    end_pressure,
    tangential,
    torque_harmonics,
)
from quillshaft.train.reciprocating_model import CompressorEnd, PressureCard, SimpleCycle

CYCLE = SimpleCycle(15.5, 17e5, 155e5)


def test_a_constant_pressure_makes_the_harmonics_of_the_lever():
    # Fourier sine coefficients of sin θ + λ sin θ cos θ / √(1 − λ² sin² θ) at λ = 0.25, by quadrature.
    orders = np.array([1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0])
    mean, values = torque_harmonics(tangential(np.ones(720), 1, 0.25), 1, orders)
    expected = [1.0, 0.127012521153, 0.0, -0.00102452779301, 0.0, 1.23965054657e-5, -1.66661438103e-7]
    assert -values.imag == pytest.approx(expected, abs=1e-12)
    assert values.real == pytest.approx(0.0, abs=1e-14)
    assert mean == pytest.approx(0.0, abs=1e-14)


# p = exp(12 (cos(θ/2 − 5°) − 1)) over 720°, λ = 0.25, per unit A R p_max: cosine and sine coefficients by quadrature.
SYNTHETIC = {
    0.5: (0.034844181304, 0.039950064229),
    1.0: (0.023725045007, 0.070973697843),
    1.5: (0.009435366480, 0.087415443530),
    2.0: (-0.003770587506, 0.088512030164),
    2.5: (-0.012854075555, 0.077763582306),
    3.0: (-0.016828079658, 0.060756250396),
    4.0: (-0.013615673182, 0.027400915548),
    6.0: (-0.002053975325, 0.001940054376),
}


def synthetic(count):
    return np.exp(12 * (np.cos(cycle_angles(count, 2) / 2 - math.radians(5)) - 1))


@pytest.mark.parametrize("count", [360, 720, 7200])
def test_torque_harmonics_of_a_synthetic_four_stroke_pressure(count):
    mean, values = torque_harmonics(tangential(synthetic(count), 2, 0.25), 2, np.array(list(SYNTHETIC)))
    assert mean == pytest.approx(0.019524030784, abs=1e-12)
    assert values.real == pytest.approx([a for a, _ in SYNTHETIC.values()], abs=1e-12)
    assert -values.imag == pytest.approx([b for _, b in SYNTHETIC.values()], abs=1e-12)


def test_a_card_of_uneven_steps_gives_nearly_the_same():
    angle = np.sort(np.concatenate([np.arange(0, 720, 0.5), np.arange(0.13, 60, 0.5)]))
    pressure = np.exp(12 * (np.cos(np.radians(angle) / 2 - math.radians(5)) - 1))
    card = PressureCard("c", tuple(np.radians(angle)), tuple(pressure), 4 * math.pi, gauge=True)
    _, values = torque_harmonics(tangential(card_pressure(card), 2, 0.25), 2, np.array(list(SYNTHETIC)))
    # Straight lines between points 0.5° apart: error h² p''/12, below 2e-5 here.
    assert -values.imag == pytest.approx([b for _, b in SYNTHETIC.values()], abs=2e-5)


def test_half_orders_do_not_exist_in_two_strokes():
    _, values = torque_harmonics(np.sin(cycle_angles(100, 1)), 1, np.array([0.5, 1.0, 1.5]))
    assert np.abs(values) == pytest.approx([0.0, 1.0, 0.0], abs=1e-14)


@pytest.mark.parametrize("turns", [1, 2])
@pytest.mark.parametrize("cycle", [CYCLE, SimpleCycle(16.5, 3e5, 55e5), SimpleCycle(12.0, 11e5, 90e5, 1.5e5)])
def test_the_work_of_a_simple_cycle_is_imep_times_swept_volume(cycle, turns):
    # Definition of imep: ∮ p dV = imep · A · 2 R; the mean torque does 2π · turns · T of work a cycle.
    mean, _ = torque_harmonics(
        tangential(cycle_pressure(cycle, turns, 0.27, True), turns, 0.27), turns, np.array([1.0])
    )
    assert mean * 2 * math.pi * turns / 2 == pytest.approx(cycle.imep_pa, rel=3e-6)


@pytest.mark.parametrize("turns", [1, 2])
def test_a_cycle_that_does_not_fire_gives_back_what_it_took(turns):
    mean, values = torque_harmonics(
        tangential(cycle_pressure(CYCLE, turns, 0.27, False), turns, 0.27), turns, np.array([1.0, 2.0])
    )
    assert mean == pytest.approx(0.0, abs=1.0)  # Pa, of 17e5
    assert np.all(np.abs(values) > 1e5)


def test_the_simple_cycle_reaches_its_peak_and_no_more():
    pressure = cycle_pressure(CYCLE, 2, 0.27, True)
    assert np.max(pressure) + AMBIENT_PA == pytest.approx(155e5, rel=1e-12)
    assert 1.0 < cut_off_ratio(CYCLE) < 15.5


@pytest.mark.parametrize(
    ("cycle", "key", "words"),
    [
        (SimpleCycle(15.5, 17e5, 60e5), "peak", "below the compression pressure"),
        (SimpleCycle(15.5, 3e5, 120e5), "imep", "does not fit this peak"),
    ],
)
def test_a_cycle_that_cannot_be_is_refused_with_what_could(cycle, key, words):
    with pytest.raises(CycleError, match=words) as caught:
        cut_off_ratio(cycle)
    assert caught.value.key == key
    assert "bar" in caught.value.allowed


@pytest.mark.parametrize("crank_side", [False, True])
def test_the_ideal_compressor_card_encloses_the_textbook_work(crank_side):
    # W = n/(n−1) p_s V_in ((p_d/p_s)^((n−1)/n) − 1) a cycle, V_in = V_s (1 + c − c (p_d/p_s)^(1/n)): any textbook of
    # thermodynamics, reciprocating compressor with clearance.
    end = CompressorEnd(None, 0.12, 1e5, 4e5, 1.3)
    drawn = 1 + end.clearance - end.clearance * 4 ** (1 / 1.3)
    work = 1.3 / 0.3 * 1e5 * drawn * (4 ** (0.3 / 1.3) - 1)
    sign = -1.0 if crank_side else 1.0
    pressure = end_pressure(end, 0.2, crank_side)
    mean, _ = torque_harmonics(tangential(sign * pressure, 1, 0.2), 1, np.array([1.0]))
    assert -mean * 2 * math.pi / 2 == pytest.approx(work, rel=1e-6)
    assert (np.min(pressure), np.max(pressure)) == pytest.approx((1e5, 4e5), rel=1e-12)
