"""Electrical machines as springs and dampers: recalled check values, and a rotor circuit solved independently."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import pytest

from quillshaft.elements.electrical import (
    breakdown_slip,
    induction_damping,
    induction_spring_and_damping,
    kloss_torque,
    load_damping,
    swing_frequency_hz,
    synchronizing_stiffness,
)

# Kloss 1916 (from memory), exact for a stator without resistance: s_k = 0.12, T_k = 100.
KLOSS = [(0.02, 32.43243243243), (0.05, 71.00591715976), (0.5, 45.38577912254), (1.0, 23.65930599369)]


@pytest.mark.parametrize(("slip", "torque"), KLOSS)
def test_kloss_torque(slip, torque):
    assert kloss_torque(slip, 0.12, 100.0) == pytest.approx(torque, rel=1e-12)


def circuit_torque(slip: float, r1: float) -> float:
    """Series circuit by hand: 400 V between lines, X = 0.8 ohm, R2' = 0.1 ohm, synchronous speed 2π 25 rad/s."""
    r2, x, phase = 0.1, 0.8, 400.0 / math.sqrt(3.0)
    current = phase**2 / ((r1 + r2 / slip) ** 2 + x**2)
    return 3.0 * current * r2 / slip / (2.0 * math.pi * 25.0)


@pytest.mark.parametrize(
    ("r1", "slip_k", "peak", "at_3_percent"),
    [(0.0, 0.125, 636.6197723676, 288.9348437372), (0.05, 0.1247565723104, 598.0732226975, 280.9068469068)],
)
def test_kloss_is_the_torque_of_the_series_circuit(r1, slip_k, peak, at_3_percent):
    assert circuit_torque(slip_k, r1) == pytest.approx(peak, rel=1e-12)
    assert kloss_torque(0.03, slip_k, peak, r1 / 0.1) == pytest.approx(at_3_percent, rel=1e-11)
    for slip in (0.01, 0.03, 0.2, 1.0):
        assert kloss_torque(slip, slip_k, peak, r1 / 0.1) == pytest.approx(circuit_torque(slip, r1), rel=1e-11)


def test_breakdown_slip_from_the_rated_point():
    # s_n = 1.5 %, m = 2.5: s_k = 0.015 (2.5 + √5.25).
    assert breakdown_slip(0.015, 2.5) == pytest.approx(0.07186931771217, rel=1e-12)
    assert kloss_torque(0.015, breakdown_slip(0.015, 2.5), 2.5) == pytest.approx(1.0, rel=1e-12)


@pytest.mark.parametrize("slip", [0.0001, 0.01, 0.05, 0.12, 0.3])
def test_damping_of_slow_swings_is_the_slope_of_kloss_over_speed(slip):
    synchronous, step = 2.0 * math.pi * 25.0, 1e-6
    torques = [kloss_torque(slip - sign * step / synchronous, 0.12, 100.0) for sign in (1, -1)]
    slope = (torques[1] - torques[0]) / (2.0 * step)
    assert induction_damping(slip, 0.12, 100.0, synchronous) == pytest.approx(slope, rel=1e-6, abs=1e-6)


@dataclass(frozen=True)
class TwoAxisMachine:
    """An induction machine in space vectors of the synchronous frame, stator without resistance: its flux stands."""

    poles: int = 4
    supply_hz: float = 50.0
    stator_h: float = 0.050
    rotor_h: float = 0.051
    mutual_h: float = 0.047
    rotor_ohm: float = 0.4
    flux_wb: float = 1.1

    def torque(self, rotor_flux: complex) -> float:
        spread = self.stator_h * self.rotor_h - self.mutual_h**2
        current = (self.rotor_h * self.flux_wb - self.mutual_h * rotor_flux) / spread
        return 0.75 * self.poles * (self.flux_wb * current).imag

    def rate(self, rotor_flux: complex, shaft_rad_s: float) -> complex:
        spread = self.stator_h * self.rotor_h - self.mutual_h**2
        current = (self.stator_h * rotor_flux - self.mutual_h * self.flux_wb) / spread
        slip_rad_s = 2.0 * math.pi * self.supply_hz - 0.5 * self.poles * shaft_rad_s
        return -self.rotor_ohm * current - 1j * slip_rad_s * rotor_flux

    @property
    def synchronous_rad_s(self) -> float:
        return 4.0 * math.pi * self.supply_hz / self.poles

    def steady(self, slip: float) -> float:
        speed = (1.0 - slip) * self.synchronous_rad_s
        start, unit = self.rate(0.0, speed), self.rate(1.0, speed) - self.rate(0.0, speed)
        return self.torque(-start / unit)

    def swing(self, hz: float) -> complex:
        """−δT/δθ at no load: flux amplitude of a swing from the equations linearised by differences."""
        rest, speed, omega = -self.rate(0.0, self.synchronous_rad_s), self.synchronous_rad_s, 2.0 * math.pi * hz
        steady = rest / (self.rate(1.0, speed) - self.rate(0.0, speed))
        decay = self.rate(steady + 1.0, speed) - self.rate(steady, speed)
        drive = (self.rate(steady, speed + 1e-6) - self.rate(steady, speed - 1e-6)) / 2e-6
        # One real and one imaginary equation, each of a swing exp(jωt): solved as a real system of parts.
        jacobian = np.array([[decay.real, -decay.imag], [decay.imag, decay.real]])
        parts = np.linalg.solve(1j * omega * np.eye(2) - jacobian, np.array([drive.real, drive.imag]) * 1j * omega)
        gain = [self.torque(steady + unit) - self.torque(steady) for unit in (1.0, 1.0j)]
        return -complex(parts @ np.array(gain))


