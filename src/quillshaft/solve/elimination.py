"""Elimination of K − ω²M on the graph, vectorised over frequencies, in the form that keeps small excesses.

Holzer's table (H. Holzer, Die Berechnung der Drehschwingungen, 1921) generalised to branches, loops and links
over several nodes. A diagonal of K − ω²M is never formed. Kept instead are the weight of every pair of
unknowns (minus the entry of the matrix) and the excess of every unknown, the row applied to a rigid state
(angle 1 on one group of nodes, 0 elsewhere); a pivot is the excess plus the weights to the own group. Every
unknown u with the pivot d then leaves behind

    weight_ij += weight_ui · weight_uj / d,    excess_i += weight_ui · excess_u / d

so that a soft or slow part is never lost against a stiff one. A torque link enters by its torque as one more
unknown with the diagonal −compliance. (Excess form: own derivation.)
"""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal
from typing import Any, TypeAlias

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.solve.plan import NO_PAIR, CoreStep, Plan

Numbers: TypeAlias = np.ndarray[Any, Any]  # float64 or complex128
Value = Any  # a number or an array over the points
Values = Numbers | Sequence[Value]

CHUNK_POINTS = 1024


@dataclass(frozen=True)
class ElementValues:
    """Values that stand in for those of a network; None keeps the network's own.

    springs, ties [N·m/rad], inertia [kg·m²] and compliances [rad/(N·m)] hold for each element one number or
    one (F,) array over the points, real or complex.
    """

    springs: Values | None = None
    ties: Values | None = None
    inertia: Values | None = None
    compliances: Values | None = None


OWN_VALUES = ElementValues()


@dataclass(frozen=True)
class CoreRecord:
    """What one step of the core leaves: pivot, weights to the neighbours, excess for each group (or None)."""

    step: CoreStep
    pivot: Value
    weights: tuple[Value, ...]
    excess: tuple[Value | None, ...]


@dataclass(frozen=True)
class Elimination:
    """K − ω²M eliminated at every point.

    tie_node      (ties,)       node of each tie
    pivot         (unknowns, F) nodes, then torque links
    excess        (nodes, F)    excess of the own group when the node was eliminated
    leaf_ratio    (leaves, F)   weight over pivot of each leaf, and leaf_weight its weight
    core          records of the core, in order
    growth        (F,) largest ratio of the magnitudes that form a pivot of the core to the pivot, which
                  magnifies rounding where loops or torque links join unknowns left; 1 if not watched
    """

    plan: Plan
    tie_node: Ints
    pivot: Numbers
    excess: Numbers
    leaf_ratio: Numbers
    leaf_weight: tuple[Value, ...]
    core: tuple[CoreRecord, ...]
    growth: Floats


def eliminate(
    network: Network,
    plan: Plan,
    omega2: Numbers,
    values: ElementValues | None = None,
    watch: bool = False,
) -> Elimination:
    """Eliminate K − ω²M at the points omega2 (F,) [rad²/s²], with other values than the network's if given.

    Pivots that are exactly zero make the results infinite or undefined there; nothing is raised. With `watch`
    the growth is recorded. Points of dtype object must be exact numbers, and then all values with them.
    """
    values = values or OWN_VALUES
    excess = _first_excess(network, omega2, values)
    exact = omega2.dtype == object
    dtype = np.dtype(object) if exact else _common_type(excess, values)
    excess = excess.astype(dtype, copy=False)
    pivot = np.empty((plan.nodes + plan.links, len(omega2)), dtype=dtype)
    ratio = np.empty((len(plan.leaf), len(omega2)), dtype=dtype)
    coefficients = [[Decimal(a) if exact else a for a in link.coefficients] for link in network.torque_links]
    work = _Work(
        excess=excess,
        pivot=pivot,
        weights=_first_weights(network, plan, values, coefficients),
        diagonal=_link_diagonals(network, values),
        states=[],
        growth=np.ones(len(omega2)),
        watch=watch,
        formed=[0.0] * plan.links,
    )
    with np.errstate(all="ignore"):
        _peel_leaves(plan, work, ratio)
        work.states = _states(network, plan, excess, coefficients)
        core = tuple([_core_record(plan, step, work) for step in plan.core])
    leaf_weight = tuple([work.weights[pair] for pair in plan.leaf_pair])
    return Elimination(plan, network.tie_node, pivot, excess, ratio, leaf_weight, core, work.growth)


@dataclass
class _Work:
    """The matrix while it is being eliminated.

    states[group][unknown] are the excesses of the core; formed[link] is the sum of the magnitudes that make
    up the diagonal of a torque link.
    """

    excess: Numbers
    pivot: Numbers
    weights: list[Value]
    diagonal: list[Value]
    states: list[list[Value | None]]
    growth: Floats
    watch: bool
    formed: list[Value]


def _common_type(excess: Numbers, values: ElementValues) -> np.dtype[Any]:
    given = [value for own in (values.springs, values.compliances) if own is not None for value in own]
    if np.iscomplexobj(excess) or any(np.iscomplexobj(value) for value in given):
        return np.dtype(complex)
    return np.dtype(float)


