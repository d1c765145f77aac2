"""Mean wind-up and mean torques under steady torques: K θ = T.

Every part of the spring graph without a tie can turn freely; it is grounded at one node by a helper spring,
which carries nothing because the sum of torques on the part is zero once the torque links' torques are on it.
On a tree every spring torque is then a plain sum of the torques beyond it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.solve.elimination import eliminate
from quillshaft.solve.plan import Plan, plan_elimination, spring_parts
from quillshaft.solve.substitution import Solution, solve

WORK_TOLERANCE = 1e-9  # work on a rigid motion over the sum of the magnitudes of its terms


@dataclass(frozen=True)
class Statics:
    """Angles and torques under steady torques, referred.

    angle          (nodes,) [rad], one node of each free rigid motion at zero
    spring_twist   (springs,) angle of the first end less that of the second [rad]
    spring_torque  (springs,) [N·m]
    tie_torque     (ties,) [N·m]
    link_torque    (torque links,) [N·m]
    """

    angle: Floats
    spring_twist: Floats
    spring_torque: Floats
    tie_torque: Floats
    link_torque: Floats


@dataclass(frozen=True)
class _Parts:
    """Parts of the spring graph: number of each node's part, the free parts (no tie) and one node of each.

    conditions (torque links, free parts): sum of the coefficients of each link over each free part.
    """

    part: Ints
    free: list[int]
    ground: list[int]
    conditions: Floats


def static_torques(network: Network, plan: Plan, torque_nm: Floats) -> Statics:
    """Solve K θ = T for the torques on the nodes torque_nm (nodes,) [N·m], + where they drive.

    Leave out ties that carry no mean torque (a grid) before calling. Raises ValueError when the torques do
    work on a rigid motion, numpy.linalg.LinAlgError when the torque links have no unique split.
    """
    bare = replace(network, torque_links=())
    bare_plan = plan_elimination(bare) if network.torque_links else plan
    parts = _parts(network, bare_plan)
    _check_work(network, parts, torque_nm)
    columns = _torque_columns(network, torque_nm)
    solution = _solve_grounded(bare, bare_plan, parts.ground, columns)
    link_torque, turned = _link_torques(network, parts, columns, solution)
    shares = np.concatenate([[1.0], link_torque])
    twist = solution.spring_twist @ shares
    offset = np.zeros(len(parts.free) + 1)
    offset[: len(parts.free)] = turned
    position = {number: place for place, number in enumerate(parts.free)}
    own = [position.get(number, len(parts.free)) for number in parts.part.tolist()]
    return Statics(
        angle=solution.angle @ shares + offset[own],
        spring_twist=twist,
        spring_torque=network.spring_nm_rad * twist,
        tie_torque=network.tie_nm_rad * (solution.tie_twist @ shares),
        link_torque=link_torque,
    )


def _torque_columns(network: Network, torque_nm: Floats) -> Floats:
    """The torques on the nodes, then those a torque link gives back at unit torque, (nodes, 1 + links)."""
    columns = np.zeros((network.nodes, 1 + len(network.torque_links)))
    columns[:, 0] = torque_nm
    for column, link in enumerate(network.torque_links, start=1):
        np.add.at(columns[:, column], list(link.nodes), -np.array(link.coefficients))
    return columns


def _parts(network: Network, plan: Plan) -> _Parts:
    """Find the parts; each is grounded at its last node in the plan (which knows no torque links)."""
    part = spring_parts(network)
    tied = {part[node] for node in network.tie_node.tolist()}
    last = {part[node]: node for node in (*plan.leaf, *(step.unknown for step in plan.core))}
    free = [number for number in last if number not in tied]
    ground = [last[number] for number in free]
    conditions = np.zeros((len(network.torque_links), len(free)))
    column = {number: place for place, number in enumerate(free)}
    for row, link in zip(conditions, network.torque_links, strict=True):
        for node, coefficient in zip(link.nodes, link.coefficients, strict=True):
            if part[node] in column:
                row[column[part[node]]] += coefficient
    return _Parts(np.array(part, dtype=np.intp), free, ground, conditions)


def _rigid_basis(network: Network, parts: _Parts) -> tuple[Floats, list[int]]:
    """Return the rigid motions (free parts, rigid motions) and the positions of the parts that choose them.

    Elimination with full pivoting, stopped at the rank that the number of rigid motions says.
    """
    left, size = parts.conditions.copy(), len(parts.free)
    dependent: list[int] = []
    rows: list[int] = []
    for _ in range(size - network.rigid_motions):
        candidates = np.abs(left)
        candidates[rows] = 0.0
        row, column = np.unravel_index(int(np.argmax(candidates)), left.shape)
        left[row] /= left[row, column]
        for other in range(len(left)):
            if other != row:
                left[other] -= left[other, column] * left[row]
        rows.append(int(row))
        dependent.append(int(column))
    chosen = [place for place in range(size) if place not in dependent]
    basis = np.zeros((size, len(chosen)))
    basis[chosen, range(len(chosen))] = 1.0
    basis[dependent] = -left[np.ix_(rows, chosen)]
    return basis, chosen


def _check_work(network: Network, parts: _Parts, torque_nm: Floats) -> None:
    """Raise ValueError when the torques do work on a rigid motion."""
    basis, _ = _rigid_basis(network, parts)
    column = {number: place for place, number in enumerate(parts.free)}
    for motion in basis.T:
        angle = np.array([motion[column[p]] if p in column else 0.0 for p in parts.part.tolist()])
        work, size = float(angle @ torque_nm), float(np.abs(angle * torque_nm).sum())
        if abs(work) > WORK_TOLERANCE * size:
            raise ValueError(
                f"the torques do not balance: on a rigid motion their sum is {work:.6g} N·m "
                f"of {size:.6g} N·m in all, it must be zero"
            )


def _solve_grounded(network: Network, plan: Plan, ground: list[int], columns: Floats) -> Solution:
    """Solve without torque links, every free part grounded at one node by a helper spring."""
    known = [*network.spring_nm_rad.tolist(), *network.tie_nm_rad.tolist(), 1.0]
    helper = np.full(len(ground), max(known))
    grounded = replace(
        network,
        tie_node=np.concatenate([network.tie_node, np.array(ground, dtype=np.intp)]),
        tie_nm_rad=np.concatenate([network.tie_nm_rad, helper]),
    )
    solution = solve(eliminate(grounded, plan, np.zeros(columns.shape[1])), columns)
    return replace(solution, tie_twist=solution.tie_twist[: len(network.tie_node)])


def _link_torques(
    network: Network, parts: _Parts, columns: Floats, solution: Solution
) -> tuple[Floats, Floats]:
    """Return the torque of every torque link [N·m] and the extra angle of every free part [rad].

    Unknowns are those link torques and angles. Equations: each link's own, and balance of each free part that
    does not choose a rigid motion; a part that does stays where it is grounded.
    """
    links = len(network.torque_links)
    turned = np.zeros(len(parts.free))
    if not links:
        return np.zeros(0), turned
    chosen = _rigid_basis(network, parts)[1]
    moving = [place for place in range(len(parts.free)) if place not in chosen]
    size = links + len(moving)
    matrix, right = np.zeros((size, size)), np.zeros(size)
    for row, link in enumerate(network.torque_links):
        stretch = np.array(link.coefficients) @ solution.angle[list(link.nodes)]
        matrix[row, :links] = stretch[1:]
        matrix[row, row] -= link.compliance_rad_per_nm
        right[row] = -stretch[0]
    matrix[:links, links:] = parts.conditions[:, moving]
    matrix[links:, :links] = parts.conditions[:, moving].T
    for row, place in enumerate(moving, start=links):
        right[row] = columns[parts.part == parts.free[place], 0].sum()
    scale = 1.0 / np.sqrt(np.maximum(np.abs(np.diag(matrix)), 0.0) + (np.diag(matrix) == 0))
    found = scale * np.linalg.solve(matrix * np.outer(scale, scale), right * scale)
    turned[moving] = found[links:]
    return found[:links], turned
