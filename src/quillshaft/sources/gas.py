"""Gas pressure on a piston over one working cycle, and the harmonics of the torque that it makes.

Pressures are over the ambient, at uniform crank angles from the firing dead centre (of a compressor: the outer
one). A torque is written T(θ) = mean + Σ Re(C_n exp(j n θ)), so C_n = cosine − j · sine coefficient.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from quillshaft.elements.slider_crank import lever, travel
from quillshaft.graph.network import Floats
from quillshaft.train.reciprocating_model import CompressorEnd, PressureCard, SimpleCycle

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Complexes: TypeAlias = NDArray[np.complex128]
else:  # numpy.typing is slow to import
    Complexes = np.ndarray

AMBIENT_PA = 101325.0
FINE = 14400
"""Points of a cycle that is made here, or laid through a card of uneven steps."""
COMPRESSION_EXPONENT = 1.35
EXPANSION_EXPONENT = 1.28
IMEP_OVER_INTAKE = 8.0
"""Polytropic exponents, and mean effective pressure per unit of absolute intake pressure (common practice)."""


class CycleError(ValueError):
    """A cycle that no gas can run through: the key at fault, what is wrong, and what is allowed."""

    def __init__(self, key: str, message: str, allowed: str) -> None:
        super().__init__(f"{message}; allowed: {allowed}")
        self.key, self.message, self.allowed = key, message, allowed


def cycle_angles(count: int, turns: int) -> Floats:
    """(count,) uniform crank angles [rad] over a working cycle of `turns` turns, from its dead centre."""
    return np.asarray(np.arange(count, dtype=np.float64) * (2.0 * math.pi * turns / count))


def torque_harmonics(shape: Floats, turns: int, orders: Floats) -> tuple[float, Complexes]:
    """(mean, complex C_n at `orders`) of samples, uniform over a working cycle of `turns` turns.

    Units are those of `shape`; an order that the cycle does not hold is 0. Source: discrete Fourier transform.
    """
    spectrum = np.fft.rfft(shape) / len(shape)
    place = np.round(orders * turns).astype(int)
    held = (np.abs(place - orders * turns) < 1e-9) & (place < (len(shape) + 1) // 2)
    values = np.where(held, 2.0 * spectrum[np.where(held, place, 0)], 0.0)
    return float(spectrum[0].real), np.asarray(values)


def tangential(pressure: Floats, turns: int, rod_ratio: float) -> Floats:
    """Tangential pressure at the crankpin: pressure times `lever`, in the unit of `pressure`.

    T = p A R (sin θ + λ sin θ cos θ / √(1 − λ² sin² θ)). Source: Den Hartog, Mechanical Vibrations, ch. 5.
    """
    return np.asarray(pressure * lever(cycle_angles(len(pressure), turns), rod_ratio))


def card_pressure(card: PressureCard) -> Floats:
    """The card's pressure [Pa over ambient] at uniform angles: its own points where they are, else straight lines."""
    angle, pressure = np.array(card.angle_rad), np.array(card.pressure_pa)
    pressure = pressure if card.gauge else pressure - AMBIENT_PA
    uniform = np.arange(len(angle)) * (card.cycle_rad / len(angle))
    if np.max(np.abs(angle - uniform)) < 1e-6:
        return np.asarray(pressure)
    grid = np.arange(FINE) * (card.cycle_rad / FINE)
    return np.asarray(np.interp(grid, angle, pressure, period=card.cycle_rad))


def intake_pressure(cycle: SimpleCycle) -> float:
    """Absolute pressure [Pa] at the start of compression: as given, else imep / 8, at least 1 bar."""
    return cycle.intake_pa if cycle.intake_pa is not None else max(1e5, cycle.imep_pa / IMEP_OVER_INTAKE)


