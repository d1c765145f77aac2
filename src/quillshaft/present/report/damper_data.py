"""Dampers, fluid couplings and coupling ratings as the data table words them."""

from __future__ import annotations

import math

from quillshaft.present.units import ShownUnits
from quillshaft.present.words import number, plain
from quillshaft.train.coupling_model import CouplingRatings, FluidCoupling
from quillshaft.train.damper_model import Damper

RPM = 30.0 / math.pi
MOVING = {0.5: "half of it", 1.0: "all of it", 0.0: "none of it"}


def damper_text(damper: Damper, units: ShownUnits) -> str:
    """Kind, station, data as given and state."""
    inertia = f"{number(damper.inertia_kgm2 * units.per_kgm2, 5)} {units.inertia}"
    if damper.kind == "viscous":
        text = f"untuned viscous damper at {damper.at}, ring {inertia}, {MOVING[damper.moving_share]} counts undamped"
    elif damper.kind == "tuned":
        stiffness = damper.stiffness_nm_rad or 0.0
        own = math.sqrt(stiffness / damper.inertia_kgm2) / (2.0 * math.pi)
        spring = f"{number(stiffness * units.per_nm_rad, 5)} {units.stiffness}"
        text = f"tuned damper at {damper.at}, ring {inertia} on {spring} (alone {own:.2f} Hz)"
    else:
        text = _pendulums(damper, units) + f", {inertia} at rest on their arms"
    if damper.viscous_nms_rad is not None:
        text += f", {number(damper.viscous_nms_rad * units.per_nm)} {units.torque}·s/rad"
    if damper.loss_factor is not None:
        text += f", loss factor {number(damper.loss_factor, 3)}"
    return text + ("" if damper.state == "healthy" else f"; state: {damper.state}")


def _pendulums(damper: Damper, units: ShownUnits) -> str:
    made = damper.pendulums
    if made is None:
        return f"pendulums at {damper.at}"
    mass = f"{number(made.mass_kg)} kg" if units.length == "mm" else f"{number(made.mass_kg / 0.45359237)} lb"
    radius, length = (f"{value * units.per_m:.5g}" for value in (made.suspension_m, made.length_m))
    arms = f"suspended at {radius} {units.length}, length {length} {units.length}"
    return f"{made.number} pendulums of {mass} at {damper.at}, {arms}, order {damper.order or 0.0:.4g}"


def ratings_text(ratings: CouplingRatings | None, units: ShownUnits) -> str:
    """The maker's ratings beside the rated torque, each led by a comma; nothing where there are none."""
    if ratings is None:
        return ""
    text = ""
    if ratings.peak_nm is not None:
        text += f", peak {number(ratings.peak_nm * units.per_nm)} {units.torque}"
    if ratings.vibratory_nm is not None:
        text += f", vibratory ±{number(ratings.vibratory_nm * units.per_nm)} {units.torque}"
        text += f" at {number(ratings.reference_hz or 0.0)} Hz"
    if ratings.permitted_heat_w is not None:
        text += f", heat {number(ratings.permitted_heat_w)} W"
        text += "" if ratings.heat_rise_k is None else f" for {number(ratings.heat_rise_k)} K rise"
    if ratings.max_speed_rad_s is not None:
        text += f", up to {ratings.max_speed_rad_s * RPM:.0f} rpm"
    return text


def fluid_text(coupling: FluidCoupling, units: ShownUnits) -> str:
    """A fluid coupling, and that it separates the train."""
    first, second = coupling.between
    text = (
        f"fluid coupling {first} – {second}, slip {plain(coupling.slip)}: no spring, it separates the train torsionally"
    )
    if any(coupling.half_inertias_kgm2):
        halves = " and ".join(number(value * units.per_kgm2) for value in coupling.half_inertias_kgm2)
        text += f", halves {halves} {units.inertia}"
    if coupling.rated_torque_nm is not None:
        text += f", rated {number(coupling.rated_torque_nm * units.per_nm)} {units.torque}"
    if coupling.max_speed_rad_s is not None:
        text += f", up to {coupling.max_speed_rad_s * RPM:.0f} rpm"
    return text
