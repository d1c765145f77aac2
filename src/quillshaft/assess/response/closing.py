"""What the response makes of the interferences that the screening left open."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.response.ground import Ground, judged_torque, share_of
from quillshaft.assess.response.in_tune import tuned_responses
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response_results import CaseKind, Closing, Finding, LimitCurve
from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Bools
from quillshaft.sources.line import slope

RPM = 30.0 / math.pi
CARRYING = ("shaft", "coupling", "mesh", "epicyclic", "belt")
CARRIES = 0.05
"""Share of a mode's largest link torque from which a link must have a limit for the mode to be cleared."""


def close_pairs(screening: Screening, ground: Ground, swept: Swept, loads: LoadSet) -> tuple[Closing, ...]:
    """One closing for every pair not clear and not dismissed, in the order of `Screening.not_clear`.

    A pair is cleared where every link that carries its mode has a continuous limit and stays within it in all judged
    cases, at the judged speeds where the pair is near, and with the tolerances tuning the mode onto its source there. A
    dead cylinder is judged by the findings and by the load limit, not here.
    """
    return tuple(
        _close(screening, ground, swept, loads, pair) for pair in screening.not_clear() if pair.dismissed is None
    )


def _close(screening: Screening, ground: Ground, swept: Swept, loads: LoadSet, pair: Interference) -> Closing:
    name = f"mode {pair.mode} with {pair.source}"
    if pair.source in loads.unjudged:
        text = f"{name}: the file gives no amplitude for this source"
        return Closing(pair.source, pair.mode, "not judged: no amplitude", text, None)
    places = carrying_links(screening, pair.mode)
    without = [curve for curve in (ground.limits[place] for place in places) if curve.continuous_nm is None]
    if not places or without:
        names = ", ".join(f"{curve.link} ({curve.basis})" for curve in without) or "any link that carries it"
        return Closing(pair.source, pair.mode, "not judged: no limit", f"{name}: no limit is known for {names}", None)
    finding = _governing(screening, ground, swept, loads, pair, places)
    if finding is None:
        text = f"{name}: a link that carries it has no limit at a speed where they are near"
        return Closing(pair.source, pair.mode, "not judged: no limit", text, None)
    share = finding.use or 0.0
    used = f"{share * 100.0:.0f} % of the limit" if math.isfinite(share) else "beyond a limit of nothing"
    where = f"{finding.element} at {finding.at_speed_rpm:.0f} rpm, case {finding.case}"
    if finding.verdict == "fail":
        return Closing(pair.source, pair.mode, "not cleared", f"{name}: {used} in {where}", finding)
    text = f"{name}: {used} in {where}"
    if "barred" in (pair.verdict, pair.worst_verdict):
        text += ", the barred range kept"
    return Closing(pair.source, pair.mode, "cleared by response", text, finding)


def carrying_links(screening: Screening, mode: int) -> list[int]:
    """Places of shafts, couplings, gears and belts that carry at least a twentieth of a mode's largest link torque."""
    torque = screening.mode(mode).link_torque
    return [
        place
        for place, link in enumerate(screening.graph.links)
        if link.kind in CARRYING and abs(torque.get(link.name) or 1.0) >= CARRIES
    ]


def _governing(
    screening: Screening, ground: Ground, swept: Swept, loads: LoadSet, pair: Interference, places: list[int]
) -> Finding | None:
    """The most used limit over the judged cases at the speeds of the pair, and tuned onto its source by tolerances.

    None where a link that carries the mode has no limit at such a speed.
    """
    where = _near(screening, ground, pair) & ground.continuous
    if not where.any():
        judged = np.flatnonzero(ground.continuous)
        where[judged[np.argmin(np.abs(ground.speed_rad_s[judged] - pair.judged_at_rpm / RPM))]] = True
    if any(np.isnan(ground.limits[place].continuous_nm[where]).any() for place in places):  # type: ignore[index]
        return None
    best: tuple[float, Finding] | None = None
    for case in (case for case in ground.judged if case.kind != "dead cylinder"):
        for place in places:
            curve = ground.limits[place]
            assert curve.continuous_nm is not None
            used = np.where(where, share_of(judged_torque(case, place), curve.continuous_nm), -1.0)
            at = int(np.argmax(used))
            if best is None or used[at] > best[0]:
                value, limit = float(judged_torque(case, place)[at]), float(curve.continuous_nm[at])
                speed = float(ground.speed_rad_s[at])
                best = (float(used[at]), _finding(curve, value, limit, speed, case.name, case.kind))
    found = _in_tune(screening, ground, swept, loads, pair, places)
    if found is not None and (best is None or found[0] > best[0]):
        best = found
    return None if best is None else best[1]


def _in_tune(
    screening: Screening, ground: Ground, swept: Swept, loads: LoadSet, pair: Interference, places: list[int]
) -> tuple[float, Finding] | None:
    """The most used limit with the tolerances tuning the mode onto its source in the judged range."""
    judged = np.flatnonzero(ground.continuous)
    best: tuple[float, Finding] | None = None
    found = tuned_responses(screening, ground, swept, loads, pair)
    for tuned, number, speed in ((item, n, v) for item in found for n, v in enumerate(item.speed_rad_s.tolist())):
        nearest = int(judged[np.argmin(np.abs(ground.speed_rad_s[judged] - speed))])
        for place in places:
            curve, plain = ground.limits[place], float(ground.cases[0].alternating_torque_nm[place, nearest])
            assert curve.continuous_nm is not None
            weight = float(judged_torque(ground.cases[0], place)[nearest]) / plain if plain > 0 else 1.0
            value, limit = float(tuned.torque_nm[place, number]) * weight, float(curve.continuous_nm[nearest])
            used = float(share_of(np.array([value]), np.array([limit]))[0])
            if best is None or used > best[0]:
                best = (used, _finding(curve, value, limit, speed, "tuned by its tolerances", "tolerance"))
    return best


def _finding(curve: LimitCurve, value: float, limit: float, speed_rad_s: float, case: str, kind: CaseKind) -> Finding:
    scale = curve.mpa_per_nm
    check, unit = ("alternating stress", "MPa") if scale is not None else ("alternating torque", "N·m")
    factor = 1.0 if scale is None else scale
    good = value <= limit * (1.0 + 1e-9)
    return Finding(
        curve.link,
        check,
        value * factor,
        limit * factor,
        unit,
        speed_rad_s * RPM,
        case,
        "continuous",
        "pass" if good else "fail",
        curve.basis,
        kind,
    )


def _near(screening: Screening, ground: Ground, pair: Interference) -> Bools:
    """(S,) True where the source is within the required separation of the mode's band, or 3 damping ratios of it."""
    mode, source = screening.mode(pair.mode), screening.source(pair.source)
    if source.order == 0.0:
        return np.ones(len(ground.speed_rad_s), dtype=bool)
    frequency = np.abs(slope(source) * ground.speed_rad_s + source.frequency_hz)
    low, high = np.full(len(frequency), mode.bounds_hz[0]), np.full(len(frequency), mode.bounds_hz[1])
    if mode.frequency_along is not None:
        rows = np.array(mode.frequency_along)
        low, high = (np.interp(ground.speed_rad_s * RPM, rows[:, 0], rows[:, column]) for column in (2, 3))
    wide = max(pair.required, pair.worst_required, 3.0 * mode.damping_ratio)
    return np.asarray((frequency >= low * (1.0 - wide)) & (frequency <= high * (1.0 + wide)))
