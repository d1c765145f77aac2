"""Sets of ranges on one axis: union, what they leave, and what two have in common."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

Range = tuple[float, float]
"""From and to; the upper end may be infinite. Open or closed ends make no difference here."""

TOUCH = 1e-12
"""Relative gap below which two ranges are joined."""


def union(ranges: Iterable[Range]) -> tuple[Range, ...]:
    """The ranges joined where they overlap or touch, rising."""
    joined: list[Range] = []
    for low, high in sorted(ranges):
        if low >= high:
            continue
        if joined and low <= joined[-1][1] * (1.0 + TOUCH):
            joined[-1] = (joined[-1][0], max(joined[-1][1], high))
        else:
            joined.append((low, high))
    return tuple(joined)


def left_over(whole: Range, taken: Iterable[Range]) -> tuple[Range, ...]:
    """What the ranges taken leave of the whole, rising."""
    left, start = [], whole[0]
    for low, high in sorted(reach for reach in taken if reach[0] < reach[1]):
        if low > start * (1.0 + TOUCH) and start < whole[1]:
            left.append((start, min(low, whole[1])))
        start = max(start, high)
        if start >= whole[1]:
            return tuple(left)
    if start * (1.0 + TOUCH) < whole[1]:
        left.append((start, whole[1]))
    return tuple(left)


def covered(whole: Range, taken: Sequence[Range]) -> bool:
    """True where the ranges taken leave nothing of the whole."""
    if any(low <= whole[0] and high >= whole[1] for low, high in taken):
        return True
    return len(taken) > 1 and not left_over(whole, taken)


def common(first: Sequence[Range], second: Sequence[Range]) -> tuple[Range, ...]:
    """What two sets of ranges have in common, rising."""
    return union((max(a, c), min(b, d)) for a, b in first for c, d in second)
