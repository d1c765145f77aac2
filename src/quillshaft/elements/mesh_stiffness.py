"""Mesh stiffness of cylindrical steel gears by the simplified rule of ISO 6336-1, and the contact ratio it needs.

All constants of the rule are recalled from memory: confirm them against your edition of the standard.
"""

from __future__ import annotations

import math

from quillshaft.records import dataclass
from quillshaft.train.gear_model import GearGeometry

CORRECTION = 0.8
"""C_M of the rule: measured over theoretical stiffness (ISO 6336-1, recalled)."""

RACK_ANGLE_DEG = 20.0
PER_MM_UM = 1e9
"""N/m² in one N/(mm·µm)."""

SHIFT_SUM = (-0.5, 2.0)
"""Range of x1 + x2 in which the rule holds (ISO 6336-1, recalled)."""


@dataclass(frozen=True)
class MeshRuleResult:
    """The rule's results for one pair of gears.

    flexibility_mm_um_n     q' [mm·µm/N], per unit face
    theoretical_n_mm_um     c'_th = 1/q' [N/(mm·µm)]
    single_n_mm_um          c' of one pair of teeth [N/(mm·µm)]
    contact_ratio           transverse, ε_α
    mean_n_mm_um            c_γ of the mesh, its mean over the engagement [N/(mm·µm)]
    """

    flexibility_mm_um_n: float
    theoretical_n_mm_um: float
    single_n_mm_um: float
    contact_ratio: float
    mean_n_mm_um: float


def tooth_flexibility(z1: float, z2: float, x1: float = 0.0, x2: float = 0.0) -> float:
    """Theoretical flexibility q' [mm·µm/N] of a pair of teeth of steel, per unit face.

    z1, z2 are (virtual) tooth numbers, 1 the smaller wheel; z2 = inf for a ring or a rack. x1, x2 are profile
    shift coefficients. Source: ISO 6336-1, single stiffness, series for q' (recalled, confirm against your edition).
    """
    return (
        0.04723
        + 0.15551 / z1
        + 0.25791 / z2
        - 0.00635 * x1
        - 0.11654 * x1 / z1
        - 0.00193 * x2
        - 0.24188 * x2 / z2
        + 0.00529 * x1**2
        + 0.00182 * x2**2
    )


def single_stiffness(
    theoretical_n_mm_um: float, helix_rad: float = 0.0, pressure_angle_rad: float = math.pi / 9
) -> float:
    """Stiffness c' [N/(mm·µm)] of one pair of teeth: c'_th C_M C_R C_B cos β.

    C_M = 0.8, C_R = 1 (solid blanks), C_B = 1 − 0.02 (20° − α_n), for a basic rack of dedendum 1.2 modules.
    Source: ISO 6336-1 (recalled, confirm against your edition).
    """
    rack = 1.0 - 0.02 * (RACK_ANGLE_DEG - math.degrees(pressure_angle_rad))
    return theoretical_n_mm_um * CORRECTION * rack * math.cos(helix_rad)


def mean_stiffness(single_n_mm_um: float, contact_ratio: float) -> float:
    """Mean mesh stiffness c_γ [N/(mm·µm)]: c' (0.75 ε_α + 0.25).

    Source: ISO 6336-1 (recalled, confirm against your edition).
    """
    return single_n_mm_um * (0.75 * contact_ratio + 0.25)


def involute(angle_rad: float) -> float:
    """inv α = tan α − α. Source: definition of the involute function."""
    return math.tan(angle_rad) - angle_rad


def inverse_involute(value: float) -> float:
    """Angle [rad, 0 to π/2] whose involute function is `value` ≥ 0, by bisection."""
    low, high = 0.0, 1.5
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if involute(middle) < value else (low, middle)
    return 0.5 * (low + high)


def contact_ratio(geometry: GearGeometry, teeth: tuple[int, int], internal: bool = False) -> float:
    """Transverse contact ratio ε_α; in an internal mesh the second wheel is the ring.

    Addendum 1.0 module shifted by x, wheels at the centre distance that leaves no backlash; a ring's shift
    counts outward. Source: geometry of the involute, ISO 21771 (from memory): path of contact between the two
    tip circles over the base pitch. Raises ValueError where these sizes cannot mesh.
    """
    beta, module = geometry.helix_rad, geometry.module_m
    alpha = math.atan(math.tan(geometry.pressure_angle_rad) / math.cos(beta))
    z1, z2 = (float(count) for count in teeth)
    x1, x2 = geometry.profile_shift
    side = -1.0 if internal else 1.0
    shifts, count = side * x1 + x2, side * z1 + z2
    lift = involute(alpha) + 2.0 * shifts / count * math.tan(geometry.pressure_angle_rad)
    if lift <= 0.0:
        raise ValueError("these profile shifts leave no pressure angle")
    working = inverse_involute(lift)
    pitch = [0.5 * z * module / math.cos(beta) for z in (z1, z2)]
    base = [radius * math.cos(alpha) for radius in pitch]
    distance = 0.5 * count * module / math.cos(beta) * math.cos(alpha) / math.cos(working)
    tip = [pitch[0] + module * (1.0 + x1), pitch[1] + module * (side + x2)]
    if any(outer <= inner for outer, inner in zip(tip, base, strict=True)):
        raise ValueError("a tip circle lies inside its base circle")
    near, far = (math.sqrt(outer**2 - inner**2) for outer, inner in zip(tip, base, strict=True))
    path = near + side * far - side * distance * math.sin(working)
    return path / (math.pi * module / math.cos(beta) * math.cos(alpha))


def rule_stiffness(geometry: GearGeometry, teeth: tuple[int, int], internal: bool = False) -> MeshRuleResult:
    """Mesh stiffness per unit face by the rule; in an internal mesh the second wheel is the ring.

    Virtual tooth numbers z / (cos² β_b cos β); a ring counts as infinitely many teeth. Source: ISO 6336-1
    (recalled, confirm against your edition). Raises ValueError as `contact_ratio` does.
    """
    beta = geometry.helix_rad
    base_helix = math.asin(math.sin(beta) * math.cos(geometry.pressure_angle_rad))
    virtual = [z / (math.cos(base_helix) ** 2 * math.cos(beta)) for z in teeth]
    shifts = list(geometry.profile_shift)
    if internal:
        virtual[1], shifts[1] = math.inf, 0.0
    elif virtual[0] > virtual[1]:
        virtual.reverse()
        shifts.reverse()
    flexibility = tooth_flexibility(*virtual, *shifts)
    single = single_stiffness(1.0 / flexibility, beta, geometry.pressure_angle_rad)
    ratio = geometry.contact_ratio or contact_ratio(geometry, teeth, internal)
    return MeshRuleResult(flexibility, 1.0 / flexibility, single, ratio, mean_stiffness(single, ratio))
