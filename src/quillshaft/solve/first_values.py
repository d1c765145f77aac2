"""The matrix before elimination: the weight of every pair of unknowns and the excess of every node."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from quillshaft.graph.network import Network
from quillshaft.records import dataclass
from quillshaft.solve.memory import Memory, Numbers
from quillshaft.solve.plan import NO_PAIR, Plan

Value = Any  # a number or an array over the points
Values = Numbers | Sequence[Value]


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


def common_type(omega2: Numbers, values: ElementValues) -> np.dtype[Any]:
    """Complex where any of the values is, object where the points are exact numbers, else float."""
    if omega2.dtype == object:
        return np.dtype(object)
    own = (values.springs, values.ties, values.inertia, values.compliances)
    given = [value for part in own if part is not None for value in part]
    return np.dtype(complex if np.iscomplexobj(omega2) or any(map(_is_complex, given)) else float)


def _is_complex(value: Value) -> bool:
    return type(value) is complex or (type(value) is not float and np.iscomplexobj(value))


def link_diagonals(network: Network, values: ElementValues) -> list[Value]:
    """Minus the compliance of every torque link."""
    if values.compliances is not None:
        return [-compliance for compliance in values.compliances]
    return [-link.compliance_rad_per_nm for link in network.torque_links]


def first_weights(network: Network, plan: Plan, values: ElementValues, coefficients: list[list[Value]]) -> list[Value]:
    """Weight of every pair before elimination: springs, minus link coefficients; None where it is zero.

    Numbers come as arrays without axes: numpy takes them in a third of the time of Python's own.
    """
    weights: list[Value] = [None] * plan.pair_count
    springs = network.spring_nm_rad if values.springs is None else values.springs
    for pair, spring in zip(plan.spring_pair, _listed(springs), strict=True):
        if pair != NO_PAIR:
            before = weights[pair]
            weights[pair] = spring if before is None else before + spring
    for own, pairs in zip(coefficients, plan.link_pairs, strict=True):
        for pair, coefficient in zip(pairs, own, strict=True):
            before = weights[pair]
            weights[pair] = -coefficient if before is None else before - coefficient
    return [None if weight is None else np.asarray(weight) for weight in weights]


def whole_excess(network: Network, omega2: Numbers, values: ElementValues) -> list[Numbers]:
    """Ties less ω² · inertia of each node: rows (F,) that may be written over."""
    if values.inertia is None:
        rows = list(np.multiply.outer(network.inertia_kgm2, -omega2))
    else:
        rows = [-omega2 * value for value in values.inertia]
    for node, ties in _ties(network, values).items():
        for tie in ties:
            rows[node] = rows[node] + tie
    return rows


class ComplexExcess:
    """Ties less ω² · inertia of one node after the other, so that a row is still in the cache when it is needed."""

    def __init__(self, network: Network, omega2: Numbers, values: ElementValues, memory: Memory) -> None:
        self._memory = memory
        inertia = _listed(network.inertia_kgm2 if values.inertia is None else values.inertia)
        self._inertia = [np.asarray(value, dtype=complex) for value in inertia]
        self._ties = _ties(network, values)
        self._factor = (-omega2).astype(complex)

    def row(self, node: int) -> Numbers:
        """The row (F,) of a node, from the memory."""
        row = self._memory.row()
        np.multiply(self._factor, self._inertia[node], row)
        for tie in self._ties.get(node, ()):
            np.add(row, tie, row)
        return row


def _ties(network: Network, values: ElementValues) -> dict[int, list[Value]]:
    """Ties of the nodes that have any."""
    given = _listed(network.tie_nm_rad if values.ties is None else values.ties)
    ties: dict[int, list[Value]] = {}
    for node, tie in zip(network.tie_node.tolist(), given, strict=True):
        ties.setdefault(node, []).append(tie)
    return ties


def _listed(values: Values) -> Sequence[Value]:
    """The same, with Python's numbers in place of numpy's."""
    return list(values.tolist() if isinstance(values, np.ndarray) and values.ndim == 1 else values)
