"""Checks of gears, belts and joints that need more than one key, or another row."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.train.gear_fields import ISO_RULE
from quillshaft.train.model import FIXED
from quillshaft.train.problems import did_you_mean
from quillshaft.train.validate import Findings, Rows

DEGREES = 180.0 / math.pi
ANGLE_LIMITS = (("helix", 1.05, "0 to 60 degrees"), ("pressure_angle", 0.7, "10 to 40 degrees"))
LINKS = ("shafts", "couplings", "gears", "belts", "ties")
SHIFT_SUM = (-0.5, 2.0)
"""Range of x1 + x2 in which the rule of ISO 6336-1 stands (recalled)."""


def check_gears(findings: Findings, rows: Rows) -> None:
    """What a gear's stiffness needs beside it, angles, and names that an epicyclic stage brings along."""
    for name, row in rows.keyed["gears"].items():
        path = ("gears", name)
        _angles(findings, path, row)
        if row.kind == "epicyclic":
            _stage(findings, rows, name, row)
            continue
        measure = row.mesh_stiffness[0] if row.mesh_stiffness else None
        if measure == "mesh_stiffness_per_face" and row.face is None:
            findings.add(path, "mesh-stiffness per unit face needs the face width", None, 'face = "200 mm"')
        if measure in ("mesh_stiffness_per_face", "linear_stiffness") and row.module is None:
            findings.add(path, "this mesh-stiffness needs the base radius", None, 'module = "6 mm" (normal module)')
        if row.kind == "mesh":
            _mesh(findings, path, row, measure == ISO_RULE)


def _angles(findings: Findings, path: tuple[str, str], row: Any) -> None:
    for key, most, limit in ANGLE_LIMITS:
        value = getattr(row, key)
        if value is not None and value >= most:
            message = f"an angle of {value * DEGREES:.0f}° is no gear's"
            findings.add((*path, key.replace("_", "-")), message, None, limit)


def _rule(findings: Findings, path: tuple[str, str], row: Any) -> None:
    missing = [key for key in ("module", "face") if getattr(row, key) is None]
    if missing:
        allowed = ", ".join({"module": 'module = "6 mm" (normal)', "face": 'face = "200 mm"'}[key] for key in missing)
        findings.add((*path, "mesh-stiffness"), f"this rule needs {' and '.join(missing)}", ISO_RULE, allowed)


def _mesh(findings: Findings, path: tuple[str, str], row: Any, by_rule: bool) -> None:
    if row.internal and row.teeth[0] == row.teeth[1]:
        findings.add((*path, "teeth"), "an internal mesh has unequal tooth numbers", row.teeth)
    if by_rule:
        _rule(findings, path, row)
    low, high = SHIFT_SUM
    if row.profile_shift is not None and not low <= sum(row.profile_shift) <= high:
        message = "the rule does not stand for this sum of profile shifts"
        allowed = f"x1 + x2 from {low:g} to {high:g}"
        findings.add((*path, "profile-shift"), message, row.profile_shift, allowed)


def _stage(findings: Findings, rows: Rows, name: str, row: Any) -> None:
    path = ("gears", name)
    if row.mesh_stiffness is not None and math.isnan(row.mesh_stiffness):
        _rule(findings, path, row)
    stations, links = [], []
    if row.planet_inertia is not None:
        stations, links = [f"{name} planets"], [f"{name} ring mesh"]
    if row.fixed_through is not None:
        held = next(key for key in ("sun", "ring", "carrier") if getattr(row, key) == FIXED)
        stations, links = [*stations, f"{name} {held}"], [*links, f"{name} {held} support"]
    for tables, brought in ((("stations",), stations), (LINKS, links)):
        for table, own in ((table, own) for table in tables for own in brought):
            if own in rows.declared[table]:
                message = f'this stage brings "{own}" along, and [{table}] has one too'
                findings.add(path, message, None, f"another name in [{table}]")


def check_joints(findings: Findings, rows: Rows) -> None:
    """A joint sits in a shaft or coupling, and its name is no station's."""
    fluid = [name for name, row in rows.keyed["couplings"].items() if row.kind == "fluid"]
    places = [name for name in (*rows.declared["shafts"], *rows.declared["couplings"]) if name not in fluid]
    for name, row in rows.keyed["joints"].items():
        if row.at not in places:
            message = f"there is no shaft or coupling of this name{did_you_mean(row.at, places)}"
            findings.add(("joints", name, "at"), message, row.at, "the shaft or coupling that the joint bends")
        if name in rows.declared["stations"]:
            message = f"a station is named {name} too: both would be called {name} 2x"
            findings.add(("joints", name), message, None, "another name for the joint")
