"""What the response makes of the interferences that the screening left open."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.response.findings import Ground, judged_torque, share_of
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response_results import CaseResponse, Closing, Finding, LimitCurve
from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Bools, Floats, Ints
from quillshaft.sources.line import frequencies_over, slope

RPM = 30.0 / math.pi
CARRIES = 0.05
"""Share of a mode's largest link torque from which a link must have a limit for the mode to be cleared."""


def close_pairs(screening: Screening, ground: Ground, swept: Swept, loads: LoadSet) -> tuple[Closing, ...]:
    """One closing for every pair not clear and not dismissed, in the order of `Screening.not_clear`.

    A pair is cleared where every link that carries its mode has a continuous limit and stays within it in all judged
    cases, at the speeds where the pair is near and at its resonance wherever the tolerances can put that. A dead
    cylinder is judged by the findings and by the load limit, not here.
    """
    unjudged = set(loads.unjudged)
    return tuple(
        _close(screening, ground, swept, pair, unjudged) for pair in screening.not_clear() if pair.dismissed is None
    )


def _close(screening: Screening, ground: Ground, swept: Swept, pair: Interference, unjudged: set[str]) -> Closing:
    name = f"mode {pair.mode} with {pair.source}"
    if pair.source in unjudged:
        text = f"{name}: the file gives no amplitude for this source"
        return Closing(pair.source, pair.mode, "not judged: no amplitude", text, None)
    places = carrying_links(screening, pair.mode)
    without = [curve for curve in (ground.limits[place] for place in places) if curve.continuous_nm is None]
    if not places or without:
        names = ", ".join(f"{curve.link} ({curve.basis})" for curve in without) or "any link that carries it"
        return Closing(pair.source, pair.mode, "not judged: no limit", f"{name}: no limit is known for {names}", None)
    finding = _governing(screening, ground, swept, pair, places)
    used = (finding.use or 0.0) * 100.0
    where = f"{finding.element} at {finding.at_speed_rpm:.0f} rpm, case {finding.case}"
    if finding.verdict == "fail":
        return Closing(pair.source, pair.mode, "not cleared", f"{name}: {used:.0f} % of the limit in {where}", finding)
    text = f"{name}: {used:.0f} % of the limit in {where}"
    if "barred" in (pair.verdict, pair.worst_verdict):
        text += ", the barred range kept"
    return Closing(pair.source, pair.mode, "cleared by response", text, finding)


def carrying_links(screening: Screening, mode: int) -> list[int]:
    """Places of the shafts, couplings and gears that carry at least a twentieth of a mode's largest link torque."""
    torque = screening.mode(mode).link_torque
    return [
        place
        for place, link in enumerate(screening.graph.links)
        if link.kind in ("shaft", "coupling", "mesh", "epicyclic") and abs(torque.get(link.name) or 1.0) >= CARRIES
    ]


def _governing(screening: Screening, ground: Ground, swept: Swept, pair: Interference, places: list[int]) -> Finding:
    """The most used limit over the judged cases, at the speeds of the pair and at its resonance."""
    where = _speeds_of(screening, ground, pair)
    extra = _resonance(screening, swept, pair)
    best: tuple[float, Finding] | None = None
    nearest = _nearest_judged(ground)
    for case in (case for case in ground.judged if case.kind != "dead cylinder"):
        for place in places:
            curve = ground.limits[place]
            limit_nm = None if curve.continuous_nm is None else curve.continuous_nm[nearest]
            used, value, limit, at = _most_used(case, place, limit_nm, where, extra)
            if best is None or used > best[0]:
                best = (used, _finding(ground, case, curve, value, limit, at, used))
    assert best is not None
    return best[1]


def _nearest_judged(ground: Ground) -> Ints:
    """(S,) place of the judged speed nearest to every speed: a peak beside the range is held to its limit there."""
    judged = np.flatnonzero(ground.continuous)
    after = np.clip(np.searchsorted(judged, np.arange(len(ground.speed_rad_s))), 0, len(judged) - 1)
    before = np.clip(after - 1, 0, len(judged) - 1)
    here = ground.speed_rad_s
    closer = np.abs(here[judged[before]] - here) < np.abs(here[judged[after]] - here)
    return np.asarray(np.where(closer, judged[before], judged[after]), dtype=np.intp)