def _link_diagonals(network: Network, values: ElementValues) -> list[Value]:
    if values.compliances is not None:
        return [-compliance for compliance in values.compliances]
    return [-link.compliance_rad_per_nm for link in network.torque_links]


def _states(network: Network, plan: Plan, excess: Numbers, coefficients: list[list[Value]]) -> list[list[Value | None]]:
    """Excess of the core's unknowns for each group; None where it is zero.

    That of a torque link is the sum of its coefficients in the group: exactly zero for turning nodes,
    because the rated speeds satisfy the link.
    """
    states: list[list[Value | None]] = [[None] * (plan.nodes + plan.links) for _ in range(plan.groups)]
    for step in plan.core:
        if step.unknown < plan.nodes:
            states[plan.group[step.unknown]][step.unknown] = excess[step.unknown]
    if plan.resting_group >= 0:
        for number, link in enumerate(network.torque_links):
            terms = zip(link.nodes, coefficients[number], strict=True)
            resting = [a for node, a in terms if not network.turning[node]]
            states[plan.resting_group][plan.nodes + number] = sum(resting) if resting else None
    return states


def _first_excess(network: Network, omega2: Floats, values: ElementValues) -> Numbers:
    """Ties less ω² · inertia of each node, (nodes, F)."""
    if values.inertia is None:
        excess = np.multiply.outer(network.inertia_kgm2, -omega2)
    else:
        excess = np.array([-omega2 * value for value in values.inertia]).reshape(network.nodes, len(omega2))
    given = network.tie_nm_rad.tolist() if values.ties is None else values.ties
    for node, tie in zip(network.tie_node.tolist(), given, strict=True):
        if np.iscomplexobj(tie) and not np.iscomplexobj(excess):
            excess = excess.astype(complex)
        excess[node] += tie
    return excess


def _first_weights(network: Network, plan: Plan, values: ElementValues, coefficients: list[list[Value]]) -> list[Value]:
    """Weight of every pair before elimination: springs, minus link coefficients; None where it is zero."""
    weights: list[Value] = [None] * plan.pair_count
    springs = network.spring_nm_rad if values.springs is None else values.springs
    given = springs.tolist() if isinstance(springs, np.ndarray) and springs.ndim == 1 else springs
    for pair, spring in zip(plan.spring_pair, given, strict=True):
        if pair != NO_PAIR:
            before = weights[pair]
            weights[pair] = spring if before is None else before + spring
    for own, pairs in zip(coefficients, plan.link_pairs, strict=True):
        for pair, coefficient in zip(pairs, own, strict=True):
            before = weights[pair]
            weights[pair] = -coefficient if before is None else before - coefficient
    return weights


def _peel_leaves(plan: Plan, work: _Work, ratio: Numbers) -> None:
    rows, pivots, ratios = list(work.excess), list(work.pivot), list(ratio)
    scratch = np.empty(ratio.shape[1], dtype=ratio.dtype)
    add, divide, multiply = np.add, np.divide, np.multiply
    for node, parent, pair, r in zip(plan.leaf, plan.parent, plan.leaf_pair, ratios, strict=True):
        weight, here, above, d = work.weights[pair], rows[node], rows[parent], pivots[node]
        add(here, weight, d)
        divide(weight, d, r)
        multiply(r, here, scratch)
        add(above, scratch, above)


def _core_record(plan: Plan, step: CoreStep, work: _Work) -> CoreRecord:
    """Eliminate one unknown of the core from `work` and record it."""
    u, group = step.unknown, plan.group[step.unknown]
    here = tuple(work.weights[pair] for pair in step.pairs)
    states = tuple(of_group[u] for of_group in work.states)
    d: Value = work.diagonal[u - plan.nodes] if group < 0 else states[group]
    for other, weight in zip(step.neighbours, here, strict=True):
        if group >= 0 and plan.group[other] == group:
            d = d + weight
    if work.watch and here:
        _record_growth(plan, step, work, (d, states, here))
    work.pivot[u] = d
    if group >= 0:
        work.excess[u] = states[group]
    ratios = [weight / d for weight in here]
    for a, b, pair in step.fill:
        work.weights[pair] = _sum(work.weights[pair], ratios[a] * here[b])
    for other, weight, ratio in zip(step.neighbours, here, ratios, strict=True):
        if plan.group[other] < 0:
            less = ratio * weight
            work.diagonal[other - plan.nodes] = work.diagonal[other - plan.nodes] - less
            if work.watch:
                work.formed[other - plan.nodes] = work.formed[other - plan.nodes] + np.abs(less)
        for of_group, state in zip(work.states, states, strict=True):
            if state is not None:
                of_group[other] = _sum(of_group[other], ratio * state)
    return CoreRecord(step, d, here, states)


def _record_growth(
    plan: Plan, step: CoreStep, work: _Work, at: tuple[Value, tuple[Value | None, ...], tuple[Value, ...]]
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


def _sum(before: Value | None, more: Value) -> Value:
    return more if before is None else before + more
