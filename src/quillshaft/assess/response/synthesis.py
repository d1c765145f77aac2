"""Synthesis of orders over a working cycle: largest and smallest value of Σ Re(C_h exp(j h φ))."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Ints
from quillshaft.sources.gas import Complexes

POINTS_A_PERIOD = 10
ROWS = 1024
BESIDE = 3


def cycle_points(harmonics: Ints) -> int:
    """Points of a working cycle: at least 10 to a period of the highest harmonic, a product of small primes."""
    least = POINTS_A_PERIOD * max(int(np.max(harmonics, initial=1)), 6)
    return int(min(2**a * factor for a in range(3, 24) for factor in (1, 3) if 2**a * factor >= least))


def wave(amplitude: Complexes, harmonics: Ints, points: int) -> Floats:
    """(rows, points) Σ_h Re(C_h exp(j h φ)) of complex amplitudes (rows, H), φ over one working cycle."""
    spectrum = np.zeros((len(amplitude), points // 2 + 1), dtype=amplitude.dtype)
    if len(set(harmonics.tolist())) == len(harmonics):
        spectrum[:, harmonics] = amplitude
    else:
        for column, harmonic in enumerate(harmonics.tolist()):
            spectrum[:, harmonic] += amplitude[:, column]
    values = np.fft.irfft(spectrum, points, axis=1)  # any other norm takes six times as long
    return np.asarray(np.multiply(values, points / 2, values))


def extremes(amplitude: Complexes, harmonics: Ints) -> tuple[Floats, Floats]:
    """(largest, smallest) (rows,) of the wave of (rows, H) amplitudes at harmonics (H,) of the cycle.

    The extremes of samples, refined by the quartic through their neighbours, at every crest that may be the highest
    between its samples. Samples are in single precision, of the sum of amplitudes. One harmonic alone is exact.
    """
    if len(harmonics) == 1:
        size = np.abs(amplitude[:, 0])
        return size, -size
    points = cycle_points(harmonics)
    loss = 1.0 - np.cos(np.pi * harmonics / points)
    high, low = np.empty(len(amplitude)), np.empty(len(amplitude))
    for start in range(0, len(amplitude), ROWS):
        cut = slice(start, start + ROWS)
        size = np.abs(amplitude[cut])
        scale = np.maximum(size.sum(axis=1), 1e-300)
        values = wave((amplitude[cut] / scale[:, None]).astype(np.complex64), harmonics, points)
        between = (size @ loss / scale).astype(np.float32)
        high[cut] = scale * _highest(values, between)
        np.negative(values, values)
        low[cut] = -scale * _highest(values, between)
    return high, low


def _highest(values: Floats, between: Floats) -> Floats:
    """(rows,) largest value, refined at every crest whose true height may be above: samples miss `between` at most."""
    rows, points = np.arange(len(values)), values.shape[1]
    place = np.argmax(values, axis=1)
    best = _vertex(values, rows, place)
    level = best - between
    near = (place[:, None] + np.arange(-BESIDE, BESIDE + 1)) % points
    reaching = np.count_nonzero(values > level[:, None], axis=1)
    beside = np.count_nonzero(values[rows[:, None], near] > level[:, None], axis=1)
    others = np.flatnonzero(reaching > beside)
    if len(others):
        part = values[others]
        crest = part > level[others, None]
        crest[:, 1:-1] &= (part[:, 1:-1] >= part[:, :-2]) & (part[:, 1:-1] > part[:, 2:])
        row, at = np.nonzero(crest)
        np.maximum.at(best, others[row], _vertex(part, row, at))
    return best


def _vertex(values: Floats, rows: Ints, place: Ints) -> Floats:
    """Value between the samples about `place`: the quartic through five, at the vertex of the parabola through three.

    Source: Lagrange's interpolation through equidistant points.
    """
    points = values.shape[1]
    far_before, before, here, after, far_after = (
        values[rows, (place + step) % points].astype(float) for step in (-2, -1, 0, 1, 2)
    )
    bend, slope = before - 2.0 * here + after, 0.5 * (after - before)
    with np.errstate(all="ignore"):
        x = np.clip(np.where(bend != 0, -slope / bend, 0.0), -0.5, 0.5)
    square = x * x
    return np.asarray(
        here * (1.0 - square) * (4.0 - square) / 4.0
        + (before * (x - 1.0) + after * (x + 1.0)) * x * (4.0 - square) / 6.0
        - (far_before * (x - 2.0) + far_after * (x + 2.0)) * x * (1.0 - square) / 24.0
    )
