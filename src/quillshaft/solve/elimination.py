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

from decimal import Decimal

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.solve.core import CoreRecord, Work, eliminate_core
from quillshaft.solve.first_values import (
    OWN_VALUES,
    ComplexExcess,
    ElementValues,
    Value,
    common_type,
    first_weights,
    link_diagonals,
    whole_excess,
)
from quillshaft.solve.memory import Memory, Numbers
from quillshaft.solve.plan import Plan

CHUNK_POINTS = 1024


@dataclass(frozen=True)
class Elimination:
    """K − ω²M eliminated at every point.

    tie_node      (ties,)       node of each tie
    pivot         (unknowns, F) nodes, then torque links; no rows where numbers are complex, and have no sign
    ratio         (unknowns, F) weight over pivot in the row of each leaf; anything in the others
    passed        (pairs, F)    ratio · excess in the row of each leaf's pair: what its parent's excess was given
    leaf_weight   weight of each leaf, in order; one number is an array without axes
    leaf_inverse  1 over pivot of each leaf, kept with complex numbers where the weight is not one number: there
                  ratio over weight would take another division
    core          records of the core, in order
    growth        (F,) largest ratio of the magnitudes that form a pivot of the core to the pivot, which
                  magnifies rounding where loops or torque links join unknowns left; 1 if not watched
    """

    plan: Plan
    tie_node: Ints
    pivot: Numbers
    ratio: Numbers
    passed: Numbers
    leaf_weight: tuple[Value, ...]
    leaf_inverse: tuple[Value | None, ...]
    core: tuple[CoreRecord, ...]
    growth: Floats


def eliminate(
    network: Network,
    plan: Plan,
    omega2: Numbers,
    values: ElementValues | None = None,
    watch: bool = False,
    memory: Memory | None = None,
) -> Elimination:
    """Eliminate K − ω²M at the points omega2 (F,) [rad²/s²], with other values than the network's if given.

    Pivots that are exactly zero make the results infinite or undefined there; nothing is raised. With `watch`
    the growth is recorded. Points of dtype object must be exact numbers, and then all values with them. What is
    worked in a `memory` holds until the next elimination there.
    """
    values, points = values or OWN_VALUES, len(omega2)
    dtype = common_type(omega2, values)
    unknowns, with_sign = plan.nodes + plan.links, dtype.kind != "c"
    memory = memory or Memory()
    memory.begin(points, dtype)
    number = Decimal if dtype.kind == "O" else float
    coefficients: list[list[Value]] = [[number(a) for a in link.coefficients] for link in network.torque_links]
    work = Work(
        pivot=np.empty((unknowns if with_sign else 0, points), dtype=dtype),
        weights=first_weights(network, plan, values, coefficients),
        diagonal=link_diagonals(network, values),
        states=[],
        growth=np.ones(points),
        watch=watch,
        formed=[0.0] * plan.links,
        filled=set(),
    )
    ratio, passed = memory.table("ratio", unknowns), memory.table("passed", plan.pair_count)
    inverse: tuple[Value | None, ...] = (None,) * len(plan.leaf)
    with np.errstate(all="ignore"):
        if with_sign:
            rows: list[Numbers] | dict[int, Numbers]
            rows = whole_excess(network, omega2, values)
            _peel(plan, work, (ratio, passed), rows)
        else:
            first = ComplexExcess(network, omega2, values, memory)
            rows, inverse = _peel_complex(plan, work, (ratio, passed), first, memory)
        work.states = _states(network, plan, rows, coefficients)
        core = tuple([eliminate_core(plan, step, work, memory) for step in plan.core])
    weight = tuple([work.weights[pair] for pair in plan.leaf_pair])
    return Elimination(plan, network.tie_node, work.pivot, ratio, passed, weight, inverse, core, work.growth)


def _states(
    network: Network, plan: Plan, excess: dict[int, Numbers] | list[Numbers], coefficients: list[list[Value]]
) -> list[list[Value | None]]:
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


def _peel(plan: Plan, work: Work, tables: tuple[Numbers, Numbers], rows: list[Numbers]) -> None:
    """Eliminate the leaves from `rows` of excess, and put ratio and passed into the tables."""
    ratios, passes, pivots = list(tables[0]), list(tables[1]), list(work.pivot)
    add, divide, multiply = np.add, np.divide, np.multiply
    for node, parent, pair in zip(plan.leaf, plan.parent, plan.leaf_pair, strict=True):
        weight, here, above = work.weights[pair], rows[node], rows[parent]
        d, ratio, passed = pivots[node], ratios[node], passes[pair]
        add(here, weight, d)
        divide(weight, d, ratio)
        multiply(ratio, here, passed)
        add(above, passed, above)


def _peel_complex(
    plan: Plan, work: Work, tables: tuple[Numbers, Numbers], first: ComplexExcess, memory: Memory
) -> tuple[dict[int, Numbers], tuple[Value | None, ...]]:
    """The same for complex numbers, by reciprocals; rows of excess come and go. Rows left, and inverses kept."""
    ratios, passes = list(tables[0]), list(tables[1])
    rows: dict[int, Numbers] = {}
    add, multiply, reciprocal, scratch = np.add, np.multiply, np.reciprocal, memory.row()
    inverses = []
    for node, parent, pair in zip(plan.leaf, plan.parent, plan.leaf_pair, strict=True):
        weight, ratio, passed = work.weights[pair], ratios[node], passes[pair]
        here = rows.pop(node) if node in rows else first.row(node)
        above = rows[parent] if parent in rows else rows.setdefault(parent, first.row(parent))
        own = memory.row() if weight.ndim or not weight else None
        inverses.append(own)
        d = scratch if own is None else own
        add(here, weight, d)
        reciprocal(d, d)
        multiply(weight, d, ratio)
        multiply(ratio, here, passed)
        add(above, passed, above)
        memory.give(here)
    left = [step.unknown for step in plan.core if step.unknown < plan.nodes]
    return {node: rows[node] if node in rows else first.row(node) for node in left}, tuple(inverses)
