"""Couplings whose stiffness and damping follow mean torque and temperature."""

from __future__ import annotations

from quillshaft.train.basic_model import table_value
from quillshaft.train.coupling_model import Coupling


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
