"""Dampers: optimum of untuned and tuned ones on one mode, its response, and the centrifugal pendulum.

One mode is a disc of inertia J on a spring k, natural frequency ω_n = √(k/J), with a damper ring J_d = μ J on it.
Two definitions of the damping ratio of a damper are in use; here it is always that of the ring,
ζ = c / (2 J_d ω_n). On the inertia of the disc, c / (2 √(k J)), it is μ times that: the two agree at μ = 1 only.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from quillshaft.records import dataclass

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
    Complexes: TypeAlias = NDArray[np.complex128]
else:  # numpy.typing is slow to import
    Floats = Complexes = np.ndarray


@dataclass(frozen=True)
class Optimum:
    """The best damper on one mode.

    tuning      ring alone on its spring over ω_n: √(k_d/J_d) / ω_n; 0 for an untuned damper
    zeta        c / (2 J_d ω_n), of the ring
    peak        largest angle of the disc over that under the same torque at rest, as the rule has it
    peak_ratio  frequency of that peak over ω_n; None where the rule makes two points equally high
    """

    tuning: float
    zeta: float
    peak: float
    peak_ratio: float | None


def viscous_optimum(mu: float) -> Optimum:
    """Optimum of an untuned viscous damper, inertia ratio μ = J_d/J.

    ζ = 1/√(2(1+μ)(2+μ)), peak 1 + 2/μ at ω/ω_n = √(2/(2+μ)). Source: Den Hartog, Mechanical Vibrations, ch. 3,
    untuned viscous damper (from memory; the peak is confirmed by the response below).
    """
    return Optimum(0.0, 1.0 / math.sqrt(2.0 * (1.0 + mu) * (2.0 + mu)), 1.0 + 2.0 / mu, math.sqrt(2.0 / (2.0 + mu)))


def tuned_optimum(mu: float) -> Optimum:
    """Optimum of a tuned damper by its two fixed points: tuning 1/(1+μ), ζ = √(3μ / (8 (1+μ)³)), peak √(1+2/μ).

    The true maximum is up to 0.3 % above the height of the fixed points. Source: Brock, A note on the damped
    vibration absorber, J. Appl. Mech. 1946; Den Hartog, Mechanical Vibrations, ch. 3 (from memory).
    """
    zeta = math.sqrt(3.0 * mu / (8.0 * (1.0 + mu) ** 3))
    return Optimum(1.0 / (1.0 + mu), zeta, math.sqrt(1.0 + 2.0 / mu), None)


def ring_dynamic_stiffness(
    omega: Floats, inertia_kgm2: float, stiffness_nm_rad: complex, viscous_nms_rad: float
) -> Complexes:
    """Torque over angle [N·m/rad] (F,) at the station that carries a ring, at ω [rad/s] (F,).

    −Z J ω² / (Z − J ω²) with Z = k + j ω c, k may be complex; a ring without spring and damping gives 0.
    """
    joint = stiffness_nm_rad + 1j * omega * viscous_nms_rad
    moved = inertia_kgm2 * omega**2
    return np.asarray(-joint * moved / (joint - moved), dtype=np.complex128)


def magnification(ratio: Floats, mu: float, tuning: float, zeta: float) -> Floats:
    """Angle of the disc over its static angle (F,) at ω/ω_n (F,), undamped but for the damper (derived)."""
    ring = ring_dynamic_stiffness(ratio, mu, mu * tuning**2, 2.0 * zeta * mu)
    return np.asarray(1.0 / np.abs(1.0 - ratio**2 + ring))


def absorber_resonances(mu: float) -> tuple[float, float]:
    """The two resonances over ω_n of an undamped absorber tuned to ω_n: r² = 1 + μ/2 ∓ √(μ + μ²/4) (derived)."""
    middle, half = 1.0 + mu / 2.0, math.sqrt(mu + mu**2 / 4.0)
    return math.sqrt(middle - half), math.sqrt(middle + half)


def absorber_mu(lowest_ratio: float, highest_ratio: float) -> float:
    """Inertia ratio μ at which no resonance lies between two ratios of ω_n: the larger (r²−1)²/r² (derived)."""
    return max((ratio**2 - 1.0) ** 2 / ratio**2 for ratio in (lowest_ratio, highest_ratio))


def pendulum_order(suspension_m: float, length_m: float) -> float:
    """Order a pendulum is tuned to, per turn: √(R/r), R from the shaft axis to the suspension, r its length.

    Source: Den Hartog, Mechanical Vibrations, sec. 5.7, centrifugal pendulum (from memory).
    """
    return math.sqrt(suspension_m / length_m)


def pendulum_inertia(mass_kg: float, number: int, suspension_m: float, length_m: float) -> float:
    """Inertia [kg·m²] of the masses at rest on their arms, N m (R+r)²; masses as points or hung by two pins."""
    return number * mass_kg * (suspension_m + length_m) ** 2


def pendulum_stiffness(inertia_kgm2: float, order: float, omega_rad_s: float) -> float:
    """Stiffness [N·m/rad] of the equal ring and spring at a shaft speed [rad/s]: J (n₀ Ω)² (small swings)."""
    return inertia_kgm2 * (order * omega_rad_s) ** 2


def pendulum_effective_inertia(inertia_kgm2: float, order: float, at_order: float) -> float:
    """Inertia [kg·m²] that the shaft feels at an order n: J / (1 − (n/n₀)²); without bound at n₀ itself.

    Source: Den Hartog, Mechanical Vibrations, sec. 5.7 (from memory): m (R+r)² / (1 − r n²/R).
    """
    return inertia_kgm2 / (1.0 - (at_order / order) ** 2)