def _cycle_imep(cycle: SimpleCycle, intake: float, cut_off: float) -> float:
    """Work per swept volume [Pa] of the closed cycle whose combustion ends at `cut_off` clearance volumes."""
    ratio, top = cycle.compression_ratio, cycle.peak_pa
    clearance = 1.0 / (ratio - 1.0)
    compressed, released = intake * ratio**COMPRESSION_EXPONENT, top * (cut_off / ratio) ** EXPANSION_EXPONENT
    compression = (intake * ratio - compressed) * clearance / (COMPRESSION_EXPONENT - 1.0)
    expansion = (top * cut_off - released * ratio) * clearance / (EXPANSION_EXPONENT - 1.0)
    return float(compression + top * (cut_off - 1.0) * clearance + expansion)


def cut_off_ratio(cycle: SimpleCycle) -> float:
    """Volume at the end of combustion over the clearance volume, so that the cycle has the given imep.

    Compression p V^1.35, pressure up to the peak at the dead centre, combustion at the peak, expansion p V^1.28;
    exhaust and intake at the intake pressure. Raises CycleError where no cut-off gives the imep. Source: the
    limited-pressure cycle, J. B. Heywood, Internal Combustion Engine Fundamentals, ch. 5 (from memory).
    """
    intake, ratio = intake_pressure(cycle), cycle.compression_ratio
    compressed = intake * ratio**COMPRESSION_EXPONENT
    if cycle.peak_pa < compressed:
        message = f"a peak of {cycle.peak_pa / 1e5:.4g} bar is below the compression pressure"
        raise CycleError("peak", message, f"at least {compressed / 1e5:.4g} bar, or a lower intake pressure")
    least = _cycle_imep(cycle, intake, 1.0)
    most = _cycle_imep(cycle, intake, ratio)
    if not least <= cycle.imep_pa <= most:
        message = f"an imep of {cycle.imep_pa / 1e5:.4g} bar does not fit this peak and compression ratio"
        raise CycleError("imep", message, f"{least / 1e5:.3g} to {most / 1e5:.3g} bar, or another peak or intake")
    low, high = 1.0, ratio
    for _ in range(200):
        middle = 0.5 * (low + high)
        if _cycle_imep(cycle, intake, middle) < cycle.imep_pa:
            low = middle
        else:
            high = middle
    return 0.5 * (low + high)


def cycle_pressure(cycle: SimpleCycle, turns: int, rod_ratio: float, fired: bool) -> Floats:
    """(14400,) pressure [Pa over ambient] of the simple cycle from its firing dead centre.

    Not fired, the gas expands along the line on which it was compressed. Raises CycleError as `cut_off_ratio`.
    """
    angle, intake = cycle_angles(FINE, turns), intake_pressure(cycle)
    clearance = 1.0 / (cycle.compression_ratio - 1.0)
    volume = clearance + 0.5 * travel(angle, rod_ratio)
    compression = intake * ((clearance + 1.0) / volume) ** COMPRESSION_EXPONENT
    end = clearance * cut_off_ratio(cycle)
    burnt = np.where(volume <= end, cycle.peak_pa, cycle.peak_pa * (end / volume) ** EXPANSION_EXPONENT)
    last_turn = angle >= 2.0 * math.pi * turns - math.pi
    pressure = np.where(last_turn, compression, intake)
    pressure = np.where(angle < math.pi, burnt if fired else compression, pressure)
    return np.asarray(pressure - AMBIENT_PA)


def end_pressure(end: CompressorEnd, rod_ratio: float, crank_side: bool) -> Floats:
    """(points,) absolute pressure [Pa] at one side of a compressor's piston over a turn from its outer dead centre.

    Without a card: polytropic expansion of the clearance gas and compression, valves opening at suction and
    discharge pressure without loss. Source: ideal indicator card of a compressor (any textbook).
    """
    if end.card is not None:
        return np.asarray(card_pressure(end.card) + AMBIENT_PA)
    angle = cycle_angles(FINE, 1)
    swept = 0.5 * travel(angle, rod_ratio)
    volume = end.clearance + (1.0 - swept if crank_side else swept)
    expanding = (angle >= math.pi) if crank_side else (angle < math.pi)
    expansion = end.discharge_pa * (end.clearance / volume) ** end.exponent
    compression = end.suction_pa * ((end.clearance + 1.0) / volume) ** end.exponent
    return np.asarray(
        np.where(expanding, np.maximum(expansion, end.suction_pa), np.minimum(compression, end.discharge_pa))
    )
