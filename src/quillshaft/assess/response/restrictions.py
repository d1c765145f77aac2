"""What operation has to keep to: barred ranges, lowest idle, load with a dead cylinder, ripple, passing a resonance."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.response.combine import continuous_speeds
from quillshaft.assess.response.dead_load import dead_loads
from quillshaft.assess.response.evaluate import Lines, plain_responses
from quillshaft.assess.response.ground import Ground, judged_torque
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response_results import BarredSpan, CaseResponse, Passage, Restrictions, Tolerable
from quillshaft.assess.results import Screening
from quillshaft.elements.coupling_duty import frequency_factor, weighs_by_frequency
from quillshaft.elements.passage import half_power_cycles, half_power_seconds, passage_number, passage_peak
from quillshaft.elements.propulsion_rule import barred_range, barred_range_allowed
from quillshaft.graph.network import Bools, Floats
from quillshaft.sources.line import TWO_PI, slope

RPM = 30.0 / math.pi
MOST_PASSAGES = 12
DECLARED = "declared barred by the file"
RUNNING = ("normal", "temperature", "tolerance")
"""Kinds of case that are normal running: what is asked of it holds hot, cold and at the ends of the tolerances."""


def over_limit(ground: Ground, case: CaseResponse) -> dict[str, Bools]:
    """By link (S,) True where a limit for continuous running is exceeded in a case, wherever that is.

    Of couplings the mean and peak torque and the heat count as well.
    """
    out = {}
    for place, curve in enumerate(ground.limits):
        if curve.continuous_nm is None:
            continue
        own = judged_torque(case, place)
        if own.max(initial=0.0) > 0:
            out[curve.link] = own > curve.continuous_nm * (1.0 + 1e-9)
    links = [link.name for link in ground.graph.links]
    for coupling in ground.train.couplings:
        place, ratings = links.index(coupling.name), coupling.ratings
        values = [(np.abs(case.mean_torque_nm[place]), coupling.rated_torque_nm)]
        if ratings is not None:
            values += [(case.heat_w[place], ratings.permitted_heat_w), (case.peak_torque_nm[place], ratings.peak_nm)]
        for value, most in values:
            if most is not None:
                beyond = value > most * (1.0 + 1e-9)
                out[coupling.name] = out.get(coupling.name, np.zeros_like(beyond)) | beyond
    return out


def _spans(speeds: Floats, bad: Bools) -> list[tuple[float, float]]:
    """Stretches of speed where `bad`, each out to the last speed before and the first after that is good."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], bad.astype(int), [0]])))
    out = []
    for start, end in zip(edges[::2].tolist(), edges[1::2].tolist(), strict=True):
        low = speeds[start - 1] if start else speeds[0]
        high = speeds[end] if end < len(speeds) else speeds[-1]
        out.append((float(low), float(high)))
    return out


def barred_spans(ground: Ground) -> tuple[BarredSpan, ...]:
    """Ranges between idle and the highest running speed in which a continuous limit is exceeded in normal running.

    Widened by the tachometer's error; about propulsion shafts by the class rule's 16 n/(18 − λ) to (18 − λ) n/16 too.
    Normal running, hot, cold and at the ends of the tolerances, asks for them; a dead cylinder asks for less load.
    """
    operation = ground.train.operation
    low = min(operation.idle_rad_s or math.inf, operation.ranges_rad_s[0][0])
    high = operation.ranges_rad_s[-1][1]
    rule = {shaft.name for shaft in ground.train.shafts if shaft.strength and shaft.strength.rule == "propulsion"}
    running = (ground.speed_rad_s >= low * (1 - 1e-9)) & (ground.speed_rad_s <= high * (1 + 1e-9))
    found: list[tuple[float, float, str]] = []
    for case in ground.judged:
        if case.kind not in RUNNING:
            continue
        for link, bad in over_limit(ground, case).items():
            spans = _spans(ground.speed_rad_s, bad & running)
            found += [_span(ground, case, link, span, link in rule) for span in spans]
    share = operation.tachometer
    widened = [(start * (1 - share) * RPM, end * (1 + share) * RPM, words) for start, end, words in found]
    declared = [(start * RPM, end * RPM, DECLARED) for start, end in operation.barred_rad_s]
    return tuple(_merged([*widened, *declared]))


