"""Mean wind-up and mean torques under steady torques: K θ = T.

Every part of the spring graph without a tie can turn freely; it is grounded at one node by a helper spring,
which carries nothing because the sum of torques on the part is zero once the torque links' torques are on it.
On a tree every spring torque is then a plain sum of the torques beyond it.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.elimination import eliminate
from quillshaft.solve.motions import RigidParts, rigid_basis, rigid_motions, rigid_parts
from quillshaft.solve.plan import Plan, plan_elimination
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


def static_torques(network: Network, plan: Plan, torque_nm: Floats) -> Statics:
    """Solve K θ = T for the torques on the nodes torque_nm (nodes,) [N·m], + where they drive.

    Leave out ties that carry no mean torque (a grid) before calling. Raises ValueError when the torques do
    work on a rigid motion, numpy.linalg.LinAlgError when the torque links have no unique split.
    """
    bare = replace(network, torque_links=())
    bare_plan = plan_elimination(bare) if network.torque_links else plan
    parts = rigid_parts(network)
    _check_work(network, torque_nm)
    columns = _torque_columns(network, torque_nm)
    solution = _solve_grounded(bare, bare_plan, _ground_nodes(parts, bare_plan), columns)
    link_torque, turned = _link_torques(network, parts, columns, solution)
    shares = np.concatenate([[1.0], link_torque])
    twist = solution.spring_twist @ shares
    offset = np.zeros(len(parts.free) + 1)
    offset[: len(parts.free)] = turned
    position = {number: place for place, number in enumerate(parts.free)}
    own = [position.get(number, len(parts.free)) for number in parts.part]
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


def _check_work(network: Network, torque_nm: Floats) -> None:
    """Raise ValueError when the torques do work on a rigid motion."""
    for angle in rigid_motions(network):
        work, size = float(angle @ torque_nm), float(np.abs(angle * torque_nm).sum())
        if abs(work) > WORK_TOLERANCE * size:
            raise ValueError(
                f"the torques do not balance: on a rigid motion their sum is {work:.6g} N·m "
                f"of {size:.6g} N·m in all, it must be zero"
            )


def _ground_nodes(parts: RigidParts, plan: Plan) -> list[int]:
    """One node of each free part, the last in a plan without torque links: no other then sees the ground."""
    last = {parts.part[node]: node for node in (*plan.leaf, *(step.unknown for step in plan.core))}
    return [last[number] for number in parts.free]


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


def _link_torques(network: Network, parts: RigidParts, columns: Floats, solution: Solution) -> tuple[Floats, Floats]:
    """Return the torque of every torque link [N·m] and the extra angle of every free part [rad].

    Unknowns are those link torques and angles. Equations: each link's own, and balance of each free part that
    does not choose a rigid motion; a part that does stays where it is grounded.
    """
    links = len(network.torque_links)
    turned = np.zeros(len(parts.free))
    if not links:
        return np.zeros(0), turned
    _, chosen = rigid_basis(parts, network.rigid_motions)
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
        right[row] = columns[np.array(parts.part) == parts.free[place], 0].sum()
    scale = 1.0 / np.sqrt(np.maximum(np.abs(np.diag(matrix)), 0.0) + (np.diag(matrix) == 0))
    found = scale * np.linalg.solve(matrix * np.outer(scale, scale), right * scale)
    turned[moving] = found[links:]
    return found[:links], turned
