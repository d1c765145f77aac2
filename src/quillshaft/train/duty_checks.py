"""What limits of shafts and phases of excitations need of other tables."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from quillshaft.train.materials import BUILT_IN
from quillshaft.train.problems import did_you_mean
from quillshaft.train.validate import Findings, Rows

RECIPROCATING = ("reciprocating-engine", "reciprocating-compressor")
ELECTRICAL = ("induction-motor", "synchronous-motor", "converter-fed-motor", "generator")
EXAMPLE = {"tensile": "850 MPa", "yield": "640 MPa"}
BY_YIELD = ("soderberg", "elliptic")
"""Lines of mean stress that end at the yield strength."""


def check_duty(findings: Findings, rows: Rows) -> None:
    """Rules find the strengths they need and the shafts they are made for; locked excitations their partner."""
    _strengths(findings, rows)
    _propulsion(findings, rows)
    _locks(findings, rows)


def _criteria(rows: Rows) -> Any:
    table = rows.plain.get("criteria")
    return None if table is None else table.strength


def _rule(row: Any, criteria: Any) -> str | None:
    """The rule that a shaft is judged by: its own, or that of the criteria where it states no limit of its own."""
    if row.strength_rule is not None:
        return str(row.strength_rule)
    limited = row.permitted_stress is not None or row.permitted_torque is not None
    seen = row.pieces is not None or row.weakest is not None
    return criteria.rule if criteria is not None and seen and not limited else None


def _strengths(findings: Findings, rows: Rows) -> None:
    criteria = _criteria(rows)
    said: set[tuple[str, str]] = set()
    for name, row in rows.keyed["shafts"].items():
        rule = _rule(row, criteria)
        if rule is None:
            continue
        needed = ["tensile"]
        if rule == "endurance" and criteria is not None and criteria.mean_stress in BY_YIELD:
            needed.append("yield")
        as_given = row.stiffness is not None or row.flexibility is not None
        material = row.material or (None if as_given else "steel")
        for key in needed:
            _strength(findings, rows, (name, rule, key), material, said)


def _strength(
    findings: Findings, rows: Rows, asked: tuple[str, str, str], material: str | None, said: set[tuple[str, str]]
) -> None:
    """One strength that a shaft's rule asks of its material; (shaft, rule, key) in `asked`."""
    shaft, rule, key = asked
    needs = f'the rule "{rule}" needs the {key} strength'
    example = f'{key} = "{EXAMPLE[key]}"'
    allowed = f"a material of [materials] with {example}"
    if material is None:
        findings.add(("shafts", shaft, "material"), f"is missing: {needs}", None, allowed)
    elif material in rows.declared["materials"]:
        own = rows.keyed["materials"].get(material)
        value = None if own is None else {"tensile": own.tensile, "yield": own.yield_}[key]
        if own is not None and value is None and (material, key) not in said:
            said.add((material, key))
            message = f"is missing: {needs} for shaft {shaft}"
            findings.add(("materials", material, key), message, None, example)
    elif material in BUILT_IN:
        message = f"{needs}, and the built-in material {material} states none"
        findings.add(("shafts", shaft, "material"), message, None, allowed)


def _propulsion(findings: Findings, rows: Rows) -> None:
    for name, row in rows.keyed["shafts"].items():
        if row.strength_rule != "propulsion":
            continue
        at_ends = [machine for machine in _seated(rows) if machine[2] in row.between]
        for machine, kind, station in at_ends[:1]:
            message = (
                "the rule covers intermediate, thrust and propeller shafts only, "
                f"and {machine} ({kind}) sits at {station}"
            )
            allowed = "permitted-stress or permitted-torque of its maker, endurance or tensile-share"
            findings.add(("shafts", name, "strength-rule"), message, "propulsion", allowed)


def _seated(rows: Rows) -> Iterator[tuple[str, str, str]]:
    """(machine, kind, station) of every cylinder, motor and generator."""
    for name, row in rows.keyed["machines"].items():
        if row.kind in RECIPROCATING:
            for cylinder in row.cylinders:
                yield name, row.kind, cylinder.at
        elif row.kind in ELECTRICAL:
            yield name, row.kind, row.at


def _locks(findings: Findings, rows: Rows) -> None:
    excitations, machines = rows.keyed["excitations"], rows.keyed["machines"]
    known = [name for name, row in machines.items() if row.kind in RECIPROCATING]
    for name, row in excitations.items():
        partner, path = row.locked_with, ("excitations", name, "locked-with")
        if partner is None or partner in known:
            continue
        others = [*known, *(other for other in rows.declared["excitations"] if other != name)]
        allowed = "a reciprocating machine, or another excitation with an order"
        if partner in machines and partner not in others:
            message = f"no phase is known of a machine of kind {machines[partner].kind}"
            findings.add(path, message, partner, allowed)
        elif partner not in others:
            what = "is the excitation itself" if partner == name else "there is no such machine or excitation"
            hint = "" if partner == name else did_you_mean(partner, others)
            findings.add(path, what + hint, partner, allowed)
        elif partner in excitations and excitations[partner].frequency:
            findings.add(path, "has a constant frequency, which keeps its phase to no shaft", partner, allowed)
        elif _circle(name, excitations):
            findings.add(path, "the excitations are locked with each other in a circle", partner, allowed)


def _circle(name: str, excitations: dict[str, Any]) -> bool:
    """Whether the chain of locked excitations comes back to its first."""
    met: list[str] = []
    at: str | None = name
    while at in excitations and at not in met:
        met.append(at)
        at = excitations[at].locked_with
    return at == name
