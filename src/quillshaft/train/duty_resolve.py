"""Limits, criteria and amplitudes into their records. Defaults are listed where they are used, not here."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from quillshaft.train.assumptions import Assumptions, provenance
from quillshaft.train.duty_model import Amplitude, DutyCriteria, ShaftStrength, StrengthCriteria, StressSection

if TYPE_CHECKING:
    from quillshaft.train.validate import Rows


def shaft_strength(row: Any) -> ShaftStrength | None:
    """The limits of a shaft's row; None where it states none."""
    made = ShaftStrength(
        row.permitted_stress,
        row.passing_stress,
        row.permitted_torque,
        row.passing_torque,
        row.strength_rule,
        row.propulsion_kind,
        row.propulsion_form,
        _section(row.weakest),
    )
    return None if made == ShaftStrength() else made


def _section(row: Any) -> StressSection | None:
    if row is None:
        return None
    return StressSection(
        row.od,
        row.id or 0.0,
        row.fillet,
        row.shoulder,
        row.keyway,
        row.spline,
        row.cross_hole,
        row.stress_factor,
        row.surface,
    )


def strength_criteria(row: Any) -> StrengthCriteria:
    """[criteria.strength]; what it does not state takes its default."""
    return StrengthCriteria(**_stated(row, {}))


def duty_criteria(row: Any) -> DutyCriteria:
    """[criteria.duty]; what it does not state takes its default."""
    return DutyCriteria(**_stated(row, {"electrical_angle": "electrical_rad"}))


def _stated(row: Any, names: dict[str, str]) -> dict[str, Any]:
    """The fields of a record that a table states, and their keys as `given`; `names` are fields of another name."""
    values = {} if row is None else {key: value for key, value in dict(row).items() if value is not None}
    given = tuple(key.replace("_", "-") for key in values)
    return {**{names.get(key, key): value for key, value in values.items()}, "given": given}


def operation_fields(row: Any) -> dict[str, Any]:
    """Fields of Operation that only the forced response uses; those not stated take its defaults."""
    stated: dict[str, Any] = {"ramp_rad_s2": row.ramp}
    for key in ("tachometer", "light_load"):
        if getattr(row, key) is not None:
            stated |= {key: getattr(row, key), f"{key}_given": True}
    return stated


def amplitudes(rows: Rows, said: Assumptions) -> tuple[Amplitude, ...]:
    """[amplitudes] in file order."""
    out = []
    for name, row in rows.keyed["amplitudes"].items():
        provenance(row, f"amplitudes.{name}", said)
        measure, value = row.torque
        is_torque = measure == "torque"
        out.append(Amplitude(name, value if is_torque else None, None if is_torque else value, row.note))
    return tuple(out)
