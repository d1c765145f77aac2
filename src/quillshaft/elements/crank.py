"""Crank throws: stiffness by two published formulas, inertia from the parts. Units SI."""

from __future__ import annotations

import math

from quillshaft.elements.slider_crank import equivalent_inertia
from quillshaft.train.model import RunningGear
from quillshaft.train.shaft_model import Material, Throw


def _area_power(outer_m: float, bore_m: float) -> float:
    return outer_m**4 - bore_m**4


def carter_length(throw: Throw) -> float:
    """Equivalent length over diameter to the fourth, Le/De⁴ [1/m³], of a crank throw by Carter.

    (Lj + 0.8 T)/(Dj⁴ − dj⁴) + 0.75 Lp/(Dp⁴ − dp⁴) + 1.5 R/(T W³). Source: B.C. Carter, Engineering, 1928, as
    given by Ker Wilson, Practical Solution of Torsional Vibration Problems (from memory).
    """
    journal = (throw.journal_length_m + 0.8 * throw.web_thickness_m) / _area_power(
        throw.journal_m, throw.journal_bore_m
    )
    pin = 0.75 * throw.pin_length_m / _area_power(throw.pin_m, throw.pin_bore_m)
    return journal + pin + 1.5 * throw.radius_m / (throw.web_thickness_m * throw.web_width_m**3)


def ker_wilson_length(throw: Throw) -> float:
    """Equivalent length over diameter to the fourth, Le/De⁴ [1/m³], of a crank throw by Ker Wilson.

    (Lj + 0.4 Dj)/(Dj⁴ − dj⁴) + (Lp + 0.4 Dp)/(Dp⁴ − dp⁴) + (R − 0.2 (Dj + Dp))/(T W³). Source: W. Ker Wilson,
    Practical Solution of Torsional Vibration Problems, crankshaft stiffness (from memory).
    """
    journal = (throw.journal_length_m + 0.4 * throw.journal_m) / _area_power(throw.journal_m, throw.journal_bore_m)
    pin = (throw.pin_length_m + 0.4 * throw.pin_m) / _area_power(throw.pin_m, throw.pin_bore_m)
    web = throw.radius_m - 0.2 * (throw.journal_m + throw.pin_m)
    return journal + pin + web / (throw.web_thickness_m * throw.web_width_m**3)


def throw_stiffness(throw: Throw, modulus_pa: float, formula: str | None = None) -> float:
    """Torsional stiffness [N·m/rad] of a throw, pin middle to pin middle: π G / (32 Le/De⁴).

    By its own formula, or by the one named ("carter" or "ker-wilson"). Source: as the two formulas.
    """
    by = throw.formula if formula is None else formula
    length = carter_length(throw) if by == "carter" else ker_wilson_length(throw)
    return math.pi * modulus_pa / (32.0 * length)


def web_inertia(throw: Throw, density_kgm3: float) -> float:
    """Polar inertia [kg·m²] of one plain rectangular web about the crank's axis.

    A block of thickness T and width W from half a journal diameter below the axis to half a pin diameter beyond
    the pin: m (W² + H²)/12 + m e², H = R + (Dj + Dp)/2, e its middle's distance from the axis. Source: the
    parallel-axis theorem for a rectangular block.
    """
    height = throw.radius_m + (throw.journal_m + throw.pin_m) / 2.0
    middle = throw.radius_m / 2.0 + (throw.pin_m - throw.journal_m) / 4.0
    mass = density_kgm3 * throw.web_thickness_m * throw.web_width_m * height
    return mass * ((throw.web_width_m**2 + height**2) / 12.0 + middle**2)


def throw_inertia(throw: Throw, material: Material) -> float:
    """Polar inertia [kg·m²] of a throw, pin middle to pin middle: one journal, one pin at the radius, two webs.

    Source: sum of the parts, the pin moved by the parallel-axis theorem.
    """
    density = material.density_kgm3
    web = web_inertia(throw, density) if throw.web_inertia_kgm2 is None else throw.web_inertia_kgm2
    journal = math.pi / 32.0 * density * throw.journal_length_m * _area_power(throw.journal_m, throw.journal_bore_m)
    pin = math.pi / 32.0 * density * throw.pin_length_m * _area_power(throw.pin_m, throw.pin_bore_m)
    pin_mass = math.pi / 4.0 * density * throw.pin_length_m * (throw.pin_m**2 - throw.pin_bore_m**2)
    return journal + pin + pin_mass * throw.radius_m**2 + 2.0 * web


def running_gear_inertia(gear: RunningGear) -> float:
    """Inertia [kg·m²] that the running gear of a throw adds: rotating masses at the crank radius, and the mean of
    the reciprocating ones over a turn. Source: kinetic energy averaged over a turn; `slider_crank`.
    """
    rotating = gear.rotating_kg * gear.radius_m**2
    mean = equivalent_inertia(gear.reciprocating_kg, gear.radius_m, gear.radius_m / gear.rod_m)
    return gear.cylinders * (rotating + mean)
