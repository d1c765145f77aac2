"""The core: what loops and torque links leave, eliminated one unknown after the other and solved for in reverse.

The formulas are those of `elimination` and `substitution`. A step joins its neighbours to one another, and what is
kept of a pair is its twist, because a pair filled in has no spring whose torque it could be.
"""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats
from quillshaft.records import dataclass
from quillshaft.solve.first_values import Value
from quillshaft.solve.memory import Memory, Numbers
from quillshaft.solve.plan import CoreStep, Plan


@dataclass
class Work:
    """The matrix while it is being eliminated.

    states[group][unknown] are the excesses of the core; formed[link] is the sum of the magnitudes that make
    up the diagonal of a torque link; `filled` are the pairs whose weights are rows of this elimination.
    """

    pivot: Numbers
    weights: list[Value]
    diagonal: list[Value]
    states: list[list[Value | None]]
    growth: Floats
    watch: bool
    formed: list[Value]
    filled: set[int]


@dataclass(frozen=True)
class CoreRecord:
    """What one step of the core leaves.

    pivot     or instead its inverse where numbers are complex: multiplying is quicker than dividing there
    weights   to the neighbours, and their ratios to the pivot
    excess    for each group, or None where it is zero
    """

    step: CoreStep
    pivot: Value
    inverse: Value
    weights: tuple[Value, ...]
    ratios: tuple[Value, ...]
    excess: tuple[Value | None, ...]

    def over_pivot(self, value: Value, into: Numbers) -> Numbers:
        """The value divided by the pivot."""
        if self.inverse is None:
            np.divide(value, self.pivot, into)
        else:
            np.multiply(value, self.inverse, into)
        return into


def eliminate_core(plan: Plan, step: CoreStep, work: Work, memory: Memory) -> CoreRecord:
    """Eliminate one unknown of the core from `work` and record it."""
    u, group = step.unknown, plan.group[step.unknown]
    here = tuple(work.weights[pair] for pair in step.pairs)
    states = tuple(of_group[u] for of_group in work.states)
    d: Value = work.diagonal[u - plan.nodes] if group < 0 else states[group]
    with_sign = len(work.pivot) > 0
    own = d if with_sign and not here else memory.row()
    for other, weight in zip(step.neighbours, here, strict=True):
        if group >= 0 and plan.group[other] == group:
            d = np.add(d, weight, own)
    if work.watch and here:
        _record_growth(plan, step, work, (d, states, here))
    if with_sign:
        work.pivot[u] = d
        pivot, inverse, ratios = d, None, tuple([np.divide(weight, d, memory.row()) for weight in here])
    else:
        pivot, inverse = None, np.reciprocal(d, own)
        ratios = tuple([np.multiply(weight, inverse, memory.row()) for weight in here])
    for a, b, pair in step.fill:
        work.weights[pair] = _sum(work.weights[pair], ratios[a], here[b], memory, pair in work.filled)
        work.filled.add(pair)
    for other, weight, ratio in zip(step.neighbours, here, ratios, strict=True):
        if plan.group[other] < 0:
            less = ratio * weight
            work.diagonal[other - plan.nodes] = work.diagonal[other - plan.nodes] - less
            if work.watch:
                work.formed[other - plan.nodes] = work.formed[other - plan.nodes] + np.abs(less)
        for of_group, state in zip(work.states, states, strict=True):
            if state is not None:
                before = of_group[other]
                of_group[other] = _sum(before, ratio, state, memory, isinstance(before, np.ndarray))
    return CoreRecord(step, pivot, inverse, here, ratios, states)


