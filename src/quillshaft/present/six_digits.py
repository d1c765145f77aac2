"""Numbers of long results: six significant digits, null where not finite."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from quillshaft.graph.network import Floats

DIGITS = 6


def numbers(values: Floats) -> list[Any]:
    """An array as nested lists of numbers with six significant digits, null where not finite."""
    rows = np.asarray(values, dtype=float)
    known = np.isfinite(rows) & (rows != 0)
    size = np.zeros(rows.shape)
    np.log10(np.abs(rows), out=size, where=known)
    step = DIGITS - 1 - np.floor(size)
    up, down = 10.0 ** np.maximum(step, 0.0), 10.0 ** np.maximum(-step, 0.0)
    rounded = np.round(np.where(np.isfinite(rows), rows, 0.0) / down * up) / up * down
    held: np.ndarray[Any, Any] = rounded.astype(object)
    held[~np.isfinite(rows)] = None
    return list(held.tolist())


def one(value: float | None) -> float | None:
    """A number with six significant digits; null where there is none."""
    if value is None or not math.isfinite(value):
        return None
    return float(f"{value:.{DIGITS}g}")
