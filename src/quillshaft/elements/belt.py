"""Belts and chains as a ratio and a torsional spring."""

from __future__ import annotations

from fractions import Fraction

from quillshaft.train.gear_model import Belt

LARGEST_DENOMINATOR = 10**6


def span_torsional_stiffness(span_n_m: float, spans: int, radius_m: float) -> float:
    """Stiffness [N·m/rad] at a pulley of pitch radius r: spans · k · r².

    The taut span pulls k r θ; where the belt is tensioned so that the other span stays taut, that one lets go by as
    much and adds as much torque again, so that two spans give 2 k r². Source: statics of a belt over two pulleys.
    """
    return spans * span_n_m * radius_m**2


def belt_stiffness_at_first(belt: Belt) -> float | None:
    """Stiffness [N·m/rad] of a belt at its first-named station; None where it is rigid."""
    if belt.belt_nm_rad is not None or belt.span_n_m is None:
        return belt.belt_nm_rad
    return span_torsional_stiffness(belt.span_n_m, belt.spans, belt.diameters_m[0] / 2.0)


def belt_ratio(belt: Belt) -> Fraction:
    """Signed speed of the second pulley over that of the first: d1/d2 or z1/z2, − where the belt is crossed."""
    if belt.teeth is not None:
        ratio = Fraction(belt.teeth[0], belt.teeth[1])
    else:
        first, second = (Fraction(value).limit_denominator(LARGEST_DENOMINATOR) for value in belt.diameters_m)
        ratio = first / second
    return -ratio if belt.crossed else ratio


def ratio_words(belt: Belt) -> str:
    """ "24 : 60" of tooth numbers, else the ratio of the pitch diameters: "⌀ 1 : 2.52"."""
    if belt.teeth is not None:
        return f"{belt.teeth[0]} : {belt.teeth[1]}"
    first, second = belt.diameters_m
    return f"⌀ 1 : {second / first:.5g}" + (" crossed" if belt.crossed else "")
