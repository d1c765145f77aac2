"""Solving with an elimination: angles, twists and torques for given torques, at every point.

The angle of an unknown u follows from those eliminated after it, and its twist against a neighbour j of its
own group never as the difference of two nearly equal angles (excess form: own derivation):

    x_u = (f_u + Σ weight_ui · x_i) / d
    twist_uj = (f_u − excess_u · x_j + Σ weight_ui · (x_i − x_j)) / d

Differences on the right are twists found before.
"""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.solve.elimination import (
    CHUNK_POINTS,
    CoreRecord,
    ElementValues,
    Elimination,
    Numbers,
    Value,
    Values,
    eliminate,
)
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
    plan, points = elimination.plan, elimination.pivot.shape[1]
    f = np.zeros((plan.nodes + plan.links, points), dtype=np.result_type(elimination.pivot, torque))
    f[: plan.nodes] = torque
    loaded = [True] * plan.nodes if torque.shape[1] > 1 else (torque[:, 0] != 0).tolist()
    if link_error is not None:
        f[plan.nodes :] = link_error
    x, twist = np.empty_like(f), np.empty((plan.pair_count, points), dtype=f.dtype)
    with np.errstate(all="ignore"):
        _forward_leaves(elimination, f, loaded)
        _solve_core(elimination, f, x, twist)
        _back_leaves(elimination, (f, loaded), x, twist)
    return _solution(plan, elimination.tie_node, x, twist)


def _forward_leaves(elimination: Elimination, f: Numbers, loaded: list[bool]) -> None:
    """Carry the torques of the leaves to their parents; `loaded` says which nodes have any, and grows."""
    plan = elimination.plan
    rows, scratch = list(f), np.empty(f.shape[1], dtype=f.dtype)
    multiply, add = np.multiply, np.add
    for node, parent, ratio in zip(plan.leaf, plan.parent, elimination.leaf_ratio, strict=True):
        if loaded[node]:
            above = rows[parent]
            multiply(ratio, rows[node], scratch)
            add(above, scratch, above)
            loaded[parent] = True


def _solve_core(elimination: Elimination, f: Numbers, x: Numbers, twist: Numbers) -> None:
    for record in elimination.core:
        carried = f[record.step.unknown] / record.pivot
        for other, weight in zip(record.step.neighbours, record.weights, strict=True):
            f[other] += weight * carried
    for record in reversed(elimination.core):
        _back_core(elimination.plan, record, f, x, twist)


def _back_leaves(elimination: Elimination, load: tuple[Numbers, list[bool]], x: Numbers, twist: Numbers) -> None:
    """Angles and twists of the leaves: x = ratio (x_parent + f/weight), twist = ratio (f − excess x_parent)/weight."""
    plan = elimination.plan
    f, loaded = load
    torques, angles, twists, excesses = list(f), list(x), list(twist), list(elimination.excess)
    scratch = np.empty(f.shape[1], dtype=f.dtype)
    multiply, add, subtract = np.multiply, np.add, np.subtract
    leaves = zip(plan.leaf, plan.parent, plan.leaf_pair, elimination.leaf_ratio, elimination.leaf_weight, strict=True)
    for node, parent, pair, ratio, weight in reversed(list(leaves)):
        here, above, inverse = angles[node], angles[parent], 1 / weight
        multiply(excesses[node], above, scratch)
        subtract(torques[node], scratch, scratch)
        multiply(scratch, ratio, scratch)
        multiply(scratch, inverse, twists[pair])
        if loaded[node]:
            multiply(torques[node], inverse, here)
            add(here, above, here)
            multiply(here, ratio, here)
        else:
            multiply(above, ratio, here)


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


def _solution(plan: Plan, tie_node: Ints, x: Numbers, twist: Numbers) -> Solution:
    signs = np.array(plan.spring_sign, dtype=np.intp)[:, None]
    joined = plan.spring_pair
    if joined == tuple(range(len(joined))):
        spring_twist = twist[: len(joined)]
    else:
        spring_twist = twist[list(joined)] if len(twist) else np.zeros((len(joined), x.shape[1]), x.dtype)
        spring_twist[[pair == NO_PAIR for pair in joined]] = 0
    np.multiply(spring_twist, signs, spring_twist)
    return Solution(x[: plan.nodes], spring_twist, x[tie_node], x[plan.nodes :])


def _back_core(plan: Plan, record: CoreRecord, f: Numbers, x: Numbers, twist: Numbers) -> None:
    """Angle (or torque) of one core unknown and its twists against the neighbours of its own group."""
    step, weights = record.step, record.weights
    groups = [plan.group[other] for other in step.neighbours]
    own = plan.group[step.unknown]
    base = f[step.unknown]
    for group in sorted(set(groups) - {own} if own >= 0 else set(groups)):
        base = base + _from_group(groups, group, record, x, twist)
    mine = [position for position, group in enumerate(groups) if group == own >= 0]
    total = base
    excess = record.excess[own] if own >= 0 else None
    parts: dict[int, Value] = {}
    for position in mine:
        at = x[step.neighbours[position]]
        total = total + weights[position] * at
        parts[position] = base if excess is None else base - excess * at
    x[step.unknown] = total / record.pivot
    for a, b, pair in step.fill:
        if a in parts and b in parts:
            parts[a] = parts[a] - weights[b] * twist[pair]
            parts[b] = parts[b] + weights[a] * twist[pair]
    for position, part in parts.items():
        twist[step.pairs[position]] = part / record.pivot


def _from_group(groups: list[int], group: int, record: CoreRecord, x: Numbers, twist: Numbers) -> Value:
    """Σ weight · x over the neighbours of another group, by their twists against the first of them."""
    step, weights = record.step, record.weights
    members = [position for position, other in enumerate(groups) if other == group]
    if group < 0 or len(members) == 1:
        return sum(weights[position] * x[step.neighbours[position]] for position in members)
    first = members[0]
    excess = record.excess[group]
    total: Value = 0 if excess is None else -excess * x[step.neighbours[first]]
    for a, b, pair in step.fill:
        if a == first and groups[b] == group:
            total = total - weights[b] * twist[pair]
    return total
