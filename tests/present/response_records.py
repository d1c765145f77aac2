"""Synthetic responses for tests of charts and words: plausible curves over a real screening, nothing solved.

Every judged mode is one resonance of each engine order or other line: torque in a link is the mode's link torque
times the source's excitability times 1/(1 − r² + 2iζr). Limits, losses and temperatures are invented.
"""

from __future__ import annotations

import math
from dataclasses import replace
from functools import cache
from pathlib import Path

import numpy as np

from quillshaft import load, screen
from quillshaft.assess.response_results import (
    BarredSpan,
    CaseResponse,
    Closing,
    DeadLoad,
    Finding,
    Gauge,
    LimitCurve,
    LineShare,
    Passage,
    Response,
    Restrictions,
    SeparationMap,
    Tolerable,
    Wave,
)
from quillshaft.assess.results import Screening
from quillshaft.train.basic_model import Assumed
from quillshaft.train.coupling_model import CouplingRatings

ROOT = Path(__file__).resolve().parents[2]
RPM = 30.0 / math.pi
AMBIENT_K = 303.15


@cache
def example(stem: str) -> Screening:
    """The screening of one of the shipped examples, its rubber couplings with ratings of heat."""
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    ratings = CouplingRatings(permitted_heat_w=620.0, heat_rise_k=70.0)
    rubber = tuple(
        replace(item, ratings=ratings, operating_k=(278.15, 363.15)) if item.kind == "elastomer" else item
        for item in screening.train.couplings
    )
    return replace(screening, train=replace(screening.train, couplings=rubber))


def build(screening: Screening, speeds: int = 241, from_rpm: float | None = None, limits: bool = True) -> Response:
    """A response with every record filled; `speeds` of them up to trip, or a tenth above the range."""
    rpm = _speeds(screening, speeds, from_rpm)
    judged = np.zeros(len(rpm), dtype=bool)
    for low, high in screening.train.operation.ranges_rad_s:
        judged |= (rpm >= low * RPM - 1e-6) & (rpm <= high * RPM + 1e-6)
    if not judged.any():
        judged[np.argmin(np.abs(rpm - screening.train.operation.rated_rad_s * RPM))] = True
    shares = _shares(screening, rpm, 1.0)
    cases = _cases(screening, rpm, shares)
    curves = _limits(screening, rpm, cases, limits)
    return Response(
        screening=screening,
        speed_rad_s=rpm / RPM,
        continuous=judged,
        cases=cases,
        shares=shares,
        waves=_waves(screening, rpm, cases),
        limits=curves,
        findings=_findings(rpm, judged, cases, curves),
        restrictions=_restrictions(screening, rpm, cases),
        closings=_closings(screening),
        gauges=_gauges(screening, rpm),
        maps=_maps(screening, rpm),
        groups=tuple(_groups(screening).items()),
        combination="groups added by amplitude",
        unjudged=("pulley 1x",),
        assumed=(Assumed("ring", "temperature of surroundings", "30 °C", "the file states none"),),
        notes=("invented for a test",),
    )


def _speeds(screening: Screening, count: int, from_rpm: float | None) -> np.ndarray:
    operation = screening.train.operation
    rated = operation.rated_rad_s * RPM
    if count == 1:
        return np.array([rated])
    high = max((operation.trip_rad_s or 0.0) * RPM, 1.1 * max(high for _, high in operation.ranges_rad_s) * RPM)
    return np.unique(np.append(np.linspace(from_rpm or 0.02 * high, high, count - 1), rated))


def _groups(screening: Screening) -> dict[str, tuple[str, ...]]:
    groups: dict[str, tuple[str, ...]] = {}
    for source in screening.sources:
        group = source.name.split(" order-")[0]
        groups[group] = (*groups.get(group, ()), source.name)
    return groups


def _rated_nm(screening: Screening) -> float:
    """The largest mean torque at rated speed, or 1 kN·m where no power is given."""
    return max((abs(duty.mean_torque_nm or 0.0) for duty in screening.duties), default=0.0) or 1000.0


def _shares(screening: Screening, rpm: np.ndarray, half: float, damping: float = 1.0) -> tuple[LineShare, ...]:
    """Amplitudes in every link; `half` scales the half orders and order 1, as a dead cylinder raises them."""
    found = []
    for source in screening.sources:
        if source.when != "continuous" or "line" in source.name or source.name.endswith((" 1x", " 2x")):
            continue
        order = abs(source.order) or 1.0
        minor = source.major is False or order < 2.0
        torque = _rated_nm(screening) * (0.008 * half if minor else 0.3) / (1.0 + 0.1 * order**1.8)
        hertz = np.abs(order * abs(float(source.speed_ratio)) * rpm / 60.0 + source.frequency_hz)
        rows = np.zeros((len(screening.graph.links), len(rpm)), dtype=complex)
        for mode in screening.modes[:6]:
            pull = mode.shape[screening.graph.stations[source.station]]
            ratio, zeta = hertz / mode.frequency_hz, damping * max(mode.damping_ratio, 0.012)
            gain = torque * pull / (1.0 - ratio**2 + 2j * zeta * ratio)
            for number, link in enumerate(screening.graph.links):
                rows[number] += gain * (mode.link_torque.get(link.name) or 0.0)
        group = source.name.split(" order-")[0]
        found.append(LineShare(source.name, group, source.order, source.frequency_hz, np.abs(rows)))
    return tuple(found)


