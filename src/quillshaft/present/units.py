"""The units that tables and report print: those the train file declares."""

from __future__ import annotations

from dataclasses import dataclass

LBF_IN_NM = 0.1129848290276167
LB_FT2_KGM2 = 0.0421401100938048


@dataclass(frozen=True)
class ShownUnits:
    """Labels, and what an SI value is multiplied by: kg·m², N·m, N·m/rad and kW on the way in.

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


SHOWN = {
    "SI": ShownUnits("kg·m²", 1.0, "N·m", 1.0, "kN·m/rad", 1e-3, "kW", 1.0),
    "US": ShownUnits(
        "lb·ft²",
        1.0 / LB_FT2_KGM2,
        "lbf·in",
        1.0 / LBF_IN_NM,
        "lbf·in/rad",
        1.0 / LBF_IN_NM,
        "hp",
        1.0 / 0.74569987158227022,
    ),
}
