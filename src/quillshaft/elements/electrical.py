"""Electrical machines as springs and dampers on the shaft, and the damping of a load, for small swings.

Signs: a damping coefficient is −dT/dω of a driving torque and +dT/dω of an absorbed one, so that a positive one damps.
"""

from __future__ import annotations

import math
from itertools import pairwise

from quillshaft.train.model import Tie

TWO_PI = 2.0 * math.pi


def synchronizing_stiffness(synchronizing_w_rad: float, poles: int, supply_hz: float) -> float:
    """Stiffness to the grid [N·m/rad of shaft angle] of a synchronous machine.

    synchronizing_w_rad is its synchronizing power per electrical radian. The electrical angle is p = poles/2 times the
    shaft's, the torque is power over the synchronous speed 2π f/p: k = p² P_s / (2π f).
    Source: common practice (IEC 60034-1 and makers' data give the synchronizing power); derived from the definitions.
    """
    pairs = poles / 2.0
    return pairs * pairs * synchronizing_w_rad / (TWO_PI * supply_hz)


def tie_stiffness(tie: Tie) -> float:
    """Stiffness [N·m/rad] of a tie as given, or that of the synchronizing power. Raises ValueError without either."""
    if tie.stiffness_nm_rad is not None:
        return tie.stiffness_nm_rad
    if tie.synchronizing is None:
        raise ValueError(f"tie {tie.name} has neither stiffness nor synchronizing power")
    given = tie.synchronizing
    return synchronizing_stiffness(given.power_w_rad, given.poles, given.supply_hz)


def swing_frequency_hz(stiffness_nm_rad: float, inertia_kgm2: float) -> float:
    """Frequency [Hz] of a rigid train of this inertia on its spring to the grid, both referred to the machine's speed.

    Source: one degree of freedom, f = √(k/J)/2π; the flexible train lies a little below.
    """
    return math.sqrt(stiffness_nm_rad / inertia_kgm2) / TWO_PI


def breakdown_slip(rated_slip: float, overload: float) -> float:
    """Slip at breakdown torque from the rated point; overload is breakdown over rated torque, at least 1.

    s_k = s_n (m + √(m² − 1)), Kloss's formula solved for s_k with the stator's resistance neglected (M. Kloss,
    "Drehmoment und Schlüpfung des Drehstrommotors", Archiv für Elektrotechnik 5, 1916; from memory).
    """
    return rated_slip * (overload + math.sqrt(overload * overload - 1.0))


def kloss_torque(slip: float, slip_k: float, torque_k_nm: float, resistance_ratio: float = 0.0) -> float:
    """Air-gap torque [N·m] of an induction machine at a slip other than 0.

    T = 2 T_k (1 + a s_k) / (s/s_k + s_k/s + 2 a s_k), a = R1/R2' (0: Kloss's formula, exact for a stator without
    resistance). Source: Kloss 1916, in the full form of textbooks on electrical machines (from memory).
    """
    a_k = resistance_ratio * slip_k
    return 2.0 * torque_k_nm * (1.0 + a_k) / (slip / slip_k + slip_k / slip + 2.0 * a_k)


def induction_damping(slip: float, slip_k: float, torque_k_nm: float, synchronous_rad_s: float) -> float:
    """Damping −dT/dω [N·m·s/rad] of an induction machine at a slip: the slope of Kloss's curve over the speed.

    With x = s/s_k: dT/ds = 2 T_k/s_k · (1 − x²)/(1 + x²)², and ω = Ω_s (1 − s). For slow swings only, those far below
    the slip frequency at breakdown; `induction_spring_and_damping` holds for any. Negative beyond breakdown.
    """
    x = slip / slip_k
    per_slip = 2.0 * torque_k_nm / slip_k * (1.0 - x * x) / (1.0 + x * x) ** 2
    return per_slip / synchronous_rad_s


def induction_spring_and_damping(
    frequency_hz: float, slip_k: float, torque_k_nm: float, poles: int, supply_hz: float
) -> tuple[float, float]:
    """Electrical spring [N·m/rad] and damping [N·m·s/rad] that an induction machine gives to a swing of frequency_hz.

    Its torque follows the swing of speed with the lag τ = 1/(s_k 2π f): −δT/δθ = jω c/(1 + jω τ), c = 2 T_k/(s_k Ω_s),
    so that spring = c ω² τ/(1 + ω² τ²), which tends to 2 p T_k, and damping = c/(1 + ω² τ²). Exact for a stator
    without resistance and small slip. Source: the rotor's circuit at constant stator flux (derived; the lag of
    textbooks on the transients of induction machines, from memory).
    """
    omega = TWO_PI * frequency_hz
    static = 2.0 * torque_k_nm / (slip_k * 2.0 * TWO_PI * supply_hz / poles)
    lag = 1.0 / (slip_k * TWO_PI * supply_hz)
    turned = 1.0 + (omega * lag) ** 2
    return static * omega * omega * lag / turned, static / turned


LAW_EXPONENT = {"square": 2.0, "constant-torque": 0.0, "constant-power": -1.0}
"""Exponent of the speed in the torque of each load law."""


def load_damping(law: str | tuple[tuple[float, float], ...], torque_nm: float, omega_rad_s: float) -> float:
    """Damping dT/dω [N·m·s/rad] of a load at its rated torque and speed.

    A named law T ~ ω^n gives n T/ω: 2 T/ω for a square law (common practice), −T/ω for constant power. A law given as
    (speed [rad/s], share of rated power) points is taken straight between them: T = P/ω, dT/dω = (dP/dω − T)/ω, on the
    side below where a point stands at the speed itself.
    """
    if isinstance(law, str):
        return LAW_EXPONENT[law] * torque_nm / omega_rad_s
    spans = [(low, high) for low, high in pairwise(law) if low[0] < omega_rad_s * (1 - 1e-12)]
    if not spans:
        spans = list(pairwise(law))[:1]
    if not spans:
        return -torque_nm / omega_rad_s
    (speed, share), (above, share_above) = spans[-1]
    per_speed = (share_above - share) / (above - speed) * torque_nm * omega_rad_s
    return (per_speed - torque_nm) / omega_rad_s
