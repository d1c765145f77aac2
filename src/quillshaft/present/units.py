"""The units that tables and report print: those the train file declares."""

from __future__ import annotations

from dataclasses import dataclass

LBF_IN_NM = 0.1129848290276167
LB_FT2_KGM2 = 0.0421401100938048


@dataclass(frozen=True)
class ShownUnits:
    """Labels, and what an SI value is multiplied by: kg·m², N·m, N·m/rad, kW, m, Pa, kg/m³ on the way in.

    Source of the factors: lb = 0.45359237 kg, in = 0.0254 m, standard gravity 9.80665 m/s² (exact definitions).
    """

    inertia: str
    per_kgm2: float
    torque: str
    per_nm: float
    stiffness: str
    per_nm_rad: float
    power: str
    per_kw: float
    length: str
    per_m: float
    modulus: str
    per_pa: float
    density: str
    per_kgm3: float


SHOWN = {
    "SI": ShownUnits("kg·m²", 1.0, "N·m", 1.0, "MN·m/rad", 1e-6, "kW", 1.0, "mm", 1e3, "GPa", 1e-9, "kg/m³", 1.0),
    "US": ShownUnits(
        "lb·ft²",
        1.0 / LB_FT2_KGM2,
        "lbf·in",
        1.0 / LBF_IN_NM,
        "10⁶ lbf·in/rad",
        1e-6 / LBF_IN_NM,
        "hp",
        1.0 / 0.74569987158227022,
        "in",
        1.0 / 0.0254,
        "10⁶ psi",
        1e-6 / 6894.757293168361,
        "lb/in³",
        0.0254**3 / 0.45359237,
    ),
}
