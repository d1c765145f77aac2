"""Validated rows into the Train: defaults are filled in here, and each one is listed as assumed."""

from __future__ import annotations

from typing import Any

from quillshaft.train.assumptions import DEFAULT_TOLERANCE, ICE_K, Assumptions, damping, provenance
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.coupling_resolve import coupling_ratings
from quillshaft.train.electrical_resolve import electrical, synchronizing
from quillshaft.train.model import Dismissal, Excitation, Machine, RunningGear, Station, Tie
from quillshaft.train.reciprocating_resolve import KINDS as RECIPROCATING
from quillshaft.train.reciprocating_resolve import Read, machine_parts
from quillshaft.train.validate import Rows

WET_KINDS = ("centrifugal-pump", "propeller")


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
    tolerance = said.tolerance(row.tolerance, element, kind, share) if dry > 0 or row.running_gear else (0.0, 0.0)
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
        viscous_nms_rad=row.viscous,
        viscous_because=row.viscous_because,
        running_gear=_running_gear(row.running_gear, element, said),
    )


def _running_gear(row: Any, element: str, said: Assumptions) -> RunningGear | None:
    if row is None:
        return None
    if row.rotating_mass is None:
        said.add(element, "rotating-mass", "0 kg", "not given: the rod's big end is taken to stand in the inertia")
    return RunningGear(row.reciprocating_mass, row.rotating_mass or 0.0, row.radius, row.rod, row.cylinders)


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
        if row.kind == "fluid":
            continue
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
                damping(row),
                row.rated_torque,
                row.referred_to,
                provenance(row, element, said),
                points if len(points) > 1 else (),
                temperature,
                row.damping_temperature or (),
                operating,
                row.group,
                viscous_nms_rad=row.viscous,
                ratings=coupling_ratings(name, row, said),
                ambient_k=row.ambient,
            )
        )
    return tuple(out)


def ties(rows: Rows, said: Assumptions) -> tuple[Tie, ...]:
    """[ties] with their tolerances."""
    return tuple(
        Tie(
            name,
            row.at,
            row.stiffness,
            said.tolerance(row.tolerance, f"ties.{name}", "a tie", DEFAULT_TOLERANCE["tie"]),
            damping(row),
            provenance(row, f"ties.{name}", said),
            row.group,
            viscous_nms_rad=row.viscous,
            synchronizing=synchronizing(row, f"ties.{name}", rows.keyed["machines"], said),
        )
        for name, row in rows.keyed["ties"].items()
    )


def machines(rows: Rows, said: Assumptions, files: Read | None = None) -> tuple[Machine, ...]:
    """[machines]; a missing vane or blade number is listed, since its passing is then not screened.

    `files` holds what the cards that reciprocating machines name say.
    """
    return tuple(
        _reciprocating(name, row, said, files or {}) if row.kind in RECIPROCATING else _machine(name, row, said)
        for name, row in rows.keyed["machines"].items()
    )


def _reciprocating(name: str, row: Any, said: Assumptions, files: Read) -> Machine:
    element = f"machines.{name}"
    low = "0.5" if getattr(row, "strokes", 2) == 4 else "1"
    said.add(element, "orders", f"{low} to 12", "the orders screened; higher ones are not")
    fields, assumed = machine_parts(name, row, files)
    said.items += assumed
    return Machine(name, row.kind, None, provenance=provenance(row, element, said), **fields)


def _machine(name: str, row: Any, said: Assumptions) -> Machine:
    element = f"machines.{name}"
    blades = getattr(row, "vanes", getattr(row, "blades", None))
    for key in ("vanes", "blades"):
        if hasattr(row, key) and blades is None:
            said.add(element, key, "none", f"not given: {key[:-1]} passing is not screened")
    slip = getattr(row, "slip", None)
    if hasattr(row, "slip") and slip is None:
        said.add(element, "slip", "0 Hz", "not given: output frequency = pole pairs · speed")
    electrical_side = electrical(row, element, said)
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
        provenance=provenance(row, element, said),
        electrical=electrical_side,
        load_slope_nms_rad=getattr(row, "load_slope", None),
    )


def excitations(rows: Rows, said: Assumptions) -> tuple[Excitation, ...]:
    """[excitations] as lines in the speed–frequency plane."""
    out = []
    for name, row in rows.keyed["excitations"].items():
        measure, value = row.torque or (None, 0.0)
        if row.locked_with is not None and row.phase is None:
            said.add(f"excitations.{name}", "phase", "0°", f"not given: in phase with the angle of {row.locked_with}")
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
                row.phase,
                row.locked_with,
            )
        )
    return tuple(out)


def dismissals(rows: Rows) -> tuple[Dismissal, ...]:
    """[dismissals] in file order."""
    return tuple(
        Dismissal(name, row.source, row.mode, row.frequency, row.because, row.by, tuple(row.cases))
        for name, row in rows.keyed["dismissals"].items()
    )
