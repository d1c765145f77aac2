"""The class rule for propulsion shafts, IACS UR M68: recalled, confirm against your edition.

Stresses are amplitudes (half range) of the nominal shear, all orders together, on the plain section. The rule covers
intermediate, thrust and propeller shafts of forged steel; not crankshafts, nor shafts of gears, motors, generators
and turbines. The speed ratio λ is speed over rated speed. A figure of this module is no approval.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from quillshaft.records import dataclass
from quillshaft.train.duty_model import PropulsionForm, PropulsionKind

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
else:  # numpy.typing is slow to import
    Floats = np.ndarray

FORM_FACTORS: dict[tuple[PropulsionKind, PropulsionForm | None], tuple[float, float]] = {
    ("intermediate", "integral-flange"): (1.0, 1.0),
    ("intermediate", "shrink-fit"): (1.0, 1.0),
    ("intermediate", "keyway-taper"): (0.60, 1.10),
    ("intermediate", "keyway-cylindrical"): (0.45, 1.10),
    ("intermediate", "radial-hole"): (0.50, 1.10),
    ("intermediate", "longitudinal-slot"): (0.30, 1.20),
    ("thrust", None): (0.85, 1.10),
    ("thrust", "integral-flange"): (0.85, 1.10),
    ("propeller", "integral-flange"): (0.55, 1.22),
    ("propeller", "keyless"): (0.55, 1.22),
    ("propeller", "keyway-taper"): (0.55, 1.26),
}
"""c_K and diameter factor k by kind and form (IACS UR M68, recalled, confirm against your edition).

