"""What the user wrote, as frozen records: SI units, radians and seconds, every default resolved."""

from __future__ import annotations

from dataclasses import field
from fractions import Fraction
from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.document import Document
from quillshaft.train.duty_model import Amplitude, DutyCriteria, ShaftStrength, StrengthCriteria, Surface
from quillshaft.train.electrical_model import Electrical, Synchronizing
from quillshaft.train.reciprocating_model import Cylinder, EngineGas

Tolerance = tuple[float, float]
"""Relative deviations (low ≤ 0, high ≥ 0): (-0.05, 0.05) is ±5 %."""

Table = tuple[tuple[float, float], ...]
"""(argument, value) pairs rising in the argument, in SI."""

Range = tuple[float, float]
"""Lowest and highest speed of a range [rad/s]."""

FIXED = "fixed"
BALANCE = "balance"

ORDINARY_STRENGTH = StrengthCriteria()
ORDINARY_DUTY = DutyCriteria()
"""Criteria of a file that states none."""


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
    """Shear modulus [Pa], density [kg/m³] and strengths [Pa], the latter only where given.

    yield_pa         in tension
    endurance_pa     in fully reversed shear, of a plain polished bar
    modulus_points   (temperature [K], shear modulus [Pa]) where it is stated against temperature
    temperature_k    temperature [K] that shear_modulus_pa then stands for
    """

    name: str
    shear_modulus_pa: float
    density_kgm3: float
    tensile_pa: float | None = None
    temperature_k: float | None = None
    modulus_points: Table = ()
    yield_pa: float | None = None
    endurance_pa: float | None = None


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
class Keyway:
    """One keyway: width and depth [m]; along its whole piece where length_m is None."""

    width_m: float
    depth_m: float
    length_m: float | None = None


@dataclass(frozen=True)
class Piece:
    """One length of shaft [m]: outer and inner diameters at its two ends, and what sits in hubs.

    section_m        longer and shorter side of a solid rectangle; None of a round piece
    spline_minor_m   root diameter of splines, od_m being the outer one; None of a plain piece
    spline_share     share of the tooth height that carries torque: 0 is the root circle
    flange           True of a disc that does not twist
    modulus_factor   shear modulus at the piece's temperature over that of the shaft
    cross_hole_m     diameter of a radial hole through the piece
    stress_factor    theoretical stress concentration in torsion, given in place of all stress raisers
    surface          finish; None takes that of [criteria.strength]
    """

    length_m: float
    od_m: tuple[float, float]
    id_m: tuple[float, float] = (0.0, 0.0)
    hub_m: tuple[float, ...] = ()
    hub_rule: float = 1.0 / 3.0
    fillet_m: float | None = None
    keyway: Keyway | None = None
    section_m: tuple[float, float] | None = None
    spline_minor_m: float | None = None
    spline_share: float = 0.0
    flange: bool = False
    modulus_factor: float = 1.0
    cross_hole_m: float | None = None
    stress_factor: float | None = None
    surface: Surface | None = None


@dataclass(frozen=True)
class Throw:
    """A crank throw [m], from the middle of one crankpin to the middle of the next.

    web_inertia_kgm2   polar inertia of one web with its counterweight about the crank's axis; None: from the
                       shape of a plain rectangular web
    """

    journal_m: float
    journal_length_m: float
    pin_m: float
    pin_length_m: float
    web_thickness_m: float
    web_width_m: float
    radius_m: float
    journal_bore_m: float = 0.0
    pin_bore_m: float = 0.0
    web_inertia_kgm2: float | None = None
    formula: Literal["carter", "ker-wilson"] = "carter"


@dataclass(frozen=True)
class EquivalentLength:
    """A shaft given as a plain round bar of the same stiffness: length and diameter [m]."""

    length_m: float
    diameter_m: float


