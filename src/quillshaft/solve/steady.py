"""Steady forced response: the damped network eliminated once at every point, solved for any number of loads.

Every point is a circular frequency ω with torques Re(T e^{jωt}); springs stand for k (1 + jη) + jωc. Where a pivot is
exactly zero, as at a resonance without damping, results are infinite or undefined, and nothing is raised.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.solve.core import Motion
from quillshaft.solve.damped_state import Damping
from quillshaft.solve.dynamic_values import dynamic_values
from quillshaft.solve.elimination import Elimination, eliminate
from quillshaft.solve.first_values import ElementValues, Value, Values
from quillshaft.solve.memory import Memory, Numbers
from quillshaft.solve.plan import NO_PAIR, Plan
from quillshaft.solve.substitution import move

IN_CACHE, IN_MEMORY = 2**19, 2**23
"""Complex numbers of a chunk: 8 MB about fit the cache, more than 128 MB are never held."""
FEWEST, MOST = 2048, 8192
"""Points of a chunk: fewer would be quicker to work than to call for, more gain nothing."""


@dataclass(frozen=True)
class Steady:
    """Complex amplitudes at every point, referred; torques hold stiffness and damping together.

    angle (nodes, F) [rad]; spring_torque (springs, F), tie_torque (ties, F), link_torque (torque links, F) [N·m]
    spring_ends (springs, 2) and what each spring weighs, k (1 + jη) + jωc [N·m/rad], give its twist
    """

    angle: Numbers
    spring_torque: Numbers
    tie_torque: Numbers
    link_torque: Numbers
    spring_ends: Ints
    spring_weight: tuple[Value, ...]

    @property
    def spring_twist(self) -> Numbers:
        """Twist (springs, F) [rad] of each spring, worked out when it is asked for."""
        twist = np.empty_like(self.spring_torque)
        for torque, weight, (a, b), into in zip(
            self.spring_torque, self.spring_weight, self.spring_ends.tolist(), twist, strict=True
        ):
            if type(weight) is np.ndarray:
                np.divide(torque, weight, into)
            elif weight:
                np.multiply(torque, 1 / weight, into)
            else:
                np.subtract(self.angle[a], self.angle[b], into)
        return twist


def steady_chunks(
    network: Network,
    damping: Damping,
    plan: Plan,
    omega_rad_s: Floats,
    loads_nm: Sequence[Numbers],
    springs_nm_rad: Numbers | None = None,
) -> Iterator[tuple[slice, list[Steady]]]:
    """(points, one `Steady` for each load) in chunks of the circular frequencies (F,), above 0.

    A load is (nodes, F) or (nodes, 1) [N·m]. springs_nm_rad (springs, F) is the stiffness at each point where it
    follows speed; complex, it holds the loss factors too. Memory does not grow with F: a chunk's results hold until
    the next chunk is asked for.
    """
    memory, own = Memory(), Memory()
    loads = [[row if isinstance(row, np.ndarray) or row else None for row in _rows(load)] for load in loads_nm]
    no_errors: list[Value | None] = [None] * plan.links
    springs = None if springs_nm_rad is None else _rows(springs_nm_rad)
    points = _points(plan, len(loads))
    for start in range(0, len(omega_rad_s), points):
        cut = slice(start, start + points)
        omega = omega_rad_s[cut]
        own.begin(len(omega), np.dtype(complex))
        values = dynamic_values(network, damping, 1j * omega, None if springs is None else _at(springs, cut), own)
        elimination = eliminate(network, plan, (omega**2).astype(complex), values, memory=memory)
        found = []
        for number, load in enumerate(loads):
            tables = elimination.ratio, elimination.passed  # used up by the last load, which saves memory and time
            if number + 1 < len(loads):
                tables = memory.table(f"x{number}", len(tables[0])), memory.table(f"b{number}", len(tables[1]))
            motion = Motion(*tables)
            move(elimination, [*_at(load, cut), *no_errors], motion, memory)
            found.append(_steady(network, elimination, motion, values))
        yield slice(start, start + len(omega)), found


def _points(plan: Plan, loads: int) -> int:
    """Points of a chunk: as many as the cache holds, within limits."""
    numbers = (plan.nodes + plan.links) * (1 + loads)
    return max(1, min(max(IN_CACHE // numbers, FEWEST), MOST, IN_MEMORY // numbers))


def _rows(values: Numbers) -> list[Value]:
    """Each row of values (rows, F) or (rows, 1), those that are the same at all points as one number."""
    if not values.shape[1]:
        return list(values)
    varies = (values != values[:, :1]).any(axis=1).tolist()
    return [row if own else row[0].item() for row, own in zip(values, varies, strict=True)]


def _at(rows: list[Value], cut: slice) -> list[Value]:
    return [row[cut] if isinstance(row, np.ndarray) else row for row in rows]


def _steady(network: Network, elimination: Elimination, motion: Motion, values: ElementValues) -> Steady:
    plan = elimination.plan
    springs = values.springs or ()
    torque = _spring_torques(elimination, motion, springs)
    ties = [motion.x[node] * tie for node, tie in zip(network.tie_node.tolist(), values.ties or (), strict=True)]
    return Steady(
        motion.x[: plan.nodes],
        torque,
        np.array(ties, dtype=complex).reshape(len(ties), torque.shape[1]),
        motion.x[plan.nodes :],
        network.spring_ends,
        tuple(springs),
    )


def _spring_torques(elimination: Elimination, motion: Motion, springs: Values) -> Numbers:
    """(springs, F) torques; where no two springs share a pair, they take the place of what is between the unknowns."""
    plan, between = elimination.plan, motion.between
    leaves = dict(zip(plan.leaf_pair, zip(plan.leaf_first, elimination.leaf_weight, strict=True), strict=True))
    alone = plan.spring_pair == tuple(range(len(springs)))
    torques = between[: len(springs)] if alone else np.zeros((len(springs), between.shape[1]), dtype=complex)
    for torque, pair, sign, value in zip(torques, plan.spring_pair, plan.spring_sign, springs, strict=True):
        if pair == NO_PAIR or (alone and pair in leaves):
            continue
        if pair in leaves:
            first, weight = leaves[pair]
            share = value / weight if np.any(weight) else 0.0
            np.multiply(between[pair], share if first == (sign > 0) else -share, torque)
        else:
            np.multiply(between[pair], value if sign > 0 else -value, torque)
    return torques


def steady_response(
    network: Network,
    damping: Damping,
    plan: Plan,
    omega_rad_s: Floats,
    loads_nm: Sequence[Numbers],
    springs_nm_rad: Numbers | None = None,
) -> list[Steady]:
    """All points of `steady_chunks` together: one `Steady` for each load."""
    springs = None if springs_nm_rad is None else _rows(springs_nm_rad)
    weight = tuple(dynamic_values(network, damping, 1j * omega_rad_s, springs).springs or ())
    sizes = (plan.nodes, len(weight), len(network.tie_node), plan.links)
    whole = [[np.empty((size, len(omega_rad_s)), dtype=complex) for size in sizes] for _ in loads_nm]
    for cut, found in steady_chunks(network, damping, plan, omega_rad_s, loads_nm, springs_nm_rad):
        for part, tables in zip(found, whole, strict=True):
            parts = (part.angle, part.spring_torque, part.tie_torque, part.link_torque)
            for table, rows in zip(tables, parts, strict=True):
                table[:, cut] = rows
    return [Steady(angle, spring, tie, link, network.spring_ends, weight) for angle, spring, tie, link in whole]
