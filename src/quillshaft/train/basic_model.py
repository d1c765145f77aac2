"""Records and kinds that every part of a train shares."""

from __future__ import annotations

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
