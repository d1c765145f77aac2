"""Endurance of steel shafts in torsion: factors from the tensile strength, notches and mean stress.

Stresses are nominal shear stresses and amplitudes [Pa]. The figures are common practice for steels (Shigley,
Mechanical Engineering Design, fatigue; partly from memory): mean values without a factor for reliability, which
support a judgement and replace no test. The fatigue notch factor Kf belongs to the alternating stress alone.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from quillshaft.records import dataclass
from quillshaft.train.duty_model import MeanStress, Surface

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
else:  # numpy.typing is slow to import
    Floats = np.ndarray

NotchMethod = Literal["peterson", "neuber"]

SURFACE: dict[Surface, tuple[float, float]] = {
    "ground": (1.58, -0.085),
    "machined": (4.51, -0.265),
    "hot-rolled": (57.7, -0.718),
    "forged": (272.0, -0.995),
}
"""a and b of k_a = a Su^b, Su in MPa (Shigley, surface factors; machined seen there, others from memory)."""
BENDING_SHARE = 0.5
"""Endurance limit of a polished specimen in bending over the tensile strength of steel (common practice)."""
BENDING_LIMIT_PA = 700e6
"""Endurance limit [Pa] of a polished specimen in bending that no stronger steel exceeds (common practice)."""
TORSION_LOAD_FACTOR = 0.59
"""Endurance limit in torsion over that in bending (Shigley, from memory; 0.577 by distortion energy)."""
ULTIMATE_SHARE = 0.67
"""Ultimate strength in shear over tensile strength of steel (Shigley, from memory)."""
YIELD_SHARE = 0.577
"""Yield strength in shear over that in tension (distortion energy, 1/√3)."""
ASSUMED_YIELD = 0.5
"""Yield over tensile strength where yield is not stated: low for most shaft steels (common practice)."""
PASSING_SHARE = 1.75
"""Passing over continuous limit of `tensile_share_limits`."""

_KPSI = 6.894757293168361e6
_ROOT_INCH = math.sqrt(0.0254)
_NEUBER_RANGE_PA = (50.0 * _KPSI, 220.0 * _KPSI)
_PETERSON_LEAST_PA = 550e6


@dataclass(frozen=True)
class ShearStrength:
    """Strengths in shear [Pa] of one piece at its nominal section, and what was assumed for them, in words."""

    endurance_pa: float
    ultimate_pa: float
    yield_pa: float
    assumed: tuple[str, ...] = ()


def surface_factor(tensile_pa: float, surface: Surface) -> float:
    """Surface factor k_a = a Su^b (Su in MPa), at most 1, of a tensile strength [Pa]. Source: `SURFACE`."""
    scale, power = SURFACE[surface]
    return min(scale * math.pow(tensile_pa / 1e6, power), 1.0)


def size_factor(diameter_m: float) -> float:
    """Size factor k_b of a diameter [m]: 1.24 d^−0.107 up to 51 mm, 1.51 d^−0.157 above (d in mm), at most 1.

    Known from 2.79 to 254 mm; continued above, where it goes on falling. Source: Shigley, size factor (seen in a
    solution at 2 in; the rest from memory).
    """
    diameter = diameter_m * 1e3
    return min(1.24 * math.pow(diameter, -0.107) if diameter <= 51.0 else 1.51 * math.pow(diameter, -0.157), 1.0)


def notch_sensitivity(tensile_pa: float, radius_m: float | None, method: NotchMethod = "peterson") -> float:
    """Notch sensitivity q in torsion, 0 to 1, at a notch radius [m]; 1 where the radius is unknown.

    peterson: q = 1/(1 + a/r), a = 0.6 · 0.0254 (2070/Su)^1.8 mm, Su in MPa, below 550 MPa as at 550 (safe side).
    neuber: q = 1/(1 + √a/√r), √a = 0.190 − 2.51e-3 S + 1.35e-5 S² − 2.67e-8 S³ in √inch, S in kpsi, held at its
    ends outside 50 to 220 kpsi. They differ by some 10 %, Peterson's is the higher. Sources: Peterson, Stress
    Concentration Factors; Shigley, Neuber's equation with torsion constants (both from memory). Raises ValueError
    for a radius that is not positive.
    """
    if radius_m is None:
        return 1.0
    if not radius_m > 0.0:
        raise ValueError(f"notch radius {radius_m:g} m: must be positive")
    if method == "peterson":
        strength = max(tensile_pa, _PETERSON_LEAST_PA)
        return 1.0 / (1.0 + 0.6 * 0.0254e-3 * math.pow(2070e6 / strength, 1.8) / radius_m)
    least, most = _NEUBER_RANGE_PA
    kpsi = min(max(tensile_pa, least), most) / _KPSI
    root = 0.190 - 2.51e-3 * kpsi + 1.35e-5 * kpsi**2 - 2.67e-8 * kpsi**3
    return 1.0 / (1.0 + root * _ROOT_INCH / math.sqrt(radius_m))


def fatigue_notch_factor(theoretical: float, sensitivity: float, net: float = 1.0) -> float:
    """Fatigue notch factor Kf = (1 + q (Kt − 1)) · net, on the nominal stress; lost metal (`net`) counts in full.

    Source: Peterson, Stress Concentration Factors, definition of the notch sensitivity.
    """
    return (1.0 + sensitivity * (theoretical - 1.0)) * net


def shear_endurance(
    tensile_pa: float, diameter_m: float, surface: Surface, polished_shear_pa: float | None = None
) -> float:
    """Endurance limit in shear [Pa] of a piece without notch: 0.59 · 0.5 Su · k_a k_b, 0.5 Su at most 700 MPa.

    A measured limit of plain polished specimens in torsion, where given, stands in place of 0.59 · 0.5 Su.
    Source: Shigley, endurance limit modifying factors (from memory; a worked product in ch. 7 was seen).
    """
    plain = polished_shear_pa
    if plain is None:
        plain = TORSION_LOAD_FACTOR * min(BENDING_SHARE * tensile_pa, BENDING_LIMIT_PA)
    return plain * surface_factor(tensile_pa, surface) * size_factor(diameter_m)


def ultimate_shear(tensile_pa: float) -> float:
    """Ultimate strength in shear [Pa], 0.67 Su of steel (Shigley, from memory)."""
    return ULTIMATE_SHARE * tensile_pa


def yield_shear(yield_pa: float) -> float:
    """Yield strength in shear [Pa], 0.577 Sy (distortion energy)."""
    return YIELD_SHARE * yield_pa


def shear_strength(
    tensile_pa: float,
    diameter_m: float,
    surface: Surface,
    yield_pa: float | None = None,
    polished_shear_pa: float | None = None,
) -> ShearStrength:
    """Endurance, ultimate and yield strength in shear of a piece, with what was assumed. Sources: at each function.

    Where the yield strength is not given it is `ASSUMED_YIELD` of the tensile strength.
    """
    assumed = []
    if polished_shear_pa is None:
        share = TORSION_LOAD_FACTOR * min(BENDING_SHARE, BENDING_LIMIT_PA / tensile_pa)
        assumed.append(f"endurance limit of polished steel in torsion {share:.3g} of the tensile strength")
    if yield_pa is None:
        yield_pa = ASSUMED_YIELD * tensile_pa
        assumed.append(f"yield strength {ASSUMED_YIELD:g} of the tensile strength, {yield_pa / 1e6:.4g} N/mm²")
    endurance = shear_endurance(tensile_pa, diameter_m, surface, polished_shear_pa)
    return ShearStrength(endurance, ultimate_shear(tensile_pa), yield_shear(yield_pa), tuple(assumed))


def _static_pa(criterion: MeanStress, strength: ShearStrength) -> float:
    """Stress [Pa] at which the criterion's line meets the axis of mean stress."""
    return strength.ultimate_pa if criterion in {"goodman", "gerber"} else strength.yield_pa


