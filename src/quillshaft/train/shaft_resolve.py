"""[shafts] and [materials] into the Train: what is not stated is filled in and listed."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from typing import Any, Literal

from quillshaft.train.assumptions import DEFAULT_TOLERANCE, ICE_K, Assumptions, damping, provenance
from quillshaft.train.duty_resolve import shaft_strength
from quillshaft.train.materials import BUILT_IN
from quillshaft.train.shaft_model import EquivalentLength, Keyway, Material, Piece, Shaft, Throw
from quillshaft.train.validate import Rows

ROOM_K = ICE_K + 20.0
SHALLOW_KEYWAY, WIDE_KEYWAY = 0.2, 1.5
WORTH_A_WORD = 1.25
EQUAL = 1e-9
OwnInertia = Literal["ends", "none", "distributed"]
FIRST_CUTS = 16


def materials(rows: Rows) -> dict[str, Material]:
    """Built-in and own materials by name; the file's own win."""
    own = {name: _material(name, row) for name, row in rows.keyed["materials"].items()}
    return {**BUILT_IN, **own}


def _material(name: str, row: Any) -> Material:
    points = row.shear_modulus
    table = points if len(points) > 1 else ()
    return Material(
        name,
        points[0][1],
        row.density,
        row.tensile,
        modulus_points=table,
        yield_pa=row.yield_,
        endurance_pa=row.endurance,
    )


def at_temperature(material: Material, kelvin: float) -> Material:
    """The material with its shear modulus read at a temperature [K], straight between the stated points."""
    points = material.modulus_points
    if not points:
        return material
    modulus = points[-1][1]
    for (low, first), (high, second) in pairwise(points):
        if kelvin <= high:
            modulus = first + (second - first) * max(0.0, (kelvin - low) / (high - low))
            break
    return replace(material, shear_modulus_pa=modulus, temperature_k=kelvin)


def shafts(rows: Rows, said: Assumptions) -> tuple[Shaft, ...]:
    """[shafts]; geometry takes a material, a hub rule and what becomes of its own inertia."""
    known = materials(rows)
    return tuple(_shaft(name, row, known, rows, said) for name, row in rows.keyed["shafts"].items())


def _shaft(name: str, row: Any, known: dict[str, Material], rows: Rows, said: Assumptions) -> Shaft:
    element = f"shafts.{name}"
    settings = rows.plain["assumptions"]
    material = _shaft_material(row, known, rows, element, said)
    own_inertia = _own_inertia(row, settings.own_inertia, element, said)
    throw = row.throw is not None
    words, kind = ("a crank throw", "throw") if throw else ("a shaft's stiffness", "shaft")
    tolerance = said.tolerance(row.tolerance, element, words, DEFAULT_TOLERANCE[kind])
    pieces = _pieces(row, settings.hub_rule, material, element, said)
    return Shaft(
        name,
        (row.between[0], row.between[1]),
        tolerance,
        _stiffness(row),
        EquivalentLength(row.equivalent.length, row.equivalent.diameter) if row.equivalent else None,
        pieces,
        material,
        own_inertia,
        row.inertia_tolerance or (0.0, 0.0),
        row.referred_to,
        damping(row),
        provenance(row, element, said),
        row.group,
        viscous_nms_rad=row.viscous,
        throw=_throw(row.throw, own_inertia, element, said) if throw else None,
        shoulder=_shoulder(row, pieces, element, said),
        cuts=(row.cuts or FIRST_CUTS) if own_inertia == "distributed" else 0,
        cuts_given=row.cuts is not None,
        strength=shaft_strength(row),
    )


def _shaft_material(
    row: Any, known: dict[str, Material], rows: Rows, element: str, said: Assumptions
) -> Material | None:
    if row.pieces is None and row.equivalent is None and row.throw is None:
        return None if row.material is None else known[row.material]
    material = known[row.material or "steel"]
    _say_material(material, row.material is None, material.name in rows.keyed["materials"], element, said)
    if material.modulus_points and row.temperature is None:
        said.add(element, "temperature", "20 °C", f"not given: the shear modulus of {material.name} follows it")
    return at_temperature(material, ROOM_K if row.temperature is None else row.temperature)


def _own_inertia(row: Any, setting: OwnInertia | None, element: str, said: Assumptions) -> OwnInertia:
    if row.pieces is None and row.throw is None:
        return "none"
    chosen: OwnInertia | None = row.own_inertia or (setting if row.throw is None else None)
    if chosen == "distributed" and row.referred_to is not None:
        why = "its stiffness is given at another shaft's speed: lumped at both ends, not distributed"
        said.add(element, "own-inertia", "ends", why)
        chosen = "ends"
    if chosen is None and row.throw is not None:
        why = "not given: the inertias of the stations are taken to hold journal, webs and pin"
        said.add(element, "own-inertia", "none", why)
        return "none"
    if chosen is None:
        chosen = "ends"
        said.add(element, "own-inertia", "ends", "default for shafts given by pieces: lumped at both ends")
    if chosen != "none" and row.inertia_tolerance is None:
        said.add(element, "inertia-tolerance", "0 %", "default for a shaft's own inertia")
    return chosen


