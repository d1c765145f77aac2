"""Validated rows into the Train: defaults are filled in here, and each one is listed as assumed."""

from __future__ import annotations

from typing import Any

from quillshaft.train.materials import BUILT_IN
from quillshaft.train.model import (
    Assumed,
    Coupling,
    Cylinder,
    Dismissal,
    Epicyclic,
    EquivalentLength,
    Excitation,
    GearGeometry,
    GearMesh,
    Machine,
    Material,
    Piece,
    Provenance,
    Shaft,
    Station,
    Tie,
    Tolerance,
)
from quillshaft.train.validate import Rows

TWO_PI = 6.283185307179586
ICE_K = 273.15
DEFAULT_TOLERANCE = {
    "station": 0.05,
    "impeller": 0.10,
    "shaft": 0.05,
    "metallic": 0.10,
    "gear": 0.25,
    "elastomer": 0.15,
    "mesh": 0.20,
    "tie": 0.20,
}
"""Default relative tolerances by kind of element (common practice)."""

WET_KINDS = ("centrifugal-pump", "propeller")


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


def _damping(row: Any) -> float | None:
    if row.psi is not None:
        return float(row.psi) / TWO_PI
    return None if row.loss_factor is None else float(row.loss_factor)


def stations(rows: Rows, said: Assumptions) -> tuple[Station, ...]:
    """[stations] with their tolerances; pump impellers and propellers ask about their water."""
    wet_at = {row.at for row in rows.keyed["machines"].values() if row.kind in WET_KINDS}
    return tuple(_station(name, row, name in wet_at, said) for name, row in rows.keyed["stations"].items())


def _station(name: str, row: Any, wetted: bool, said: Assumptions) -> Station:
    element = f"stations.{name}"
    spelling = next(key for key in ("inertia", "wr2", "gd2") if getattr(row, key) is not None)
    dry = float(getattr(row, spelling))
    entrained = row.entrained or 0.0
    if wetted and row.entrained is None and not row.wet and dry > 0:
        why = "neither entrained nor wet = true is given: the inertia is taken as it stands"
        said.add(element, "entrained", "0 %", why)
    kind = "an impeller or propeller, plus half the entrained part" if wetted else "a station"
    share = DEFAULT_TOLERANCE["impeller"] + entrained / 2 if wetted else DEFAULT_TOLERANCE["station"]
    tolerance = said.tolerance(row.tolerance, element, kind, share) if dry > 0 else (0.0, 0.0)
    return Station(
        name,
        dry * (1 + entrained),
        tolerance,
        entrained,
        row.wet,
        row.referred_to,
        row.mass,
        row.diameter,
        spelling,  # type: ignore[arg-type]
        provenance(row, element, said),
        row.group,
    )


def materials(rows: Rows) -> dict[str, Material]:
    """Built-in and own materials by name; the file's own win."""
    own = {
        name: Material(name, row.shear_modulus, row.density, row.tensile)
        for name, row in rows.keyed["materials"].items()
    }
    return {**BUILT_IN, **own}


def shafts(rows: Rows, said: Assumptions) -> tuple[Shaft, ...]:
    """[shafts]; geometry takes a material, a hub rule and what becomes of its own inertia."""
    known, own = materials(rows), rows.keyed["materials"]
    settings = rows.plain["assumptions"]
    out = []
    for name, row in rows.keyed["shafts"].items():
        element = f"shafts.{name}"
        geometric = row.pieces is not None or row.equivalent is not None
        material = known[row.material or "steel"] if geometric else None
        if material is not None:
            _say_material(material, row.material is None, material.name in own, element, said)
        own_inertia = row.own_inertia or settings.own_inertia
        if row.pieces is not None and own_inertia is None:
            own_inertia = "ends"
            said.add(element, "own-inertia", "ends", "default for shafts given by pieces: lumped at both ends")
        if own_inertia == "ends" and row.pieces is not None and row.inertia_tolerance is None:
            said.add(element, "inertia-tolerance", "0 %", "default for a shaft's own inertia")
        out.append(
            Shaft(
                name,
                (row.between[0], row.between[1]),
                said.tolerance(row.tolerance, element, "a shaft's stiffness", DEFAULT_TOLERANCE["shaft"]),
                _stiffness(row),
                EquivalentLength(row.equivalent.length, row.equivalent.diameter) if row.equivalent else None,
                _pieces(row, settings.hub_rule, element, said),
                material,
                (own_inertia or "none") if row.pieces is not None else "none",
                row.inertia_tolerance or (0.0, 0.0),
                row.referred_to,
                _damping(row),
                provenance(row, element, said),
                row.group,
            )
        )
    return tuple(out)


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


