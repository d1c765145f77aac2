"""Synthesised response against marching the same train in time: an independent assembly and scipy's solve_ivp."""

from __future__ import annotations

import numpy as np
import pytest
from response_trains import RPM, alternating_at, engine_text, lines_at, response_of
from scipy.integrate import solve_ivp

from quillshaft.assess.response.loads import LoadCase
from quillshaft.sources.reciprocating import cylinder_torques, machine_orders
from trains import screening_of

J = np.array([0.2, 0.2, 0.2, 4.0, 5.0])
RECIPROCATING = 4.0 * 0.07**2
LINKS = [(0, 1, 2e6, 60.0), (1, 2, 2e6, 60.0), (2, 3, 3e6, 90.0), (3, 4, 2e4, 120.0)]


def matrices():
    k, c = np.zeros((5, 5)), np.zeros((5, 5))
    for a, b, stiffness, viscous in LINKS:
        row = np.zeros(5)
        row[a], row[b] = 1.0, -1.0
        k += stiffness * np.outer(row, row)
        c += viscous * np.outer(row, row)
    c[4, 4] += 40.0
    return k, c


def marched(screening, rpm: float, dead: int | None = None):
    """Half the peak-to-peak torque of every link over one working cycle, after transients have died down."""
    from dataclasses import replace

    machine = next(item for item in screening.train.machines if item.cylinders)
    if dead is not None:
        cylinders = tuple(replace(item, dead=n == dead) for n, item in enumerate(machine.cylinders))
        machine = replace(machine, cylinders=cylinders)
    orders = np.array(machine_orders(machine))
    amplitude = np.array([item.torque_nm for item in cylinder_torques(machine, rpm * RPM)])
    k, c = matrices()
    omega = rpm * RPM

    def rate(t, y):
        torque = np.zeros(5)
        torque[:3] = (amplitude * np.exp(1j * orders * omega * t)).real.sum(axis=1)
        return np.concatenate([y[5:], (torque - k @ y[:5] - c @ y[5:]) / J])

    cycle = 4.0 * np.pi / omega
    settled = np.ceil(1.6 / cycle) * cycle  # twenty times the slowest decay of a twist
    times = settled + np.linspace(0.0, cycle, 4001)
    found = solve_ivp(rate, (0.0, times[-1]), np.zeros(10), "DOP853", times, rtol=1e-7, atol=1e-10)
    angle, speed = found.y[:5], found.y[5:]
    torques = [s * (angle[a] - angle[b]) + d * (speed[a] - speed[b]) for a, b, s, d in LINKS]
    return np.array([0.5 * (item.max() - item.min()) for item in torques])


def test_synthesised_half_range_equals_time_integration_to_a_thousandth():
    """solve_ivp (DOP853) on an independently assembled train with viscous damping."""
    screening = screening_of(engine_text())
    found = alternating_at(screening, np.array([760.0]))[:, 0]
    assert found == pytest.approx(marched(screening, 760.0), rel=1e-3)


def test_dead_cylinder_equals_time_integration_to_a_thousandth():
    """As above, the second cylinder without fire: half orders no longer cancel."""
    screening = screening_of(engine_text())
    case = LoadCase("dead", "dead cylinder", "", 1.0, "engine", 1)
    found = alternating_at(screening, np.array([1200.0]), case)[:, 0]
    assert found == pytest.approx(marched(screening, 1200.0, 1), rel=1e-3)


def test_angles_of_every_station_equal_a_dense_complex_solve_line_by_line():
    """numpy.linalg.solve of −ω²M + jωC + K for every order, torques from the public cylinder harmonics."""
    screening = screening_of(engine_text())
    _state, loads, lines = lines_at(screening, np.array([900.0, 1500.0]))
    group, own = loads.groups[0], lines.groups[0][0]
    machine = next(item for item in screening.train.machines if item.cylinders)
    k, c = matrices()
    for column, rpm in enumerate((900.0, 1500.0)):
        amplitude = np.array([item.torque_nm for item in cylinder_torques(machine, rpm * RPM)])
        for row, line in enumerate(group.lines):
            omega = line.source.order * rpm * RPM
            torque = np.zeros(5, dtype=complex)
            torque[:3] = amplitude[:, line.order_index]
            angle = np.linalg.solve(k + 1j * omega * c - omega**2 * np.diag(J), torque)
            assert np.abs(own.angle_rad[:, row, column] - angle).max() <= 1e-10 * np.abs(angle).max()


def test_every_peak_of_the_grid_is_within_a_thousandth_of_a_fine_scan():
    """Brute force: 20 001 speeds about the largest peak of every link."""
    text = engine_text(operation={"range": ["700 rpm", "1600 rpm"], "trip": "1700 rpm"})
    response = response_of(text)
    curves = response.normal.alternating_torque_nm
    for link in range(len(curves)):
        at = response.speed_rad_s[int(np.argmax(curves[link]))] / RPM
        fine = np.linspace(0.97 * at, 1.03 * at, 20001)
        fine = fine[(fine >= response.speed_rad_s[0] / RPM) & (fine <= response.speed_rad_s[-1] / RPM)]
        true = alternating_at(response.screening, fine)[link].max()
        assert curves[link].max() == pytest.approx(true, rel=1e-3)
