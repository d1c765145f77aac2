"""What the file says of strength, limits and amplitudes, as frozen records in SI."""

from __future__ import annotations

from typing import Literal

from quillshaft.records import dataclass

Surface = Literal["ground", "machined", "hot-rolled", "forged"]
MeanStress = Literal["goodman", "soderberg", "gerber", "elliptic"]
StrengthRule = Literal["endurance", "propulsion", "tensile-share"]
PropulsionKind = Literal["intermediate", "thrust", "propeller"]
PropulsionForm = Literal[
    "integral-flange", "shrink-fit", "keyway-taper", "keyway-cylindrical", "radial-hole", "longitudinal-slot", "keyless"
]


@dataclass(frozen=True)
class StressSection:
    """A section at which stress is judged: diameters [m] and its stress raisers; None where it has none.

    shoulder_m      the larger diameter that the fillet leads to
    cross_hole_m    diameter of a radial hole through the shaft
    stress_factor   theoretical stress concentration in torsion, given in place of all raisers
    """

    od_m: float
    id_m: float = 0.0
    fillet_m: float | None = None
    shoulder_m: float | None = None
    keyway: bool = False
    spline: bool = False
    cross_hole_m: float | None = None
    stress_factor: float | None = None
    surface: Surface | None = None


@dataclass(frozen=True)
class ShaftStrength:
    """Limits of a shaft of its own; stresses [Pa] and torques [N·m] are amplitudes, at the shaft's own speed.

    passing_*           permitted while a speed is passed; None: the continuous limit holds there too
    rule                None takes that of [criteria.strength]
    propulsion_kind, propulsion_form   what the class rule for propulsion shafts asks
    weakest             the section to judge, where the shaft is not given by pieces or they do not show it
    """

    permitted_stress_pa: float | None = None
    passing_stress_pa: float | None = None
    permitted_torque_nm: float | None = None
    passing_torque_nm: float | None = None
    rule: StrengthRule | None = None
    propulsion_kind: PropulsionKind | None = None
    propulsion_form: PropulsionForm | None = None
    weakest: StressSection | None = None


@dataclass(frozen=True)
class StrengthCriteria:
    """[criteria.strength]: how shafts are judged that state no limit of their own.

    rule      None: shafts are not judged by a rule
    safety    factor on the endurance limit
    edition   edition of the rule set that the user has confirmed; None: its figures are recalled
    given     keys that the file states; the others are defaults and listed as assumed
    """

    rule: Literal["endurance", "tensile-share"] | None = None
    mean_stress: MeanStress = "goodman"
    safety: float = 1.5
    notch: Literal["peterson", "neuber"] = "peterson"
    surface: Surface = "machined"
    edition: str | None = None
    given: tuple[str, ...] = ()


@dataclass(frozen=True)
class DutyCriteria:
    """[criteria.duty]: limits of gears and generators. Defaults are recalled class-rule figures.

    gear_share          vibratory torque of a gear over its rated torque
    gear_reversal       whether teeth may separate in continuous running
    inertia_torque      inertia torque of a generator over its rated torque
    electrical_rad      amplitude of a generator's electrical angle [rad]
    irregularity        peak-to-peak speed over mean speed at a generator; None: no limit
    edition, given      as in `StrengthCriteria`
    """

    gear_share: float = 1.0 / 3.0
    gear_reversal: Literal["refused", "allowed"] = "refused"
    inertia_torque: float = 2.0
    electrical_rad: float = 0.061086523819801536
    irregularity: float | None = None
    edition: str | None = None
    given: tuple[str, ...] = ()


@dataclass(frozen=True)
class Amplitude:
    """[amplitudes]: amplitude of a source that the train implies, by its name as `check` lists it.

    torque_nm [N·m] at the source's own station, or torque_share of the mean torque there: one of them.
    """

    source: str
    torque_nm: float | None = None
    torque_share: float | None = None
    note: str | None = None
