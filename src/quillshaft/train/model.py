"""What the user wrote, as frozen records: SI units, radians and seconds, every default resolved."""

from __future__ import annotations

from dataclasses import field
from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.basic_model import Assumed, Provenance, Range, Tolerance
from quillshaft.train.coupling_model import Coupling, FluidCoupling
from quillshaft.train.damper_model import Damper
from quillshaft.train.document import Document
from quillshaft.train.duty_model import Amplitude, DutyCriteria, StrengthCriteria
from quillshaft.train.electrical_model import Electrical, Synchronizing
from quillshaft.train.gear_model import Belt, Epicyclic, GearMesh
from quillshaft.train.reciprocating_model import Cylinder, EngineGas
from quillshaft.train.shaft_model import Shaft

FIXED = "fixed"
BALANCE = "balance"

ORDINARY_STRENGTH = StrengthCriteria()
ORDINARY_DUTY = DutyCriteria()
"""Criteria of a file that states none."""


@dataclass(frozen=True)
class RunningGear:
    """What runs on a crankpin: masses [kg] of each of its cylinders, crank radius and rod length [m]."""

    reciprocating_kg: float
    rotating_kg: float
    radius_m: float
    rod_m: float
    cylinders: int = 1


@dataclass(frozen=True)
class Station:
    """A polar inertia [kg·m²]: as given, entrained fluid included, before `referred_to` is undone.

    viscous_nms_rad   damping to ground [N·m·s/rad] at the station's own speed; negative feeds energy in
    made_by           the element ("gears.first-stage") that brings this station and its inertia along
    """

    name: str
    inertia_kgm2: float
    tolerance: Tolerance
    entrained: float = 0.0
    wet: bool | None = None
    referred_to: str | None = None
    mass_kg: float | None = None
    diameter_m: float | None = None
    spelling: Literal["inertia", "wr2", "gd2"] = "inertia"
    provenance: Provenance = Provenance()
    group: str | None = None
    viscous_nms_rad: float | None = None
    viscous_because: str | None = None
    running_gear: RunningGear | None = None
    made_by: str | None = None


@dataclass(frozen=True)
class UniversalJoint:
    """A universal joint in a shaft or coupling: `at` is that link, `angle_rad` the bend between its two shafts."""

    name: str
    at: str
    angle_rad: float
    provenance: Provenance = Provenance()


@dataclass(frozen=True)
class Tie:
    """A torsional spring from a station to ground [N·m/rad], or a synchronous machine's synchronizing power."""

    name: str
    at: str
    stiffness_nm_rad: float | None
    tolerance: Tolerance
    loss_factor: float | None = None
    provenance: Provenance = Provenance()
    group: str | None = None
    viscous_nms_rad: float | None = None
    synchronizing: Synchronizing | None = None


NO_ELECTRICAL = Electrical()


@dataclass(frozen=True)
class Machine:
    """What sits at a station. Fields that a kind does not use stay None or empty.

    magnifier   dynamic magnifier of each cylinder's own damping, of engines and reciprocating compressors
    """

    name: str
    kind: str
    at: str | None
    poles: int | None = None
    supply_hz: float | None = None
    slip_hz: float = 0.0
    line_side: bool = False
    blades: int | None = None
    diffuser_vanes: int | None = None
    passes: tuple[int, ...] = ()
    strokes: int | None = None
    cylinders: tuple[Cylinder, ...] = ()
    provenance: Provenance = Provenance()
    stroke_m: float | None = None
    rod_m: float | None = None
    gas: EngineGas | None = None
    electrical: Electrical = NO_ELECTRICAL
    load_slope_nms_rad: float | None = None
    magnifier: float | None = None