def _span(
    ground: Ground, case: CaseResponse, link: str, span: tuple[float, float], by_rule: bool
) -> tuple[float, float, str]:
    """(from, to [rad/s], why) of one stretch over the limit, widened by the class rule where that holds."""
    words = f"{link}: {case.name}"
    if not by_rule:
        return (*span, words)
    rated = ground.train.operation.rated_rad_s
    at = _peak_between(ground, case, link, *span)
    if not barred_range_allowed(at / rated):
        return (*span, f"{words} (no barred range is accepted here: λ ≥ 0.8)")
    wide = barred_range(at, rated)
    return min(span[0], wide[0]), max(span[1], wide[1]), words


def _peak_between(ground: Ground, case: CaseResponse, link: str, low: float, high: float) -> float:
    place = [curve.link for curve in ground.limits].index(link)
    inside = np.flatnonzero((ground.speed_rad_s >= low) & (ground.speed_rad_s <= high))
    return float(ground.speed_rad_s[inside[np.argmax(case.alternating_torque_nm[place][inside])]])


def _merged(spans: list[tuple[float, float, str]]) -> list[BarredSpan]:
    out: list[tuple[float, float, list[str]]] = []
    for start, end, words in sorted(spans):
        if out and start <= out[-1][1]:
            before = out[-1]
            listed = before[2] if words in before[2] else [*before[2], words]
            out[-1] = (before[0], max(before[1], end), listed)
        else:
            out.append((start, end, [words]))
    return [BarredSpan(start, end, _few(words), words == [DECLARED]) for start, end, words in out]


def _few(words: list[str]) -> str:
    if words == [DECLARED]:
        return DECLARED
    also = f"; partly {DECLARED}" if DECLARED in words else ""
    words = [item for item in words if item != DECLARED]
    links = list(dict.fromkeys(item.split(":")[0] for item in words))
    refused = " (no barred range is accepted here: λ ≥ 0.8)" if any("λ ≥ 0.8" in item for item in words) else ""
    shown = ", ".join(links[:4]) + (f" and {len(links) - 4} more" if len(links) > 4 else "")
    return f"continuous limit of {shown} exceeded{refused}{also}"


def lowest_idle(ground: Ground) -> tuple[float | None, str]:
    """Lowest speed [rpm] from which up to the judged range every continuous limit of torque holds in normal running."""
    running = [over_limit(ground, case) for case in ground.judged if case.kind in RUNNING]
    if float(ground.speed_rad_s[0]) >= ground.train.operation.ranges_rad_s[0][0] * (1 - 1e-9):
        return None, "the train runs at no speed below the judged range"
    if not any(running):
        return None, "no limits are given, so no lowest idle can be stated"
    top = ground.train.operation.ranges_rad_s[0][0]
    bad = np.zeros(len(ground.speed_rad_s), dtype=bool)
    for own in (row for over in running for row in over.values()):
        bad |= own
    below = np.flatnonzero(ground.speed_rad_s <= top * (1 + 1e-9))
    wrong = [index for index in below.tolist() if bad[index]]
    if not wrong:
        return float(ground.speed_rad_s[0]) * RPM, "every continuous limit holds down to the lowest speed looked at"
    last = wrong[-1]
    if last >= below[-1]:
        return None, "a continuous limit is exceeded at the low end of the judged range itself"
    speed = float(ground.speed_rad_s[last + 1]) * RPM * (1.0 + ground.train.operation.tachometer)
    return speed, "below it a continuous limit is exceeded (tachometer allowance included)"