@pytest.mark.parametrize("hz", [0.1, 3.0, 12.0, 40.0, 300.0])
def test_spring_and_damping_of_a_swing_are_those_of_the_two_axis_equations(hz):
    machine = TwoAxisMachine()
    slips = np.linspace(1e-4, 1.0, 200_001)
    torques = [machine.steady(slip) for slip in slips[::2000]]
    near = slips[::2000][int(np.argmax(torques))]
    fine = np.linspace(near - 0.01, near + 0.01, 20_001)
    values = np.array([machine.steady(slip) for slip in fine])
    slip_k, torque_k = float(fine[int(np.argmax(values))]), float(values.max())
    spring, damping = induction_spring_and_damping(hz, slip_k, torque_k, machine.poles, machine.supply_hz)
    swing = machine.swing(hz)
    # The peak is found on a grid of 1e-6 in slip, which bounds the agreement.
    assert spring == pytest.approx(swing.real, rel=3e-5)
    assert damping == pytest.approx(swing.imag / (2.0 * math.pi * hz), rel=3e-5)


def test_spring_of_fast_swings_tends_to_the_pole_number_times_breakdown_torque():
    spring, _ = induction_spring_and_damping(1e6, 0.1, 5000.0, 6, 50.0)
    assert spring == pytest.approx(6 * 5000.0, rel=1e-9)


def test_synchronizing_power_per_electrical_degree_becomes_a_stiffness_of_the_shaft():
    # By hand: 45 kW/deg is 2578.31 kW per electrical radian; 10 poles at 50 Hz turn at 62.832 rad/s; a shaft radian
    # is 5 electrical ones: 5 · 2578.31e3 / 62.832 = 205 175 N·m/rad.
    power = 45e3 * 180.0 / math.pi
    assert synchronizing_stiffness(power, 10, 50.0) == pytest.approx(5.0 * power / (2.0 * math.pi * 10.0), rel=1e-14)
    assert synchronizing_stiffness(power, 10, 50.0) == pytest.approx(205_175.0, rel=1e-5)


def test_swing_against_the_grid_of_one_inertia():
    assert swing_frequency_hz(4.0 * math.pi**2 * 90.0, 10.0) == pytest.approx(3.0, rel=1e-14)


@pytest.mark.parametrize(("law", "exponent"), [("square", 2.0), ("constant-torque", 0.0), ("constant-power", -1.0)])
def test_load_damping_is_the_slope_of_the_law(law, exponent):
    # 2T/ω of a square law is common practice; each by difference of T ω^n.
    torque, speed, step = 700.0, 150.0, 1e-4
    slope = torque * (((speed + step) / speed) ** exponent - ((speed - step) / speed) ** exponent) / (2.0 * step)
    assert load_damping(law, torque, speed) == pytest.approx(slope, rel=1e-8, abs=1e-9)


def test_load_damping_of_a_table_is_the_slope_of_the_span_that_ends_at_rated_speed():
    # Power 31 % at 90 rad/s, 100 % at 150 rad/s, straight between: P(ω) = T₀ω₀ (0.31 + 0.69 (ω − 90)/60).
    table, torque, speed = ((90.0, 0.31), (150.0, 1.0), (160.0, 1.5)), 700.0, 150.0

    def at(omega: float) -> float:
        return torque * speed * (0.31 + 0.69 * (omega - 90.0) / 60.0) / omega

    slope = (at(speed + 1e-4) - at(speed - 1e-4)) / 2e-4
    assert load_damping(table, torque, speed) == pytest.approx(slope, rel=1e-8)
