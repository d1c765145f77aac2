"""Screening: every continuous source against every mode, nominal and over the tolerances."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from quillshaft.assess.along import Track, follow, settle
from quillshaft.assess.excitability import excitabilities
from quillshaft.assess.mean_torque import mean_powers, mean_torques
from quillshaft.assess.mode_results import mode_results
from quillshaft.assess.plausibility import plausibility_flags
from quillshaft.assess.results import (
    SEVERITY,
    CaseResult,
    Flag,
    Interference,
    ModeResult,
    Screening,
    SelfCheck,
    StaleDismissal,
    Verdict,
)
from quillshaft.assess.separation import (
    JudgedRange,
    Separation,
    bar_needed,
    critical_speeds,
    highest_frequency,
    judged_ranges,
    required_separation,
    separate,
)
from quillshaft.assess.separation_along import critical_speeds_along, separate_along
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.graph.states import Temperature, follows_torque
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.sources.collect import collect_sources
from quillshaft.sources.line import Source
from quillshaft.train.model import Dismissal, Operation, Train
from quillshaft.train.overlay import case_names
from quillshaft.train.problems import TrainFileError, did_you_mean
from quillshaft.train.read import train_of
from quillshaft.train.validate import Findings

RPM = 30.0 / math.pi
MATCH = 0.03


def screen_alone(train: Train, temperature: Temperature = "reference") -> Screening:
    """Screen a train without the cases of its file: frequencies, margins, critical speeds and verdicts.

    Couplings stand at the given temperature: cold, reference (30 °C), hot, or one temperature [K] for all. Where
    a coupling's stiffness follows mean torque, every mode is judged along the speed.

    Raises TrainFileError when the train cannot turn, is not connected, its power does not close, or a
    machine, a criterion or a dismissal names what does not exist.
    """
    graph = build_graph(train, temperature)
    settled = settle(train, graph, temperature) if follows_torque(train) else None
    graph = graph if settled is None else settled.graph
    sources = collect_sources(train, graph)
    _check_dismissals(train, (*sources.active, *(source for source, _ in sources.off)))
    plan = plan_elimination(graph.network)
    nominal, soft, stiff = (
        natural_modes(network, plan) for network in (graph.network, graph.soft_heavy, graph.stiff_light)
    )
    two_pi = 2.0 * math.pi
    modes = mode_results(graph, nominal, soft.omega_rad_s / two_pi, stiff.omega_rad_s / two_pi, train.zeta[0])
    track = None if settled is None else follow(train, settled, temperature)
    modes = modes if track is None else tuple(_with_track(mode, track) for mode in modes)
    duties = mean_torques(train, graph) if settled is None else settled.duties
    excitable = _excitability(graph, nominal, soft, stiff, sources.active)
    judged, pairs, stale = _judge(train, modes, sources.active, excitable, track)
    counted = [pair for pair in pairs if pair.dismissed is None]
    return Screening(
        train=train,
        graph=graph,
        network_modes=nominal,
        modes=modes,
        judged_modes=judged,
        sources=sources.active,
        sources_off=sources.off,
        interferences=pairs,
        stale_dismissals=stale,
        duties=duties,
        flags=(*plausibility_flags(train, graph, duties), *_idle_flags(train, pairs)),
        assumed=train.assumed,
        self_check=_self_check(nominal, modes),
        verdict=_worst([pair.verdict for pair in counted]),
        worst_verdict=_worst([pair.worst_verdict for pair in counted]),
        temperature=temperature,
        station_power_w=mean_powers(train, graph),
        case_names=() if train.cases else case_names(train.file.data),
    )


def screen(train: Train, temperature: Temperature = "reference") -> Screening:
    """The train screened, and each case of its file beside it. Raises TrainFileError where the train cannot be."""
    base = screen_alone(train, temperature)
    results = []
    for name in base.case_names:
        try:
            results.append(CaseResult(name, screen_alone(train_of(train.file, (name,)), temperature)))
        except TrainFileError as error:
            results.append(CaseResult(name, None, str(error)))
    return replace(base, cases=tuple(results))


def screen_temperatures(train: Train) -> dict[str, Screening]:
    """The train screened with its couplings cold, at 30 °C and hot. Raises TrainFileError as `screen` does."""
    return {
        "cold": screen_alone(train, "cold"),
        "30 °C": screen_alone(train),
        "hot": screen_alone(train, "hot"),
    }


def _with_track(mode: ModeResult, track: Track) -> ModeResult:
    column = mode.mode - 1
    rows = zip(
        (track.speed_rad_s * RPM).tolist(),
        track.nominal_hz[:, column].tolist(),
        track.low_hz[:, column].tolist(),
        track.high_hz[:, column].tolist(),
        strict=True,
    )
    return replace(mode, frequency_along=tuple(rows))


def _worst(verdicts: list[Verdict]) -> Verdict:
    return max(verdicts, key=SEVERITY.__getitem__, default="clear")


def _check_dismissals(train: Train, sources: tuple[Source, ...]) -> None:
    """A dismissal of a source that the base train does not have is a slip; in a case it is only stale."""
    findings = Findings(train.file, train.cases)
    for dismissal in train.dismissals:
        if not train.cases and not any(source.answers_to(dismissal.source) for source in sources):
            hint = did_you_mean(dismissal.source, [source.name for source in sources])
            path = ("dismissals", dismissal.name, "source")
            findings.add(path, f"there is no source of this name{hint}", dismissal.source, "as `check` lists it")
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))


def _excitability(
    graph: TorsionalGraph, nominal: Modes, soft: Modes, stiff: Modes, sources: tuple[Source, ...]
) -> tuple[Floats, Floats]:
    """(sources, modes) nominal, and the largest of nominal and both corners of the tolerances."""
    own = excitabilities(graph, graph.network, nominal, sources)
    corners = (
        excitabilities(graph, graph.soft_heavy, soft, sources),
        excitabilities(graph, graph.stiff_light, stiff, sources),
    )
    return own, np.maximum(own, np.maximum(*corners))


def _judge(
    train: Train,
    modes: tuple[ModeResult, ...],
    sources: tuple[Source, ...],
    excitable: tuple[Floats, Floats],
    track: Track | None,
) -> tuple[tuple[int, ...], tuple[Interference, ...], tuple[StaleDismissal, ...]]:
    top = highest_frequency(sources, train.operation, train.criteria)
    judged = tuple(mode.mode for mode in modes if _lowest(mode, train.operation) <= top)
    ranges = judged_ranges(train.operation)
    applied, stale = _sort_dismissals(train, modes, sources)
    pairs = tuple(
        _pair(
            train,
            mode,
            source,
            _seen(mode, source, train, ranges, track),
            (own[row, i - 1], worst[row, i - 1]),
            applied,
        )
        for own, worst in (excitable,)
        for i, mode in ((mode.mode, mode) for mode in modes if mode.mode in judged)
        for row, source in enumerate(sources)
        if source.when == "continuous"
    )
    return judged, pairs, stale


def _lowest(mode: ModeResult, operation: Operation) -> float:
    """Lowest frequency [Hz] of a mode over the tolerances and, where it follows speed, over the judged range."""
    if mode.frequency_along is None:
        return mode.bounds_hz[0]
    low, high = operation.ranges_rad_s[0][0] * RPM, operation.ranges_rad_s[-1][1] * RPM
    inside = [row[2] for row in mode.frequency_along if low * (1 - 1e-9) <= row[0] <= high * (1 + 1e-9)]
    return min(inside, default=mode.bounds_hz[0])


@dataclass(frozen=True)
class _Seen:
    """A pair as judged: nominal and over the tolerances, over the free stretches alone, and where they meet."""

    nominal: Separation
    worst: Separation
    free: tuple[Separation, Separation] | None
    speeds_rpm: tuple[float, ...]
    chosen_rpm: float | None


def _seen(
    mode: ModeResult, source: Source, train: Train, ranges: tuple[JudgedRange, ...], track: Track | None
) -> _Seen:
    on = train.criteria.margin_on
    required = required_separation(source, train.criteria.separation)
    worst_required = required_separation(source, train.criteria.worst_case)

    def both(stretches: tuple[JudgedRange, ...]) -> tuple[Separation, Separation]:
        if track is None:
            own = (mode.frequency_hz, mode.frequency_hz)
            nominal = separate(source, own, stretches, required, on)
            return nominal, separate(source, mode.bounds_hz, stretches, worst_required, on)
        column = mode.mode - 1
        middle, low, high = (values[:, column] for values in (track.nominal_hz, track.low_hz, track.high_hz))
        nominal = separate_along(source, track, (middle, middle), stretches, required, on)
        return nominal, separate_along(source, track, (low, high), stretches, worst_required, on)

    nominal, worst = both(ranges)
    barred = "barred" in (nominal.verdict, worst.verdict)
    free = both(tuple(stretch for stretch in ranges if not stretch.barred)) if barred else None
    if track is None:
        speeds, chosen = critical_speeds(source, mode.frequency_hz, train.operation)
    else:
        speeds, chosen = critical_speeds_along(source, track, mode.mode - 1, train.operation)
    return _Seen(nominal, worst, free, speeds, chosen)


def _bar(mode: ModeResult, source: Source, train: Train, seen: _Seen) -> tuple[float, float] | None:
    """The barred range [rpm] that nominal and worst-case requirements together ask for."""
    if mode.frequency_along is not None:
        return None
    on, inside = train.criteria.margin_on, seen.nominal.at_rad_s
    required = required_separation(source, train.criteria.separation)
    worst_required = required_separation(source, train.criteria.worst_case)
    first = bar_needed(source, (mode.frequency_hz, mode.frequency_hz), required, on, inside)
    second = bar_needed(source, mode.bounds_hz, worst_required, on, inside)
    if first is None or second is None:
        return None
    return min(first[0], second[0]), max(first[1], second[1])


def _where(seen: _Seen, operation: Operation) -> float:
    """Speed [rpm] of the smallest margin; where they meet in range, the critical speed."""
    meets = seen.nominal.margin == 0.0 and seen.chosen_rpm is not None
    if meets and any(low <= (seen.chosen_rpm or 0.0) / RPM <= high for low, high in operation.ranges_rad_s):
        return seen.chosen_rpm or 0.0
    return seen.nominal.at_rad_s * RPM


def _pair(
    train: Train,
    mode: ModeResult,
    source: Source,
    seen: _Seen,
    excitable: tuple[float, float],
    applied: tuple[Dismissal, ...],
) -> Interference:
    criteria = train.criteria
    required = required_separation(source, criteria.separation)
    worst_required = required_separation(source, criteria.worst_case)
    dismissed = next((item for item in applied if item.mode == mode.mode and source.answers_to(item.source)), None)
    own, largest = (None if math.isnan(value) else float(value) for value in excitable)
    return Interference(
        source.name,
        mode.mode,
        seen.chosen_rpm,
        seen.speeds_rpm,
        seen.nominal.margin,
        seen.worst.margin,
        _where(seen, train.operation),
        required,
        worst_required,
        own,
        largest,
        seen.nominal.verdict,
        seen.worst.verdict,
        dismissed,
        None if seen.free is None else seen.free[0].margin,
        None if seen.free is None else seen.free[1].margin,
        None if seen.free is None else _bar(mode, source, train, seen),
    )


def _sort_dismissals(
    train: Train, modes: tuple[ModeResult, ...], sources: tuple[Source, ...]
) -> tuple[tuple[Dismissal, ...], tuple[StaleDismissal, ...]]:
    applied, stale = [], []
    for item in train.dismissals:
        why = _why_stale(item, train, modes, sources)
        if why is None:
            applied.append(item)
        else:
            stale.append(StaleDismissal(item, why))
    return tuple(applied), tuple(stale)


def _why_stale(item: Dismissal, train: Train, modes: tuple[ModeResult, ...], sources: tuple[Source, ...]) -> str | None:
    if not any(source.answers_to(item.source) for source in sources):
        return f"there is no source {item.source} in this train as it stands"
    if not set(train.cases) <= set(item.cases):
        missing = ", ".join(case for case in train.cases if case not in item.cases)
        return f"it is not stated for the case {missing}"
    if item.mode > len(modes):
        return f"there is no mode {item.mode}"
    frequency = modes[item.mode - 1].frequency_hz
    if abs(frequency - item.frequency_hz) > MATCH * item.frequency_hz:
        return f"mode {item.mode} is now at {frequency:.2f} Hz, dismissed at {item.frequency_hz:.2f} Hz"
    return None


def _idle_flags(train: Train, pairs: tuple[Interference, ...]) -> tuple[Flag, ...]:
    idle = train.operation.idle_rad_s
    if idle is None or any(low <= idle <= high for low, high in train.operation.ranges_rad_s):
        return ()
    near = [
        f"mode {pair.mode} with {pair.source} at {speed:.0f} rpm"
        for pair in pairs
        for speed in pair.critical_speeds_rpm
        if abs(speed - idle * RPM) <= pair.required * speed
    ]
    if not near:
        return ()
    listed = "; ".join(near[:6]) + (f"; and {len(near) - 6} more" if len(near) > 6 else "")
    text = f"idle at {idle * RPM:.0f} rpm is outside the judged range and near critical speeds: {listed}"
    return (Flag("operation.idle", text),)


def _self_check(nominal: Modes, modes: tuple[ModeResult, ...]) -> SelfCheck:
    errors = [
        abs(sum(shares) - 1.0)
        for mode in modes
        for shares in (mode.strain_energy.values(), mode.kinetic_energy.values())
    ]
    return SelfCheck(
        len(modes),
        bool(np.all(nominal.proven)),
        float(np.max(nominal.relative_width, initial=0.0)),
        float(np.max(nominal.residual, initial=0.0)),
        max(errors, default=0.0),
    )
