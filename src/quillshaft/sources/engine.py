"""Orders of reciprocating engines and how the firing pulses of the cylinders add up."""

from __future__ import annotations

import cmath
from collections.abc import Sequence

HIGHEST_ORDER = 12


def orders_of(strokes: int) -> tuple[float, ...]:
    """Orders screened: 0.5 to 12 in steps of a half for four strokes, 1 to 12 for two (common practice)."""
    if strokes == 4:
        return tuple(step / 2.0 for step in range(1, 2 * HIGHEST_ORDER + 1))
    return tuple(float(step) for step in range(1, HIGHEST_ORDER + 1))


def phase_vector_sum(order: float, angles: Sequence[float], firing_rad: Sequence[float]) -> float:
    """|Σ β_i exp(j n φ_i)|: relative angles β (any scale), firing angles φ [rad of crank turn].

    Source: Den Hartog, Mechanical Vibrations, ch. 5, star diagrams of crank orders.
    """
    total = sum(beta * cmath.exp(1j * order * phi) for beta, phi in zip(angles, firing_rad, strict=True))
    return abs(total)


def is_major(order: float, firing_rad: Sequence[float]) -> bool:
    """True where the pulses on a rigid crank add to at least half their number (common practice)."""
    return phase_vector_sum(order, [1.0] * len(firing_rad), firing_rad) >= 0.5 * len(firing_rad) - 1e-9
