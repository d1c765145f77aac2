"""[dampers] with every default filled in and listed, and what a damper's state leaves of it."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from quillshaft.train.basic_model import Provenance, Tolerance
from quillshaft.train.damper_model import Damper, Pendulums

if TYPE_CHECKING:
    from quillshaft.train.assumptions import Assumptions
    from quillshaft.train.validate import Rows

SPRING_TOLERANCE = 0.15
RING_TOLERANCE = 0.05
ORDER_TOLERANCE = 0.02
"""Default relative tolerances of a damper's spring, its ring, and the order of its pendulums (common practice)."""

MOVING_SHARE = {"half": 0.5, "all": 1.0, "none": 0.0}


def dampers(rows: Rows, said: Assumptions) -> tuple[Damper, ...]:
    """[dampers] in file order."""
    makers = {"viscous": _viscous, "tuned": _tuned, "pendulum": _pendulum}
    return tuple(makers[row.kind](name, row, said) for name, row in rows.keyed["dampers"].items())


def _provenance(row: Any, element: str, said: Assumptions) -> Provenance:
    if row.status == "assumed":
        said.add(element, "status", "assumed", row.note or "the file marks this element's data as assumed")
    return Provenance(row.source, row.document, row.date, row.status, row.note)


def _ring_tolerance(row: Any, element: str, said: Assumptions) -> Tolerance:
    if row.inertia_tolerance is not None:
        return (row.inertia_tolerance[0], row.inertia_tolerance[1])
    if not said.tolerances or row.state == "lost":
        return (0.0, 0.0)
    said.add(element, "inertia-tolerance", f"±{RING_TOLERANCE * 100:.3g} %", "default for a damper's ring")
    return (-RING_TOLERANCE, RING_TOLERANCE)


def _damping(row: Any) -> tuple[float | None, float | None]:
    """(viscous [N·m·s/rad], loss factor) in the damper's state."""
    left = 0.5 if row.state == "half-damping" else 1.0
    psi = getattr(row, "psi", None)
    loss = getattr(row, "loss_factor", None) if psi is None else psi / (2.0 * math.pi)
    return None if row.viscous is None else row.viscous * left, None if loss is None else loss * left


def _viscous(name: str, row: Any, said: Assumptions) -> Damper:
    element, share = f"dampers.{name}", MOVING_SHARE[row.undamped or "half"]
    if row.state == "seized":
        share = 1.0
    elif row.state == "lost":
        share = 0.0
    elif row.undamped is None:
        why = "of the ring counts with its station in the undamped modes (common practice)"
        said.add(element, "undamped", "half", why)
    viscous, _ = _damping(row)
    return Damper(
        name,
        "viscous",
        row.at,
        row.ring_inertia,
        _ring_tolerance(row, element, said),
        moving_share=share,
        state=row.state,
        viscous_nms_rad=viscous,
        provenance=_provenance(row, element, said),
        group=row.group,
        permitted_heat_w=row.permitted_heat,
        permitted_torque_nm=row.permitted_torque,
    )


def _tuned(name: str, row: Any, said: Assumptions) -> Damper:
    element = f"dampers.{name}"
    stiffness = row.stiffness
    if stiffness is None:
        stiffness = row.ring_inertia * (2.0 * math.pi * row.tuned_frequency) ** 2
    viscous, loss = _damping(row)
    swings = row.state in ("healthy", "half-damping")
    tolerance = (0.0, 0.0)
    if swings:
        tolerance = said.tolerance(row.tolerance, element, "a tuned damper's spring", SPRING_TOLERANCE)
    return Damper(
        name,
        "tuned",
        row.at,
        row.ring_inertia,
        _ring_tolerance(row, element, said),
        tolerance,
        stiffness,
        state=row.state,
        viscous_nms_rad=viscous,
        loss_factor=loss,
        provenance=_provenance(row, element, said),
        group=row.group,
        permitted_heat_w=row.permitted_heat,
        permitted_torque_nm=row.permitted_torque,
    )


def _pendulum(name: str, row: Any, said: Assumptions) -> Damper:
    element = f"dampers.{name}"
    own = row.inertia_tolerance
    if own is None and said.tolerances and row.state != "lost":
        said.add(element, "inertia-tolerance", "0 %", "not given: mass and radii of pendulums are taken as exact")
    tolerance = (0.0, 0.0)
    if row.state in ("healthy", "half-damping"):
        kind = "the order of a pendulum damper; its ends are corner cases, not proven bounds"
        tolerance = said.tolerance(row.tolerance, element, kind, ORDER_TOLERANCE)
    viscous, _ = _damping(row)
    made = Pendulums(row.mass, row.number, row.suspension_radius, row.length)
    return Damper(
        name,
        "pendulum",
        row.at,
        made.number * made.mass_kg * (made.suspension_m + made.length_m) ** 2,
        (0.0, 0.0) if own is None else (own[0], own[1]),
        tolerance,
        order=math.sqrt(made.suspension_m / made.length_m),
        state=row.state,
        viscous_nms_rad=viscous,
        pendulums=made,
        provenance=_provenance(row, element, said),
        group=row.group,
        permitted_heat_w=row.permitted_heat,
        permitted_torque_nm=row.permitted_torque,
    )
