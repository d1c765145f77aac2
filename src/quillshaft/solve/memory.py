"""Memory that one chunk of points hands on to the next, so that it is not given back and asked for again."""

from __future__ import annotations

from typing import Any, TypeAlias

import numpy as np

Numbers: TypeAlias = np.ndarray[Any, Any]  # float64, complex128 or exact numbers

BLOCK = 8  # rows asked for together


class Memory:
    """Rows of one number a point, and tables of rows by name; both come with anything in them."""

    def __init__(self) -> None:
        self._points, self._whole, self._dtype = 0, -1, np.dtype(float)
        self._rows: list[Numbers] = []
        self._free: list[Numbers] = []
        self._tables: dict[str, Numbers] = {}

    def begin(self, points: int, dtype: np.dtype[Any]) -> None:
        """Take back all rows, which from now on hold so many points; forget what is too short or of another type."""
        if points > self._whole or dtype != self._dtype:
            self._whole, self._dtype, self._rows, self._tables = points, dtype, [], {}
        self._points = points
        self._free = [row[:points] for row in self._rows]

    def row(self) -> Numbers:
        """A row (points,)."""
        if not self._free:
            block = np.empty((BLOCK, self._whole), dtype=self._dtype)
            self._rows += list(block)
            self._free += list(block[:, : self._points])
        return self._free.pop()

    def give(self, row: Numbers) -> None:
        """Take back a row."""
        self._free.append(row)

    def table(self, name: str, rows: int) -> Numbers:
        """The table (rows, points) of this name."""
        there = self._tables.get(name)
        if there is None or len(there) < rows:
            there = self._tables[name] = np.empty((rows, self._whole), dtype=self._dtype)
        return there[:rows, : self._points]
