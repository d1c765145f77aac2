"""Sections and steps of shafts in torsion: rectangles, keyways, splines, shoulders. Units SI."""

from __future__ import annotations

import math

import numpy as np

RECTANGLE_TERMS = 60
STEP_RATIOS = (1.0, 1.25, 1.5, 2.0, 3.0, 6.0, 20.0)
SHARP_JUNCTION = (0.0, 0.07675, 0.10676, 0.13408, 0.15117, 0.15881, 0.16004)
FILLET_RATIOS = (0.0, 0.05, 0.10, 0.20)
FILLET_SAVING = (
    (0.0, 0.01925, 0.04755, 0.07675),
    (0.0, 0.01636, 0.04076, 0.09986),
    (0.0, 0.01488, 0.03698, 0.09098),
    (0.0, 0.01427, 0.03557, 0.08757),
)
"""What a fillet r/D1 (columns) takes off the sharp corner's factor at D2/D1 = 1.25, 1.5, 2 and 3 (rows)."""


def rectangle_constant(long_m: float, short_m: float) -> float:
    """Torsion constant K [m⁴] of a solid rectangle, G K / L being its stiffness.

    K = a b³ [1/3 − 64/π⁵ · b/a · Σ tanh(nπa/2b)/n⁵, n odd], a ≥ b. Source: Timoshenko and Goodier, Theory of
    Elasticity, torsion of rectangular bars (the series, from memory; checked against tabled values).
    """
    ratio = long_m / short_m
    odd = np.arange(1, 2 * RECTANGLE_TERMS, 2)
    series = float(np.sum(np.tanh(odd * math.pi * ratio / 2.0) / odd**5.0))
    return long_m * short_m**3 * (1.0 / 3.0 - 64.0 / (math.pi**5 * ratio) * series)


def rectangle_modulus(long_m: float, short_m: float) -> float:
    """Torque over the largest shear stress [m³] of a solid rectangle, at the middle of its longer sides.

    K / (b [1 − 8/π² · Σ 1/(n² cosh(nπa/2b)), n odd]), a ≥ b: 0.208 a³ of a square. Source: as `rectangle_constant`.
    """
    odd = np.arange(1, 2 * RECTANGLE_TERMS, 2)
    series = float(np.sum(1.0 / (odd**2 * np.cosh(np.minimum(odd * math.pi * long_m / short_m / 2.0, 700.0)))))
    return rectangle_constant(long_m, short_m) / (short_m * (1.0 - 8.0 / math.pi**2 * series))


def rectangle_inertia(density_kgm3: float, length_m: float, long_m: float, short_m: float) -> float:
    """Polar inertia [kg·m²] of a rectangular bar about its axis: ρ L a b (a² + b²) / 12 (common practice)."""
    return density_kgm3 * length_m * long_m * short_m * (long_m**2 + short_m**2) / 12.0


def keyway_constant(radius_m: float, width_m: float, depth_m: float) -> float:
    """Torsion constant K [m⁴] of a solid round bar of radius r with one flat-bottomed keyway.

    K = 2 C r⁴, C a cubic in depth over radius whose coefficients are quadratics in half width over depth; holds
    for 0.3 ≤ half width / depth ≤ 1.5 and 0.2 ≤ depth / radius ≤ 0.5, and tends to the plain bar as the depth
    vanishes. Source: Roark's Formulas for Stress and Strain, table of torsional constants, circular section
    with one keyway (from memory; 0.2 to 0.6 % below a solution of the Prandtl problem in that range).
    """
    shape, depth = width_m / 2.0 / depth_m, depth_m / radius_m
    k2 = -0.0848 + 0.1234 * shape - 0.0847 * shape**2
    k3 = -0.4318 - 2.2000 * shape + 0.7633 * shape**2
    k4 = -0.0780 + 2.0618 * shape - 0.5234 * shape**2
    return 2.0 * (0.7854 + k2 * depth + k3 * depth**2 + k4 * depth**3) * radius_m**4


def keyway_loss(radius_m: float, width_m: float, depth_m: float) -> float:
    """What one keyway takes off the torsion constant [m⁴] of the plain round bar.

    The plain bar of the fit (2 · 0.7854 r⁴) less the grooved one, so that a vanishing keyway costs nothing.
    Source: as `keyway_constant`.
    """
    return 2.0 * 0.7854 * radius_m**4 - keyway_constant(radius_m, width_m, depth_m)


def spline_diameter(major_m: float, minor_m: float, share: float) -> float:
    """Diameter [m] of the plain bar taken for a splined one: root diameter + share · tooth height on both sides.

    The torsion constant of a section lies between those of any section inside it and any around it, so root and
    outer circle (share 0 and 1) bound it. Source: inclusion of sections in St Venant torsion; share 0 is
    common practice. An own solution of the Prandtl problem for straight teeth as wide as their gaps gives shares
    of 0.1 (20 teeth, root 7/8 of the outer diameter) to 0.3 (6 such teeth).
    """
    return minor_m + share * (major_m - minor_m)


def junction_factor(step: float, fillet: float = 0.0) -> float:
    """Shoulder allowance JF, in diameters of the thinner shaft, for D2/D1 = `step` ≥ 1 and fillet r/D1.

    The thinner shaft counts JF · D1 longer, the thicker JF · D1 shorter. Source: own axisymmetric finite-element
    solution of div(r³ grad ψ) = 0 for solid shafts, straight between the tabled points in D1/D2 and in r/D1; it
    lies above the table recalled from the BICERA handbook, which belongs to small fillets. An infinite sharp
    step cannot have less than 3π/64 = 0.1473 (Reissner and Sagoci, J. Appl. Phys. 15, 1944: rigid punch on a
    half space, from memory). At D2/D1 = 1.25 a fillet of 0.2 is taken to end the allowance; a larger one counts
    as 0.2, above D2/D1 = 3 a fillet saves what it saves there, and the factor is never below zero.
    """
    thinness = 1.0 / step
    sharp = float(np.interp(thinness, [1.0 / value for value in reversed(STEP_RATIOS)], SHARP_JUNCTION[::-1]))
    savings = [float(np.interp(fillet, FILLET_RATIOS, row)) for row in FILLET_SAVING]
    steps = [1.0 / value for value in (3.0, 2.0, 1.5, 1.25)]
    return max(0.0, sharp - float(np.interp(thinness, steps, savings[::-1])))
