"""Screening: every continuous source against every mode, nominal and over the tolerances."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.excitability import excitabilities
from quillshaft.assess.mean_torque import mean_torques
from quillshaft.assess.mode_results import mode_results
from quillshaft.assess.plausibility import plausibility_flags
from quillshaft.assess.results import (
    SEVERITY,
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
    critical_speeds,
    highest_frequency,
    judged_ranges,
    required_separation,
    separate,
)
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.sources.collect import collect_sources
from quillshaft.sources.line import Source
from quillshaft.train.model import Dismissal, Train
from quillshaft.train.problems import TrainFileError, did_you_mean
from quillshaft.train.validate import Findings

RPM = 30.0 / math.pi
MATCH = 0.03


def screen(train: Train) -> Screening:
    """Screen a train: natural frequencies, margins, critical speeds and verdicts.

    Raises TrainFileError when the train cannot turn, is not connected, its power does not close, or a
    machine, a criterion or a dismissal names what does not exist.
    """
    graph = build_graph(train)
    sources = collect_sources(train, graph)
    _check_dismissals(train, (*sources.active, *(source for source, _ in sources.off)))
    plan = plan_elimination(graph.network)
    nominal, soft, stiff = (
        natural_modes(network, plan) for network in (graph.network, graph.soft_heavy, graph.stiff_light)
    )
    two_pi = 2.0 * math.pi
    modes = mode_results(graph, nominal, soft.omega_rad_s / two_pi, stiff.omega_rad_s / two_pi, train.zeta[0])
    duties = mean_torques(train, graph)
    excitable = _excitability(graph, nominal, soft, stiff, sources.active)
    judged, pairs, stale = _judge(train, modes, sources.active, excitable)
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
    )


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
    train: Train, modes: tuple[ModeResult, ...], sources: tuple[Source, ...], excitable: tuple[Floats, Floats]
) -> tuple[tuple[int, ...], tuple[Interference, ...], tuple[StaleDismissal, ...]]:
    top = highest_frequency(sources, train.operation, train.criteria)
    judged = tuple(mode.mode for mode in modes if mode.bounds_hz[0] <= top)
    ranges = judged_ranges(train.operation)
    applied, stale = _sort_dismissals(train, modes, sources)
    pairs = tuple(
        _pair(train, mode, source, ranges, (own[row, mode.mode - 1], worst[row, mode.mode - 1]), applied)
        for own, worst in (excitable,)
        for mode in modes[: len(judged)]
        for row, source in enumerate(sources)
        if source.when == "continuous"
    )
    return judged, pairs, stale


def _pair(
    train: Train,
    mode: ModeResult,
    source: Source,
    ranges: tuple[JudgedRange, ...],
    excitable: tuple[float, float],
    applied: tuple[Dismissal, ...],
) -> Interference:
    criteria, on = train.criteria, train.criteria.margin_on
    required = required_separation(source, criteria.separation)
    worst_required = required_separation(source, criteria.worst_case)
    nominal = separate(source, (mode.frequency_hz, mode.frequency_hz), ranges, required, on)
    worst = separate(source, mode.bounds_hz, ranges, worst_required, on)
    speeds, chosen = critical_speeds(source, mode.frequency_hz, train.operation)
    dismissed = next((item for item in applied if item.mode == mode.mode and source.answers_to(item.source)), None)
    own, largest = (None if math.isnan(value) else float(value) for value in excitable)
    return Interference(
        source.name,
        mode.mode,
        chosen,
        speeds,
        nominal.margin,
        worst.margin,
        nominal.at_rad_s * RPM,
        required,
        worst_required,
        own,
        largest,
        nominal.verdict,
        worst.verdict,
        dismissed,
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