def _cases(screening: Screening, rpm: np.ndarray, shares: tuple[LineShare, ...]) -> tuple[CaseResponse, ...]:
    cases = [_case(screening, rpm, shares, "normal", "normal", "all as stated", True)]
    machine = next((m for m in screening.train.machines if getattr(m, "cylinders", ())), None)
    if machine is not None:
        for cylinder, half in ((1, 4.0), (3, 5.0)):
            dead = _shares(screening, rpm, half)
            name = f"{machine.name} cylinder {cylinder} dead"
            cases.append(_case(screening, rpm, dead, name, "dead cylinder", "no firing in one cylinder", True))
    light = tuple(replace(share, torque_nm=0.4 * share.torque_nm) for share in shares)
    cases.append(_case(screening, rpm, light, "light load", "light load", "a tenth of the load", True))
    calm = _shares(screening, rpm, 1.0, damping=2.0)
    cases.append(_case(screening, rpm, calm, "high damping", "high damping", "twice the damping", False))
    return tuple(cases)


def _case(screening, rpm, shares, name, kind, note, judged) -> CaseResponse:
    links, stations = screening.graph.links, screening.graph.stations
    rated = screening.train.operation.rated_rad_s * RPM
    load = 0.1 if kind == "light load" else 1.0
    duty = {item.link: item.mean_torque_nm for item in screening.duties}
    mean = np.array(
        [np.full(len(rpm), np.nan) if duty.get(k.name) is None else duty[k.name] * load + 0.0 * rpm for k in links]
    )
    parts = np.array([share.torque_nm for share in shares] or [np.zeros((len(links), len(rpm)))])
    swing = 0.9 * parts.sum(axis=0)
    heat = 0.9 * 620.0 * (swing / (0.2 * _rated_nm(screening))) ** 2 * rpm / rated
    elastic = [k.name for k in links if k.kind == "coupling" and _rubber(screening, k.name)]
    number = {k.name: i for i, k in enumerate(links)}
    warm = {n: AMBIENT_K + 70.0 * np.minimum(heat[number[n]] / 620.0, 2.4) for n in elastic}
    away = {n: heat[number[n]] > 1500.0 for n in elastic}
    turn = np.outer(np.linspace(1.0, 0.2, len(stations)), swing.max(axis=0) / 1e5)
    return CaseResponse(
        name=name,
        kind=kind,
        note=note,
        judged=judged,
        mean_torque_nm=mean,
        alternating_torque_nm=swing,
        root_sum_square_nm=np.sqrt((parts**2).sum(axis=0)),
        peak_torque_nm=np.abs(np.nan_to_num(mean)) + swing,
        weighted_torque_nm=1.2 * swing,
        twist_deg=swing / 1e4,
        heat_w=heat,
        angle_deg=turn,
        irregularity=turn / 50.0,
        inertia_torque_nm=turn * 100.0,
        temperature_k={n: np.where(away[n], np.nan, warm[n]) for n in elastic},
        runaway=away,
    )


def _rubber(screening: Screening, name: str) -> bool:
    return any(item.name == name and item.kind == "elastomer" for item in screening.train.couplings)


def _limits(screening, rpm, cases, given: bool) -> tuple[LimitCurve, ...]:
    """Couplings a third of the rated torque at all speeds; shafts a stress that falls with speed; meshes a third."""
    curves = []
    top = max(_rated_nm(screening), float(np.nanmax(cases[0].alternating_torque_nm)) / 4.0)
    fall = 1.38 - 0.6 * (rpm / rpm.max()) ** 2
    for link in screening.graph.links:
        shaft = link.kind == "shaft"
        if not given or link.kind == "tie":
            curves.append(LimitCurve(link.name, None, None, None, "no limit given"))
            continue
        level = 0.8 * top * fall if shaft else np.full(len(rpm), 0.33 * top)
        stress = 16.0 / (math.pi * 0.125**3) * 1e-6 if shaft else None
        curves.append(LimitCurve(link.name, level, 1.7 * level, stress, "invented: rule, section and figures in words"))
    return tuple(curves)


