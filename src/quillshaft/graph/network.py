"""The weighted graph as arrays: nodes with inertia, springs between nodes, springs to ground, torque links.

Everything here is in referred coordinates: an angle divided by its speed ratio, inertia and stiffness
multiplied by the square of it. Stations that a rigid gear mesh holds together share one node.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from quillshaft.records import dataclass

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Floats: TypeAlias = NDArray[np.float64]
    Ints: TypeAlias = NDArray[np.intp]
    Bools: TypeAlias = NDArray[np.bool_]
else:  # numpy.typing is slow to import
    Floats = Ints = Bools = np.ndarray


@dataclass(frozen=True)
class TorqueLink:
    """A link over two or more nodes that enters the equations by its torque T [N·m].

    `sum(coefficient · angle) = compliance · T`, and T · coefficient is the torque that node gives to the
    link. Compliance 0 is a rigid link (a rigid epicyclic stage). The coefficients of turning nodes sum to
    zero, because the rated speeds satisfy the link.
    """

    nodes: tuple[int, ...]
    coefficients: tuple[float, ...]
    compliance_rad_per_nm: float


@dataclass(frozen=True)
class Network:
    """A torsional graph in numbers, referred to one speed.

    inertia_kgm2    (nodes,)    ≥ 0; 0 is a massless node
    turning         (nodes,)    False where the node stands still (its own angle, scale 1)
    spring_ends     (springs, 2) node numbers; a spring joins two turning or two resting nodes
    spring_nm_rad   (springs,)  > 0
    tie_node        (ties,)     node number of each spring to ground
    tie_nm_rad      (ties,)     > 0
    torque_links    links that enter by their torque; the rigid ones are linearly independent
    rigid_motions   number of rigid-body motions (modes at zero frequency), exact from the graph
    """

    inertia_kgm2: Floats
    turning: Bools
    spring_ends: Ints
    spring_nm_rad: Floats
    tie_node: Ints
    tie_nm_rad: Floats
    torque_links: tuple[TorqueLink, ...]
    rigid_motions: int

    @property
    def nodes(self) -> int:
        """Number of nodes."""
        return len(self.inertia_kgm2)
