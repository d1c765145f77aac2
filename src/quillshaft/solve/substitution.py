"""Solving with an elimination: angles, twists and torques for given torques, at every point.

The angle of an unknown u follows from those eliminated after it, and its twist against a neighbour j of its
own group never as the difference of two nearly equal angles (excess form: own derivation):

    x_u = (f_u + Σ weight_ui · x_i) / d
    twist_uj = (f_u − excess_u · x_j + Σ weight_ui · (x_i − x_j)) / d

Differences on the right are twists found before.
"""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.core import Motion, carry_core, solve_core
from quillshaft.solve.elimination import (
    CHUNK_POINTS,
    Elimination,
    eliminate,
)
from quillshaft.solve.first_values import ElementValues, Value, Values
from quillshaft.solve.memory import Memory, Numbers
from quillshaft.solve.plan import NO_PAIR, Plan


@dataclass(frozen=True)
class Solution:
    """Angles and torques at every point, referred.

    angle          (nodes, F)   [rad]
    spring_twist   (springs, F) angle of the first end less that of the second [rad]
    tie_twist      (ties, F)    angle of the tied node [rad]
    link_torque    (torque links, F) [N·m]
    """

    angle: Numbers
    spring_twist: Numbers
    tie_twist: Numbers
    link_torque: Numbers


def solve(elimination: Elimination, torque: Numbers, link_error: Numbers | None = None) -> Solution:
    """Solve for the torques on the nodes (nodes, F) or (nodes, 1) [N·m] at every point.

    link_error (torque links, F) [rad] is a given right-hand side of the links' equations
    Σ coefficient · angle − compliance · T = link_error (a transmission error); left out, it is zero.
    """
    plan, memory = elimination.plan, Memory()
    memory.begin(elimination.ratio.shape[1], np.result_type(elimination.ratio, torque))
    motion = Motion(memory.table("x", plan.nodes + plan.links), memory.table("between", plan.pair_count))
    errors: list[Value | None] = [None] * plan.links if link_error is None else list(link_error)
    move(elimination, [*loads_of(torque), *errors], motion, memory)
    return _solution(elimination, motion)


def loads_of(torque: Numbers) -> list[Value | None]:
    """The load of each node from torques (nodes, F) or (nodes, 1): a row, a number, or None where there is none."""
    if torque.shape[1] > 1:
        return list(torque)
    return [value or None for value in torque[:, 0].tolist()]


def move(elimination: Elimination, load: list[Value | None], motion: Motion, memory: Memory) -> None:
    """Put into `motion` what a load on every unknown (a row, a number, or None) does; `load` is used up.

    The motion may be made of `ratio` and `passed` of the elimination, which are then used up too.
    """
    scratch = memory.row()
    carried, summed = memory.table("carried", len(load)), memory.table("summed", len(load))
    with np.errstate(all="ignore"):
        _forward_leaves(elimination, load, carried, summed)
        for record in elimination.core:
            carry_core(record, load, summed, scratch)
        for record in reversed(elimination.core):
            solve_core(elimination.plan, record, load, motion, memory)
        _back_leaves(elimination, (load, carried), motion, scratch)
    memory.give(scratch)


def _forward_leaves(elimination: Elimination, load: list[Value | None], carried: Numbers, summed: Numbers) -> None:
    """Carry the torques of the leaves to their parents; what a leaf carries stays in its row of `carried`."""
    plan = elimination.plan
    ratios, carries, sums = list(elimination.ratio), list(carried), list(summed)
    multiply, add = np.multiply, np.add
    for node, parent in zip(plan.leaf, plan.parent, strict=True):
        own, before = load[node], load[parent]
        if own is not None:
            more = multiply(ratios[node], own, carries[node])
            load[parent] = more if before is None else add(before, more, sums[parent])


