"""Every check of every element: its largest value over the judged cases against its limit."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from quillshaft.assess.response.ground import Ground, Zone, judged_torque, size_of, worst
from quillshaft.assess.response_results import CaseResponse, Finding, LimitCurve
from quillshaft.elements.coupling_duty import frequency_factor, weighs_by_frequency
from quillshaft.graph.network import Floats
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.model import Machine

ICE_K = 273.15
RECALLED = "recalled, confirm against your edition"


def damper_faults(ground: Ground) -> tuple[Finding, ...]:
    """Limits exceeded in continuous running with a damper at fault, the worst of each element."""
    faulty = tuple(replace(case, judged=True) for case in ground.cases if case.kind == "damper")
    if not faulty:
        return ()
    found = [item for item in all_findings(replace(ground, cases=faulty)) if item.verdict == "fail"]
    return tuple(item for item in found if item.zone == "continuous")


def all_findings(ground: Ground) -> tuple[Finding, ...]:
    """Every check, in the order of the links, then dampers and machines."""
    rows: list[Finding] = []
    train, places = ground.train, {link.name: number for number, link in enumerate(ground.graph.links)}
    curves = {curve.link: curve for curve in ground.limits}
    for shaft in train.shafts:
        rows += _alternating(ground, places[shaft.name], curves[shaft.name])
    for coupling in train.couplings:
        rows += _coupling(ground, places[coupling.name], coupling)
    for gear in train.gears:
        rows += _gear(ground, places[gear.name], curves[gear.name], gear.name)
    rows += _dampers(ground, places)
    for machine in train.machines:
        if machine.kind == "generator" and machine.at is not None:
            rows += _generator(ground, machine)
    return tuple(rows)


def _alternating(ground: Ground, place: int, curve: LimitCurve) -> Iterator[Finding]:
    """Alternating stress where the section is known, else torque, continuous and in passing."""
    scale = curve.mpa_per_nm
    check, unit = ("alternating stress", "MPa") if scale is not None else ("alternating torque", "N·m")
    factor = 1.0 if scale is None else scale

    def values(case: CaseResponse) -> Floats:
        return np.asarray(case.alternating_torque_nm[place] * factor)

    zones: tuple[tuple[Zone, Floats | None], ...] = (
        ("continuous", curve.continuous_nm),
        ("passing", curve.passing_nm),
    )
    most = 0.0
    without = None if curve.continuous_nm is None else np.isnan(curve.continuous_nm) & ground.continuous
    if without is not None and without.any():
        words = f"{curve.basis}: it gives no limit at these speeds"
        yield from worst(replace(ground, continuous=without), curve.link, check, unit, words, values, None)
    for zone, limit in zones:
        if zone == "continuous" or limit is not None:
            bound = None if limit is None else limit * factor
            found = list(worst(ground, curve.link, check, unit, curve.basis, values, bound, zone))
            yield from (item for item in found if zone == "continuous" or size_of(item) > most)
            most = max([most, *(size_of(item) for item in found)])


def _coupling(ground: Ground, place: int, coupling: Coupling) -> Iterator[Finding]:
    name, ratings = coupling.name, coupling.ratings
    rated = coupling.rated_torque_nm
    given = "the maker's rating"
    missing = "its maker's rating is not given"
    if ground.mean.known:
        yield from worst(
            ground,
            name,
            "mean torque",
            "N·m",
            f"rated torque, {given if rated else missing}",
            lambda case: np.abs(case.mean_torque_nm[place]),
            rated,
        )
    peak = None if ratings is None else ratings.peak_nm
    known = bool(np.isfinite(ground.cases[0].mean_torque_nm[place]).all())
    reason = missing if peak is None else "the mean torque is not known, so it cannot be judged"
    for zone in ("continuous", "passing"):
        if zone == "continuous" or peak is not None or ground.train.operation.barred_rad_s:
            basis = f"peak torque, {given if peak and known else reason}"
            yield from worst(
                ground,
                name,
                "peak torque",
                "N·m",
                basis,
                lambda case: case.peak_torque_nm[place],
                peak if known else None,
                zone,
            )
    vibratory = None if ratings is None or ratings.vibratory_nm is None else ratings.vibratory_nm
    reference = 10.0 if ratings is None else ratings.reference_hz or 10.0
    weighs = weighs_by_frequency(coupling.kind)
    limit = None if vibratory is None else vibratory * (frequency_factor(reference) if weighs else 1.0)
    how = f" weighed by √(f / 10 Hz) above 10 Hz (DIN 740-2, {RECALLED})" if weighs else ""
    basis = f"vibratory torque{how}, {given if vibratory else missing}"
    yield from worst(ground, name, "vibratory torque", "N·m", basis, lambda case: judged_torque(case, place), limit)
    heat = None if ratings is None else ratings.permitted_heat_w
    basis = f"heat, {given if heat else missing}"
    yield from worst(ground, name, "heat", "W", basis, lambda case: case.heat_w[place], heat)
    yield from _temperature(ground, coupling)


def _temperature(ground: Ground, coupling: Coupling) -> Iterator[Finding]:
    """Temperature reached by its own heat, against the last of its table; running away fails."""
    hot = [case for case in ground.judged if coupling.name in case.temperature_k]
    if not hot:
        return
    top = coupling.temperature_points[-1][0] - ICE_K
    none = np.full(len(ground.speed_rad_s), np.nan)

    def reached(case: CaseResponse) -> Floats:
        return np.asarray(case.temperature_k.get(coupling.name, none) - ICE_K)

    basis = "settled by its own heat; the limit is the last temperature of its table"
    for item in worst(ground, coupling.name, "temperature", "degC", basis, reached, top):
        case = next(case for case in hot if case.name == item.case)
        if bool((case.runaway[coupling.name] & ground.continuous).any()):
            words = "it runs away: stiffness, heat and temperature do not settle; the value is where that was stopped"
            yield replace(item, verdict="fail", basis=words)
        else:
            yield item


def _gear(ground: Ground, place: int, curve: LimitCurve, name: str) -> Iterator[Finding]:
    duty, mean = ground.train.duty, ground.mean.link_nm[place]

    def vibratory(case: CaseResponse) -> Floats:
        return np.asarray(case.alternating_torque_nm[place])

    gear = next(item for item in ground.train.gears if item.name == name)
    rated = gear.rated_torque_nm or (abs(float(mean)) if np.isfinite(mean) and mean else None)
    share = None if rated is None else duty.gear_share * rated
    basis = curve.basis.split("; no tooth")[0]
    yield from worst(ground, name, "vibratory torque", "N·m", basis, vibratory, share)
    if duty.gear_reversal == "allowed" or not ground.mean.known or not np.isfinite(mean):
        return

    def holding(case: CaseResponse) -> Floats:
        return np.asarray(np.abs(case.mean_torque_nm[place]))

    def ratio(case: CaseResponse) -> Floats:
        with np.errstate(all="ignore"):
            return np.asarray(vibratory(case) / holding(case))

    text = "the limit is the mean torque, above it the teeth separate (no reversal in continuous running, class rules)"
    basis = f"{text}, {duty.edition or RECALLED}"
    yield from worst(ground, name, "tooth separation", "N·m", basis, vibratory, holding)
    if ground.train.operation.barred_rad_s:
        words = "alternating over mean torque while a barred range is passed: above 1 teeth separate; no limit is kept"
        yield from worst(_in_barred(ground), name, "tooth separation", "", words, ratio, None, "passing")


def _in_barred(ground: Ground) -> Ground:
    """The same with the declared barred ranges alone as speeds that are passed."""
    inside = np.zeros(len(ground.speed_rad_s), dtype=bool)
    for low, high in ground.train.operation.barred_rad_s:
        inside |= (ground.speed_rad_s > low) & (ground.speed_rad_s < high)
    return replace(ground, continuous=~inside)


def _dampers(ground: Ground, places: dict[str, int]) -> Iterator[Finding]:
    for damper in ground.train.dampers:
        if damper.state in {"lost", "seized"}:
            continue
        none = np.full(len(ground.speed_rad_s), np.nan)
        name = damper.name

        def heat(case: CaseResponse, name: str = name, none: Floats = none) -> Floats:
            if name in case.damper_w:
                return case.damper_w[name]
            own = places.get(name)
            return none if own is None else np.asarray(case.heat_w[own])

        def torque(case: CaseResponse, name: str = name, none: Floats = none) -> Floats:
            if name in case.damper_nm:
                return case.damper_nm[name]
            own = places.get(name)
            return none if own is None else np.asarray(case.alternating_torque_nm[own])

        words = "the maker's value" if damper.permitted_heat_w else "its maker's value is not given"
        yield from worst(ground, name, "damper heat", "W", f"heat, {words}", heat, damper.permitted_heat_w)
        if damper.permitted_torque_nm is not None:
            basis = "torque through the damper, the maker's value"
            yield from worst(ground, name, "damper torque", "N·m", basis, torque, damper.permitted_torque_nm)


def _generator(ground: Ground, machine: Machine) -> Iterator[Finding]:
    """Inertia torque, electrical angle and speed irregularity."""
    duty, station = ground.train.duty, ground.graph.number(machine.at or "")
    edition = duty.edition or RECALLED
    rated = machine.electrical.rated_torque_nm or ground.mean.at_station(ground.graph, station)
    limit = None if rated is None else duty.inertia_torque * rated
    words = f"inertia torque within ±{duty.inertia_torque:g} × rated (class rules, {edition})"
    yield from worst(
        ground, machine.name, "inertia torque", "N·m", words, lambda case: case.inertia_torque_nm[station], limit
    )
    pairs = (machine.poles or 2) / 2.0
    yield from worst(
        ground,
        machine.name,
        "electrical angle",
        "deg",
        f"amplitude of the rotor's angle times {pairs:g} pole pairs (class rules, {edition})",
        lambda case: pairs * case.angle_deg[station],
        math.degrees(duty.electrical_rad),
    )
    yield from worst(
        ground,
        machine.name,
        "speed irregularity",
        "",
        "peak-to-peak speed over mean speed" + ("" if duty.irregularity else ": no limit is stated"),
        lambda case: case.irregularity[station],
        duty.irregularity,
    )