def _record_growth(
    plan: Plan, step: CoreStep, work: Work, at: tuple[Value, tuple[Value | None, ...], tuple[Value, ...]]
) -> None:
    """Note how far the magnitudes that form a pivot exceed it: its inverse magnifies rounding so much."""
    d, states, weights = at
    group = plan.group[step.unknown]
    magnitude: Value
    if group < 0:
        magnitude = work.formed[step.unknown - plan.nodes]
    else:
        excess: Value = states[group]
        magnitude = np.abs(excess)
        for other, weight in zip(step.neighbours, weights, strict=True):
            if plan.group[other] == group:
                magnitude = magnitude + np.abs(weight)
    work.growth = np.maximum(work.growth, magnitude / np.abs(d))


def _sum(before: Value | None, a: Value, b: Value, memory: Memory, own: bool) -> Numbers:
    """before + a · b, in the row of `before` if that may be written over, else in one of its own."""
    product = np.multiply(a, b, memory.row())
    if before is None:
        return product
    np.add(before, product, before if own else product)
    if own:
        memory.give(product)
    return before if own else product


@dataclass(frozen=True)
class Motion:
    """What back-substitution finds, at every point.

    x        (unknowns, F) angles of the nodes [rad], then torques of the torque links [N·m]
    between  (pairs, F) of the pair of a leaf the torque in the direction of its last spring [N·m], of a pair of
             the core the twist of the unknown eliminated first against the other [rad]
    """

    x: Numbers
    between: Numbers


def carry_core(record: CoreRecord, load: list[Value | None], summed: Numbers, product: Numbers) -> None:
    """Carry the load of an unknown of the core to its neighbours, into their rows of `summed`."""
    own = load[record.step.unknown]
    if own is None:
        return
    for other, ratio in zip(record.step.neighbours, record.ratios, strict=True):
        before = load[other]
        if before is None:
            load[other] = np.multiply(ratio, own, summed[other])
        else:
            load[other] = np.add(before, np.multiply(ratio, own, product), summed[other])


def solve_core(plan: Plan, record: CoreRecord, load: list[Value | None], motion: Motion, memory: Memory) -> None:
    """Angle (or torque) of one core unknown and its twists against the neighbours of its own group."""
    step, own = record.step, plan.group[record.step.unknown]
    groups = [plan.group[other] for other in step.neighbours]
    total = load[step.unknown]
    for group in sorted(set(groups) - {own} if own >= 0 else set(groups)):
        more = _from_group(groups, group, record, motion)
        total = more if total is None else total + more
    mine = [position for position, group in enumerate(groups) if group == own >= 0]
    base = None if total is None else record.over_pivot(total, memory.row())
    x, product = motion.x[step.unknown], memory.row()
    if base is not None or not mine:
        x[...] = 0 if base is None else base
    for position in mine:
        first = base is None and position == mine[0]
        np.multiply(record.ratios[position], motion.x[step.neighbours[position]], x if first else product)
        if not first:
            np.add(x, product, x)
    if mine:
        _twists(record, own, mine, motion, (base, product))
    for row in (product, base):
        if row is not None:
            memory.give(row)


def _twists(
    record: CoreRecord, own: int, mine: list[int], motion: Motion, rows: tuple[Numbers | None, Numbers]
) -> None:
    """Twists of a core unknown against its neighbours at positions `mine`; rows: load over pivot, one to spare."""
    step, ratios = record.step, record.ratios
    base, product = rows
    parts = {position: motion.between[step.pairs[position]] for position in mine}
    excess = record.over_pivot(record.excess[own], product)
    np.negative(excess, excess)
    for position, part in parts.items():
        np.multiply(excess, motion.x[step.neighbours[position]], part)
        if base is not None:
            np.add(part, base, part)
    for a, b, pair in step.fill:
        if a in parts and b in parts:
            np.multiply(ratios[b], motion.between[pair], product)
            np.subtract(parts[a], product, parts[a])
            np.multiply(ratios[a], motion.between[pair], product)
            np.add(parts[b], product, parts[b])


def _from_group(groups: list[int], group: int, record: CoreRecord, motion: Motion) -> Value:
    """Σ weight · x over the neighbours of another group, by their twists against the first of them."""
    step, weights, x, twist = record.step, record.weights, motion.x, motion.between
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
