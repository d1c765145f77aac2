"""Shafts, their pieces, crank throws and materials as the report's data table words them."""

from __future__ import annotations

from typing import Any

from quillshaft.elements.crank import throw_stiffness
from quillshaft.present.duty_words import raiser_words
from quillshaft.present.units import ShownUnits
from quillshaft.present.words import number
from quillshaft.train.model import RunningGear, Train
from quillshaft.train.shaft_model import Piece, Shaft, Throw

OWN_INERTIA = {
    "ends": "own inertia lumped at both ends",
    "none": "own inertia left out",
    "distributed": "own inertia distributed",
}
SHOULDERS = {
    "none": "",
    "fillet": "; shoulders with their fillets",
    "sharp": "; shoulders as sharp corners",
}


def shaft_words(shaft: Shaft, units: ShownUnits) -> str:
    """A shaft as it was given."""
    if shaft.stiffness_nm_rad is not None:
        text = f"{number(shaft.stiffness_nm_rad * units.per_nm_rad, 5)} {units.stiffness}"
        return text + (f", referred to {shaft.referred_to}" if shaft.referred_to else "")
    material = material_label(shaft)
    if shaft.equivalent is not None:
        length, diameter = shaft.equivalent.length_m * units.per_m, shaft.equivalent.diameter_m * units.per_m
        size = f"{length:.5g} × ⌀{diameter:.5g} {units.length}"
        return f"equal to a plain bar {size}, {material}"
    if shaft.throw is not None:
        return _throw(shaft, shaft.throw, units)
    pieces = "; ".join(_piece(piece, units) for piece in shaft.pieces)
    return f"{material}, {units.length}: {pieces}{SHOULDERS[shaft.shoulder]}; {OWN_INERTIA[shaft.own_inertia]}"


def material_label(shaft: Shaft) -> str:
    """The material's name, with its temperature where the shear modulus follows it."""
    material = shaft.material
    if material is None:
        return ""
    if material.temperature_k is None:
        return material.name
    return f"{material.name} at {material.temperature_k - 273.15:.4g} °C"


def _piece(piece: Piece, units: ShownUnits) -> str:
    outer = "/".join(f"{value * units.per_m:.4g}" for value in dict.fromkeys(piece.od_m))
    inner = "/".join(f"{value * units.per_m:.4g}" for value in dict.fromkeys(piece.id_m) if value)
    text = f"{_kind(piece, outer, units)}" + (f" bore {inner}" if inner else "")
    text += f" × {piece.length_m * units.per_m:.5g}"
    if piece.hub_m:
        text += f" + {piece.hub_rule:.3g} · {sum(piece.hub_m) * units.per_m:.4g} in hub"
    if piece.keyway is not None:
        text += f", keyway {piece.keyway.width_m * units.per_m:.4g} × {piece.keyway.depth_m * units.per_m:.4g}"
        if piece.keyway.length_m is not None:
            text += f" over {piece.keyway.length_m * units.per_m:.4g}"
    if piece.modulus_factor != 1.0:
        text += f", modulus × {piece.modulus_factor:.4g}"
    return text + raiser_words(piece, units)


def _kind(piece: Piece, outer: str, units: ShownUnits) -> str:
    if piece.section_m is not None:
        return " by ".join(f"{side * units.per_m:.4g}" for side in piece.section_m)
    if piece.spline_minor_m is not None:
        root = f"{piece.spline_minor_m * units.per_m:.4g}"
        return f"splines ⌀{outer}/{root}, teeth carry {piece.spline_share:.3g}"
    return f"flange ⌀{outer}" if piece.flange else f"⌀{outer}"


def _throw(shaft: Shaft, throw: Throw, units: ShownUnits) -> str:
    def size(outer: float, bore: float, length: float) -> str:
        hole = f" bore {bore * units.per_m:.4g}" if bore else ""
        return f"⌀{outer * units.per_m:.4g}{hole} × {length * units.per_m:.4g}"

    webs = f"{throw.web_thickness_m * units.per_m:.4g} × {throw.web_width_m * units.per_m:.4g}"
    modulus = shaft.material.shear_modulus_pa if shaft.material else 0.0
    carter, ker_wilson = (
        number(throw_stiffness(throw, modulus, formula) * units.per_nm_rad, 5) for formula in ("carter", "ker-wilson")
    )
    used = {"carter": "Carter", "ker-wilson": "Ker Wilson"}[throw.formula]
    own = OWN_INERTIA[shaft.own_inertia]
    if shaft.own_inertia == "ends":
        given = throw.web_inertia_kgm2
        own += ", plain webs" if given is None else f", web {number(given * units.per_kgm2)} {units.inertia} each"
    return (
        f"crank throw, {material_label(shaft)}, {units.length}: "
        f"journal {size(throw.journal_m, throw.journal_bore_m, throw.journal_length_m)}, "
        f"pin {size(throw.pin_m, throw.pin_bore_m, throw.pin_length_m)}, webs {webs}, "
        f"radius {throw.radius_m * units.per_m:.4g}; Carter {carter}, Ker Wilson {ker_wilson} {units.stiffness} "
        f"(both recalled, confirm against your edition), {used} used; {own}"
    )


def running_gear_words(gear: RunningGear, units: ShownUnits) -> str:
    """The running gear of a throw as it was given; masses in kg."""
    each = f"reciprocating {gear.reciprocating_kg:.5g} kg, rotating {gear.rotating_kg:.5g} kg"
    size = f"radius {gear.radius_m * units.per_m:.5g}, rod {gear.rod_m * units.per_m:.5g} {units.length}"
    return f"running gear of {gear.cylinders} × {each}, {size}"


def material_rows(train: Train, units: Any) -> list[tuple[str, str, str]]:
    """(material, shear modulus, density) of every material and temperature that a shaft uses."""
    used = {material_label(shaft): shaft.material for shaft in train.shafts if shaft.material}
    return [
        (
            name,
            f"{item.shear_modulus_pa * units.per_pa:.4g} {units.modulus}",
            f"{item.density_kgm3 * units.per_kgm3:.5g} {units.density}",
        )
        for name, item in used.items()
    ]
