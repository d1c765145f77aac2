"""Fluid couplings, and the ratings of the others, with every default filled in and listed."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from quillshaft.train.basic_model import Provenance
from quillshaft.train.coupling_model import CouplingRatings, FluidCoupling

if TYPE_CHECKING:
    from quillshaft.train.assumptions import Assumptions
    from quillshaft.train.validate import Rows

SLIP = 0.03
"""Slip of a fluid coupling at rated load where the file says nothing: 2 to 4 % (common practice)."""
HALF_TOLERANCE = 0.05
REFERENCE_HZ = 10.0


def fluid_couplings(rows: Rows, said: Assumptions) -> tuple[FluidCoupling, ...]:
    """[couplings] of kind fluid, in file order."""
    out = []
    for name, row in rows.keyed["couplings"].items():
        if row.kind != "fluid":
            continue
        element, slip = f"couplings.{name}", row.slip
        if slip is None:
            slip = SLIP
            said.add(element, "slip", "3 %", "not given: ordinary at rated load is 2 to 4 % (common practice)")
        half = row.inertia_tolerance
        if half is None and row.half_inertias is not None and any(row.half_inertias):
            share = HALF_TOLERANCE if said.tolerances else 0.0
            said.add(element, "inertia-tolerance", f"±{share * 100:.3g} %", "default for half inertias")
            half = (-share, share)
        if row.status == "assumed":
            said.add(element, "status", "assumed", row.note or "the file marks this element's data as assumed")
        out.append(
            FluidCoupling(
                name,
                (row.between[0], row.between[1]),
                slip,
                row.half_inertias or (0.0, 0.0),
                half or (0.0, 0.0),
                row.rated_torque,
                row.max_speed or None,
                Provenance(row.source, row.document, row.date, row.status, row.note),
            )
        )
    return tuple(out)


def coupling_ratings(name: str, row: Any, said: Assumptions) -> CouplingRatings | None:
    """The maker's ratings of a coupling; None where it states none."""
    reference = row.reference_frequency
    if row.vibratory_torque is not None and reference is None:
        reference = REFERENCE_HZ
        said.add(f"couplings.{name}", "reference-frequency", "10 Hz", "not given: catalogues quote at 10 Hz")
    made = CouplingRatings(
        row.peak_torque, row.vibratory_torque, reference, row.permitted_heat, row.heat_rise, row.max_speed or None
    )
    return None if made == CouplingRatings() else made