def _pieces(row: Any, hub_rule: float | None, element: str, said: Assumptions) -> tuple[Piece, ...]:
    pieces = row.pieces or []
    if hub_rule is None and any(piece.hub is not None and piece.hub_rule is None for piece in pieces):
        said.add(element, "hub-rule", "1/3", "of the engagement counts as free length (common practice)")
    third = 1.0 / 3.0 if hub_rule is None else hub_rule
    return tuple(
        Piece(
            piece.length,
            piece.od,
            piece.id or (0.0, 0.0),
            piece.hub or (),
            third if piece.hub_rule is None else piece.hub_rule,
            piece.fillet,
        )
        for piece in pieces
    )


def coupling_kind(kind: str | None) -> tuple[str, str]:
    """(key of the default tolerance, how the list of assumptions calls it)."""
    if kind in ("disc", "diaphragm", "steel-spring", "grid"):
        return "metallic", "a metallic coupling"
    if kind == "gear":
        return "gear", "a gear coupling"
    return "elastomer", "an elastomer coupling" if kind else "a coupling of no stated kind"


def couplings(rows: Rows, said: Assumptions) -> tuple[Coupling, ...]:
    """[couplings]; whether the stiffness holds the shaft ends is an assumption where not said."""
    out = []
    for name, row in rows.keyed["couplings"].items():
        element = f"couplings.{name}"
        key, words = coupling_kind(row.kind)
        tolerance = said.tolerance(row.tolerance, element, words, DEFAULT_TOLERANCE[key])
        if row.shaft_in_hub is None:
            why = "not said: the stated stiffness is taken not to hold the shaft ends in its hubs"
            said.add(element, "shaft-in-hub", "excluded", why)
        half = row.inertia_tolerance
        if half is None and row.half_inertias is not None and any(row.half_inertias):
            share = DEFAULT_TOLERANCE["station"] if said.tolerances else 0.0
            said.add(element, "inertia-tolerance", f"±{share * 100:.3g} %", "default for half inertias")
            half = (-share, share)
        points = row.stiffness or ((0.0, 1.0 / row.flexibility),)
        temperature = row.temperature or ()
        operating = row.operating_temperature
        if temperature and operating is None:
            operating = (temperature[0][0], temperature[-1][0])
            cold, hot = (f"{value - ICE_K:.4g} °C" for value in operating)
            said.add(element, "operating-temperature", f"{cold} to {hot}", "not given: the ends of the table")
        out.append(
            Coupling(
                name,
                (row.between[0], row.between[1]),
                points[0][1],
                tolerance,
                row.kind,
                row.half_inertias or (0.0, 0.0),
                half or (0.0, 0.0),
                row.shaft_in_hub,
                _damping(row),
                row.rated_torque,
                row.referred_to,
                provenance(row, element, said),
                points if len(points) > 1 else (),
                temperature,
                row.damping_temperature or (),
                operating,
                row.group,
            )
        )
    return tuple(out)


def gears(rows: Rows, said: Assumptions) -> tuple[GearMesh | Epicyclic, ...]:
    """[gears]: rigid meshes have no tolerance; an elastic one takes the mesh default."""
    return tuple(
        _epicyclic(name, row, said) if row.kind == "epicyclic" else _mesh(name, row, said)
        for name, row in rows.keyed["gears"].items()
    )


def _mesh_tolerance(row: Any, element: str, said: Assumptions) -> Tolerance:
    if row.kind == "epicyclic":
        said.add(element, "planet inertia", "0", "planets turn and travel without inertia of their own")
    if row.mesh_stiffness is None:
        said.add(element, "mesh-stiffness", "rigid", "not given")
        return (0.0, 0.0)
    return said.tolerance(row.tolerance, element, "a gear mesh", DEFAULT_TOLERANCE["mesh"])


