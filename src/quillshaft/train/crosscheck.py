"""Checks over several rows: names that must exist or be unique, and what one row needs of another."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from quillshaft.train.basic_model import table_value
from quillshaft.train.damper_checks import check_dampers
from quillshaft.train.duty_checks import check_duty
from quillshaft.train.electrical_resolve import tie_problem
from quillshaft.train.gear_checks import check_gears, check_joints
from quillshaft.train.materials import BUILT_IN
from quillshaft.train.model import BALANCE, FIXED
from quillshaft.train.overlay import PathParts, added_by
from quillshaft.train.problems import did_you_mean
from quillshaft.train.quantity import QuantityError, read_quantity
from quillshaft.train.shaft_checks import check_shaft_temperatures
from quillshaft.train.validate import Findings, Rows

LINK_TABLES = ("shafts", "couplings", "gears", "belts", "ties", "dampers")
RPM = 9.549296585513721
RATED_SHARE = 0.01
"""How far from 100 % a load law may be at rated speed."""
DEGREES = 57.29577951308232
LEAST_POWER_W = 1e-9
LAWS = ("square", "constant-torque", "constant-power")


def _names(findings: Findings, rows: Rows) -> None:
    if not rows.declared["stations"] and all(problem.path != ("stations",) for problem in findings.problems):
        findings.add(("stations",), "a train needs stations", None, "[stations] with at least one row")
    for table in ("stations", *LINK_TABLES):
        for name in rows.declared[table]:
            if name in (FIXED, BALANCE, "law"):
                findings.add((table, name), f"the name {name} is reserved", None, "another name")
    seen: dict[str, str] = {}
    for table in LINK_TABLES:
        for name in rows.declared[table]:
            if name in seen:
                message = f"the name {name} is taken by [{seen[name]}]"
                findings.add((table, name), message, None, "a name that no other link has")
            seen[name] = table


def _left_out(findings: Findings, path: PathParts, name: str, seen: str | None) -> bool:
    """Whether a case leaves a station out that is still named; noted where it does."""
    base = findings.document.data.get("stations")
    if not isinstance(base, dict) or name not in base:
        return False
    findings.add(path, f"the case leaves the station {name} out, but it is still named here", seen)
    return True


def _station(findings: Findings, rows: Rows, path: PathParts, name: str, seen: str | None = None) -> None:
    """A station's name must stand in [stations]; where that table is missing, one problem says so for all."""
    stations = rows.declared["stations"]
    if name in stations or not stations:
        return
    if _left_out(findings, path, name, seen):
        return
    findings.add(
        path, f"there is no station of this name{did_you_mean(name, stations)}", seen, "a name from [stations]"
    )


def _links(findings: Findings, rows: Rows) -> None:
    for table in ("shafts", "couplings", "gears", "belts"):
        for name, row in rows.keyed[table].items():
            if not hasattr(row, "between"):
                continue
            for index, station in enumerate(row.between):
                _station(findings, rows, (table, name, "between", index), station, station)
            if row.between[0] == row.between[1]:
                findings.add((table, name, "between"), "the two ends are the same station", row.between, "two stations")
            if getattr(row, "referred_to", None) is not None:
                _station(findings, rows, (table, name, "referred-to"), row.referred_to, row.referred_to)
    for name, row in rows.keyed["stations"].items():
        if row.referred_to is not None:
            _station(findings, rows, ("stations", name, "referred-to"), row.referred_to, row.referred_to)
    for table in ("ties", "dampers"):
        for name, row in rows.keyed[table].items():
            _station(findings, rows, (table, name, "at"), row.at, row.at)
    for name, row in rows.keyed["ties"].items():
        if lacking := tie_problem(row, rows.keyed["machines"]):
            findings.add(("ties", name), lacking, None, 'poles = 10 and supply = "50 Hz", in the tie or its machine')


def _gears(findings: Findings, rows: Rows) -> None:
    for name, row in rows.keyed["gears"].items():
        path = ("gears", name)
        if row.kind == "epicyclic":
            for key in ("sun", "ring", "carrier"):
                member = getattr(row, key)
                if member != FIXED:
                    _station(findings, rows, (*path, key), member, member)
    check_gears(findings, rows)
    check_joints(findings, rows)


def _machines(findings: Findings, rows: Rows) -> None:
    for name, row in rows.keyed["machines"].items():
        if row.kind == "reciprocating-engine":
            for index, cylinder in enumerate(row.cylinders):
                _station(findings, rows, ("machines", name, "cylinders", index, "at"), cylinder.at, cylinder.at)
                turns = row.strokes // 2
                if cylinder.fires_at >= turns * 6.283185308:
                    message = f"{cylinder.fires_at * DEGREES:.6g} degrees lie beyond the working cycle"
                    allowed = f"0 to below {turns * 360} degrees of a {row.strokes}-stroke engine"
                    findings.add(("machines", name, "cylinders", index, "fires-at"), message, None, allowed)
        elif row.kind == "reciprocating-compressor":
            for index, cylinder in enumerate(row.cylinders):
                _station(findings, rows, ("machines", name, "cylinders", index, "at"), cylinder.at, cylinder.at)
                if cylinder.dead_centre >= 6.283185308:
                    message = f"{cylinder.dead_centre * DEGREES:.6g} degrees lie beyond a turn"
                    place = ("machines", name, "cylinders", index, "dead-centre")
                    findings.add(place, message, None, "0 to below 360 degrees")
        else:
            _station(findings, rows, ("machines", name, "at"), row.at, row.at)
    places = set(rows.declared["stations"]).union(*(rows.declared[table] for table in LINK_TABLES))
    for name, row in rows.keyed["excitations"].items():
        path = ("excitations", name, "at")
        if row.at not in places and rows.declared["stations"] and not _left_out(findings, path, row.at, row.at):
            hint, allowed = did_you_mean(row.at, sorted(places)), "a station, or a link to act inside it"
            findings.add(
                ("excitations", name, "at"), f"there is no station or link of this name{hint}", row.at, allowed
            )


