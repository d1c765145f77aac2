"""How the number of modes below a frequency depends on the stiffness of one link, in closed form.

The stiffness k of one link enters K − ω²M as k·e·eᵀ, with e its twist. Written as a torque link of compliance
1/k that is eliminated last, its pivot is D(ω) − 1/k with D = −eᵀ (K₀ − ω²M)⁻¹ e, and no other pivot depends
on k. So the modes below ω number

    base(ω) + (1 where k < turn(ω), else 0),        turn = 1/D where D > 0, infinite elsewhere

and a finite turn is the stiffness that puts a mode exactly on ω. The base is the count with the link rigid.
(Sylvester's law of inertia on a bordered matrix: own derivation. For a spring between the ends of two parts
with the excesses t_a and t_b it is the known k = −t_a t_b/(t_a + t_b).)

Rigid-body motions of the train are those with the link in place, whatever its stiffness above zero. Where the
link is all that holds two parts together, taking it out would add a motion; the form above never takes it out.
"""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal, localcontext
from typing import Literal

import numpy as np

from quillshaft.graph.network import Bools, Floats, Ints, Network, TorqueLink
from quillshaft.records import dataclass
from quillshaft.solve.elimination import CHUNK_POINTS, Elimination, eliminate
from quillshaft.solve.first_values import ElementValues
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.solve.precise import GROWTH_LIMIT, LONG, NUDGE

TRACE_INERTIA = Decimal("1e-60")  # of the largest inertia: what a massless node gets in long arithmetic


@dataclass(frozen=True)
class OpenLink:
    """A network in which one link stands as a torque link of its own, the last one, with its stiffness open.

    network       the same train; its last torque link holds the twist e of the link and no compliance
    plan          an order of elimination with that link's torque last
    """

    network: Network
    plan: Plan


@dataclass(frozen=True)
class LinkCounts:
    """Modes below each point: base + (stiffness < turn).

    base           (F,) elastic modes below the point with the link rigid
    turn_nm_rad    (F,) stiffness of the link, referred, below which one more mode is; it may be infinite
    """

    base: Ints
    turn_nm_rad: Floats

    def at(self, stiffness_nm_rad: float) -> Ints:
        """Elastic modes below each point (F,) when the link has this referred stiffness [N·m/rad]."""
        counts: Ints = self.base + (stiffness_nm_rad < self.turn_nm_rad)
        return counts


def open_link(
    network: Network, slot: Literal["spring", "tie", "torque"], index: int, plan: Plan | None = None
) -> OpenLink:
    """Set one spring, tie or elastic torque link of a network apart, by its number there.

    `plan` is that of another network of the same structure, opened at the same link.
    """
    torque_links = list(network.torque_links)
    springs, ties = [np.ones(len(nodes), dtype=bool) for nodes in (network.spring_ends, network.tie_node)]
    if slot == "spring":
        a, b = network.spring_ends[index].tolist()
        torque_links.append(TorqueLink((a, b), (1.0, -1.0), 0.0))
        springs[index] = False
    elif slot == "tie":
        torque_links.append(TorqueLink((int(network.tie_node[index]),), (1.0,), 0.0))
        ties[index] = False
    else:
        torque_links.append(replace(torque_links.pop(index), compliance_rad_per_nm=0.0))
    opened = replace(
        network,
        spring_ends=network.spring_ends[springs],
        spring_nm_rad=network.spring_nm_rad[springs],
        tie_node=network.tie_node[ties],
        tie_nm_rad=network.tie_nm_rad[ties],
        torque_links=tuple(torque_links),
    )
    last = network.nodes + len(torque_links) - 1
    return OpenLink(opened, plan or plan_elimination(opened, last=(last,)))


def link_counts(opened: OpenLink, omega2: Floats) -> LinkCounts:
    """Count the elastic modes below each point omega2 (F,) [rad²/s²] for every stiffness of the open link.

    At and below zero there are none. Points with doubtful pivots are eliminated again in long arithmetic, and all
    of them if the plan says `precisely`.
    """
    base = np.zeros(len(omega2), dtype=np.intp)
    turn = np.zeros(len(omega2))
    for start in range(0, len(omega2), CHUNK_POINTS):
        cut = slice(start, start + CHUNK_POINTS)
        base[cut], turn[cut] = _count_chunk(opened, omega2[cut])
    above = omega2 > 0
    return LinkCounts(np.where(above, base, 0), np.where(above, turn, 0.0))


def _count_chunk(opened: OpenLink, omega2: Floats) -> tuple[Ints, Floats]:
    elimination = eliminate(opened.network, opened.plan, omega2, watch=True)
    negative: Ints = np.count_nonzero(elimination.pivot[:-1] < 0, axis=0)
    last = elimination.pivot[-1]
    doubtful = _doubtful(elimination) | opened.plan.precisely
    if doubtful.any():
        negative[doubtful], last[doubtful] = _precisely(opened, omega2[doubtful])
    with np.errstate(all="ignore"):
        turn = np.where(last > 0, 1.0 / last, np.inf)
    return negative - (opened.plan.links + opened.network.rigid_motions), turn


def _doubtful(elimination: Elimination) -> Bools:
    """Points where rounding is magnified, or a pivot before the last is zero or not finite."""
    before = elimination.pivot[:-1]
    sound = np.isfinite(elimination.pivot).all(axis=0) & before.all(axis=0)
    doubtful: Bools = ~(sound & (elimination.growth < GROWTH_LIMIT))
    return doubtful


def _precisely(opened: OpenLink, omega2: Floats) -> tuple[Ints, Floats]:
    """Negative pivots before the last, and the last pivot, in long arithmetic.

    A massless part that hangs on the open link alone would leave a pivot of zero; a trace of inertia makes it
    a part of its own, which the last pivot then counts again.
    """
    network = opened.network
    inertia = [Decimal(value) for value in network.inertia_kgm2.tolist()]
    trace = max(inertia) * TRACE_INERTIA
    with localcontext(LONG):
        values = ElementValues(
            springs=[Decimal(value) for value in network.spring_nm_rad.tolist()],
            ties=[Decimal(value) for value in network.tie_nm_rad.tolist()],
            inertia=[value or trace for value in inertia],
            compliances=[Decimal(link.compliance_rad_per_nm) for link in network.torque_links],
        )
        points = np.array([Decimal(value) for value in omega2.tolist()], dtype=object) * (1 + NUDGE)
        pivot = eliminate(network, opened.plan, points, values).pivot
        negative: Ints = np.count_nonzero(pivot[:-1] < 0, axis=0)
    return negative, pivot[-1].astype(float)
