"""The slider-crank: exact kinematics, the torque of its reciprocating mass, its equivalent inertia.

Angles are crank angles from the outer (top) dead centre; `rod_ratio` is λ, crank radius over rod length. The
piston runs through the crank axis (no offset), and the rod is replaced by two masses, at crankpin and piston pin.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
else:  # numpy.typing is slow to import
    Floats = np.ndarray

POINTS = 2048
"""Points a turn for mean values and harmonics: exact to rounding, since the functions are smooth and periodic."""


def travel(angle_rad: Floats, rod_ratio: float) -> Floats:
    """Piston travel from the outer dead centre over the crank radius [-], 0 to 2.

    `angle_rad` [rad], `rod_ratio` [-]. Source: Den Hartog, Mechanical Vibrations, ch. 5, exact form.
    """
    root = np.sqrt(1.0 - (rod_ratio * np.sin(angle_rad)) ** 2)
    return np.asarray(1.0 - np.cos(angle_rad) + (1.0 - root) / rod_ratio)


def lever(angle_rad: Floats, rod_ratio: float) -> Floats:
    """dx/dθ of `travel` [-]: the torque of a piston force F is F · radius · lever.

    `angle_rad` [rad], `rod_ratio` [-]. Source: Den Hartog, Mechanical Vibrations, ch. 5, exact form.
    """
    sine, cosine = np.sin(angle_rad), np.cos(angle_rad)
    root = np.sqrt(1.0 - (rod_ratio * sine) ** 2)
    return np.asarray(sine + rod_ratio * sine * cosine / root)


def acceleration(angle_rad: Floats, rod_ratio: float) -> Floats:
    """d²x/dθ² of `travel` [-]: the piston's acceleration over radius · speed².

    `angle_rad` [rad], `rod_ratio` [-]. Source: differentiation of `lever`.
    """
    sine, cosine = np.sin(angle_rad), np.cos(angle_rad)
    root = np.sqrt(1.0 - (rod_ratio * sine) ** 2)
    rod = (cosine**2 - sine**2) / root + (rod_ratio * sine * cosine) ** 2 / root**3
    return np.asarray(cosine + rod_ratio * rod)


def inertia_torque(angle_rad: Floats, mass_kg: float, radius_m: float, rod_ratio: float, omega_rad_s: float) -> Floats:
    """Torque on the crank [N·m] by the reciprocating mass at constant speed, + in the sense of rotation.

    T = −m R² ω² x' x''. Source: Den Hartog, Mechanical Vibrations, ch. 5, with exact kinematics.
    """
    shape = -lever(angle_rad, rod_ratio) * acceleration(angle_rad, rod_ratio)
    return np.asarray(mass_kg * radius_m**2 * omega_rad_s**2 * shape)


def _turn() -> Floats:
    return np.asarray(np.arange(POINTS, dtype=np.float64) * (2.0 * np.pi / POINTS))


def inertia_harmonics(rod_ratio: float, highest: int) -> Floats:
    """(highest,) sine coefficients S_n [-], n = 1 … highest, of T / (m R² ω²): T = m R² ω² Σ S_n sin nθ.

    By the trapezoid rule on the exact kinematics, which is exact to rounding for smooth periodic functions.
    Source: Den Hartog, Mechanical Vibrations, ch. 5 (the series there is its short form).
    """
    angle = _turn()
    shape = -lever(angle, rod_ratio) * acceleration(angle, rod_ratio)
    return np.asarray(-2.0 * np.fft.rfft(shape).imag[1 : highest + 1] / POINTS)


def equivalent_inertia(mass_kg: float, radius_m: float, rod_ratio: float) -> float:
    """Mean inertia [kg·m²] of a reciprocating mass on its crank: m R² · mean of x'².

    Its energy averaged over a turn at constant speed; m R² (1/2 + λ²/8 + λ⁴/16 + …). Source: average of kinetic
    energy over a turn (Ker Wilson, Practical Solution of Torsional Vibration Problems; from memory).
    """
    angle = _turn()
    return float(mass_kg * radius_m**2 * np.mean(lever(angle, rod_ratio) ** 2))