@dataclass(frozen=True)
class Excitation:
    """A source of the user's own: |order · speed + frequency_hz| at a station or inside a link.

    locked_with   reciprocating machine or other excitation that it keeps its phase to; None: to nothing
    phase_rad     that phase, None where the file is silent
    """

    name: str
    at: str
    order: float = 0.0
    frequency_hz: float = 0.0
    torque_nm: float | None = None
    torque_share: float | None = None
    when: Literal["continuous", "start", "fault"] = "continuous"
    provenance: Provenance = Provenance()
    phase_rad: float | None = None
    locked_with: str | None = None


@dataclass(frozen=True)
class Dismissal:
    """An interference that an engineer accepts, bound to its mode's number and frequency [Hz]."""

    name: str
    source: str
    mode: int
    frequency_hz: float
    because: str
    by: str
    cases: tuple[str, ...] = ()


@dataclass(frozen=True)
class Operation:
    """The operating map; speeds are those of `speed_at` [rad/s].

    tachometer    relative error of the speed shown to the operator
    ramp_rad_s2   rate at which speeds are passed
    light_load    share of full load that stands for running at light load
    """

    speed_at: str
    rated_rad_s: float
    ranges_rad_s: tuple[Range, ...]
    range_given: bool
    speed_band: float
    supply_band: float
    idle_rad_s: float | None = None
    trip_rad_s: float | None = None
    barred_rad_s: tuple[Range, ...] = ()
    barred_because: str | None = None
    speeds_rad_s: dict[str, float] = field(default_factory=dict)
    tachometer: float = 0.02
    tachometer_given: bool = False
    ramp_rad_s2: float | None = None
    light_load: float = 0.25
    light_load_given: bool = False


@dataclass(frozen=True)
class Power:
    """Mean power at rated speed per station [W], + drives, − absorbs; None is "balance"."""

    stations_w: dict[str, float | None]
    law: str | tuple[tuple[float, float], ...] | None = None


@dataclass(frozen=True)
class Criteria:
    """Required separation per kind of source (fractions) and what the margin is divided by."""

    separation: dict[str, float]
    worst_case: dict[str, float]
    margin_on: Literal["excitation", "natural"] = "excitation"


@dataclass(frozen=True)
class Revision:
    """One line of the document's history."""

    revision: str
    date: str
    what: str
    by: str | None = None


@dataclass(frozen=True)
class SignOff:
    """Identification of the report; None leaves a blank line to sign."""

    document: str | None = None
    revision: str | None = None
    date: str | None = None
    status: Literal["draft", "checked", "issued"] = "draft"
    prepared: str | None = None
    checked: str | None = None
    approved: str | None = None
    client: str | None = None
    history: tuple[Revision, ...] = ()


@dataclass(frozen=True)
class Train:
    """A drivetrain as its file states it, in file order throughout.

    ordinary_amplitudes   sources without an amplitude of their own take an ordinary one
    """

    title: str
    tag: str | None
    units: Literal["SI", "US"]
    file: Document
    cases: tuple[str, ...]
    cases_because: tuple[str, ...]
    operation: Operation
    power: Power | None
    stations: tuple[Station, ...]
    shafts: tuple[Shaft, ...]
    couplings: tuple[Coupling, ...]
    gears: tuple[GearMesh | Epicyclic, ...]
    ties: tuple[Tie, ...]
    machines: tuple[Machine, ...]
    excitations: tuple[Excitation, ...]
    excitations_off: dict[str, str]
    dismissals: tuple[Dismissal, ...]
    criteria: Criteria
    zeta: tuple[float, float]
    sign_off: SignOff
    assumed: tuple[Assumed, ...]
    dampers: tuple[Damper, ...] = ()
    belts: tuple[Belt, ...] = ()
    joints: tuple[UniversalJoint, ...] = ()
    fluid_couplings: tuple[FluidCoupling, ...] = ()
    amplitudes: tuple[Amplitude, ...] = ()
    ordinary_amplitudes: bool = False
    strength: StrengthCriteria = ORDINARY_STRENGTH
    duty: DutyCriteria = ORDINARY_DUTY
