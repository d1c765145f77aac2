"""What springs, ties, torque links and inertias of a damped network weigh at a rate s [1/s], for the elimination.

A spring is k (1 + jη) + s c, damping to ground adds c / s to an inertia (−(s²) · c/s = … s c beside s² J), and a
magnifier's damping of a cylinder is the imaginary inertia −j J/M. Real rates carry no loss factors.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.solve.damped_state import Damping
from quillshaft.solve.first_values import ElementValues, Value
from quillshaft.solve.memory import Memory, Numbers


def dynamic_values(
    network: Network,
    damping: Damping,
    rate: Numbers,
    springs_nm_rad: Sequence[Value] | None = None,
    memory: Memory | None = None,
) -> ElementValues:
    """Values of all elements at the rates s (F,) [1/s], complex or real; an element without viscous part is one number.

    springs_nm_rad, a number or (F,) for each spring [N·m/rad], stands in for the network's own stiffness; complex,
    it holds the loss factors too. Rows of viscous springs come from `memory` where it is given.
    """
    springs = network.spring_nm_rad.tolist() if springs_nm_rad is None else springs_nm_rad
    elastic = [link.compliance_rad_per_nm for link in network.torque_links]
    inverse = [1.0 / value if value else 0.0 for value in elastic]
    links = _springs(inverse, damping.link_loss, damping.link_viscous, rate, memory)
    return ElementValues(
        springs=_springs(springs, damping.spring_loss, damping.spring_viscous, rate, memory),
        ties=_springs(network.tie_nm_rad.tolist(), damping.tie_loss, damping.tie_viscous, rate, memory),
        inertia=_inertias(network, damping, rate),
        compliances=[1.0 / link if value else 0.0 for link, value in zip(links, elastic, strict=True)],
    )


def _springs(
    stiffness: Sequence[Value], losses: Floats, viscous: Floats, rate: Numbers, memory: Memory | None
) -> list[Value]:
    if np.iscomplexobj(rate):
        values = [_lossy(k, loss) for k, loss in zip(stiffness, losses.tolist(), strict=True)]
    else:
        values = list(stiffness)
    for number in np.flatnonzero(viscous).tolist():
        row = np.multiply(rate, viscous[number], None if memory is None else memory.row())
        values[number] = np.add(row, values[number], row)
    return values


def _lossy(stiffness: Value, loss: float) -> Value:
    """k (1 + jη), or k where it is complex already; rows are complex always: that is quicker later."""
    if isinstance(stiffness, float | int):
        return stiffness * (1 + 1j * loss)
    return stiffness if np.iscomplexobj(stiffness) else stiffness.astype(complex) * (1 + 1j * loss)


def _inertias(network: Network, damping: Damping, rate: Numbers) -> list[Value] | None:
    lost = damping.node_lost_kgm2
    if not damping.node_viscous.any() and lost is None:
        return None
    inverse = 1.0 / rate
    values: list[Value] = []
    for node, (inertia, viscous) in enumerate(
        zip(network.inertia_kgm2.tolist(), damping.node_viscous.tolist(), strict=True)
    ):
        value: Value = inertia if lost is None or not lost[node] else inertia - 1j * lost[node].item()
        values.append(value + viscous * inverse if viscous else value)
    return values
