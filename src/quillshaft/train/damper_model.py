"""Dampers, as the user wrote them."""

from __future__ import annotations

from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.basic_model import Provenance, Tolerance


@dataclass(frozen=True)
class Pendulums:
    """Centrifugal pendulums: mass [kg] of one, how many, shaft axis to suspension and length [m]."""

    mass_kg: float
    number: int
    suspension_m: float
    length_m: float


@dataclass(frozen=True)
class Damper:
    """A damper at a station, as it stands in its state.

    inertia_kgm2       of the ring; of a pendulum damper all masses at rest on their arms
    stiffness_nm_rad   of a tuned damper's spring; None of the others
    tolerance          on that stiffness; on the order of a pendulum damper
    order              that the pendulums are tuned to, per turn of their station; None of the others
    moving_share       part of a viscous damper's ring that counts with its station in undamped modes
    state              seized: the ring turns with its station; lost: it is not there
    permitted_heat_w, permitted_torque_nm   loss and torque amplitude that its maker permits
    """

    name: str
    kind: Literal["viscous", "tuned", "pendulum"]
    at: str
    inertia_kgm2: float
    inertia_tolerance: Tolerance
    tolerance: Tolerance = (0.0, 0.0)
    stiffness_nm_rad: float | None = None
    order: float | None = None
    moving_share: float = 0.5
    state: Literal["healthy", "seized", "lost", "half-damping"] = "healthy"
    viscous_nms_rad: float | None = None
    loss_factor: float | None = None
    pendulums: Pendulums | None = None
    provenance: Provenance = Provenance()
    group: str | None = None
    permitted_heat_w: float | None = None
    permitted_torque_nm: float | None = None

    @property
    def swings(self) -> bool:
        """True where the damper adds a station and a link of its own to the undamped modes."""
        return self.kind != "viscous" and self.state in ("healthy", "half-damping")

    @property
    def added_station(self) -> str:
        """Name of the station that the damper adds where it swings: "nose ring", "crank-masses masses"."""
        return f"{self.name} {'masses' if self.kind == 'pendulum' else 'ring'}"
