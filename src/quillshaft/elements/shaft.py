"""Round shafts in torsion: stiffness [N·m/rad] and polar inertia [kg·m²] of pieces in series."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.train.model import EquivalentLength, Material, Piece

PANELS = 16
NODES = 20


def cylinder_stiffness(modulus_pa: float, length_m: float, outer_m: float, inner_m: float = 0.0) -> float:
    """Torsional stiffness [N·m/rad] of a plain round bar or tube: π G (D⁴ − d⁴) / (32 L).

    Source: Timoshenko, Strength of Materials, Part I, torsion of circular shafts (from memory).
    """
    return math.pi * modulus_pa * (outer_m**4 - inner_m**4) / (32.0 * length_m)


def solid_cone_stiffness(modulus_pa: float, length_m: float, d1_m: float, d2_m: float) -> float:
    """Torsional stiffness [N·m/rad] of a solid cone: 3 π G d1³ d2³ / (32 L (d1² + d1 d2 + d2²)).

    Source: integral of the bar formula over the length, in closed form.
    """
    powers = d1_m**2 + d1_m * d2_m + d2_m**2
    return 3.0 * math.pi * modulus_pa * (d1_m * d2_m) ** 3 / (32.0 * length_m * powers)


def tapered_stiffness(
    modulus_pa: float, length_m: float, od_m: tuple[float, float], id_m: tuple[float, float]
) -> float:
    """Torsional stiffness [N·m/rad] of a cone with a straight or tapered bore.

    The flexibility 32 / (π G) · ∫ dx / (D⁴ − d⁴) by composite Gauss–Legendre quadrature.
    """
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    share = (np.arange(PANELS)[:, None] + (nodes + 1.0) / 2.0) / PANELS
    outer = od_m[0] + (od_m[1] - od_m[0]) * share
    inner = id_m[0] + (id_m[1] - id_m[0]) * share
    mean = float(np.sum(weights / (outer**4 - inner**4))) / (2.0 * PANELS)
    return math.pi * modulus_pa / (32.0 * length_m * mean)


def hub_length(piece: Piece) -> float:
    """Length [m] added for hubs: the rule's share of each engagement turns freely, the rest is held.

    Source: one third of the engagement, common practice; makers differ, so the share is a datum.
    """
    return piece.hub_rule * sum(piece.hub_m)


def piece_stiffness(piece: Piece, modulus_pa: float) -> float:
    """Stiffness [N·m/rad] of one piece, free length and hub allowance together."""
    length = piece.length_m + hub_length(piece)
    if length <= 0:
        return math.inf
    (d1, d2), (b1, b2) = piece.od_m, piece.id_m
    if d1 == d2 and b1 == b2:
        return cylinder_stiffness(modulus_pa, length, d1, b1)
    if b1 == b2 == 0:
        return solid_cone_stiffness(modulus_pa, length, d1, d2)
    return tapered_stiffness(modulus_pa, length, piece.od_m, piece.id_m)


def _fourth_power_mean(ends: tuple[float, float]) -> float:
    """Mean of D⁴ over a length in which D changes linearly."""
    a, b = ends
    return (a**4 + a**3 * b + a**2 * b**2 + a * b**3 + b**4) / 5.0


def piece_inertia(piece: Piece, density_kgm3: float) -> float:
    """Polar inertia [kg·m²] of one piece over its free length and all of its hub engagement.

    π ρ / 32 · ∫ (D⁴ − d⁴) dx.
    """
    length = piece.length_m + sum(piece.hub_m)
    section = _fourth_power_mean(piece.od_m) - _fourth_power_mean(piece.id_m)
    return math.pi * density_kgm3 * length * section / 32.0


def pieces_stiffness(pieces: tuple[Piece, ...], material: Material) -> float:
    """Stiffness [N·m/rad] of pieces in series."""
    return 1.0 / sum(1.0 / piece_stiffness(piece, material.shear_modulus_pa) for piece in pieces)


def end_inertias(pieces: tuple[Piece, ...], material: Material) -> tuple[float, float]:
    """The shaft's own inertia [kg·m²] lumped at its two ends.

    Each piece is shared by the lever rule on flexibility: an inertia at the flexible middle goes half to
    each end, one near an end mostly to that end.
    """
    flexibility = [1.0 / piece_stiffness(piece, material.shear_modulus_pa) for piece in pieces]
    total = sum(flexibility)
    first = second = before = 0.0
    for piece, own in zip(pieces, flexibility, strict=True):
        share = (before + own / 2.0) / total
        inertia = piece_inertia(piece, material.density_kgm3)
        first += inertia * (1.0 - share)
        second += inertia * share
        before += own
    return first, second


def equivalent_stiffness(equivalent: EquivalentLength, material: Material) -> float:
    """Stiffness [N·m/rad] of the plain bar that a shaft is stated to equal."""
    return cylinder_stiffness(material.shear_modulus_pa, equivalent.length_m, equivalent.diameter_m)


def equivalent_length(length_m: float, diameter_m: float, on_diameter_m: float) -> float:
    """Length [m] of another diameter with the same stiffness: L (De / D)⁴ (common practice)."""
    return float(length_m * (on_diameter_m / diameter_m) ** 4)
