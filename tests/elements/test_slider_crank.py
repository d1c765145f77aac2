"""The slider-crank by exact kinematics: harmonics, point values, equivalent inertia."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.elements.slider_crank import (
    acceleration,
    equivalent_inertia,
    inertia_harmonics,
    inertia_torque,
    lever,
    travel,
)

# S1 … S6 of T / (m R² ω²), by adaptive quadrature of the exact kinematics to 12 digits; their leading terms are
# the series of Den Hartog, Mechanical Vibrations, ch. 5.
HARMONICS = {
    0.2: (0.0505095996596, -0.500052072485, -0.152301975545, -0.010204081522, 0.00129849051985, 0.000156201187129),
    0.25: (0.0635062605767, -0.500130140561, -0.19205557342, -0.0161290311654, 0.00259231074618, 0.000390320062444),
    0.3: (0.0767626647655, -0.50027785028, -0.23300212992, -0.0235602021486, 0.00460353301745, 0.000833087635191),
    1 / 3: (0.0857771443214, -0.500433275889, -0.261118587646, -0.0294117426202, 0.00645127120081, 0.00129870129786),
}


@pytest.mark.parametrize("rod_ratio", sorted(HARMONICS))
def test_inertia_harmonics_are_those_of_quadrature(rod_ratio):
    expected = HARMONICS[rod_ratio]
    assert inertia_harmonics(rod_ratio, 6) == pytest.approx(expected, rel=1e-11, abs=1e-14)


def test_inertia_harmonics_follow_the_published_series():
    # Den Hartog, Mechanical Vibrations, ch. 5; Biezeno & Grammel, Engineering Dynamics, vol. IV (from memory),
    # the series as far as the terms named leave an error below λ^7 of each.
    rod_ratio = 0.05
    found = inertia_harmonics(rod_ratio, 6)
    series = (
        rod_ratio / 4 + rod_ratio**3 / 16 + 15 * rod_ratio**5 / 512,
        -1 / 2 - rod_ratio**4 / 32 - rod_ratio**6 / 32,
        -(3 * rod_ratio / 4 + 9 * rod_ratio**3 / 32 + 81 * rod_ratio**5 / 512),
        -(rod_ratio**2 / 4 + rod_ratio**4 / 8 + rod_ratio**6 / 16),
        5 * rod_ratio**3 / 32 + 75 * rod_ratio**5 / 512,
        3 * rod_ratio**4 / 32 + 3 * rod_ratio**6 / 32,
    )
    assert found == pytest.approx(series, abs=2e-10)


@pytest.mark.parametrize(
    ("degrees", "torque_nm"),
    [(30, -140.855627252), (60, -78.8599997854), (120, 105.366024785), (200, -39.7839061878)],
)
def test_inertia_torque_at_crank_angles(degrees, torque_nm):
    # m = 2.5 kg, R = 60 mm, L = 210 mm, 25 rev/s: T = −m R² ω² x' x'' with exact x(θ), by differentiation.
    angle = np.array([math.radians(degrees)])
    found = inertia_torque(angle, 2.5, 0.06, 0.06 / 0.21, 2 * math.pi * 25)
    assert found[0] == pytest.approx(torque_nm, rel=1e-11)


def test_inertia_torque_is_the_sum_of_its_harmonics():
    angle = np.linspace(0, 2 * math.pi, 97)
    harmonics = inertia_harmonics(0.28, 20)
    total = sum(value * np.sin(n * angle) for n, value in enumerate(harmonics, start=1))
    assert inertia_torque(angle, 1.0, 1.0, 0.28, 1.0) == pytest.approx(total, abs=1e-12)


def test_lever_and_acceleration_are_the_derivatives_of_travel():
    angle, step = np.linspace(0.1, 6.1, 25), 1e-5
    first = (travel(angle + step, 0.27) - travel(angle - step, 0.27)) / (2 * step)
    second = (lever(angle + step, 0.27) - lever(angle - step, 0.27)) / (2 * step)
    assert lever(angle, 0.27) == pytest.approx(first, abs=1e-9)
    assert acceleration(angle, 0.27) == pytest.approx(second, abs=1e-9)


def test_travel_runs_from_0_to_twice_the_radius():
    assert travel(np.array([0.0, math.pi]), 0.27) == pytest.approx([0.0, 2.0], abs=1e-15)


@pytest.mark.parametrize(("rod_ratio", "share"), [(0.25, 0.50806661517), (0.3, 0.511786650923)])
def test_equivalent_inertia_is_the_mean_of_the_lever_squared(rod_ratio, share):
    # Mean of x'² by quadrature; 1/2 + λ²/8 + λ⁴/16 + … in series.
    assert equivalent_inertia(2.0, 0.1, rod_ratio) == pytest.approx(2.0 * 0.01 * share, rel=1e-11)
