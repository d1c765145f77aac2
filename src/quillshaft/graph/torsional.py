"""The torsional graph of a train: names, ratios and actual values, beside the referred networks to solve."""

from __future__ import annotations

from fractions import Fraction
from typing import Literal

from quillshaft.graph.network import Bools, Floats, Ints, Network
from quillshaft.records import dataclass
from quillshaft.train.basic_model import Tolerance

Slot = Literal["spring", "tie", "torque", "rigid", "slack", "cut"]


@dataclass(frozen=True)
class InertiaPart:
    """One contribution [kg·m²] to a station's inertia, at the station's own speed.

    counted_at   the station whose entry holds its kinetic energy, where that is another: the mass of planets turns
                 with the carrier and counts as theirs
    """

    station: int
    element: str
    inertia_kgm2: float
    tolerance: Tolerance
    counted_at: int | None = None


@dataclass(frozen=True)
class CutLink:
    """A shaft of distributed inertia inside the networks: lengths in series with inertia between them.

    springs, nodes     their numbers in the networks, from the first-named station on; one node fewer
    referred_nm_rad    (springs,) nominal stiffness; referred_kgm2 (nodes,) nominal inertia
    """

    springs: tuple[int, ...]
    nodes: tuple[int, ...]
    referred_nm_rad: tuple[float, ...]
    referred_kgm2: tuple[float, ...]
    inertia_tolerance: Tolerance


@dataclass(frozen=True)
class GraphLink:
    """One link of the train as the graph holds it.

    kind               shaft | coupling | mesh | epicyclic | belt | tie | damper
    stations           station numbers in the order the file names them
    stiffness_nm_rad   actual, at the first-named station (an epicyclic stage: at its sun); None if rigid
    referred_nm_rad    referred to the speed of `speed-at`; None if rigid
    coefficients       (stations) referred twist = sum(coefficient · referred angle); a station gives the link
                       its coefficient times the referred torque
    torque_scale       actual torque at the first-named station over the referred torque
    loss_factor        None where the link states no damping of its own; 0 where it states a viscous one
    viscous_nms_rad    viscous coefficient, actual, at the same place as the stiffness; 0 where none is stated
    slot, index        where the networks keep it: a spring, a tie, a torque link or a rigid mesh, and its
                       number there; "slack" is a spring whose two ends are rigidly one; "cut" is a shaft in
                       lengths, whose places `cut` holds
    """

    name: str
    kind: Literal["shaft", "coupling", "mesh", "epicyclic", "belt", "tie", "damper"]
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
    viscous_nms_rad: float = 0.0
    cut: CutLink | None = None


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
class ViscousRing:
    """A damper's ring that fluid alone joins to its station, all actual.

    inertia_kgm2      of the whole ring; counted_kgm2 of it moves with the station in the undamped networks
    viscous_nms_rad   None where the file states none
    """

    name: str
    station: int
    inertia_kgm2: float
    counted_kgm2: float
    viscous_nms_rad: float | None


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
    viscous_nms_rad   (stations,) damping to ground, actual; None where no station has any
    rings          rings of untuned dampers, for solutions that hold damping
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
    viscous_nms_rad: Floats | None = None
    rings: tuple[ViscousRing, ...] = ()

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