A thrust shaft has one figure, beside its collar and in way of a roller bearing alike, whatever its form. The part of
a propeller shaft between the foremost stern bearing region and the forward seal, 0.80 and 1.15, has no form here.
"""
CONTINUOUS_TO = 1.05
"""Speed ratio up to which the rule gives a continuous limit (recalled)."""
FLAT_FROM = 0.9
"""Speed ratio from which the continuous limit no longer falls (recalled)."""
PASSING_TO = 0.8
"""Speed ratio up to which a passing limit holds; barred ranges are allowed below it (recalled)."""
PASSING_FACTOR = 1.7
"""Passing over continuous limit at c_K 1 (recalled)."""
ENGINE_FACTOR = 100.0
"""F of the diameter formula for engines without slip coupling (recalled)."""
SMOOTH_FACTOR = 95.0
"""F of the diameter formula for turbines, electric drives and engines with a slip coupling (recalled)."""


@dataclass(frozen=True)
class PropulsionShaft:
    """What the rule takes of one shaft; recalled, confirm against your edition.

    form_factor   c_K
    tensile_pa    tensile strength [Pa] as counted, after the rule's cap
    diameter_m    outer diameter [m]
    words         what was used
    """

    form_factor: float
    tensile_pa: float
    diameter_m: float
    words: str


def _factors(kind: PropulsionKind, form: PropulsionForm | None) -> tuple[float, float]:
    found = FORM_FACTORS.get((kind, form))
    if found is None:
        allowed = ", ".join(str(known) for of, known in FORM_FACTORS if of == kind and known)
        seen = "no form" if form is None else f"form {form}"
        raise ValueError(
            f"the rule for propulsion shafts gives no factor for a {kind} shaft with {seen}; it has {allowed}"
        )
    return found


def form_factor(kind: PropulsionKind, form: PropulsionForm | None = None) -> float:
    """c_K of a shaft (IACS UR M68, recalled, confirm against your edition).

    Raises ValueError for a form that the rule does not give, with those it gives.
    """
    return _factors(kind, form)[0]


def diameter_form_factor(kind: PropulsionKind, form: PropulsionForm | None = None) -> float:
    """Factor k of the diameter formula (IACS UR M68, recalled, confirm against your edition).

    Raises ValueError for a form that the rule does not give, with those it gives.
    """
    return _factors(kind, form)[1]


def tensile_cap(kind: PropulsionKind, alloy: bool = False) -> float:
    """Tensile strength [Pa] above which the vibration limits count no more: 600 N/mm², 800 of alloy steel.

    Of propeller shafts 600 whatever the steel. Source: IACS UR M68, recalled (the least certain figure of this
    module), confirm against your edition.
    """
    return 800e6 if alloy and kind != "propeller" else 600e6


def size_factor(diameter_m: float) -> float:
    """c_D = 0.35 + 0.93 d^−0.2, d in mm, of a diameter [m] (IACS UR M68, recalled, confirm against your edition)."""
    return 0.35 + 0.93 * math.pow(diameter_m * 1e3, -0.2)


def propulsion_shaft(
    kind: PropulsionKind, form: PropulsionForm | None, tensile_pa: float, diameter_m: float, alloy: bool = False
) -> PropulsionShaft:
    """What the rule takes of a shaft of a tensile strength [Pa] and diameter [m], its cap on strength applied.

    Source: IACS UR M68, recalled, confirm against your edition. Raises ValueError for a form it does not give.
    """
    factor, cap = form_factor(kind, form), tensile_cap(kind, alloy)
    shape = "" if form is None else f", {form}"
    words = f"{kind} shaft{shape}: c_K {factor:g}, c_D {size_factor(diameter_m):.3f}"
    if tensile_pa > cap:
        words += f", tensile strength {tensile_pa / 1e6:.4g} counted as {cap / 1e6:.4g} N/mm²"
    return PropulsionShaft(factor, min(tensile_pa, cap), diameter_m, words)


def continuous_limit(shaft: PropulsionShaft, speed_ratio: float | Floats) -> Floats:
    """Amplitude τ_C [Pa] permitted in continuous running at speed ratios λ, of the shape of `speed_ratio`.

    (σ_B + 160)/18 · c_K c_D · (3 − 2 λ²) N/mm² for λ < 0.9, · 1.38 from 0.9 to 1.05; nan above, where the rule gives
    none, and below 0. Source: IACS UR M68, recalled, confirm against your edition.
    """
    ratio = np.asarray(speed_ratio, dtype=float)
    falling = np.where(ratio < FLAT_FROM, 3.0 - 2.0 * ratio**2, 1.38)
    base = (shaft.tensile_pa + 160e6) / 18.0 * shaft.form_factor * size_factor(shaft.diameter_m)
    return np.where((ratio >= 0.0) & (ratio <= CONTINUOUS_TO), base * falling, np.nan)


def passing_of_continuous(continuous_pa: float | Floats, form_factor: float) -> Floats:
    """Amplitude τ_T [Pa] in quick passage from the continuous limit [Pa] there: 1.7 τ_C / √c_K.

    Source: IACS UR M68, recalled, confirm against your edition; the rule has it for λ ≤ 0.8.
    """
    return np.asarray(PASSING_FACTOR * np.asarray(continuous_pa) / math.sqrt(form_factor))


def passing_limit(shaft: PropulsionShaft, speed_ratio: float | Floats) -> Floats:
    """Amplitude τ_T [Pa] permitted in quick passage at speed ratios λ ≤ 0.8; nan above, where nothing more is allowed.

    Source: IACS UR M68, recalled, confirm against your edition.
    """
    ratio = np.asarray(speed_ratio, dtype=float)
    passing = passing_of_continuous(continuous_limit(shaft, ratio), shaft.form_factor)
    return np.where(ratio <= PASSING_TO, passing, np.nan)


def barred_range(critical_speed: float, rated_speed: float) -> tuple[float, float]:
    """Speeds to bar about a critical speed n_c: 16 n_c/(18 − λ) to (18 − λ) n_c/16, λ = n_c over rated speed.

    In the unit in which both are given. Widen it by the tachometer's error. Source: IACS UR M68, recalled, confirm
    against your edition.
    """
    ratio = critical_speed / rated_speed
    return 16.0 * critical_speed / (18.0 - ratio), (18.0 - ratio) * critical_speed / 16.0


def barred_range_allowed(speed_ratio: float) -> bool:
    """Whether a barred range is accepted about a critical speed at a speed ratio: below 0.8 in normal firing.

    Source: IACS UR M68, recalled, confirm against your edition.
    """
    return speed_ratio < PASSING_TO


def slot_concentration(length_m: float, width_m: float, diameter_m: float, bore_m: float) -> float:
    """Stress concentration of a longitudinal slot through a bored shaft, lengths l, e, d and d_i [m].

    α_t + 0.8 ((l − e)/d) / √((1 − d_i/d) e/d), α_t = 2.3 − 3 e/d + 15 (e/d)² + 10 (e/d)² (d_i/d)². Source: IACS UR
    M68, recalled, confirm against your edition. Raises ValueError unless 0 < e ≤ l and 0 ≤ d_i < d.
    """
    if not (0.0 < width_m <= length_m and 0.0 <= bore_m < diameter_m):
        given = f"l {length_m:g}, e {width_m:g}, d {diameter_m:g}, d_i {bore_m:g} m"
        raise ValueError(f"longitudinal slot {given}: needs 0 < e ≤ l and 0 ≤ d_i < d")
    width, bore = width_m / diameter_m, bore_m / diameter_m
    hole = 2.3 - 3.0 * width + 15.0 * width**2 + 10.0 * (width * bore) ** 2
    return hole + 0.8 * ((length_m - width_m) / diameter_m) / math.sqrt((1.0 - bore) * width)


def slot_form_factor(length_m: float, width_m: float, diameter_m: float, bore_m: float) -> float:
    """c_K = 1.45 over the stress concentration of a longitudinal slot, lengths as there [m].

    Source: IACS UR M68, recalled, confirm against your edition. Raises ValueError as `slot_concentration` does.
    """
    return 1.45 / slot_concentration(length_m, width_m, diameter_m, bore_m)


def minimum_diameter(
    power_w: float, speed_rad_s: float, tensile_pa: float, form: float, drive: float, bore_ratio: float = 0.0
) -> float:
    """Least diameter [m] of a shaft for its rated power [W] and speed [rad/s].

    F k ((P/n₀) · 560/(σ_B + 160) / (1 − (d_i/d)⁴))^⅓ mm with P in kW, n₀ in rev/min, σ_B in N/mm², k `form`
    (`diameter_form_factor`), F `drive` (`ENGINE_FACTOR`, `SMOOTH_FACTOR`). The rule caps σ_B here too: pass it capped.
    Source: IACS UR M68, recalled, confirm against your edition.
    """
    per_turn = (power_w / 1e3) / (speed_rad_s * 30.0 / math.pi)
    strength = 560.0 / (tensile_pa / 1e6 + 160.0)
    return drive * form * math.cbrt(per_turn * strength / (1.0 - bore_ratio**4)) / 1e3