def _say_material(material: Material, unnamed: bool, own: bool, element: str, said: Assumptions) -> None:
    if unnamed:
        said.add(element, "material", material.name, "no material is given")
    entry = f"materials.{material.name}"
    if not own and all(item.element != entry for item in said.items):
        value = f"{material.shear_modulus_pa / 1e9:.4g} GPa, {material.density_kgm3:.4g} kg/m³"
        said.add(entry, "shear-modulus, density", value, "built-in material")


def _stiffness(row: Any) -> float | None:
    if row.stiffness is not None:
        return float(row.stiffness)
    return None if row.flexibility is None else 1.0 / float(row.flexibility)


def _pieces(
    row: Any, hub_rule: float | None, material: Material | None, element: str, said: Assumptions
) -> tuple[Piece, ...]:
    pieces = row.pieces or []
    if hub_rule is None and any(piece.hub is not None and piece.hub_rule is None for piece in pieces):
        said.add(element, "hub-rule", "1/3", "of the engagement counts as free length (common practice)")
    third = 1.0 / 3.0 if hub_rule is None else hub_rule
    _say_pieces(pieces, element, said)
    return tuple(_piece(piece, third, material) for piece in pieces)


def _piece(row: Any, hub_rule: float, material: Material | None) -> Piece:
    sides = row.section and (row.section.rectangle or [row.section.square] * 2)
    factor = 1.0
    if row.temperature is not None and material is not None:
        factor = at_temperature(material, row.temperature).shear_modulus_pa / material.shear_modulus_pa
    return Piece(
        row.length,
        row.outer,
        row.id or (0.0, 0.0),
        row.hub or (),
        hub_rule if row.hub_rule is None else row.hub_rule,
        row.fillet,
        Keyway(row.keyway.width, row.keyway.depth, row.keyway.length) if row.keyway else None,
        (max(sides), min(sides)) if sides else None,
        row.spline.minor if row.spline else None,
        (row.spline.share or 0.0) if row.spline else 0.0,
        row.flange is not None,
        factor,
        row.cross_hole,
        row.stress_factor,
        row.surface,
    )


def _say_pieces(pieces: list[Any], element: str, said: Assumptions) -> None:
    """List what the formulas of keyways and splines take for granted."""
    if any(piece.spline is not None and piece.spline.share is None for piece in pieces):
        why = "not given: the teeth are taken to carry no torque, which is the lowest that the stiffness can be"
        said.add(element, "spline share", "0 % (root circle)", why)
    if any(piece.flange is not None for piece in pieces):
        said.add(element, "flange", "rigid", "a flange adds its inertia and no twist")
    for number, piece in enumerate(pieces, 1):
        if piece.keyway is None:
            continue
        radius = piece.od[0] / 2
        shape, depth = piece.keyway.width / 2 / piece.keyway.depth, piece.keyway.depth / radius
        if depth < SHALLOW_KEYWAY - EQUAL or shape > WIDE_KEYWAY + EQUAL:
            why = (
                f"piece {number}: half width over depth {shape:.3g}, depth over radius {depth:.3g}, beside the range "
                "of the formula (0.3 to 1.5, 0.2 to 0.5): carried on towards the plain bar"
            )
            said.add(element, "keyway", "outside the formula's range", why)
        if piece.id is not None and max(piece.id) > 0:
            why = f"piece {number}: the keyway is taken to cost a bored shaft what it costs a solid one"
            said.add(element, "keyway", "of a solid shaft", why)


def _shoulder(
    row: Any, pieces: tuple[Piece, ...], element: str, said: Assumptions
) -> Literal["none", "fillet", "sharp"]:
    chosen: Literal["none", "fillet", "sharp"] | None = row.shoulder
    ends = [sorted((first.od_m[1], second.od_m[0])) for first, second in pairwise(pieces)]
    if chosen is None and any(large >= WORTH_A_WORD * small for small, large in ends):
        why = f"not given: no allowance where the diameter steps, here by {WORTH_A_WORD:g} and more"
        said.add(element, "shoulder", "none", why)
    return chosen or "none"


def _throw(row: Any, own_inertia: OwnInertia, element: str, said: Assumptions) -> Throw:
    if row.formula is None:
        said.add(element, "throw formula", "carter", "not given; the data table shows Ker Wilson beside it")
    if own_inertia == "ends" and row.web_inertia is None:
        said.add(element, "web-inertia", "plain web", "not given: a rectangular web without counterweight")
    return Throw(
        row.journal,
        row.journal_length,
        row.pin,
        row.pin_length,
        row.web_thickness,
        row.web_width,
        row.radius,
        row.journal_bore or 0.0,
        row.pin_bore or 0.0,
        row.web_inertia,
        row.formula or "carter",
    )
