"""Shear stress of round shafts in torsion and what raises it: fillets, keyways, splines, radial holes.

Nominal stress is that of the plain round section, bore included. A local stress is nominal × `net` × `theoretical`:
`net` for the metal that a hole takes away, which always counts, `theoretical` for the notch, which counts in
fatigue as far as the steel feels it (`elements.endurance`). A factor compares shears; at a hole, whose edge is in
tension, it is the local distortion-energy stress over √3 times the nominal shear.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Literal, TypeAlias, TypeVar

import numpy as np

from quillshaft.records import dataclass
from quillshaft.train.duty_model import StressSection

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
else:  # numpy.typing is slow to import
    Floats = np.ndarray

Number = TypeVar("Number", float, Floats)
FilletForm = Literal["roark", "pilkey"]
Curve: TypeAlias = tuple[float, float, float]

FILLET_CURVES: dict[FilletForm, tuple[Curve, Curve, Curve, Curve]] = {
    "roark": ((0.953, 0.680, -0.053), (-0.493, -1.820, 0.517), (1.621, 0.908, -0.529), (-1.081, 0.232, 0.065)),
    "pilkey": ((0.905, 0.783, -0.075), (-0.437, -1.969, 0.553), (1.557, 1.073, -0.578), (-1.061, 0.171, 0.086)),
}
"""C1 to C4 of a shoulder fillet in torsion, each a + b s + c s² with s = √(h/r).