def _findings(rpm, judged, cases, curves) -> tuple[Finding, ...]:
    found = []
    for number, curve in enumerate(curves):
        for zone, inside in (("continuous", judged), ("passing", ~judged)):
            limits = curve.continuous_nm if zone == "continuous" else curve.passing_nm
            if not inside.any():
                continue
            rows = np.array([np.where(inside, case.alternating_torque_nm[number], -1.0) for case in cases[:-1]])
            case, at = np.unravel_index(int(np.argmax(rows)), rows.shape)
            value, limit = float(rows[case, at]), None if limits is None else float(limits[at])
            verdict = "no limit given" if limit is None else "fail" if value > limit else "pass"
            found.append(
                Finding(
                    element=curve.link,
                    check="alternating torque",
                    value=value,
                    limit=limit,
                    unit="N·m",
                    at_speed_rpm=float(rpm[at]),
                    case=cases[case].name,
                    zone=zone,
                    verdict=verdict,
                    basis=curve.basis,
                )
            )
    return tuple(found)


def _waves(screening: Screening, rpm: np.ndarray, cases: tuple[CaseResponse, ...]) -> tuple[Wave, ...]:
    """Rated speed and the speed of the largest torque, normal and with a dead cylinder."""
    groups = _groups(screening)
    group = max(groups, key=lambda name: len(groups[name]))
    angle = np.linspace(0.0, 720.0 if len(groups[group]) > 1 else 360.0, 361)
    peak = int(np.argmax(np.nanmax(cases[0].alternating_torque_nm, axis=0)))
    rated = int(np.argmin(np.abs(rpm - screening.train.operation.rated_rad_s * RPM)))
    turn = np.deg2rad(angle)
    waves = []
    for at in dict.fromkeys((rated, peak)):
        for case in cases[:2]:
            shape = (
                np.cos(3.0 * turn) + 0.4 * np.cos(1.5 * turn + 0.6) * (case is not cases[0]) + 0.3 * np.sin(6 * turn)
            )
            shape = shape / (np.ptp(shape) / 2.0)
            mean = np.nan_to_num(case.mean_torque_nm[:, at])
            torque = mean[:, None] + case.alternating_torque_nm[:, at][:, None] * shape
            waves.append(Wave(case.name, group, float(rpm[at]), angle, torque))
    return tuple(waves)


def _restrictions(screening: Screening, rpm: np.ndarray, cases: tuple[CaseResponse, ...]) -> Restrictions:
    swing = np.nanmax(cases[0].alternating_torque_nm, axis=0)
    peak = float(rpm[int(np.argmax(swing))])
    spans = (BarredSpan(0.93 * peak, 1.07 * peak, "first mode, order 0.5"),) if len(rpm) > 1 else ()
    tolerable = Tolerable(
        source=screening.sources[0].name,
        at=screening.graph.stations[0],
        torque_nm=np.full(len(rpm), 0.1 * _rated_nm(screening)),
        share=None,
        least_nm=0.1 * _rated_nm(screening),
        at_rpm=peak,
        link=screening.graph.links[0].name,
        skip_rpm=((0.95 * peak, 1.05 * peak),),
    )
    return Restrictions(
        barred=spans,
        tachometer_share=0.02,
        lowest_idle_rpm=1.07 * peak,
        idle_text="above the barred span",
        dead_loads=(DeadLoad("engine", "3", 0.6, "heat of the coupling"),),
        tolerable=(tolerable,),
        passages=(Passage(screening.sources[0].name, 1, peak, 1.4, 12.0, 0.8),),
        ramp_rad_s2=12.0,
    )


def _closings(screening: Screening) -> tuple[Closing, ...]:
    return tuple(
        Closing(pair.source, pair.mode, "not judged: no amplitude", "states no amplitude", None)
        for pair in screening.not_clear()[:3]
    )


def _gauges(screening: Screening, rpm: np.ndarray) -> tuple[Gauge, ...]:
    link = screening.graph.links[0].name
    station = screening.graph.stations[0]
    return tuple(
        Gauge(
            mode=mode.mode,
            frequency_hz=mode.frequency_hz,
            link=link,
            section="plain 125 mm",
            strain_per_nm=0.016,
            torque_nm=800.0,
            microstrain=12.8,
            at_rpm=float(rpm[-1]),
            source=screening.sources[0].name,
            torque_per_nm=14.0,
            encoder_at=station,
            encoder_deg_per_nm=2e-4,
            note="",
        )
        for mode in screening.modes[:2]
    )


def _maps(screening: Screening, rpm: np.ndarray) -> tuple[SeparationMap, ...]:
    """Alternating over mean torque falls with load and peaks at one speed."""
    load = np.linspace(0.05, 1.0, 20)
    gears = [link.name for link in screening.graph.links if link.kind in ("mesh", "epicyclic")]
    ratio = rpm / (0.55 * rpm.max())
    peak = 0.05 + 0.12 / np.sqrt((1.0 - ratio**2) ** 2 + (0.3 * ratio) ** 2)
    return tuple(SeparationMap(gear, load, peak[None, :] / load[:, None]) for gear in gears)
