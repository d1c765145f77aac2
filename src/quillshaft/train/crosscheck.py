"""Checks over several rows: names that must exist or be unique, and what one row needs of another."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from quillshaft.train.materials import BUILT_IN
from quillshaft.train.model import BALANCE, FIXED
from quillshaft.train.problems import did_you_mean
from quillshaft.train.quantity import QuantityError, read_quantity
from quillshaft.train.validate import Findings, Rows

LINK_TABLES = ("shafts", "couplings", "gears", "ties")
LAWS = ("square", "constant-torque", "constant-power")


def _names(findings: Findings, rows: Rows) -> None:
    stations = rows.declared["stations"]
    if not stations:
        findings.add(("stations",), "a train needs stations", None, "[stations] with at least one row")
    for table in ("stations", *LINK_TABLES):
        for name in rows.declared[table]:
            if name in (FIXED, BALANCE):
                findings.add((table, name), f"the name {name} is reserved", None, "another name")
    seen: dict[str, str] = {}
    for table in LINK_TABLES:
        for name in rows.declared[table]:
            if name in seen:
                message = f"the name {name} is taken by [{seen[name]}]: links need names of their own"
                findings.add((table, name), message, None)
            seen[name] = table


def _station(findings: Findings, rows: Rows, path: tuple[str | int, ...], name: str) -> None:
    stations = rows.declared["stations"]
    if name not in stations:
        hint = did_you_mean(name, stations)
        findings.add(path, f"there is no station of this name{hint}", name, "a name from [stations]")


def _links(findings: Findings, rows: Rows) -> None:
    for table in ("shafts", "couplings", "gears"):
        for name, row in rows.keyed[table].items():
            if not hasattr(row, "between"):
                continue
            for index, station in enumerate(row.between):
                _station(findings, rows, (table, name, "between", index), station)
            if row.between[0] == row.between[1]:
                findings.add((table, name, "between"), "the two ends are the same station", row.between)
            if getattr(row, "referred_to", None) is not None:
                _station(findings, rows, (table, name, "referred-to"), row.referred_to)
    for name, row in rows.keyed["stations"].items():
        if row.referred_to is not None:
            _station(findings, rows, ("stations", name, "referred-to"), row.referred_to)
    for name, row in rows.keyed["ties"].items():
        _station(findings, rows, ("ties", name, "at"), row.at)


def _gears(findings: Findings, rows: Rows) -> None:
    for name, row in rows.keyed["gears"].items():
        path = ("gears", name)
        if row.kind == "epicyclic":
            for key in ("sun", "ring", "carrier"):
                if getattr(row, key) != FIXED:
                    _station(findings, rows, (*path, key), getattr(row, key))
            continue
        measure = row.mesh_stiffness[0] if row.mesh_stiffness else None
        if measure == "mesh_stiffness_per_face" and row.face is None:
            findings.add(path, "mesh-stiffness per unit face needs the face width", None, 'face = "200 mm"')
        if measure in ("mesh_stiffness_per_face", "linear_stiffness") and row.module is None:
            findings.add(path, "this mesh-stiffness needs the base radius", None, 'module = "6 mm" (normal module)')
        if row.internal and row.teeth[0] == row.teeth[1]:
            findings.add((*path, "teeth"), "an internal mesh has unequal tooth numbers", row.teeth)
        for key, most in (("helix", 1.05), ("pressure_angle", 0.7)):
            value = getattr(row, key)
            if value is not None and value >= most:
                findings.add((*path, key.replace("_", "-")), f"{value * 57.29578:.0f}° is no gear", None, "degrees")


def _machines(findings: Findings, rows: Rows) -> None:
    for name, row in rows.keyed["machines"].items():
        if row.kind == "reciprocating-engine":
            for index, cylinder in enumerate(row.cylinders):
                _station(findings, rows, ("machines", name, "cylinders", index, "at"), cylinder.at)
                turns = row.strokes // 2
                if cylinder.fires_at >= turns * 6.283185308:
                    message = f"a {row.strokes}-stroke cylinder fires within {turns * 360} degrees"
                    findings.add(("machines", name, "cylinders", index, "fires-at"), message)
        else:
            _station(findings, rows, ("machines", name, "at"), row.at)
    places = set(rows.declared["stations"]).union(*(rows.declared[table] for table in LINK_TABLES))
    for name, row in rows.keyed["excitations"].items():
        if row.at not in places:
            hint = did_you_mean(row.at, sorted(places))
            findings.add(("excitations", name, "at"), f"there is no station or link of this name{hint}", row.at)


def _operation(findings: Findings, rows: Rows) -> None:
    operation = rows.plain.get("operation")
    if operation is None:
        return
    _station(findings, rows, ("operation", "speed-at"), operation.speed_at)
    for station in operation.speeds:
        _station(findings, rows, ("operation", "speeds", station), station)
    if operation.range:
        ranges = operation.range
        for (_, high), (low, _) in pairwise(ranges):
            if low <= high:
                findings.add(("operation", "range"), "two ranges overlap: write them as one", None)


def _materials(findings: Findings, rows: Rows) -> None:
    known = [*rows.declared["materials"], *BUILT_IN]
    for name, row in rows.keyed["shafts"].items():
        if row.material is not None and row.material not in known:
            hint = did_you_mean(row.material, known)
            path = ("shafts", name, "material")
            findings.add(path, f"there is no material of this name{hint}", row.material, ", ".join(known))
        if row.material is not None and (row.stiffness is not None or row.flexibility is not None):
            findings.add(("shafts", name, "material"), "a stiffness as given does not use a material", row.material)


def _dismissals(findings: Findings, rows: Rows, cases: tuple[str, ...]) -> None:
    for name, row in rows.keyed["dismissals"].items():
        for index, case in enumerate(row.cases):
            if case not in cases:
                hint = did_you_mean(case, cases)
                findings.add(("dismissals", name, "cases", index), f"there is no case of this name{hint}", case)


def crosscheck(findings: Findings, rows: Rows, cases: tuple[str, ...]) -> None:
    """Everything that needs more than one row; `cases` are the names of the file's cases."""
    _names(findings, rows)
    _links(findings, rows)
    _gears(findings, rows)
    _machines(findings, rows)
    _operation(findings, rows)
    _materials(findings, rows)
    _dismissals(findings, rows, cases)


