"""The torsional graph of a train: names, ratios and actual values, beside the referred networks to solve."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from quillshaft.graph.network import Bools, Floats, Ints, Network
from quillshaft.train.model import Tolerance

Slot = Literal["spring", "tie", "torque", "rigid", "slack"]


@dataclass(frozen=True)
class InertiaPart:
    """One contribution [kg·m²] to a station's inertia, at the station's own speed."""

    station: int
    element: str
    inertia_kgm2: float
    tolerance: Tolerance


@dataclass(frozen=True)
class GraphLink:
    """One link of the train as the graph holds it.

    kind               shaft | coupling | mesh | epicyclic | tie
    stations           station numbers in the order the file names them
    stiffness_nm_rad   actual, at the first-named station (an epicyclic stage: at its sun); None if rigid
    referred_nm_rad    referred to the speed of `speed-at`; None if rigid
    coefficients       (stations) referred twist = sum(coefficient · referred angle); a station gives the link
                       its coefficient times the referred torque
    torque_scale       actual torque at the first-named station over the referred torque
    slot, index        where the networks keep it: a spring, a tie, a torque link or a rigid mesh, and its
                       number there; "slack" is a spring whose two ends are rigidly one
    """

    name: str
    kind: Literal["shaft", "coupling", "mesh", "epicyclic", "tie"]
    stations: tuple[int, ...]
    stiffness_nm_rad: float | None
    referred_nm_rad: float | None
    coefficients: tuple[float, ...]
    torque_scale: float
    tolerance: Tolerance
    loss_factor: float | None
    slot: Slot
    index: int
    ratio_text: str = ""


@dataclass(frozen=True)
class RigidMeshes:
    """Rigid gear meshes inside merged nodes.

    links     (meshes,) link numbers
    ends      (meshes, 2) station numbers
    recovery  (meshes, stations): referred mesh torques = recovery @ torques that stations must pass on
    known     (meshes,) False where a closed loop of rigid meshes leaves the split open
    """

    links: Ints
    ends: Ints
    recovery: Floats
    known: Bools


@dataclass(frozen=True)
class TorsionalGraph:
    """A train as a graph, everything in file order.

    stations       names
    speed_ratio    exact signed speed over that of `speed-at`; 0 at rest
    scale          (stations,) |speed_ratio|, 1 at rest: actual angle = scale · referred angle
    inertia_kgm2   (stations,) actual, nominal
    parts          what each station's inertia is made of
    node           (stations,) node of the network that each station belongs to
    links          every link of the train
    network        nominal; `soft_heavy` and `stiff_light` are the corners of all tolerances (the lowest
                   and the highest frequencies), `static` has no ties on turning stations
    rigid          rigid meshes and how their torques are recovered
    lines          station numbers of each shaft line: stations joined by shafts, between couplings and gears
    """

    stations: tuple[str, ...]
    speed_ratio: tuple[Fraction, ...]
    scale: Floats
    inertia_kgm2: Floats
    parts: tuple[InertiaPart, ...]
    node: Ints
    links: tuple[GraphLink, ...]
    network: Network
    soft_heavy: Network
    stiff_light: Network
    static: Network
    rigid: RigidMeshes
    lines: tuple[tuple[int, ...], ...]

    def number(self, name: str) -> int:
        """Number of a station by its name. Raises ValueError where there is none."""
        return self.stations.index(name)

    @property
    def split_open(self) -> bool:
        """True where rigid stages form a closed loop: the split of torque between them is open."""
        return any(link.slot == "slack" and link.stiffness_nm_rad is None for link in self.links)

    def link(self, name: str) -> GraphLink:
        """A link by its name. Raises KeyError where there is none."""
        for link in self.links:
            if link.name == name:
                return link
        raise KeyError(name)