@dataclass(frozen=True)
class Shaft:
    """A shaft between two stations: a stiffness [N·m/rad] as given, or the geometry to get it from.

    material   of geometry; of a stiffness as given, that of the weakest section, where the file names it
    cuts       about how many lengths a shaft of distributed inertia is cut into; 0 of any other
    strength   limits of its own; None where the file states none
    """

    name: str
    between: tuple[str, str]
    tolerance: Tolerance
    stiffness_nm_rad: float | None = None
    equivalent: EquivalentLength | None = None
    pieces: tuple[Piece, ...] = ()
    material: Material | None = None
    own_inertia: Literal["ends", "none", "distributed"] = "none"
    inertia_tolerance: Tolerance = (0.0, 0.0)
    referred_to: str | None = None
    loss_factor: float | None = None
    provenance: Provenance = Provenance()
    group: str | None = None
    viscous_nms_rad: float | None = None
    throw: Throw | None = None
    shoulder: Literal["none", "fillet", "sharp"] = "none"
    cuts: int = 0
    cuts_given: bool = False
    strength: ShaftStrength | None = None


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
class GearGeometry:
    """Normal module [m], helix and normal pressure angles [rad], face width [m].

    profile_shift   coefficients x1, x2; contact_ratio the transverse one where it is given
    """

    module_m: float
    helix_rad: float
    pressure_angle_rad: float
    face_m: float | None = None
    profile_shift: tuple[float, float] = (0.0, 0.0)
    contact_ratio: float | None = None


@dataclass(frozen=True)
class GearMesh:
    """Two wheels in mesh. Rigid unless `mesh_n_m` (along the base tangent) or `mesh_nm_rad` is given.

    kind            "bevel" for any stage whose shafts are not parallel; its geometry is that at mid-face
    by_rule         the stiffness follows from teeth, module and face by ISO 6336-1, simplified
    backlash_m      circumferential at the pitch circles; stored, without effect on linear results
    reverses        of a bevel stage: its ratio counts as negative in a closed loop
    rated_torque_nm at the first-named station
    """

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
    viscous_nms_rad: float | None = None
    kind: Literal["mesh", "bevel"] = "mesh"
    by_rule: bool = False
    backlash_m: float | None = None
    reverses: bool = False
    shaft_angle_rad: float | None = None
    rated_torque_nm: float | None = None


@dataclass(frozen=True)
class Planets:
    """The planets of a stage, each: tooth number, polar inertia [kg·m²], mass [kg], radius of its centre [m]."""

    station: str
    teeth: Fraction
    inertia_kgm2: float
    mass_kg: float = 0.0
    radius_m: float = 0.0
    tolerance: Tolerance = (0.0, 0.0)


@dataclass(frozen=True)
class HeldMember:
    """A member that a stiffness holds to the housing: its station and inertia [kg·m²], and the tie's name."""

    station: str
    tie: str
    inertia_kgm2: float = 0.0
    tolerance: Tolerance = (0.0, 0.0)


@dataclass(frozen=True)
class Epicyclic:
    """A planetary stage; each member is a station or "fixed". Rigid unless `mesh_nm_rad` (at the sun).

    geometry, by_rule   the stiffness of both meshes follows from teeth, module and face by ISO 6336-1
    wheels              the planets with inertia of their own; None where that is left out
    planet_teeth        of one planet, where given
    held                the member that is fixed through a stiffness, if one is
    rated_torque_nm     at the sun
    """

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
    viscous_nms_rad: float | None = None
    geometry: GearGeometry | None = None
    by_rule: bool = False
    backlash_m: float | None = None
    wheels: Planets | None = None
    planet_teeth: int | None = None
    held: HeldMember | None = None
    rated_torque_nm: float | None = None

    @property
    def members(self) -> tuple[tuple[str, int], ...]:
        """(station or "fixed", Willis coefficient) of sun, ring and carrier: the coefficients sum to zero."""
        return (
            (self.sun, self.sun_teeth),
            (self.ring, self.ring_teeth),
            (self.carrier, -(self.sun_teeth + self.ring_teeth)),
        )


@dataclass(frozen=True)
class Belt:
    """A belt or chain between two pulleys of pitch diameters [m]. Rigid unless a stiffness is given.

    span_n_m     axial stiffness [N/m] of one span between the pulleys; `spans` of them hold
    belt_nm_rad  torsional stiffness [N·m/rad] at the first-named station, where that is given
    teeth        tooth numbers of a toothed belt or chain: the exact ratio, in place of the diameters
    crossed      the second pulley turns the other way
    """

    name: str
    between: tuple[str, str]
    diameters_m: tuple[float, float]
    kind: Literal["belt", "toothed-belt", "chain"] = "belt"
    teeth: tuple[int, int] | None = None
    span_n_m: float | None = None
    spans: int = 2
    belt_nm_rad: float | None = None
    crossed: bool = False
    loss_factor: float | None = None
    viscous_nms_rad: float | None = None
    tolerance: Tolerance = (0.0, 0.0)
    provenance: Provenance = Provenance()
    group: str | None = None


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
