"""Orders of a reciprocating machine in words and cells, as terminal and report print them."""

from __future__ import annotations

import math

from quillshaft.assess.orders import OrderStudy
from quillshaft.present.units import SHOWN
from quillshaft.present.words import counted, hertz, number

RPM = 30.0 / math.pi
MOST_MODES = 4


def order_title(study: OrderStudy) -> str:
    """What the table is about."""
    return f"Orders of {study.machine.name} at {study.speed_rad_s * RPM:.5g} rpm"


def order_sentences(study: OrderStudy) -> list[str]:
    """What to read first: major orders, how the cylinders stand, and what the torques rest on."""
    machine, units = study.machine, SHOWN[study.screening.train.units]
    major = ", ".join(f"{row.order:g}" for row in study.rows if row.major)
    count, acting = len(machine.cylinders), study.acting
    words = ("fires", "fire") if machine.kind == "reciprocating-engine" else ("is loaded", "are loaded")
    does = words[0] if acting == 1 else words[1]
    lines = [f"Major orders: {major or 'none'}. Of {counted(count, 'cylinder')} {acting} {does}."]
    strongest = max((row for row in study.rows if row.together_nm), key=lambda row: row.together_nm or 0, default=None)
    if strongest is not None:
        value = number((strongest.together_nm or 0.0) * units.per_nm)
        lines.append(
            f"On a rigid crank order {strongest.order:g} is the largest of all cylinders together: "
            f"{value} {units.torque}."
        )
    if study.mean_nm is not None and study.acting:
        power = number(abs(study.mean_nm) * study.speed_rad_s / 1e3 * units.per_kw)
        mean = number(abs(study.mean_nm) * units.per_nm)
        way = "drives" if study.mean_nm > 0 else "absorbs"
        lines.append(
            f"The gas of all cylinders {way} {mean} {units.torque} in the mean, or {power} {units.power} indicated."
        )
    if any(study.inertia_kgm2):
        value = number(max(study.inertia_kgm2) * units.per_kgm2)
        lines.append(
            f"Mean inertia of a cylinder's reciprocating mass on its throw: {value} {units.inertia}, "
            "which the stations' inertias are taken to hold."
        )
    if study.indicative:
        lines.append("Gas torques rest on an idealised cycle in place of a card: they are indicative only.")
    if all(row.together_nm is None for row in study.rows):
        lines.append("The file gives neither gas nor reciprocating mass: torques are not known.")
    return lines


def cylinder_heads(study: OrderStudy) -> tuple[str, ...]:
    """Headings of `cylinder_rows`."""
    engine = study.machine.kind == "reciprocating-engine"
    return ("Cylinder", "at", "fires at, °" if engine else "outer dead centre, °", "bank, °", "throw at, °", "state")


def cylinder_rows(study: OrderStudy) -> list[tuple[str, ...]]:
    """(cylinder, at, firing angle, bank, throw's angle, state) of each cylinder in file order."""
    engine = study.machine.kind == "reciprocating-engine"
    live, dead = ("fires", "dead") if engine else ("loaded", "unloaded")
    return [
        (
            f"{index}",
            item.at,
            f"{math.degrees(item.fires_at_rad):.6g}",
            "–" if item.bank_rad is None else f"{math.degrees(item.bank_rad):.6g}",
            f"{angle:.6g}",
            dead if item.dead else live,
        )
        for index, (item, angle) in enumerate(
            zip(study.machine.cylinders, study.crank_angles_deg(), strict=True), start=1
        )
    ]


def order_heads(study: OrderStudy) -> tuple[str, ...]:
    """Headings of `order_rows`; torques only where the file gives something to work them out from."""
    unit = SHOWN[study.screening.train.units].torque
    modes = [f"mode {mode}, {hertz(study.screening.mode(mode).frequency_hz)} Hz" for mode in study.modes[:MOST_MODES]]
    heads = ["Order", "class", f"rigid crank, of {study.acting}", *modes]
    if any(row.together_nm is not None for row in study.rows):
        heads += [f"gas, {unit}", "mass", "a cylinder"]
        heads += ["a dead one"] if any(row.dead_nm is not None for row in study.rows) else []
        heads.append("together, rigid")
    return tuple(heads)


def order_rows(study: OrderStudy) -> list[tuple[str, ...]]:
    """One order a row: class, phase-vector sums, amplitudes of one cylinder and of all on a rigid crank."""
    factor = SHOWN[study.screening.train.units].per_nm
    known = any(row.together_nm is not None for row in study.rows)
    dead = any(row.dead_nm is not None for row in study.rows)
    out = []
    for row in study.rows:
        cells = [f"{row.order:g}", "major" if row.major else "minor", _sum(row.rigid_sum)]
        cells += [_sum(row.mode_sums[mode]) for mode in study.modes[:MOST_MODES]]
        if known:
            torques = [row.gas_nm, row.inertia_nm, row.torque_nm, *([row.dead_nm] if dead else []), row.together_nm]
            cells += ["–" if value is None else f"{value * factor:.1f}" for value in torques]
        out.append(tuple(cells))
    return out


def _sum(value: float) -> str:
    return f"{value:.3f}"


def order_note(study: OrderStudy) -> str:
    """How the columns are to be read."""
    text = (
        "Phase-vector sum: |Σ β exp(j n φ)| over the cylinders that act, φ their dead-centre angles; β is 1 on a "
        "rigid crank, and in a mode the referred angle of the throw, the largest of the mode being 1."
    )
    left = len(study.modes) - MOST_MODES
    return text + (f" {left} more judged modes are in the JSON output." if left > 0 else "")