def _operation(findings: Findings, rows: Rows) -> None:
    operation = rows.plain.get("operation")
    if operation is None:
        return
    _station(findings, rows, ("operation", "speed-at"), operation.speed_at, operation.speed_at)
    for station in operation.speeds:
        _station(findings, rows, ("operation", "speeds", station), station)
    _bars(findings, operation)
    if operation.range:
        ranges = operation.range
        for (_, high), (low, _) in pairwise(ranges):
            if low <= high:
                findings.add(("operation", "range"), "two ranges overlap: write them as one", None)


def _bars(findings: Findings, operation: Any) -> None:
    """Barred ranges leave something to run in, and the rated speed is not inside one."""
    bars = operation.barred or ()
    path = ("operation", "barred")
    if any(low < operation.rated < high for low, high in bars):
        findings.add(path, "the rated speed lies inside a barred range", None, "a rated speed the train may run at")
    for low, high in operation.range or ():
        reached = low
        for bar_low, bar_high in bars:
            reached = max(reached, bar_high) if bar_low <= reached else reached
        if reached >= high:
            findings.add(path, "the barred ranges leave nothing of a running range", None, "a range with free speeds")


def _materials(findings: Findings, rows: Rows) -> None:
    known = [*rows.declared["materials"], *BUILT_IN]
    for name, row in rows.keyed["shafts"].items():
        if row.material is not None and row.material not in known:
            hint = did_you_mean(row.material, known)
            path = ("shafts", name, "material")
            findings.add(path, f"there is no material of this name{hint}", row.material, ", ".join(known))
        as_given = row.stiffness is not None or row.flexibility is not None
        if row.material is not None and as_given and row.weakest is None:
            message = "a stiffness as given does not use a material; only the strength of weakest does"
            findings.add(("shafts", name, "material"), message, row.material)


def _dismissals(findings: Findings, rows: Rows, cases: tuple[str, ...]) -> None:
    for name, row in rows.keyed["dismissals"].items():
        for index, case in enumerate(row.cases):
            if case not in cases:
                hint = did_you_mean(case, cases)
                findings.add(("dismissals", name, "cases", index), f"there is no case of this name{hint}", case)


def _added_rows(findings: Findings, rows: Rows) -> None:
    """A broken row that a case adds is most often a misspelt element of the base."""
    for table, names in rows.declared.items():
        for name in names if table != "amplitudes" else ():
            case = added_by(findings.document, findings.cases, table, name)
            if case is not None and name not in rows.keyed[table]:
                base = findings.document.data.get(table)
                hint = did_you_mean(name, base if isinstance(base, dict) else ())
                message = f"the file outside the cases has no {name}, so this row must be complete{hint}"
                findings.add((table, name), message)


def crosscheck(findings: Findings, rows: Rows, cases: tuple[str, ...]) -> None:
    """Everything that needs more than one row; `cases` are the names of the file's cases."""
    _names(findings, rows)
    _links(findings, rows)
    _gears(findings, rows)
    _machines(findings, rows)
    _operation(findings, rows)
    _materials(findings, rows)
    check_shaft_temperatures(findings, rows)
    _dismissals(findings, rows, cases)
    check_dampers(findings, rows)
    check_duty(findings, rows)
    _added_rows(findings, rows)


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
        if 0 < abs(stations[name] or 0.0) < LEAST_POWER_W:
            findings.add(("power", name), "is less than any machine's power", value, "0, or a power that counts")
    operation = rows.plain.get("operation")
    return stations, _read_law(data.get("law"), system, None if operation is None else operation.rated, findings)


def _read(value: Any, measure: str, system: str, path: tuple[str, ...], findings: Findings) -> float:
    try:
        return read_quantity(value, measure, system).value
    except QuantityError as error:
        or_balance = f'; or "{BALANCE}"' if measure == "power" else ""
        findings.add(path, error.message, value, error.allowed + or_balance)
        return 0.0


def _read_law(
    law: Any, system: str, rated_rad_s: float | None, findings: Findings
) -> str | tuple[tuple[float, float], ...] | None:
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
    points.sort()
    if not findings.problems and points[-1][0] <= 0.0:
        findings.add(
            ("power", "law"), "gives no share at a speed above 0", law, 'shares by speed, "1500 rpm" = "100 %"'
        )
        return None
    if rated_rad_s is not None and not findings.problems:
        at_rated = table_value(tuple(points), rated_rad_s)
        if abs(at_rated - 1.0) > RATED_SHARE:
            rpm = f"{rated_rad_s * RPM:.6g} rpm"
            message = f"gives {at_rated * 100.0:.4g} % of rated power at rated speed, {rpm}"
            findings.add(("power", "law"), message, None, f'a table through "{rpm}" = "100 %"')
    return tuple(points)


def read_off(data: Any, findings: Findings) -> dict[str, str]:
    """[excitations-off]: reason by source name."""
    if data is None:
        return {}
    if not isinstance(data, dict):
        findings.add(("excitations-off",), "is not a table", data, '"pump-hub 2x" = "the reason"')
        return {}
    for name, reason in data.items():
        if not isinstance(reason, str) or len(reason.strip()) < 3:
            findings.add(
                ("excitations-off", name), "a source is switched off with a reason", reason, "the reason, in quotes"
            )
    return {name: str(reason) for name, reason in data.items()}
