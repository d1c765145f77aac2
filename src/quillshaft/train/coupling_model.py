"""Couplings, elastic and fluid, as the user wrote them."""

from __future__ import annotations

from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.basic_model import Provenance, Table, Tolerance


@dataclass(frozen=True)
class CouplingRatings:
    """What a coupling's maker permits, beside the rated torque; None where the file is silent.

    peak_nm                 torque [N·m] for a short time, as in starting
    vibratory_nm            amplitude [N·m] permitted for good, at reference_hz
    permitted_heat_w        loss [W] that the coupling gives off, and heat_rise_k [K] of its rubber at that loss
    max_speed_rad_s         highest speed
    """

    peak_nm: float | None = None
    vibratory_nm: float | None = None
    reference_hz: float | None = None
    permitted_heat_w: float | None = None
    heat_rise_k: float | None = None
    max_speed_rad_s: float | None = None


@dataclass(frozen=True)
class Coupling:
    """A coupling between two stations; half inertias [kg·m²] are added to the stations they sit at.

    stiffness_nm_rad     as given; the value at zero torque where it is stated against torque
    stiffness_points     (mean torque [N·m], stiffness [N·m/rad]); empty where the stiffness is one number
    temperature_points   (temperature [K], factor on the stiffness); damping_points likewise on the damping
    operating_k          coldest and hottest temperature [K] of the coupling in service
    ambient_k            temperature [K] of the air about it, from which its losses heat it
    """

    name: str
    between: tuple[str, str]
    stiffness_nm_rad: float
    tolerance: Tolerance
    kind: str | None = None
    half_inertias_kgm2: tuple[float, float] = (0.0, 0.0)
    inertia_tolerance: Tolerance = (0.0, 0.0)
    shaft_in_hub: Literal["included", "excluded"] | None = None
    loss_factor: float | None = None
    rated_torque_nm: float | None = None
    referred_to: str | None = None
    provenance: Provenance = Provenance()
    stiffness_points: Table = ()
    temperature_points: Table = ()
    damping_points: Table = ()
    operating_k: tuple[float, float] | None = None
    group: str | None = None
    viscous_nms_rad: float | None = None
    ratings: CouplingRatings | None = None
    ambient_k: float | None = None


@dataclass(frozen=True)
class FluidCoupling:
    """A coupling that carries torque by a fluid alone: speeds follow over the slip, no spring joins the sides."""

    name: str
    between: tuple[str, str]
    slip: float
    half_inertias_kgm2: tuple[float, float] = (0.0, 0.0)
    inertia_tolerance: Tolerance = (0.0, 0.0)
    rated_torque_nm: float | None = None
    max_speed_rad_s: float | None = None
    provenance: Provenance = Provenance()
