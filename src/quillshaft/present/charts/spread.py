"""Labels moved along one direction until none overlaps its neighbour, each as near to its place as it can be."""

from __future__ import annotations

from collections.abc import Sequence

Box = tuple[float, float, float, float]
"""Left, foot, right, top [mm]."""


def spread(wanted: Sequence[float], sizes: Sequence[float], low: float, high: float) -> list[float]:
    """Centres near the wanted ones so that items of these sizes do not overlap and stay between low and high.

    Items keep the order of their wanted places. Neighbours that would overlap form a block centred on the mean
    of what its members want (pool of adjacent violators). Where the items need more room than there is, they
    start at `low` and run over.
    """
    order = sorted(range(len(wanted)), key=lambda item: (wanted[item], item))
    blocks: list[tuple[list[int], float]] = []
    for item in order:
        blocks.append(([item], _start([item], wanted, sizes, low, high)))
        while len(blocks) > 1 and _end(blocks[-2], sizes) > blocks[-1][1]:
            members = blocks[-2][0] + blocks[-1][0]
            blocks[-2:] = [(members, _start(members, wanted, sizes, low, high))]
    centres = [0.0] * len(wanted)
    for members, start in blocks:
        at = start
        for item in members:
            centres[item] = at + sizes[item] / 2.0
            at += sizes[item]
    return centres


def _start(members: list[int], wanted: Sequence[float], sizes: Sequence[float], low: float, high: float) -> float:
    """Where a block begins so that its members stand as near as can be to their places."""
    offsets, at = [], 0.0
    for item in members:
        offsets.append(wanted[item] - at - sizes[item] / 2.0)
        at += sizes[item]
    return max(low, min(high - at, sum(offsets) / len(offsets)))


def _end(block: tuple[list[int], float], sizes: Sequence[float]) -> float:
    return block[1] + sum(sizes[item] for item in block[0])


def overlaps(first: Box, second: Box) -> bool:
    """True where two boxes share more than an edge."""
    return first[0] < second[2] and second[0] < first[2] and first[1] < second[3] and second[1] < first[3]


def free_spot(spots: Sequence[Box], taken: Sequence[Box]) -> int:
    """Number of the first spot that overlaps nothing, else of the one that overlaps the fewest."""
    clashes = [sum(overlaps(spot, other) for other in taken) for spot in spots]
    return clashes.index(min(clashes))
