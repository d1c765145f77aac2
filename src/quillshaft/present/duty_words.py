"""Limits of shafts and dampers as the data table states them; nothing where the file states none."""

from __future__ import annotations

from quillshaft.present.units import SHOWN, ShownUnits
from quillshaft.present.words import number
from quillshaft.train.damper_model import Damper
from quillshaft.train.duty_model import ShaftStrength, StressSection
from quillshaft.train.shaft_model import Piece, Shaft

PSI_PA = 6894.757293168361
"""lbf/in² in Pa, exact by the international pound and inch and standard gravity."""

RULES = {
    "endurance": "judged by its endurance limit",
    "propulsion": "judged by the rule for propulsion shafts",
    "tensile-share": "judged by a share of its tensile strength",
}


def stress_words(stress_pa: float, units: ShownUnits) -> str:
    """A stress in MPa, or in psi where the file is in US units."""
    return f"{number(stress_pa / 1e6)} MPa" if units is SHOWN["SI"] else f"{number(stress_pa / PSI_PA)} psi"


def limit_words(shaft: Shaft, units: ShownUnits) -> str:
    """A shaft's own limits and the section it is judged at, each led by a semicolon."""
    given = shaft.strength
    if given is None:
        return ""
    words = _limits(given, units)
    if given.rule is not None:
        form = [word for word in (given.propulsion_kind, given.propulsion_form) if word is not None]
        words.append(", ".join([RULES[given.rule], *form]))
    if given.weakest is not None:
        material = f" of {shaft.material.name}" if shaft.material and shaft.stiffness_nm_rad is not None else ""
        words.append(f"weakest section{material}, {units.length}: {_section(given.weakest, units)}")
    return "".join(f"; {word}" for word in words)


def _limits(given: ShaftStrength, units: ShownUnits) -> list[str]:
    words = []
    for stress, torque, when in (
        (given.permitted_stress_pa, given.permitted_torque_nm, "for good"),
        (given.passing_stress_pa, given.passing_torque_nm, "in passing"),
    ):
        if stress is not None:
            words.append(f"permitted ±{stress_words(stress, units)} {when}")
        if torque is not None:
            words.append(f"permitted ±{number(torque * units.per_nm)} {units.torque} {when}")
    return words


def _section(section: StressSection, units: ShownUnits) -> str:
    def size(value: float) -> str:
        return f"{value * units.per_m:.4g}"

    text = f"⌀{size(section.od_m)}" + (f" bore {size(section.id_m)}" if section.id_m else "")
    if section.fillet_m is not None and section.shoulder_m is not None:
        text += f", fillet {size(section.fillet_m)} to ⌀{size(section.shoulder_m)}"
    text += (", keyway" if section.keyway else "") + (", splines" if section.spline else "")
    return text + raiser_words(section, units)


def raiser_words(part: StressSection | Piece, units: ShownUnits) -> str:
    """Cross hole, stress concentration and finish of a section or piece, each led by a comma."""
    text = "" if part.cross_hole_m is None else f", cross hole {part.cross_hole_m * units.per_m:.4g}"
    if part.stress_factor is not None:
        text += f", stress concentration {number(part.stress_factor)}"
    return text + ("" if part.surface is None else f", {part.surface}")


def damper_limit_words(damper: Damper, units: ShownUnits) -> str:
    """Heat and torque that a damper's maker permits, each led by a comma."""
    text = "" if damper.permitted_heat_w is None else f", permitted heat {number(damper.permitted_heat_w)} W"
    if damper.permitted_torque_nm is not None:
        text += f", permitted torque ±{number(damper.permitted_torque_nm * units.per_nm)} {units.torque}"
    return text
