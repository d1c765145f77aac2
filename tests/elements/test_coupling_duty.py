"""Loss, heat and vibratory torque of couplings (DIN 740-2 recalled; closed forms) and twist at a torque."""

from __future__ import annotations

import math

import pytest
from scipy.integrate import quad

from quillshaft.elements.coupling_duty import (
    coupling_twist,
    frequency_factor,
    loss_factor_of_psi,
    loss_from_elastic_torque,
    loss_from_total_torque,
    permitted_vibratory_torque,
    resonance_factor,
    torque_magnification,
    two_mass_frequency,
)
from quillshaft.train.basic_model import table_value
from quillshaft.train.coupling_model import Coupling

POINTS = ((0.0, 0.9e6), (5e3, 1.4e6), (10e3, 2.6e6))


def coupling(points=()):
    return Coupling("c", ("a", "b"), 0.9e6, (0.0, 0.0), stiffness_points=points)


def test_psi_of_0_8_is_every_other_word_for_the_same_damping():
    eta = loss_factor_of_psi(0.8)
    assert eta == pytest.approx(0.12732395447352, rel=1e-13)
    assert eta / 2 == pytest.approx(0.063661977236758, rel=1e-13)
    assert 1 / eta == pytest.approx(7.8539816339745, rel=1e-13)
    assert resonance_factor(eta) == pytest.approx(7.9173876693521, rel=1e-13)
    assert math.degrees(math.atan(eta)) == pytest.approx(7.2560829106409, rel=1e-12)


@pytest.mark.parametrize(
    ("ratio", "value"),
    [(0.5, 1.3251377135257), (1.0, 7.9173876693521), (1.5, 0.80230714148073), (3.0, 0.12599318218266)],
)
def test_torque_is_magnified_as_by_a_hysteretic_spring(ratio, value):
    assert torque_magnification(ratio, loss_factor_of_psi(0.8)) == pytest.approx(value, rel=1e-12)


def test_loss_is_that_of_the_elastic_torque_and_less_if_the_torque_is_the_whole_one():
    assert loss_from_elastic_torque(500.0, 25.0, 2e4, 0.8) == pytest.approx(125.0, rel=1e-14)
    assert loss_from_total_torque(500.0, 25.0, 2e4, 0.8) == pytest.approx(123.00590340355, rel=1e-12)
    # work of the damping torque over a cycle, π c ω A², with c = η k / ω (derived)
    eta, twist = loss_factor_of_psi(0.8), 500.0 / 2e4
    assert loss_from_elastic_torque(500.0, 25.0, 2e4, 0.8) == pytest.approx(math.pi * eta * 2e4 * twist**2 * 25.0)


def test_vibratory_torque_weighs_more_above_10_hz():
    assert frequency_factor(4.0) == frequency_factor(10.0) == 1.0
    assert frequency_factor(25.0) == pytest.approx(1.5811388300842, rel=1e-13)
    assert permitted_vibratory_torque(3200.0, 10.0, 25.0) == pytest.approx(3200.0 / 1.5811388300842, rel=1e-12)
    assert permitted_vibratory_torque(3200.0, 10.0, 5.0) == 3200.0


def test_two_masses_on_a_coupling_have_the_frequency_of_the_textbook():
    assert two_mass_frequency(4.5e4, 2.5, 12.0) == pytest.approx(23.471981937093, rel=1e-12)


@pytest.mark.parametrize("torque", [0.4e3, 5e3, 7.5e3, 10e3, 14e3])
def test_twist_of_a_progressive_coupling_is_the_integral_of_its_flexibility(torque):
    expected, _ = quad(lambda t: 1.0 / table_value(POINTS, t), 0.0, torque, points=[5e3, 10e3], epsrel=1e-12)
    assert coupling_twist(coupling(POINTS), torque) == pytest.approx(expected, rel=1e-10)
    assert coupling_twist(coupling(POINTS), -torque) == pytest.approx(expected, rel=1e-10)


def test_twist_of_a_straight_coupling_is_torque_over_stiffness():
    assert coupling_twist(coupling(), 9e3) == pytest.approx(0.01, rel=1e-14)