def safety_factor(
    criterion: MeanStress, alternating_pa: float | Floats, mean_pa: float | Floats, strength: ShearStrength
) -> Floats:
    """Factor n by which alternating and mean stress [Pa] may both grow until the criterion's line is reached.

    With A = τa/Sse: goodman A + τm/Ssu = 1/n; soderberg A + τm/Ssy = 1/n; gerber n A + (n τm/Ssu)² = 1; elliptic
    (n A)² + (n τm/Ssy)² = 1. Shapes broadcast; the sign of a stress does not count; inf without stress. The
    alternating stress is to hold its notch factor. Source: Shigley, fluctuating stresses (standard criteria).
    """
    a = np.abs(np.asarray(alternating_pa, dtype=float)) / strength.endurance_pa
    m = np.abs(np.asarray(mean_pa, dtype=float)) / _static_pa(criterion, strength)
    if criterion == "gerber":
        used = (a + np.hypot(a, 2.0 * m)) / 2.0
    elif criterion == "elliptic":
        used = np.hypot(a, m)
    else:
        used = a + m
    with np.errstate(divide="ignore"):
        return np.asarray(1.0 / used)


def permitted_alternating(
    criterion: MeanStress, mean_pa: float | Floats, safety: float, strength: ShearStrength
) -> Floats:
    """Alternating stress [Pa] that gives the safety factor at a mean stress [Pa]; 0 where the mean alone takes it up.

    The reverse of `safety_factor`, with its sources; of the shape of `mean_pa`. It is to hold its notch factor:
    divide by Kf for a nominal stress.
    """
    left = 1.0 / safety
    m = np.abs(np.asarray(mean_pa, dtype=float)) / _static_pa(criterion, strength)
    if criterion == "gerber":
        a = left - safety * m**2
    elif criterion == "elliptic":
        a = np.sqrt(np.maximum(left**2 - m**2, 0.0))
    else:
        a = left - m
    return np.asarray(np.maximum(a, 0.0) * strength.endurance_pa)


def yield_safety(alternating_pa: float | Floats, mean_pa: float | Floats, strength: ShearStrength) -> Floats:
    """Factor against yield in the first cycle, Ssy / (τa + τm), stresses [Pa] (Shigley, Langer's line)."""
    with np.errstate(divide="ignore"):
        return np.asarray(strength.yield_pa / (np.abs(alternating_pa) + np.abs(mean_pa)))


def yield_alternating(mean_pa: float | Floats, safety: float, strength: ShearStrength) -> Floats:
    """Alternating stress [Pa] that gives a factor against first-cycle yield at a mean stress [Pa]; at least 0."""
    return np.asarray(np.maximum(strength.yield_pa / safety - np.abs(mean_pa), 0.0))


def tensile_share_limits(tensile_pa: float) -> tuple[float, float]:
    """Nominal amplitudes [Pa] permitted near the running speed and in passing: Su/25, and 1.75 times that.

    For steel shafts, zero to peak. Source: MIL-STD-167-2, recalled, confirm against your edition.
    """
    return tensile_pa / 25.0, PASSING_SHARE * tensile_pa / 25.0
