"""What every element's resolution shares: the list of assumptions, default tolerances, provenance, damping words."""

from __future__ import annotations

from typing import Any

from quillshaft.train.basic_model import Assumed, Provenance, Tolerance

TWO_PI = 6.283185307179586
ICE_K = 273.15
DEFAULT_TOLERANCE = {
    "station": 0.05,
    "impeller": 0.10,
    "shaft": 0.05,
    "throw": 0.10,
    "metallic": 0.10,
    "gear": 0.25,
    "elastomer": 0.15,
    "mesh": 0.20,
    "tie": 0.20,
}
"""Default relative tolerances by kind of element (common practice)."""


class Assumptions:
    """Collects what was assumed, in the order met; `tolerances` is False where the file wants none."""

    def __init__(self, tolerances: bool) -> None:
        self.tolerances = tolerances
        self.items: list[Assumed] = []

    def add(self, element: str, key: str, value: str, why: str) -> None:
        """List one assumed value."""
        self.items.append(Assumed(element, key, value, why))

    def tolerance(self, given: Tolerance | None, element: str, kind: str, share: float) -> Tolerance:
        """The given tolerance, or the default of the kind, listed."""
        if given is not None:
            return given
        if not self.tolerances:
            return (0.0, 0.0)
        self.add(element, "tolerance", f"±{share * 100:.3g} %", f"default for {kind}")
        return (-share, share)


def provenance(row: Any, element: str, said: Assumptions) -> Provenance:
    """Where an element's data come from; a number marked as assumed joins the list."""
    if row.status == "assumed":
        said.add(element, "status", "assumed", row.note or "the file marks this element's data as assumed")
    return Provenance(row.source, row.document, row.date, row.status, row.note)


def damping(row: Any) -> float | None:
    """Loss factor of a row that states it, or psi = 2π times it; None where neither is given."""
    if row.psi is not None:
        return float(row.psi) / TWO_PI
    return None if row.loss_factor is None else float(row.loss_factor)
