"""What the user wrote, as frozen records: SI units, radians and seconds, every default resolved."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from quillshaft.train.document import Document

Tolerance = tuple[float, float]
"""Relative deviations (low ≤ 0, high ≥ 0): (-0.05, 0.05) is ±5 %."""

Table = tuple[tuple[float, float], ...]
"""(argument, value) pairs rising in the argument, in SI."""

Range = tuple[float, float]
"""Lowest and highest speed of a range [rad/s]."""

FIXED = "fixed"
BALANCE = "balance"


@dataclass(frozen=True)
class Assumed:
    """One value that the file does not state: what was taken for it and why."""

    element: str
    key: str
    value: str
    why: str


@dataclass(frozen=True)
class Provenance:
    """Where an element's data come from, as written in the file; None where the file is silent."""

    source: str | None = None
    document: str | None = None
    date: str | None = None
    status: Literal["stated", "calculated", "assumed"] | None = None
    note: str | None = None


@dataclass(frozen=True)
class Material:
    """Shear modulus [Pa], density [kg/m³] and tensile strength [Pa], the last only where given."""

    name: str
    shear_modulus_pa: float
    density_kgm3: float
    tensile_pa: float | None = None


@dataclass(frozen=True)
class Station:
    """A polar inertia [kg·m²]: as given, entrained fluid included, before `referred_to` is undone."""

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


@dataclass(frozen=True)
class Piece:
    """One length of shaft [m]: outer and inner diameters at its two ends, and what sits in hubs."""

    length_m: float
    od_m: tuple[float, float]
    id_m: tuple[float, float] = (0.0, 0.0)
    hub_m: tuple[float, ...] = ()
    hub_rule: float = 1.0 / 3.0
    fillet_m: float | None = None


@dataclass(frozen=True)
class EquivalentLength:
    """A shaft given as a plain round bar of the same stiffness: length and diameter [m]."""

    length_m: float
    diameter_m: float


@dataclass(frozen=True)
class Shaft:
    """A shaft between two stations: a stiffness [N·m/rad] as given, or the geometry to get it from."""

    name: str
    between: tuple[str, str]
    tolerance: Tolerance
    stiffness_nm_rad: float | None = None
    equivalent: EquivalentLength | None = None
    pieces: tuple[Piece, ...] = ()
    material: Material | None = None
    own_inertia: Literal["ends", "none"] = "none"
    inertia_tolerance: Tolerance = (0.0, 0.0)
    referred_to: str | None = None
    loss_factor: float | None = None
    provenance: Provenance = Provenance()
    group: str | None = None


@dataclass(frozen=True)
class Coupling:
    """A coupling between two stations; half inertias [kg·m²] are added to the stations they sit at.

    stiffness_nm_rad     as given; the value at zero torque where it is stated against torque
    stiffness_points     (mean torque [N·m], stiffness [N·m/rad]); empty where the stiffness is one number
    temperature_points   (temperature [K], factor on the stiffness); damping_points likewise on the damping
    operating_k          coldest and hottest temperature [K] of the coupling in service
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


@dataclass(frozen=True)
class GearGeometry:
    """Normal module [m], helix and normal pressure angles [rad], face width [m]."""

    module_m: float
    helix_rad: float
    pressure_angle_rad: float
    face_m: float | None = None


@dataclass(frozen=True)
class GearMesh:
    """Two wheels in mesh. Rigid unless `mesh_n_m` (along the base tangent) or `mesh_nm_rad` is given."""

    name: str
    between: tuple[str, str]
    teeth: tuple[int, int]
    internal: bool = False
    geometry: GearGeometry | None = None
    mesh_n_m: float | None = None
    mesh_nm_rad: float | None = None
    loss_factor: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None


@dataclass(frozen=True)
class Epicyclic:
    """A planetary stage; each member is a station or "fixed". Rigid unless `mesh_nm_rad` (at the sun)."""

    name: str
    sun: str
    ring: str
    carrier: str
    sun_teeth: int
    ring_teeth: int
    planets: int
    mesh_nm_rad: float | None = None
    loss_factor: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None

    @property
    def members(self) -> tuple[tuple[str, int], ...]:
        """(station or "fixed", Willis coefficient) of sun, ring and carrier: the coefficients sum to zero."""
        return (
            (self.sun, self.sun_teeth),
            (self.ring, self.ring_teeth),
            (self.carrier, -(self.sun_teeth + self.ring_teeth)),
        )


@dataclass(frozen=True)
class Tie:
    """A torsional spring from a station to ground [N·m/rad]."""

    name: str
    at: str
    stiffness_nm_rad: float
    tolerance: Tolerance
    loss_factor: float | None = None
    provenance: Provenance = Provenance()
    group: str | None = None


@dataclass(frozen=True)
class Cylinder:
    """One cylinder: the station of its throw and its firing angle [rad of crank turn]."""

    at: str
    fires_at_rad: float


@dataclass(frozen=True)
class Machine:
    """What sits at a station. Fields that a kind does not use stay None or empty."""

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


@dataclass(frozen=True)
class Excitation:
    """A source of the user's own: |order · speed + frequency_hz| at a station or inside a link."""

    name: str
    at: str
    order: float = 0.0
    frequency_hz: float = 0.0
    torque_nm: float | None = None
    torque_share: float | None = None
    when: Literal["continuous", "start", "fault"] = "continuous"
    provenance: Provenance = Provenance()


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
    """The operating map; speeds are those of `speed_at` [rad/s]."""

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
    """A drivetrain as its file states it, in file order throughout."""

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
