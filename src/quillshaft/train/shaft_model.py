"""Shafts, their pieces and materials, as the user wrote them."""

from __future__ import annotations

from typing import Literal

from quillshaft.records import dataclass
from quillshaft.train.basic_model import Provenance, Table, Tolerance
from quillshaft.train.duty_model import ShaftStrength, Surface


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