def _mesh(name: str, row: Any, said: Assumptions) -> GearMesh:
    element = f"gears.{name}"
    measure, value = row.mesh_stiffness or (None, 0.0)
    linear = {"linear_stiffness": 1.0, "mesh_stiffness_per_face": row.face}.get(measure or "")
    geometry = None
    if row.module is not None:
        helix, angle = row.helix, row.pressure_angle
        if linear is not None and helix is None:
            said.add(element, "helix", "0 deg", "not given: spur teeth")
        if linear is not None and angle is None:
            said.add(element, "pressure-angle", "20 deg", "not given")
        geometry = GearGeometry(row.module, helix or 0.0, angle or TWO_PI / 18, row.face)
    return GearMesh(
        name,
        (row.between[0], row.between[1]),
        (row.teeth[0], row.teeth[1]),
        row.internal,
        geometry,
        None if linear is None else value * linear,
        value if measure == "stiffness" else None,
        _damping(row),
        _mesh_tolerance(row, element, said),
        provenance(row, element, said),
        row.group,
    )


def _epicyclic(name: str, row: Any, said: Assumptions) -> Epicyclic:
    element = f"gears.{name}"
    return Epicyclic(
        name,
        row.sun,
        row.ring,
        row.carrier,
        row.teeth.sun,
        row.teeth.ring,
        row.planets,
        row.mesh_stiffness,
        _damping(row),
        _mesh_tolerance(row, element, said),
        provenance(row, element, said),
        row.group,
    )


def ties(rows: Rows, said: Assumptions) -> tuple[Tie, ...]:
    """[ties] with their tolerances."""
    return tuple(
        Tie(
            name,
            row.at,
            row.stiffness,
            said.tolerance(row.tolerance, f"ties.{name}", "a tie", DEFAULT_TOLERANCE["tie"]),
            _damping(row),
            provenance(row, f"ties.{name}", said),
            row.group,
        )
        for name, row in rows.keyed["ties"].items()
    )


def machines(rows: Rows, said: Assumptions) -> tuple[Machine, ...]:
    """[machines]; a missing vane or blade number is listed, since its passing is then not screened."""
    return tuple(_machine(name, row, said) for name, row in rows.keyed["machines"].items())


def _machine(name: str, row: Any, said: Assumptions) -> Machine:
    element = f"machines.{name}"
    blades = getattr(row, "vanes", getattr(row, "blades", None))
    for key in ("vanes", "blades"):
        if hasattr(row, key) and blades is None:
            said.add(element, key, "none", f"not given: {key[:-1]} passing is not screened")
    slip = getattr(row, "slip", None)
    if hasattr(row, "slip") and slip is None:
        said.add(element, "slip", "0 Hz", "not given: output frequency = pole pairs · speed")
    if row.kind == "converter-fed-motor":
        said.add(element, "harmonics", "1, 2, 6 and 12", "of the output frequency: the set screened")
    if row.kind == "reciprocating-engine":
        low = "0.5" if row.strokes == 4 else "1"
        said.add(element, "orders", f"{low} to 12", "the orders screened; higher ones are not")
    cylinders = tuple(Cylinder(item.at, item.fires_at) for item in getattr(row, "cylinders", ()))
    return Machine(
        name,
        row.kind,
        getattr(row, "at", None),
        getattr(row, "poles", None),
        getattr(row, "supply", None),
        slip or 0.0,
        getattr(row, "line_side", False),
        blades,
        getattr(row, "diffuser_vanes", None),
        tuple(getattr(row, "passes", ())),
        getattr(row, "strokes", None),
        cylinders,
        provenance(row, element, said),
    )


def excitations(rows: Rows, said: Assumptions) -> tuple[Excitation, ...]:
    """[excitations] as lines in the speed–frequency plane."""
    out = []
    for name, row in rows.keyed["excitations"].items():
        measure, value = row.torque or (None, 0.0)
        out.append(
            Excitation(
                name,
                row.at,
                row.order or 0.0,
                row.frequency or 0.0,
                value if measure == "torque" else None,
                value if measure == "share" else None,
                row.when,
                provenance(row, f"excitations.{name}", said),
            )
        )
    return tuple(out)


def dismissals(rows: Rows) -> tuple[Dismissal, ...]:
    """[dismissals] in file order."""
    return tuple(
        Dismissal(name, row.source, row.mode, row.frequency, row.because, row.by, tuple(row.cases))
        for name, row in rows.keyed["dismissals"].items()
    )
