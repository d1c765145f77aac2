"""What a coupling's ratings mean: twist at a torque, loss, heat, and the vibratory torque it may carry.

ψ is the energy lost in a cycle over the largest elastic energy ½ k A² (A: amplitude of twist), ψ = 2π η. The
elastic torque is k A; the whole torque of a coupling with loss is √(1 + η²) times it. DIN 740-2 is recalled,
confirm against your edition.
"""

from __future__ import annotations

import math
from itertools import pairwise

from quillshaft.elements.coupling import is_rubber
from quillshaft.train.basic_model import Table, table_value
from quillshaft.train.coupling_model import Coupling

FLAT_HZ = 10.0
"""Frequency up to which the rated vibratory torque stands undiminished (DIN 740-2, recalled)."""


def coupling_twist(coupling: Coupling, torque_nm: float) -> float:
    """Twist [rad] under a steady torque [N·m] at 30 °C: ∫ dT/k, the stiffness straight between its points."""
    points = coupling.stiffness_points
    torque = abs(torque_nm)
    if not points:
        return torque / coupling.stiffness_nm_rad
    inner = tuple(point for point in points if 0.0 < point[0] < torque)
    ends: Table = ((0.0, table_value(points, 0.0)), *inner, (torque, table_value(points, torque)))
    return sum(_stretch(after[0] - before[0], before[1], after[1]) for before, after in pairwise(ends))


def _stretch(torque_nm: float, first: float, second: float) -> float:
    if abs(second - first) <= 1e-9 * first:
        return torque_nm / first
    return torque_nm * math.log(second / first) / (second - first)


def loss_factor_of_psi(psi: float) -> float:
    """Loss factor η = ψ/2π: tangent of the loss angle, twice the equal damping ratio (definition)."""
    return psi / (2.0 * math.pi)


def resonance_factor(loss_factor: float) -> float:
    """Torque in the coupling over the exciting one at resonance, √(1 + 1/η²); catalogues print 2π/ψ (derived)."""
    return math.sqrt(1.0 + 1.0 / loss_factor**2)


def torque_magnification(ratio: float, loss_factor: float) -> float:
    """Torque in the coupling over the exciting one at ω/ω_n: √((1+η²)/((1−r²)²+η²)), hysteretic loss (derived)."""
    return math.sqrt((1.0 + loss_factor**2) / ((1.0 - ratio**2) ** 2 + loss_factor**2))


def loss_from_elastic_torque(elastic_nm: float, frequency_hz: float, stiffness_nm_rad: float, psi: float) -> float:
    """Mean loss [W] at an amplitude of elastic torque k A [N·m]: ψ T² f / (2 k) (derived)."""
    return psi * elastic_nm**2 * frequency_hz / (2.0 * stiffness_nm_rad)


def loss_from_total_torque(total_nm: float, frequency_hz: float, stiffness_nm_rad: float, psi: float) -> float:
    """Mean loss [W] at an amplitude of the whole torque, elastic and loss together: 1/(1+η²) of the above."""
    elastic = loss_from_elastic_torque(total_nm, frequency_hz, stiffness_nm_rad, psi)
    return elastic / (1.0 + loss_factor_of_psi(psi) ** 2)


def frequency_factor(frequency_hz: float) -> float:
    """S_f by which a vibratory torque weighs more at a higher frequency: 1 to 10 Hz, √(f/10) above.

    Source: DIN 740-2, recalled, confirm against your edition.
    """
    return 1.0 if frequency_hz <= FLAT_HZ else math.sqrt(frequency_hz / FLAT_HZ)


def weighs_by_frequency(kind: str | None) -> bool:
    """True of couplings whose vibratory torque weighs more at a higher frequency: rubber, and those of no stated kind.

    Metal has no loss to heat it; its fatigue counts cycles, not frequency (common practice).
    """
    return kind is None or is_rubber(kind)


def permitted_vibratory_torque(rated_nm: float, reference_hz: float, frequency_hz: float) -> float:
    """Vibratory torque [N·m] permitted at a frequency, from that stated at a reference frequency by S_f."""
    return rated_nm * frequency_factor(reference_hz) / frequency_factor(frequency_hz)


def two_mass_frequency(stiffness_nm_rad: float, first_kgm2: float, second_kgm2: float) -> float:
    """Natural frequency [Hz] of two inertias on a coupling (Den Hartog, Mechanical Vibrations, two discs)."""
    return math.sqrt(stiffness_nm_rad * (first_kgm2 + second_kgm2) / (first_kgm2 * second_kgm2)) / (2.0 * math.pi)
