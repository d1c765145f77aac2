"""How a relative deviation is spread between its two tolerances: quantiles and standard deviation.

All three kinds stay inside the tolerances and take a nominal value that is not in the middle as it is:

uniform      every deviation between the two tolerances is equally likely
triangular   the nominal value is the most likely one, the density falls straight to 0 at both tolerances
normal       a tolerance is two standard deviations; the two halves have each its own, meet at the nominal
             value with equal density, and are cut off at the tolerances

(Two-piece normal: G. T. Fechner, Kollektivmasslehre, 1897, from memory; triangular: N. L. Johnson and S. Kotz,
The Statistician 48, 1999, from memory.)
"""

from __future__ import annotations

import math
from typing import Literal, get_args

import numpy as np

from quillshaft.graph.network import Floats

Distribution = Literal["uniform", "triangular", "normal"]
DISTRIBUTIONS: tuple[Distribution, ...] = get_args(Distribution)
CUT = 2.0  # standard deviations of the normal at which a tolerance stands
HALF = 0.5 * math.erf(CUT / math.sqrt(2.0))
"""Probability of a standard normal between 0 and the cut."""


def deviations(kind: Distribution, share: Floats, low: Floats, high: Floats) -> Floats:
    """Relative deviations at probability `share` (…, n), 0 to 1, of inputs with tolerances low ≤ 0 ≤ high (n,)."""
    width = high - low
    if kind == "uniform":
        return np.clip(low + share * width, low, high)
    below = np.divide(-low, width, out=np.zeros_like(width), where=width > 0)
    left = share < below
    if kind == "triangular":
        falling = np.where(left, low + np.sqrt(share * width * -low), high - np.sqrt((1.0 - share) * width * high))
        return np.clip(falling, low, high)
    from scipy.special import ndtri  # type: ignore[import-untyped]

    depth = np.where(left, below - share, share - below) / np.where(left, below, 1.0 - below).clip(1e-300)
    size = ndtri(0.5 + HALF * depth.clip(0.0, 1.0)) / CUT
    drawn: Floats = np.clip(np.where(left, low, high) * size, low, high)
    return drawn


def standard_deviations(kind: Distribution, low: Floats, high: Floats) -> Floats:
    """Standard deviation (n,) of each relative deviation, exact."""
    width = high - low
    if kind == "uniform":
        return width / math.sqrt(12.0)
    if kind == "triangular":
        return np.sqrt((low**2 + high**2 - low * high) / 18.0)
    density = [math.exp(-0.5 * at * at) / math.sqrt(2.0 * math.pi) for at in (0.0, CUT)]
    first = (density[0] - density[1]) / HALF / CUT
    second = (1.0 - CUT * density[1] / HALF) / CUT**2
    below = np.divide(-low, width, out=np.zeros_like(width), where=width > 0)
    mean = first * (below * low + (1.0 - below) * high)
    square = second * (below * low**2 + (1.0 - below) * high**2)
    return np.sqrt(np.maximum(square - mean**2, 0.0))