Roark's Formulas for Stress and Strain, table 17.1 (from memory; the sums 1, 0, 0 and chart values of Gere,
Mechanics of Materials, problem 3.11-3 confirm it); Pilkey, Peterson's Stress Concentration Factors, chart 3.12
(seen without its signs, which are from memory).
"""
FILLET_RANGE = (0.25, 4.0)
"""h/r between which the curves hold (Roark, Pilkey)."""
SHARP_SHOULDER = 2.2
"""Factor of a shoulder whose fillet is not known: r/d = 0.02 (common practice; first estimate of Shigley, recalled)."""
KEYWAY = 3.0
"""Factor of an end-milled keyway with r/d = 0.02 (common practice; first estimate of Shigley, ch. 7)."""
KEYWAY_RADIUS = 0.02
"""Radius at the bottom of a keyway over the shaft diameter that `KEYWAY` stands for."""
SPLINE = 2.8
"""Factor of a splined shaft (common practice; photoelastic value in Peterson, eight teeth, from memory)."""
HOLE = 4.0 / math.sqrt(3.0)
"""Factor at the edge of a small radial hole, see `hole_factor`."""


@dataclass(frozen=True)
class FilletFactor:
    """Theoretical factor of a shoulder fillet; `words` say how it was continued outside h/r 0.25 to 4, else empty."""

    value: float
    words: str = ""


@dataclass(frozen=True)
class Concentration:
    """What raises the stress at one section; local stress is nominal × `net` × `theoretical`.

    theoretical   stress concentration factor, ≥ 1, on the section that is left
    net           nominal section modulus over the one left, ≥ 1
    radius_m      notch radius [m] for the notch sensitivity; None where unknown: count the notch in full
    words         what was used, and what it governs over
    """

    theoretical: float
    net: float
    radius_m: float | None
    words: str

    @property
    def whole(self) -> float:
        """Local over nominal stress, the notch counted in full."""
        return self.theoretical * self.net


def section_modulus(od_m: float, id_m: float = 0.0) -> float:
    """Polar section modulus [m³] of a round section: π (D⁴ − d⁴) / (16 D).

    Source: Timoshenko, Strength of Materials, Part I, torsion of circular shafts (from memory).
    """
    return math.pi * (od_m**4 - id_m**4) / (16.0 * od_m)


def nominal_shear(torque_nm: Number, od_m: float, id_m: float = 0.0) -> Number:
    """Nominal shear stress [Pa] at the surface under a torque [N·m]: T / section modulus, 16 T / (π D³) if solid."""
    return torque_nm / section_modulus(od_m, id_m)


def torque_of_shear(stress_pa: Number, od_m: float, id_m: float = 0.0) -> Number:
    """Torque [N·m] under which the surface has a nominal shear stress [Pa]: the reverse of `nominal_shear`."""
    return stress_pa * section_modulus(od_m, id_m)


def fillet_curve(depth: float, sharpness: float, form: FilletForm = "roark") -> float:
    """Theoretical factor of a shoulder fillet, C1 + C2 x + C3 x² + C4 x³, at x = 2 h/D and h/r, wherever asked.

    Source: `FILLET_CURVES`. The two forms differ by 2 to 3 %; Pilkey's is the higher.
    """
    root = math.sqrt(sharpness)
    return sum((a + b * root + c * sharpness) * depth**power for power, (a, b, c) in enumerate(FILLET_CURVES[form]))


def fillet_factor(small_m: float, large_m: float, radius_m: float, form: FilletForm = "roark") -> FilletFactor:
    """Theoretical factor in torsion of a fillet of radius r [m] between diameters d and D [m], on the smaller one.

    h = (D − d)/2. Below h/r 0.25 the step is counted as r/4 high, which is on the safe side. Above 4 the curves
    are continued up to the factor of a high shoulder of that radius (`high_shoulder_factor`): never more than 5 %
    below Norton's fits, mostly above, while keeping h/r at 4 would be up to a third too low. The curves are of
    solid shafts; a bore makes the true factor smaller. Source: `FILLET_CURVES`. Raises ValueError for a radius that is
    not positive or a shoulder below the shaft.
    """
    if not radius_m > 0.0 or large_m < small_m:
        raise ValueError(f"fillet radius {radius_m:g} m from {small_m:g} to {large_m:g} m: needs r > 0 and D ≥ d")
    step = (large_m - small_m) / 2.0
    sharpness = step / radius_m
    low, high = FILLET_RANGE
    if step == 0.0:
        return FilletFactor(1.0)
    if sharpness < low * (1.0 - 1e-9):
        counted = low * radius_m
        value = fillet_curve(2.0 * counted / (small_m + 2.0 * counted), low, form)
        return FilletFactor(max(value, 1.0), f"h/r {sharpness:.2g} is below {low:g}: counted as {low:g}")
    value = max(fillet_curve(2.0 * step / large_m, sharpness, form), 1.0)
    if sharpness <= high * (1.0 + 1e-9):
        return FilletFactor(value)
    return FilletFactor(
        min(value, high_shoulder_factor(small_m, radius_m, form)),
        f"h/r {sharpness:.2g} is above {high:g}: extrapolated",
    )


def high_shoulder_factor(small_m: float, radius_m: float, form: FilletForm = "roark") -> float:
    """Theoretical factor of a fillet [m] on a diameter [m] under a shoulder of any height: 0.863 (r/d)^−0.239.

    Never below the curve at h/r 4. Source: power fit for D/d = 2 in Norton, Machine Design, appendix (from memory:
    0.86331, −0.23865); r/d = 0.02 gives 2.2, the first estimate of Shigley for a sharp shoulder.
    """
    step = FILLET_RANGE[1] * radius_m
    at_range = fillet_curve(2.0 * step / (small_m + 2.0 * step), FILLET_RANGE[1], form)
    return max(at_range, 0.86331 * math.pow(radius_m / small_m, -0.23865))


def hole_factor(od_m: float, hole_m: float, id_m: float = 0.0) -> tuple[float, float]:
    """Theoretical factor, and nominal over remaining section modulus, of a radial hole [m] through a shaft.

    Net modulus π D³/16 − d D²/6 of a solid shaft (Shigley, table A-16, from memory), less d (D³ − b³)/(6 D) with a
    bore b: the strip of second moment d (D³ − b³)/12 is gone. At a small hole in pure shear τ the edge carries
    3τ − (−τ) = 4τ in tension (Kirsch): in largest shear 2τ, by distortion energy 4/√3 = 2.31 times the nominal
    shear, which is used, since the shear strengths of steel follow that rule. The class rule for propulsion
    shafts begins its hole and slot factors from the same 2.3 (recalled). A wide hole has less on what is left: safe.
    Raises ValueError for a hole that is not narrower than the shaft.
    """
    if not 0.0 < hole_m < od_m:
        raise ValueError(f"radial hole {hole_m:g} m in a shaft of {od_m:g} m: needs 0 < hole < shaft")
    plain = section_modulus(od_m, id_m)
    left = plain - hole_m * (od_m**3 - id_m**3) / (6.0 * od_m)
    return HOLE, plain / left


def section_concentration(section: StressSection, form: FilletForm = "roark") -> Concentration:
    """Stress concentration of a section: the greatest of its raisers, or the factor it states.

    A groove (keyway or spline) and a radial hole at one section are taken to meet: their factors are multiplied.
    A fillet is taken to lie beside them. The diameter of a splined section is that of the roots. Sources: at the
    constants and functions of each. Raises ValueError as `fillet_factor` and `hole_factor` do, and for a stated
    factor below 1.
    """
    if section.stress_factor is not None:
        if not section.stress_factor >= 1.0:
            raise ValueError(f"stress concentration factor {section.stress_factor:g}: must be at least 1")
        return Concentration(
            section.stress_factor, 1.0, None, f"stress concentration as given: {section.stress_factor:.3g}"
        )
    groove, hole = _groove(section), _hole(section)
    meeting = [_together(groove, hole)] if groove and hole else [raiser for raiser in (groove, hole) if raiser]
    raisers = [raiser for raiser in (_shoulder(section, form), *meeting) if raiser]
    if not raisers:
        return Concentration(1.0, 1.0, None, "plain section: 1")
    first, *others = sorted(raisers, key=lambda raiser: -raiser.whole)
    over = "".join(f"; governs over {raiser.words}" for raiser in others)
    return Concentration(first.theoretical, first.net, first.radius_m, first.words + over)


def _mm(length_m: float) -> str:
    return f"{1e3 * length_m:.6g}"


def _shoulder(section: StressSection, form: FilletForm) -> Concentration | None:
    """Fillet, or the shoulder whose fillet is not stated, or the fillet whose shoulder is not."""
    radius, large = section.fillet_m, section.shoulder_m
    if radius is None and large is None:
        return None
    if radius is None or radius == 0.0:
        to = "" if large is None else f" to {_mm(large)} mm"
        words = f"shoulder{to} without a stated fillet: {SHARP_SHOULDER:.3g} as for a sharp one (common practice)"
        return Concentration(SHARP_SHOULDER, 1.0, None, words)
    if large is None:
        value = high_shoulder_factor(section.od_m, radius, form)
        words = f"fillet r {_mm(radius)} mm on {_mm(section.od_m)} mm, shoulder not stated, taken as high: {value:.3g}"
        return Concentration(value, 1.0, radius, words)
    factor = fillet_factor(section.od_m, large, radius, form)
    note = f" ({factor.words})" if factor.words else ""
    words = f"fillet r {_mm(radius)} mm from {_mm(section.od_m)} to {_mm(large)} mm: {factor.value:.3g}{note}"
    return Concentration(factor.value, 1.0, radius, words)


def _groove(section: StressSection) -> Concentration | None:
    """Keyway or spline; the keyway's factor, the greater, where both are stated."""
    if section.keyway:
        radius = KEYWAY_RADIUS * section.od_m
        words = f"end-milled keyway, r {_mm(radius)} mm taken: {KEYWAY:.3g} (common practice, recalled)"
        return Concentration(KEYWAY, 1.0, radius, words)
    if section.spline:
        return Concentration(SPLINE, 1.0, None, f"spline: {SPLINE:.3g} (common practice, recalled)")
    return None


def _hole(section: StressSection) -> Concentration | None:
    if section.cross_hole_m is None:
        return None
    factor, net = hole_factor(section.od_m, section.cross_hole_m, section.id_m)
    words = f"radial hole {_mm(section.cross_hole_m)} mm: {factor:.3g} on {1.0 / net:.3g} of the section modulus"
    return Concentration(factor, net, section.cross_hole_m / 2.0, words)


def _together(groove: Concentration, hole: Concentration) -> Concentration:
    """Groove and hole that meet: factors multiplied, the larger radius kept, to which steel is the more sensitive."""
    radius = None if groove.radius_m is None or hole.radius_m is None else max(groove.radius_m, hole.radius_m)
    factor = groove.theoretical * hole.theoretical
    words = f"{groove.words} and {hole.words}, taken to meet: {factor:.3g}"
    return Concentration(factor, groove.net * hole.net, radius, words)
