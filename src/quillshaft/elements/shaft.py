"""Round shafts in torsion: stiffness [N·m/rad] and polar inertia [kg·m²] of pieces in series."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import pairwise

import numpy as np

from quillshaft.elements.crank import throw_inertia, throw_stiffness
from quillshaft.elements.shaft_sections import (
    junction_factor,
    keyway_loss,
    rectangle_constant,
    rectangle_inertia,
    spline_diameter,
)
from quillshaft.records import dataclass
from quillshaft.train.shaft_model import EquivalentLength, Keyway, Material, Piece, Shaft

PANELS = 16
NODES = 20
COARSE_CUTS = 8


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
    if length <= 0 or piece.flange:
        return math.inf
    modulus_pa *= piece.modulus_factor
    if piece.section_m is not None:
        return modulus_pa * rectangle_constant(*piece.section_m) / length
    if piece.spline_minor_m is not None:
        outer = spline_diameter(piece.od_m[0], piece.spline_minor_m, piece.spline_share)
        return cylinder_stiffness(modulus_pa, length, outer, piece.id_m[0])
    if piece.keyway is not None:
        return _grooved_stiffness(piece, piece.keyway, length, modulus_pa)
    (d1, d2), (b1, b2) = piece.od_m, piece.id_m
    if d1 == d2 and b1 == b2:
        return cylinder_stiffness(modulus_pa, length, d1, b1)
    if b1 == b2 == 0:
        return solid_cone_stiffness(modulus_pa, length, d1, d2)
    return tapered_stiffness(modulus_pa, length, piece.od_m, piece.id_m)


def _grooved_stiffness(piece: Piece, keyway: Keyway, length_m: float, modulus_pa: float) -> float:
    """Stiffness [N·m/rad] of a piece with a keyway: the grooved length and the plain rest in series."""
    outer, bore = piece.od_m[0], piece.id_m[0]
    plain = math.pi * (outer**4 - bore**4) / 32.0
    grooved = plain - keyway_loss(outer / 2.0, keyway.width_m, keyway.depth_m)
    along = length_m if keyway.length_m is None else min(keyway.length_m, length_m)
    return modulus_pa / (along / grooved + (length_m - along) / plain)


def _fourth_power_mean(ends: tuple[float, float]) -> float:
    """Mean of D⁴ over a length in which D changes linearly."""
    a, b = ends
    return (a**4 + a**3 * b + a**2 * b**2 + a * b**3 + b**4) / 5.0


def piece_inertia(piece: Piece, density_kgm3: float) -> float:
    """Polar inertia [kg·m²] of one piece over its free length and all of its hub engagement.

    π ρ / 32 · ∫ (D⁴ − d⁴) dx; of splines half way between root and outer circle. What a keyway takes away is
    left in, since the key fills most of it. Source: polar inertia of a solid of revolution.
    """
    length = piece.length_m + sum(piece.hub_m)
    if piece.section_m is not None:
        return rectangle_inertia(density_kgm3, length, *piece.section_m)
    if piece.spline_minor_m is not None:
        solid = (piece.od_m[0] ** 4 + piece.spline_minor_m**4) / 2.0
        return math.pi * density_kgm3 * length * (solid - _fourth_power_mean(piece.id_m)) / 32.0
    section = _fourth_power_mean(piece.od_m) - _fourth_power_mean(piece.id_m)
    return math.pi * density_kgm3 * length * section / 32.0


def pieces_stiffness(pieces: tuple[Piece, ...], material: Material, shoulder: str = "none") -> float:
    """Stiffness [N·m/rad] of pieces in series; `shoulder` none | fillet | sharp adds the junction allowances."""
    flexibility = sum(1.0 / piece_stiffness(piece, material.shear_modulus_pa) for piece in pieces)
    if shoulder != "none":
        for first, second in pairwise(pieces):
            flexibility += junction_flexibility(first, second, material.shear_modulus_pa, shoulder == "fillet")
    return 1.0 / flexibility


def junction_flexibility(first: Piece, second: Piece, modulus_pa: float, filleted: bool) -> float:
    """Flexibility [rad/(N·m)] that a step between two pieces adds: the thin one counts longer, the thick shorter.

    JF · D1 · [1/(G Ip1) − 1/(G Ip2)] with the sections that meet; the second part no more than the thick
    piece's own, and none of a flange, which does not twist. The fillet is the thin piece's, else the thick
    one's, else none. Sections that are not round have no allowance. Source: `junction_factor`.
    """
    if first.section_m is not None or second.section_m is not None:
        return 0.0
    ends = [(first, first.od_m[1], first.id_m[1]), (second, second.od_m[0], second.id_m[0])]
    (thin, small, thin_bore), (thick, large, thick_bore) = sorted(ends, key=lambda end: end[1])
    if thin.flange or small == large:
        return 0.0
    fillet = (thin.fillet_m or thick.fillet_m or 0.0) if filleted else 0.0
    length = junction_factor(large / small, fillet / small) * small
    added = 1.0 / cylinder_stiffness(modulus_pa * thin.modulus_factor, 1.0, small, thin_bore)
    taken = 0.0
    if not thick.flange:
        per_length = 1.0 / cylinder_stiffness(modulus_pa * thick.modulus_factor, 1.0, large, thick_bore)
        taken = min(length * per_length, 1.0 / piece_stiffness(thick, modulus_pa))
    return length * added - taken


def shaft_stiffness(shaft: Shaft) -> float:
    """Stiffness [N·m/rad] of a shaft however it is spelled. Raises ValueError for geometry without a material."""
    if shaft.stiffness_nm_rad is not None:
        return shaft.stiffness_nm_rad
    if shaft.material is None:
        raise ValueError(f"shaft {shaft.name} has geometry but no material")
    if shaft.equivalent is not None:
        return equivalent_stiffness(shaft.equivalent, shaft.material)
    if shaft.throw is not None:
        return throw_stiffness(shaft.throw, shaft.material.shear_modulus_pa)
    return pieces_stiffness(shaft.pieces, shaft.material, shaft.shoulder)


def own_inertias(shaft: Shaft) -> tuple[float, float]:
    """What a shaft adds [kg·m²] to the stations at its two ends; zero where its own inertia is left out."""
    if shaft.own_inertia == "none" or shaft.material is None:
        return 0.0, 0.0
    if shaft.own_inertia == "distributed":
        masses = cut_shaft(shaft).inertia_kgm2
        return masses[0], masses[-1]
    if shaft.throw is not None:
        half = throw_inertia(shaft.throw, shaft.material) / 2.0
        return half, half
    return end_inertias(shaft.pieces, shaft.material)


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


@dataclass(frozen=True)
class CutShaft:
    """A shaft cut into lengths: stiffness [N·m/rad] of each, and inertia [kg·m²] at their ends, one more."""

    stiffness_nm_rad: tuple[float, ...]
    inertia_kgm2: tuple[float, ...]


def cut_shaft(shaft: Shaft) -> CutShaft:
    """A shaft of distributed inertia as lengths in series, half of each length's inertia at each of its ends.

    About `cuts` lengths of one size each, whole numbers to a piece; twice the cuts halve every length. The error
    of a natural frequency is of second order in the length: −(ω h / c)² / 24 of it, c² = G / ρ, in a uniform
    bar. Flanges and shoulders keep their places. Source: difference equation of equal discs on equal springs
    (Den Hartog, Mechanical Vibrations, ch. 4; from memory). Raises ValueError for a shaft without a material.
    """
    if shaft.material is None:
        raise ValueError(f"shaft {shaft.name} has geometry but no material")
    modulus = shaft.material.shear_modulus_pa
    stiffness: list[float] = []
    inertia = [0.0]
    for number, (piece, count) in enumerate(zip(shaft.pieces, _cuts_of_pieces(shaft), strict=True)):
        if number and shaft.shoulder != "none":
            step = junction_flexibility(shaft.pieces[number - 1], piece, modulus, shaft.shoulder == "fillet")
            if step > 0:
                stiffness.append(1.0 / step)
                inertia.append(0.0)
        for part in _lengths(piece, count):
            own, spring = piece_inertia(part, shaft.material.density_kgm3), piece_stiffness(part, modulus)
            if spring == math.inf:
                inertia[-1] += own
                continue
            inertia[-1] += own / 2.0
            stiffness.append(spring)
            inertia.append(own / 2.0)
    return CutShaft(tuple(stiffness), tuple(inertia))


def _cuts_of_pieces(shaft: Shaft) -> list[int]:
    """Lengths of each piece: in proportion at eight cuts or fewer, then whole multiples of that."""
    base = min(shaft.cuts, COARSE_CUTS)
    lengths = [0.0 if piece.flange else piece.length_m + hub_length(piece) for piece in shaft.pieces]
    times = max(1, round(shaft.cuts / base))
    return [times * max(1, round(base * length / sum(lengths))) if length else 1 for length in lengths]


def _lengths(piece: Piece, count: int) -> list[Piece]:
    """A piece as equal lengths of it, a taper's diameters running on."""
    if piece.flange or count == 1:
        return [piece]
    keyway = piece.keyway
    if keyway is not None and keyway.length_m is not None:
        keyway = replace(keyway, length_m=keyway.length_m / count)

    def at(ends: tuple[float, float], share: float) -> float:
        return ends[0] + (ends[1] - ends[0]) * share

    return [
        replace(
            piece,
            length_m=piece.length_m / count,
            od_m=(at(piece.od_m, n / count), at(piece.od_m, (n + 1) / count)),
            id_m=(at(piece.id_m, n / count), at(piece.id_m, (n + 1) / count)),
            hub_m=tuple(hub / count for hub in piece.hub_m),
            keyway=keyway,
        )
        for n in range(count)
    ]
