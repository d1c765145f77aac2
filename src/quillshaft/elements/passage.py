"""Passing a resonance: how far one mode swings up while an exciting frequency crosses it at a steady rate.

One mode of natural frequency f and damping ratio ζ, excited by an even amplitude whose frequency moves by r [Hz/s].
All that counts is n = r / (2π ζ² f²), as long as the passage is short of a fair part of f itself.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
    Complexes: TypeAlias = NDArray[np.complex128]
else:  # numpy.typing is slow to import
    Floats = Complexes = np.ndarray

UNDAMPED_PEAK = 3.6777342850923
"""Largest angle over static angle and √q when an undamped mode is passed, see `undamped_peak`."""
_HALVINGS = 60


def passage_number(rate_hz_s: float | Floats, natural_hz: float | Floats, damping_ratio: float | Floats) -> Floats:
    """n = |r| / (2π ζ² f²) of a rate of the exciting frequency [Hz/s], natural frequency [Hz], damping ratio.

    The detuning gained in a time constant 1/(ζω), over half the half-power band, ζω (derived). inf without
    damping. Shapes broadcast.
    """
    band = 2.0 * math.pi * np.square(np.asarray(damping_ratio, dtype=float) * natural_hz)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.abs(rate_hz_s) / band)


def passage_envelope(number: Floats, time: Floats) -> Complexes:
    """Amplitude over the steady one at resonance, as a phasor, at times ζω t after the crossing; shapes broadcast.

    The slowly varying amplitude obeys R' = 1 − (1 + j n τ) R, so that R = ∫₀^∞ exp(−(1 + j n τ) v + j n v²/2) dv,
    which is √(π/2n) e^{jπ/4} w(j z), z = (1 + j n τ) e^{jπ/4} / √(2n), by turning the path through 45°; w is the
    Faddeeva function. For n > 0. Source: derived.
    """
    from scipy.special import wofz  # type: ignore[import-untyped]

    turn = np.exp(0.25j * math.pi)
    z = (1.0 + 1j * number * time) * turn / np.sqrt(2.0 * number)
    return np.asarray(np.sqrt(math.pi / (2.0 * number)) * turn * wofz(1j * z), dtype=np.complex128)


def passage_peak(number: float | Floats) -> Floats:
    """Largest amplitude over the steady one at resonance when a mode is passed, of the shape of `number` n ≥ 0.

    1 at n = 0, falling, 2.9344/√n when damping does not count any more (`undamped_peak`). The largest amplitude is
    where R' is at right angles to R, that is Re R = |R|²; bisected between the crossing and 3/√(1 + n) after it.
    Marched in time, a mode peaks 0.5 to 2 % lower upward and as much higher downward (ζ 1 to 4 %).
    Source: derived from `passage_envelope`. Raises ValueError for n below 0 or nan.
    """
    given = np.asarray(number, dtype=float)
    if not np.all(given >= 0.0):
        raise ValueError(f"passage number {given[~(given >= 0.0)].flat[0]:g}: must be 0 or more")
    plain = (given > 0.0) & np.isfinite(given)
    n = np.where(plain, given, 1.0)
    low, high = np.zeros_like(n), 3.0 / np.sqrt(1.0 + n)
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        envelope = passage_envelope(n, middle)
        rising = envelope.real > np.abs(envelope) ** 2
        low, high = np.where(rising, middle, low), np.where(rising, high, middle)
    peak = np.abs(passage_envelope(n, (low + high) / 2.0))
    return np.where(plain, peak, np.where(given == 0.0, 1.0, 0.0))


def undamped_peak(cycles: float) -> tuple[float, float]:
    """Largest angle over the static one when an undamped mode is passed upward, and the frequency over f there.

    At q = f²/r, natural frequency squared over rate: 3.6777 √q, and 1 + 0.8607/√q; holds for q ≫ 1. Source: F.M.
    Lewis, Vibration during acceleration through a critical speed, Trans. ASME 54, 1932 (from memory as 3.67 √q;
    confirmed by Fresnel integrals and `passage_peak`).
    """
    return UNDAMPED_PEAK * math.sqrt(cycles), 1.0 + 0.86068913714971 / math.sqrt(cycles)


def half_power_seconds(rate_hz_s: float, natural_hz: float, damping_ratio: float) -> float:
    """Time [s] in the half-power band 2 ζ f of a mode [Hz] at a rate of the exciting frequency [Hz/s] (definition)."""
    return 2.0 * damping_ratio * natural_hz / abs(rate_hz_s)


def half_power_cycles(rate_hz_s: float, natural_hz: float, damping_ratio: float) -> float:
    """Cycles of a mode [Hz] in its half-power band at a rate of the exciting frequency [Hz/s]: 2 ζ f²/|r|."""
    return half_power_seconds(rate_hz_s, natural_hz, damping_ratio) * natural_hz
