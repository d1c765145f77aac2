"""Speeds at which the response is worked out: fine enough to see every peak, refined until each is found."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.response.loads import LoadSet
from quillshaft.graph.network import Floats
from quillshaft.records import dataclass
from quillshaft.train.model import Train

LOWEST_SHARE = 0.05
"""Lowest speed over rated speed that is looked at."""
STEP = 0.01
"""Relative step of the first grid."""
NARROW = 0.4
"""Modes whose damping ratio is below this share of the step get points of their own at their critical speeds."""
GAIN = 2e-4
DROP = 0.35
"""A peak is found when a parabola through it rises by no more than GAIN; beyond DROP its neighbours are too far off."""
SMALLEST = 0.02
"""Peaks below this share of the largest torque of their link are left as they are."""
NEAREST = 0.015
"""Distance of two speeds over speed, as a share of the least damping ratio, below which the second says nothing new."""
ROUNDS = 8
MOST_SPEEDS = 4000


def looked_at(train: Train) -> tuple[float, float]:
    """Lowest and highest speed [rad/s] looked at: from start-up to trip, or a twentieth above the running speeds.

    The judged range alone where the grid holds a synchronous machine: the train runs at no other speed for good.
    """
    operation = train.operation
    low, high = operation.ranges_rad_s[0][0], operation.ranges_rad_s[-1][1]
    if any(tie.synchronizing is not None for tie in train.ties):
        return low, high
    top = max(operation.trip_rad_s or 0.0, 1.05 * high, 1.05 * operation.rated_rad_s)
    return LOWEST_SHARE * operation.rated_rad_s, top


def first_speeds(train: Train, loads: LoadSet, modes: list[tuple[Floats, Floats]]) -> Floats:
    """(S,) rising speeds [rad/s] of the first grid, the named speeds of the operating map included.

    modes: for every state (omega [rad/s], damping ratio) of its modes, so that narrow ones are seen.
    """
    operation = train.operation
    low, high = looked_at(train)
    speeds = list(np.geomspace(low, high, 9 + int(math.log(high / low) / STEP)))
    speeds[0], speeds[-1] = low, high
    speeds += [operation.rated_rad_s, *(edge for pair in operation.ranges_rad_s for edge in pair)]
    speeds += [edge for pair in operation.barred_rad_s for edge in pair]
    speeds += [speed for speed in (operation.idle_rad_s, operation.trip_rad_s) if speed]
    orders = {(line.harmonic * group.base, 0.0) for group in loads.groups for line in group.lines}
    orders |= {pair for item in loads.plain for pair in item.frequencies}
    for omega, zeta in modes:
        for own, ratio in zip(omega.tolist(), zeta.tolist(), strict=True):
            if ratio < NARROW * STEP:
                speeds += [
                    speed * (1.0 + step * ratio)
                    for order, constant in orders
                    for speed in _meeting(own, order, constant, low, high)
                    for step in (-2.0, -1.0, 0.0, 1.0, 2.0)
                ]
    inside = np.array([speed for speed in speeds if low <= speed <= high])
    return _thinned(np.sort(inside), 1e-5)


def _meeting(omega: float, order: float, constant: float, low: float, high: float) -> list[float]:
    if order == 0.0:
        return []
    return [speed for sign in (1.0, -1.0) if low <= (speed := (sign * omega - constant) / order) <= high]


def _thinned(speeds: Floats, least: float) -> Floats:
    """Rising speeds without those nearer than `least` (relative) to the one before."""
    if not len(speeds):
        return speeds
    keep = np.concatenate([[True], np.diff(speeds) > least * speeds[1:]])
    return np.asarray(speeds[keep])


@dataclass(frozen=True)
class Peaks:
    """Speeds to add, and whether every peak is found."""

    add: Floats
    found: bool


def refine(speeds: Floats, curves: Floats, least: float) -> Peaks:
    """Where curves (rows, S) over rising speeds (S,) may rise above their samples: parabolas and midpoints there.

    Speeds nearer than `least` (relative) to one there are left out.
    """
    middle = curves[:, 1:-1]
    is_peak = (middle >= curves[:, :-2]) & (middle > curves[:, 2:])
    is_peak &= middle > SMALLEST * curves.max(axis=1, initial=0.0)[:, None]
    rows, place = np.nonzero(is_peak)
    y0, y1, y2 = (curves[rows, place + step] for step in (0, 1, 2))
    x0, x1, x2 = (speeds[place + step] for step in (0, 1, 2))
    vertex, height = _parabola((x0, x1, x2), (y0, y1, y2))
    steep = y1 - np.minimum(y0, y2) > DROP * y1
    loose = steep | (height - y1 > GAIN * y1)
    if not loose.any():
        return Peaks(np.zeros(0), True)
    found = [vertex[loose], 0.5 * (x0 + x1)[steep], 0.5 * (x1 + x2)[steep]]
    wanted = _thinned(np.sort(np.concatenate(found)), least)
    near = np.searchsorted(speeds, wanted)
    beside = np.minimum(
        np.abs(wanted - speeds[np.clip(near - 1, 0, len(speeds) - 1)]),
        np.abs(wanted - speeds[np.clip(near, 0, len(speeds) - 1)]),
    )
    return Peaks(wanted[beside > least * wanted], False)


def _parabola(x: tuple[Floats, Floats, Floats], y: tuple[Floats, Floats, Floats]) -> tuple[Floats, Floats]:
    """Place and height of the vertex of a parabola through three points, kept between the outer ones."""
    left, right = x[0] - x[1], x[2] - x[1]
    a = y[0] - y[1]
    b = y[2] - y[1]
    with np.errstate(all="ignore"):
        bend = (a * right - b * left) / (left * right * (left - right))
        slope = (b * left**2 - a * right**2) / (left * right * (left - right))
        step = np.where(bend < 0, -0.5 * slope / bend, 0.0)
    step = np.clip(np.nan_to_num(step), left, right)
    return x[1] + step, y[1] + slope * step + bend * step**2
