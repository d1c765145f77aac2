"""Elimination in long decimal arithmetic, for the few points where rounding would be magnified too far.

In a network with equal branches in a loop, a natural frequency can make a pivot vanish long before the last
one. Its inverse then magnifies the rounding of everything it fills in. Such points are recognised by their
growth and eliminated again with 150 decimal digits, by the same code.
"""

from __future__ import annotations

from decimal import MAX_EMAX, MIN_EMIN, Context, Decimal, localcontext

import numpy as np

from quillshaft.graph.network import Bools, Floats, Ints, Network
from quillshaft.solve.elimination import CHUNK_POINTS, Elimination, eliminate
from quillshaft.solve.first_values import ElementValues
from quillshaft.solve.memory import Numbers
from quillshaft.solve.plan import Plan
from quillshaft.solve.substitution import Solution, solve

LONG = Context(prec=150, Emax=MAX_EMAX, Emin=MIN_EMIN, traps=[])
NUDGE = Decimal("1e-25")  # relative, in ω²: no pivot is exactly zero there
GROWTH_LIMIT = 1e4


def count_below(network: Network, plan: Plan, omega2: Floats) -> Ints:
    """Return the number of elastic modes below each omega2 (F,) [rad²/s²], as (F,) integers.

    Negative pivots less torque links less rigid motions (Sylvester's law of inertia). A mode exactly at a
    point counts as below.
    """
    counts = np.zeros(len(omega2), dtype=np.intp)
    for start in range(0, len(omega2), CHUNK_POINTS):
        cut = slice(start, start + CHUNK_POINTS)
        counts[cut] = _count_chunk(network, plan, omega2[cut])
    return np.where(omega2 > 0, counts, 0)


def _count_chunk(network: Network, plan: Plan, omega2: Floats) -> Ints:
    elimination = eliminate(network, plan, omega2, watch=True)
    negative: Ints = np.count_nonzero(elimination.pivot < 0, axis=0)
    doubtful = _doubtful(elimination) | plan.precisely
    if doubtful.any():
        with localcontext(LONG):
            pivot = _eliminate_precisely(network, plan, omega2[doubtful]).pivot
            negative[doubtful] = np.count_nonzero(pivot < 0, axis=0)
    return negative - (plan.links + network.rigid_motions)


def solve_at(network: Network, plan: Plan, omega2: Floats, torque: Floats) -> Solution:
    """Solve (K − ω²M) θ = torque (nodes, F) [N·m] at points that may lie next to a natural frequency."""
    elimination = eliminate(network, plan, omega2, watch=True)
    solution = solve(elimination, torque)
    doubtful = _doubtful(elimination) | plan.precisely
    if doubtful.any():
        with localcontext(LONG):
            precise = _eliminate_precisely(network, plan, omega2[doubtful])
            put(solution, doubtful, solve(precise, _decimals(torque[:, doubtful])))
    return solution


def put(solution: Solution, where: Bools | Ints | slice, other: Solution) -> None:
    """Write the columns of another solution into a solution, in place."""
    solution.angle[:, where] = other.angle.astype(float)
    solution.spring_twist[:, where] = other.spring_twist.astype(float)
    solution.tie_twist[:, where] = other.tie_twist.astype(float)
    solution.link_torque[:, where] = other.link_torque.astype(float)


def _doubtful(elimination: Elimination) -> Bools:
    """Points with much growth, or with a pivot that is zero or not finite."""
    pivot, growth = elimination.pivot, elimination.growth
    sound = np.isfinite(pivot).all(axis=0) & pivot.all(axis=0)
    doubtful: Bools = ~(sound & (growth < GROWTH_LIMIT))
    return doubtful


def _eliminate_precisely(network: Network, plan: Plan, omega2: Floats) -> Elimination:
    values = ElementValues(
        springs=[Decimal(value) for value in network.spring_nm_rad.tolist()],
        ties=[Decimal(value) for value in network.tie_nm_rad.tolist()],
        inertia=[Decimal(value) for value in network.inertia_kgm2.tolist()],
        compliances=[Decimal(link.compliance_rad_per_nm) for link in network.torque_links],
    )
    return eliminate(network, plan, _decimals(omega2) * (1 + NUDGE), values)


def _decimals(values: Floats) -> Numbers:
    exact = np.array([Decimal(value) for value in values.ravel().tolist()], dtype=object)
    return exact.reshape(values.shape)