def read_power(
    data: Any, rows: Rows, system: str, findings: Findings
) -> tuple[dict[str, float | None], str | tuple[tuple[float, float], ...] | None] | None:
    """[power]: watts per station (None is "balance") and the load law; None where the table is absent.

    A law given as a table is (speed [rad/s], share of rated power) pairs, rising in speed.
    """
    if data is None:
        return None
    if not isinstance(data, dict):
        findings.add(("power",), "is not a table", data, "station = power at rated speed")
        return None
    stations: dict[str, float | None] = {}
    for name, value in data.items():
        if name == "law":
            continue
        _station(findings, rows, ("power", name), name)
        stations[name] = None if value == BALANCE else _read(value, "power", system, ("power", name), findings)
    return stations, _read_law(data.get("law"), system, findings)


def _read(value: Any, measure: str, system: str, path: tuple[str, ...], findings: Findings) -> float:
    try:
        return read_quantity(value, measure, system).value
    except QuantityError as error:
        findings.add(path, error.message, value, error.allowed)
        return 0.0


def _read_law(law: Any, system: str, findings: Findings) -> str | tuple[tuple[float, float], ...] | None:
    if law is None or (isinstance(law, str) and law in LAWS):
        return law
    if not isinstance(law, dict) or not law:
        hint = did_you_mean(law, LAWS) if isinstance(law, str) else ""
        allowed = " | ".join(LAWS) + ' | { "900 rpm" = "31 %", … }'
        findings.add(("power", "law"), f"is not a load law that is known{hint}", law, allowed)
        return None
    points = [
        (
            _read(speed, "speed", system, ("power", "law", str(speed)), findings),
            _read(share, "share", system, ("power", "law", str(speed)), findings),
        )
        for speed, share in law.items()
    ]
    return tuple(sorted(points))


def read_off(data: Any, findings: Findings) -> dict[str, str]:
    """[excitations-off]: reason by source name."""
    if data is None:
        return {}
    if not isinstance(data, dict):
        findings.add(("excitations-off",), "is not a table", data, '"pump-hub 2x" = "the reason"')
        return {}
    for name, reason in data.items():
        if not isinstance(reason, str) or len(reason.strip()) < 3:
            findings.add(("excitations-off", name), "a source is switched off with a reason", reason, "a sentence")
    return {name: str(reason) for name, reason in data.items()}
