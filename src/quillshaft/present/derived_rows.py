"""Values worked out from the data, as rows for terminal and report."""

from __future__ import annotations

from quillshaft.assess.results import DerivedValue, Screening
from quillshaft.present.units import SHOWN
from quillshaft.present.words import number

DERIVED_HEADS = ("Element", "worked out", "value", "unit", "from")


def derived_rows(screening: Screening) -> list[tuple[str, ...]]:
    """(element, what, value, unit, from what) per value, in the units the file declares; empty where there are none."""
    return [_row(screening, value) for value in screening.derived]


def _row(screening: Screening, value: DerivedValue) -> tuple[str, ...]:
    units = SHOWN[screening.train.units]
    factors = {
        "N·m/rad": (units.per_nm_rad, units.stiffness),
        "N·m·s/rad": (units.per_nm, f"{units.torque}·s/rad"),
        "1": (100.0, "%"),
    }
    factor, unit = factors.get(value.unit, (1.0, value.unit))
    return value.element, value.quantity, number(value.value * factor), unit, value.basis