def _most_used(
    case: CaseResponse, place: int, limit_nm: Floats | None, where: Bools, extra: Floats
) -> tuple[float, float, float, int]:
    own = judged_torque(case, place) + extra[place]
    assert limit_nm is not None
    used = share_of(own, limit_nm)
    used = np.where(where & ~np.isnan(used), used, -1.0)
    at = int(np.argmax(used))
    return float(used[at]), float(own[at]), float(limit_nm[at]), at


def _finding(
    ground: Ground, case: CaseResponse, curve: LimitCurve, value: float, limit: float, at: int, used: float
) -> Finding:
    scale = curve.mpa_per_nm
    check, unit = ("alternating stress", "MPa") if scale is not None else ("alternating torque", "N·m")
    factor = 1.0 if scale is None else scale
    return Finding(
        curve.link,
        check,
        value * factor,
        limit * factor,
        unit,
        float(ground.speed_rad_s[at]) * RPM,
        case.name,
        "continuous",
        "pass" if used <= 1.0 + 1e-9 else "fail",
        curve.basis,
        case.kind,
    )


def _speeds_of(screening: Screening, ground: Ground, pair: Interference) -> Bools:
    """(S,) True at the judged speeds where source and mode are near, and at its resonance where tolerances reach that.

    Near is within the required separation of the band of tolerance, or three times the damping ratio.
    """
    mode, source = screening.mode(pair.mode), screening.source(pair.source)
    near = _near(screening, ground, pair)
    inside = ground.continuous & near
    if not inside.any():
        judged = np.flatnonzero(ground.continuous)
        inside[judged[np.argmin(np.abs(ground.speed_rad_s[judged] - pair.judged_at_rpm / RPM))]] = True
    if source.frequency_hz:
        return np.asarray(inside)
    low_hz, high_hz = mode.bounds_hz
    for speed_rpm in pair.critical_speeds_rpm:
        speed = speed_rpm / RPM
        wide = (speed * low_hz / mode.frequency_hz, speed * high_hz / mode.frequency_hz)
        if any(wide[0] <= high and wide[1] >= low for low, high in ground.train.operation.ranges_rad_s):
            inside |= np.abs(ground.speed_rad_s - speed) <= 3.0 * max(mode.damping_ratio, 1e-3) * speed
    for low, high in ground.train.operation.barred_rad_s:  # passed, not run at: the passing limits judge there
        inside &= ~((ground.speed_rad_s > low * (1 + 1e-9)) & (ground.speed_rad_s < high * (1 - 1e-9)))
    return np.asarray(inside)


def _near(screening: Screening, ground: Ground, pair: Interference) -> Bools:
    """(S,) True where the source's frequency is near the mode's."""
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


def _resonance(screening: Screening, swept: Swept, pair: Interference) -> Floats:
    """(links, S) what a source of constant frequency adds where tolerances can tune a mode to it; else 0.

    Its own torque is then multiplied by the magnification at resonance over that where it stands, as one mode has it.
    """
    mode, source = screening.mode(pair.mode), screening.source(pair.source)
    shape = swept.cases[0].alternating_torque_nm.shape
    share = next((item for item in swept.shares if item.source == pair.source), None)
    if source.order != 0.0 or share is None:
        return np.zeros(shape)
    low, high = frequencies_over(source, 0.0, 0.0)
    if mode.bounds_hz[1] < low or mode.bounds_hz[0] > high:
        return np.zeros(shape)
    zeta = max(mode.damping_ratio, 1e-9)
    ratio = np.clip(source.frequency_hz / mode.frequency_hz, 1e-6, None)
    here = 1.0 / math.hypot(1.0 - ratio**2, 2.0 * zeta * ratio)
    return np.asarray(np.nan_to_num(share.torque_nm) * max(0.5 / zeta / here - 1.0, 0.0))


def left_open(closings: tuple[Closing, ...]) -> bool:
    """True where any pair is not cleared or not judged."""
    return any(closing.status != "cleared by response" for closing in closings)