def tolerable_sources(ground: Ground, swept: Swept, loads: LoadSet) -> tuple[Tolerable, ...]:
    """How large each single source may be, all others as they are in the normal case; also those without amplitude."""
    limited = [n for n, curve in enumerate(ground.limits) if curve.continuous_nm is not None]
    if not limited:
        return ()
    out = []
    normal = swept.cases[0]
    stated = list(zip(loads.plain, swept.lines.plain, strict=True))
    lines = plain_responses(swept.states[0], loads.silent, swept.speed_rad_s, None)
    silent = list(zip(loads.silent, lines, strict=True))
    for item, own_lines in (*stated, *silent):
        unit, weight = _per_unit(own_lines, limited, ground)
        size = item.amplitude_nm(swept.share)
        own = np.array([judged_torque(normal, n) for n in limited]) - size * unit * weight
        left = np.array([ground.limits[n].continuous_nm for n in limited]) - np.maximum(own, 0.0)
        with np.errstate(all="ignore"):
            room = np.where(unit > 0, np.maximum(left, 0.0) / (unit * weight), np.inf)
        room = np.where(np.isnan(room), np.inf, room)
        least = room.min(axis=0)
        inside = np.flatnonzero(ground.continuous)
        at = int(inside[np.argmin(least[inside])])
        skip = _spans(swept.speed_rad_s, (size > least) & ground.continuous) if size.any() else []
        known = item.mean_nm is not None
        out.append(
            Tolerable(
                item.source.name,
                item.source.at,
                np.where(np.isfinite(least), least, np.nan),
                np.where(np.isfinite(least), least, np.nan) / np.maximum(item.mean_nm * swept.share, 1e-300)
                if item.mean_nm is not None and known
                else None,
                float(least[at]) if np.isfinite(least[at]) else None,
                float(swept.speed_rad_s[at]) * RPM,
                ground.limits[limited[int(np.argmin(room[:, at]))]].link,
                tuple((low * RPM, high * RPM) for low, high in skip),
            )
        )
    return tuple(out)


def _per_unit(lines: Lines, limited: list[int], ground: Ground) -> tuple[Floats, Floats]:
    """(limited links, S) torque per unit of the source, and the frequency factor of couplings."""
    unit = np.abs(lines.link_nm[limited]).max(axis=1)
    factors = np.vectorize(frequency_factor)(lines.omega_rad_s.max(axis=0) / TWO_PI)
    couplings = {item.name for item in ground.train.couplings if weighs_by_frequency(item.kind)}
    ones = np.ones_like(factors)
    weight = np.array([factors if ground.limits[n].link in couplings else ones for n in limited])
    return unit, weight


def passages(screening: Screening, swept: Swept) -> tuple[Passage, ...]:
    """Resonances that are passed at the stated ramp, those of the largest torque first: below the judged range, and in
    its barred ranges and gaps."""
    ramp = screening.train.operation.ramp_rad_s2
    if ramp is None:
        return ()
    shares = {share.source: share for share in swept.shares}
    top, found = screening.train.operation.ranges_rad_s[-1][1], []
    for pair in screening.interferences:
        share, mode = shares.get(pair.source), screening.mode(pair.mode)
        source = screening.source(pair.source)
        for rpm in pair.critical_speeds_rpm:
            run_at = continuous_speeds(screening.train.operation, np.array([rpm / RPM]))[0]
            if share is None or run_at or not swept.speed_rad_s[0] <= rpm / RPM <= top:
                continue
            place = int(np.argmin(np.abs(swept.speed_rad_s - rpm / RPM)))
            size = float(np.nan_to_num(share.torque_nm[:, place]).max())
            rate = abs(slope(source)) * ramp
            frequency, zeta = mode.frequency_hz, max(mode.damping_ratio, 1e-9)
            if rate > 0 and size > 0:
                peak = float(passage_peak(passage_number(rate, frequency, zeta)))
                seconds = half_power_seconds(rate, frequency, zeta)
                cycles = half_power_cycles(rate, frequency, zeta)
                found.append((size, Passage(pair.source, pair.mode, rpm, seconds, cycles, peak)))
    found.sort(key=lambda item: -item[0])
    return tuple(item for _, item in found[:MOST_PASSAGES])


def restrictions(screening: Screening, ground: Ground, swept: Swept, loads: LoadSet) -> Restrictions:
    """All restrictions together."""
    idle, words = lowest_idle(ground)
    operation = screening.train.operation
    return Restrictions(
        barred_spans(ground),
        operation.tachometer,
        idle,
        words,
        dead_loads(ground, swept, loads),
        tolerable_sources(ground, swept, loads),
        passages(screening, swept),
        operation.ramp_rad_s2,
    )
