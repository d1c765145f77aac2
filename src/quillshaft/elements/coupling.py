"""Couplings whose stiffness and damping follow mean torque and temperature."""

from __future__ import annotations

from itertools import pairwise

from quillshaft.train.basic_model import Table
from quillshaft.train.coupling_model import Coupling


def table_value(points: Table, at: float) -> float:
    """Value of a table at `at`: straight between its points, held at its first and last value beyond them.

    `points` are (argument, value) pairs rising in the argument, in SI.
    """
    (first, low), (last, high) = points[0], points[-1]
    if at <= first:
        return low
    if at >= last:
        return high
    for (a, value_a), (b, value_b) in pairwise(points):
        if at <= b:
            return value_a + (value_b - value_a) * (at - a) / (b - a)
    return high


def is_rubber(kind: str | None) -> bool:
    """True of the couplings that rubber or another elastomer makes soft."""
    return kind is not None and kind.startswith("elastomer")


def coupling_stiffness(coupling: Coupling, mean_torque_nm: float | None, temperature_k: float) -> float:
    """Stiffness [N·m/rad] at a mean torque [N·m, None: not known, taken as 0] and a temperature [K].

    A stiffness stated against torque is read at the magnitude of the mean torque; the temperature factor
    multiplies it (makers' catalogues state both so: common practice).
    """
    stiffness = coupling.stiffness_nm_rad
    if coupling.stiffness_points:
        stiffness = table_value(coupling.stiffness_points, abs(mean_torque_nm or 0.0))
    if coupling.temperature_points:
        stiffness *= table_value(coupling.temperature_points, temperature_k)
    return stiffness


def coupling_loss_factor(coupling: Coupling, temperature_k: float) -> float | None:
    """Loss factor at a temperature [K]; None where the coupling states no damping."""
    if coupling.loss_factor is None or not coupling.damping_points:
        return coupling.loss_factor
    return coupling.loss_factor * table_value(coupling.damping_points, temperature_k)


def coupling_viscous(coupling: Coupling, temperature_k: float) -> float | None:
    """Viscous coefficient [N·m·s/rad] at a temperature [K]; None where the coupling states none."""
    if coupling.viscous_nms_rad is None or not coupling.damping_points:
        return coupling.viscous_nms_rad
    return coupling.viscous_nms_rad * table_value(coupling.damping_points, temperature_k)
