"""Screening: every continuous source against every mode, nominal and over the tolerances."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.along import Track, follow, follows_speed, settle
from quillshaft.assess.cutting import cut_finely
from quillshaft.assess.dismissals import check_dismissals, sort_dismissals
from quillshaft.assess.electrical import derived_values, electrical_flags
from quillshaft.assess.excitability import excitabilities
from quillshaft.assess.mean_torque import mean_powers, mean_torques
from quillshaft.assess.mode_results import growth_flags, mode_results
from quillshaft.assess.pairs import judged_pair, lowest_frequency, seen
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
from quillshaft.assess.separate_parts import out_of_reach
from quillshaft.assess.separation import (
    highest_frequency,
    judged_ranges,
)
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.graph.states import Temperature
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.sources.collect import collect_sources
from quillshaft.sources.line import Source
from quillshaft.train.model import Train
from quillshaft.train.overlay import case_names
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import train_of

RPM = 30.0 / math.pi


def screen_alone(train: Train, temperature: Temperature = "reference") -> Screening:
    """Screen a train without the cases of its file: frequencies, margins, critical speeds and verdicts.

    Couplings stand at the given temperature: cold, reference (30 °C), hot, or one temperature [K] for all. Where
    a coupling's stiffness follows mean torque, every mode is judged along the speed.

    Raises TrainFileError when the train cannot turn, is not connected, its power does not close, or a
    machine, a criterion or a dismissal names what does not exist.
    """
    cut = cut_finely(train, temperature)
    train = cut.train
    graph = build_graph(train, temperature)
    settled = settle(train, graph, temperature) if follows_speed(train) else None
    graph = graph if settled is None else settled.graph
    sources = collect_sources(train, graph)
    check_dismissals(train, (*sources.active, *(source for source, _ in sources.off)))
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
    apart = out_of_reach(graph, modes, sources.active)
    judged, pairs, stale = _judge(train, modes, sources.active, excitable, track, apart)
    counted = [pair for pair in pairs if pair.dismissed is None]
    powers = mean_powers(train, graph)
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
        flags=(
            *plausibility_flags(train, graph, duties),
            *cut.flags,
            *electrical_flags(train, graph, modes),
            *growth_flags(train, modes),
            *_idle_flags(train, pairs),
        ),
        assumed=train.assumed,
        self_check=_self_check(nominal, modes),
        verdict=_worst([pair.verdict for pair in counted]),
        worst_verdict=_worst([pair.worst_verdict for pair in counted]),
        temperature=temperature,
        station_power_w=powers,
        case_names=() if train.cases else case_names(train.file.data),
        derived=derived_values(train, graph, modes, powers),
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
    apart: frozenset[tuple[int, str]],
) -> tuple[tuple[int, ...], tuple[Interference, ...], tuple[StaleDismissal, ...]]:
    top = highest_frequency(sources, train.operation, train.criteria)
    judged = tuple(mode.mode for mode in modes if lowest_frequency(mode, train.operation) <= top)
    ranges = judged_ranges(train.operation)
    applied, stale = sort_dismissals(train, modes, sources)
    pairs = tuple(
        judged_pair(
            train,
            mode,
            source,
            seen(mode, source, train, ranges, track),
            (own[row, i - 1], worst[row, i - 1]),
            applied,
        )
        for own, worst in (excitable,)
        for i, mode in ((mode.mode, mode) for mode in modes if mode.mode in judged)
        for row, source in enumerate(sources)
        if source.when == "continuous" and (i, source.name) not in apart
    )
    return judged, pairs, stale


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
