"""Universal joints: how a bent joint makes its driven shaft run unevenly."""

from __future__ import annotations

import math


def joint_amplitude(angle_rad: float, harmonic: int = 1) -> float:
    """Amplitude [rad] of the driven shaft's lead at 2 · harmonic times per turn: ε^k / k, ε = tan²(β/2).

    θ2 − θ1 = Σ (ε^k / k) sin 2kθ, from tan θ2 = tan θ1 / cos β (θ counted from the plane of the bend). Source:
    kinematics of Hooke's joint, Fourier series of the closed form (derived).
    """
    return math.tan(angle_rad / 2.0) ** (2 * harmonic) / harmonic


def joint_speed_limits(angle_rad: float) -> tuple[float, float]:
    """Lowest and highest speed of the driven shaft over that of the driving one: cos β and 1 / cos β.

    Source: kinematics of Hooke's joint.
    """
    return math.cos(angle_rad), 1.0 / math.cos(angle_rad)
