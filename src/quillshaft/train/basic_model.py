"""Records and kinds that every part of a train shares."""

from __future__ import annotations

from itertools import pairwise
from typing import Literal

from quillshaft.records import dataclass

Tolerance = tuple[float, float]
"""Relative deviations (low ≤ 0, high ≥ 0): (-0.05, 0.05) is ±5 %."""

Table = tuple[tuple[float, float], ...]
"""(argument, value) pairs rising in the argument, in SI."""

Range = tuple[float, float]
"""Lowest and highest speed of a range [rad/s]."""


@dataclass(frozen=True)
class Assumed:
    """One value that the file does not state: what was taken for it and why."""

    element: str
    key: str
    value: str
    why: str


@dataclass(frozen=True)
class Provenance:
    """Where an element's data come from, as written in the file; None where the file is silent."""

    source: str | None = None
    document: str | None = None
    date: str | None = None
    status: Literal["stated", "calculated", "assumed"] | None = None
    note: str | None = None


def table_value(points: Table, at: float) -> float:
    """Value of a table at `at`: straight between its points, held at its first and last value beyond them.

    `points` are (argument, value) pairs rising in the argument, in SI.
    """
    (first, low), (last, high) = points[0], points[-1]
    if at <= first:
        return low
    if at >= last:
        return high
    for (a, value_a), (b, value_b) in pairwise(points):
        if at <= b:
            return value_a + (value_b - value_a) * (at - a) / (b - a)
    return high