def _back_leaves(
    elimination: Elimination,
    loads: tuple[list[Value | None], Numbers],
    motion: Motion,
    scratch: Numbers,
) -> None:
    """Angles of the leaves, and torques to their parents.

    x = ratio · x_parent + f/d, torque = ratio · f − passed · x_parent: the twist (f − excess · x_parent)/d times
    the weight.
    """
    plan = elimination.plan
    load, carries = loads[0], list(loads[1])
    ratios, passes, pivots = list(elimination.ratio), list(elimination.passed), list(elimination.pivot)
    angles, torques = list(motion.x), list(motion.between)
    multiply, divide, add, subtract, negative = np.multiply, np.divide, np.add, np.subtract, np.negative
    leaves = zip(
        plan.leaf,
        plan.parent,
        plan.leaf_pair,
        plan.leaf_first,
        elimination.leaf_weight,
        elimination.leaf_inverse,
        strict=True,
    )
    for node, parent, pair, first, weight, inverse in reversed(list(leaves)):
        here, above, torque, own, more = angles[node], angles[parent], torques[pair], load[node], carries[node]
        multiply(passes[pair], above, torque)
        multiply(ratios[node], above, here)
        if own is None:
            if first:
                negative(torque, torque)
            continue
        if first:
            subtract(more, torque, torque)
        else:
            subtract(torque, more, torque)
        if pivots:
            divide(own, pivots[node], scratch)
        elif inverse is None:
            multiply(more, np.asarray(1 / weight), scratch)
        else:
            multiply(own, inverse, scratch)
        add(here, scratch, here)


def respond(
    network: Network,
    plan: Plan,
    omega2: Floats,
    torque: Numbers,
    values: ElementValues | None = None,
) -> Solution:
    """Eliminate and solve at many points, in chunks that stay in the cache.

    omega2 (F,) [rad²/s²]; torque (nodes, F) or (nodes, 1) [N·m]; values as for `eliminate`.
    """
    points = len(omega2)
    if points <= CHUNK_POINTS:
        return solve(eliminate(network, plan, omega2, values), torque)
    whole: Solution | None = None
    for start in range(0, points, CHUNK_POINTS):
        cut = slice(start, start + CHUNK_POINTS)
        own = None if values is None else _cut(values, cut)
        here = torque if torque.shape[1] == 1 else torque[:, cut]
        part = solve(eliminate(network, plan, omega2[cut], own), here)
        whole = whole or _room_for(part, points)
        for name in ("angle", "spring_twist", "tie_twist", "link_torque"):
            getattr(whole, name)[:, cut] = getattr(part, name)
    assert whole is not None
    return whole


def _room_for(part: Solution, points: int) -> Solution:
    """Empty arrays like those of one chunk, for all points."""
    parts = (part.angle, part.spring_twist, part.tie_twist, part.link_torque)
    return Solution(*[np.empty((len(rows), points), dtype=rows.dtype) for rows in parts])


def _cut(values: ElementValues, cut: slice) -> ElementValues:
    def part(of: Values | None) -> Values | None:
        return None if of is None else [value[cut] if np.ndim(value) else value for value in of]

    return ElementValues(part(values.springs), part(values.ties), part(values.inertia), part(values.compliances))


def _solution(elimination: Elimination, motion: Motion) -> Solution:
    """Twists of the springs, from the torques of leaves and the twists of the core."""
    plan, x, between = elimination.plan, motion.x, motion.between
    if all(weight.ndim == 0 for weight in elimination.leaf_weight):
        leaves = list(plan.leaf_pair)
        between[leaves] = between[leaves] / np.array(elimination.leaf_weight)[:, None]
    else:
        for pair, weight in zip(plan.leaf_pair, elimination.leaf_weight, strict=True):
            np.divide(between[pair], weight, between[pair])
    joined = plan.spring_pair
    if joined == tuple(range(len(joined))):
        spring_twist = between[: len(joined)]
    else:
        spring_twist = between[list(joined)] if len(between) else np.zeros((len(joined), x.shape[1]), x.dtype)
        spring_twist[[pair == NO_PAIR for pair in joined]] = 0
    first = dict(zip(plan.leaf_pair, plan.leaf_first, strict=True))
    signs = zip(joined, plan.spring_sign, strict=True)
    for number in [number for number, (pair, sign) in enumerate(signs) if (sign > 0) != first.get(pair, True)]:
        np.negative(spring_twist[number], spring_twist[number])
    return Solution(x[: plan.nodes], spring_twist, x[elimination.tie_node], x[plan.nodes :])
