"""Steady forced response of a screened train: every source, every case, limits, findings, restrictions, closings."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.response.closing import close_pairs
from quillshaft.assess.response.combine import Combined, combine, continuous_speeds, torque_range
from quillshaft.assess.response.evaluate import Kept, all_kept, evaluate
from quillshaft.assess.response.findings import all_findings, damper_faults
from quillshaft.assess.response.ground import Ground
from quillshaft.assess.response.heat import (
    ambient_k,
    complex_springs,
    heated_couplings,
    heated_springs,
    settle_heat,
    thinned,
)
from quillshaft.assess.response.limits import limit_curves
from quillshaft.assess.response.loads import LoadSet, collect_loads
from quillshaft.assess.response.maps import separation_maps, waves
from quillshaft.assess.response.mean import MeanTorques, mean_torques_of
from quillshaft.assess.response.measure import gauges
from quillshaft.assess.response.restrictions import restrictions
from quillshaft.assess.response.run import UNDAMPED, Swept, modes_of, rubber_links, sweep, watched_stations
from quillshaft.assess.response.states import OWN_HEAT, State, all_states
from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.assess.results import Screening
from quillshaft.graph.network import Bools
from quillshaft.sources.gas import CycleError
from quillshaft.train.basic_model import Assumed
from quillshaft.train.model import Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.validate import Findings

MOST_HEATED = 200
RPM = 30.0 / math.pi

COMBINATION = (
    "Sources locked in phase are synthesised over their working cycle; sources of unknown mutual phase are added by "
    "amplitude, and that worst case is judged. The root of the sum of their squares is shown beside it."
)


def respond(screening: Screening) -> Response:
    """The steady forced response of a screened train, its couplings in the state of the screening.

    Raises TrainFileError where no source has an amplitude, an amplitude has no mean torque to refer to, or a mode
    without damping can be met.
    """
    train = screening.train
    mean = mean_torques_of(train, screening.graph, screening.duties, screening.station_power_w)
    loads = _loads(screening, mean)
    states = all_states(train, screening.temperature)
    _check_damping(train, states[0], loads)
    watched, couplings = watched_stations(train, screening.graph), rubber_links(train, screening.graph)
    swept = _with_heat(sweep(states, loads, watched, couplings), loads, watched, couplings)
    assumed = [*loads.assumed, *_assumed(train, loads)]
    speeds, rated = swept.speed_rad_s, train.operation.rated_rad_s
    limits = limit_curves(train, screening.graph, swept.cases[0].mean_torque_nm, speeds / rated, assumed)
    inside = continuous_speeds(train.operation, speeds)
    ground = Ground(train, screening.graph, swept.cases, speeds, inside, limits, mean)
    return Response(
        screening=screening,
        speed_rad_s=speeds,
        continuous=inside,
        cases=swept.cases,
        shares=swept.shares,
        waves=waves(swept, loads),
        limits=limits,
        findings=all_findings(ground),
        restrictions=restrictions(screening, ground, swept, loads),
        closings=close_pairs(screening, ground, swept, loads),
        gauges=gauges(screening, ground, swept),
        maps=separation_maps(train, swept, loads),
        groups=tuple((group.name, tuple(line.source.name for line in group.lines)) for group in loads.groups),
        combination=COMBINATION,
        unjudged=loads.unjudged,
        assumed=tuple(assumed),
        notes=(*loads.notes, *_notes(screening, swept, loads)),
        faults=damper_faults(ground),
    )


def _loads(screening: Screening, mean: MeanTorques) -> LoadSet:
    train = screening.train
    findings = Findings(train.file, train.cases)
    try:
        loads = collect_loads(train, screening.graph, screening.sources, mean)
    except CycleError as error:
        findings.add(("machines",), error.message, None, error.allowed)
        raise TrainFileError(tuple(findings.problems)) from error
    if not loads.groups and not loads.plain:
        text = "no source of this train has an amplitude, so there is no response to work out"
        allowed = "[amplitudes] by source, torque on [excitations], gas on an engine, or [assumptions] amplitudes"
        findings.add(("amplitudes",), text, None, f'{allowed} = "ordinary"')
        raise TrainFileError(tuple(findings.problems))
    return loads


def _check_damping(train: Train, state: State, loads: LoadSet) -> None:
    """Refuse a mode without damping that a source with an amplitude meets: its resonance has no bound.

    Raises TrainFileError.
    """
    omega, zeta = modes_of(state)
    operation = train.operation
    top = 1.05 * max(operation.trip_rad_s or 0.0, operation.ranges_rad_s[-1][1], operation.rated_rad_s)
    reach = [line.harmonic * group.base * top for group in loads.groups for line in group.lines]
    reach += [abs(order) * top + abs(constant) for item in loads.plain for order, constant in item.frequencies]
    findings = Findings(train.file, train.cases)
    for number, (own, ratio) in enumerate(zip(omega.tolist(), zeta.tolist(), strict=True), start=1):
        if ratio < UNDAMPED and own <= max(reach):
            text = f"mode {number} at {own / (2 * math.pi):.4g} Hz has no damping: its resonance has no bound"
            allowed = 'zeta = ["1 %", "2 %"], or psi, loss-factor or viscous on the links it twists'
            findings.add(("assumptions", "zeta"), text, None, allowed)
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))


def _with_heat(swept: Swept, loads: LoadSet, watched: tuple[int, ...], couplings: tuple[int, ...]) -> Swept:
    """The sweep with cases in which the couplings stand at the temperature that their own heat brings them to."""
    state = swept.states[0]
    heated = heated_couplings(state.train)
    if not heated:
        return swept
    running = continuous_speeds(state.train.operation, swept.speed_rad_s)
    links = [link.name for link in state.graph.links]
    numbers = [0, *_hottest_dead(swept, [links.index(coupling.name) for coupling in heated], running)]
    cases, states, own_loads = list(swept.cases), list(swept.states), list(swept.loads)
    for number in numbers:
        own = replace(
            swept.states[number],
            name=OWN_HEAT,
            kind="temperature",
            note="couplings at the temperature of their own heat",
        )
        cases.append(_own_heat(own, swept, loads, number, running, (watched, couplings)))
        states.append(own)
        own_loads.append(swept.loads[number])
    return replace(swept, cases=tuple(cases), states=tuple(states), loads=tuple(own_loads))


def _own_heat(
    state: State,
    swept: Swept,
    loads: LoadSet,
    number: int,
    running: Bools,
    what: tuple[tuple[int, ...], tuple[int, ...]],
) -> CaseResponse:
    """Load case `number` with couplings settled at the judged speeds, and at the ambient temperature elsewhere.

    Settled at no more than 200 speeds, the temperature between them straight.
    """
    case, couplings = swept.loads[number], heated_couplings(state.train)
    few = thinned(running, MOST_HEATED)
    found = settle_heat(state, loads, case, swept.speed_rad_s[few], swept.share[few])
    kelvin = {item.name: np.full(len(running), ambient_k(item)) for item in couplings}
    away = {item.name: np.zeros(len(running), dtype=bool) for item in couplings}
    for name, value in found.temperature_k.items():
        at = swept.speed_rad_s[running]
        kelvin[name][running] = np.interp(at, swept.speed_rad_s[few], value)
        away[name][running] = np.interp(at, swept.speed_rad_s[few], found.runaway[name].astype(float)) > 0.0
    springs = heated_springs(state, couplings, kelvin, complex_springs(state, swept.speed_rad_s))
    kept = Kept(what[0], all_kept(state.graph).links)
    lines = evaluate(state, loads, (case,), (kept,), swept.speed_rad_s, swept.share, springs)
    torque = torque_range(loads, case, 0, lines, swept.share)
    made = combine(
        Combined(state, loads, case, 0, lines, swept.speed_rad_s, swept.share, torque, kept),
        swept.means[number],
        *what,
    )
    shown = {name: np.where(running, value, np.nan) for name, value in kelvin.items()}
    return replace(made, temperature_k=shown, runaway=away)


def _hottest_dead(swept: Swept, places: list[int], running: Bools) -> list[int]:
    found: list[tuple[float, int]] = []
    for number, (case, state) in enumerate(zip(swept.cases, swept.states, strict=True)):
        if case.kind == "dead cylinder" and state.kind == "normal" and running.any():
            found.append((float(case.heat_w[places][:, running].max()), number))
    return [max(found)[1]] if found else []


def _assumed(train: Train, loads: LoadSet) -> list[Assumed]:
    """What the response takes where the file is silent."""
    out = []
    operation = train.operation
    if train.power is not None and train.power.law is None:
        why = "not given: mean torque is taken as at rated speed at every speed"
        out.append(Assumed("power", "law", "constant-torque", why))
    if train.power is not None and isinstance(train.power.law, tuple):
        low, high = (train.power.law[end][0] * RPM for end in (0, -1))
        why = "the table of the load law ends there: below and above the torque is held"
        out.append(Assumed("power", "law", f"given from {low:.5g} to {high:.5g} rpm", why))
    if not operation.tachometer_given:
        why = "not given: allowance for the tachometer beside barred ranges and idle"
        out.append(Assumed("operation", "tachometer", f"{operation.tachometer * 100:.3g} %", why))
    engines = any(group.cylinders and group.cylinders.follows_load for group in loads.groups)
    if engines and not operation.light_load_given and train.power is not None:
        why = "not given: share of full load of the light-load case, and of an engine below 0.8 of its idle speed"
        out.append(Assumed("operation", "light-load", f"{operation.light_load * 100:.3g} %", why))
    out += _criteria(train)
    for coupling in heated_couplings(train):
        if coupling.ambient_k is None:
            words = f"{ambient_k(coupling) - 273.15:.0f} °C"
            out.append(Assumed(f"couplings.{coupling.name}", "ambient", words, "not given: air about the coupling"))
    return out


def _criteria(train: Train) -> list[Assumed]:
    out = []
    why = "not given: default (common practice)"
    strength = train.strength
    if strength.rule == "endurance":
        values = {
            "mean-stress": strength.mean_stress,
            "safety": f"{strength.safety:g}",
            "notch": strength.notch,
            "surface": strength.surface,
        }
        out += [Assumed("criteria.strength", k, v, why) for k, v in values.items() if k not in strength.given]
    duty = train.duty
    recalled = "not given: recalled class-rule figure, confirm against your edition"
    if train.gears:
        values = {"gear-share": f"{duty.gear_share * 100:.3g} %", "gear-reversal": duty.gear_reversal}
        out += [Assumed("criteria.duty", k, v, recalled) for k, v in values.items() if k not in duty.given]
    if any(machine.kind == "generator" for machine in train.machines):
        values = {
            "inertia-torque": f"{duty.inertia_torque:g} × rated",
            "electrical-angle": f"{math.degrees(duty.electrical_rad):.3g}°",
        }
        out += [Assumed("criteria.duty", k, v, recalled) for k, v in values.items() if k not in duty.given]
    return out


def _notes(screening: Screening, swept: Swept, loads: LoadSet) -> list[str]:
    out = []
    if not swept.all_found:
        out.append("the speed grid reached its largest size before every peak was found to 0.1 %: peaks may be low")
    if any(tie.synchronizing is not None for tie in screening.train.ties):
        out.append(
            "the grid holds the machine near rated speed only: start-up speeds are not steady and not shown here"
        )
    settled = swept.states[0].settled
    if settled is not None and settled.split_follows_stiffness:
        text = "in an elastic loop couplings that follow mean torque keep the stiffness of full load in every case"
        out.append(text)
    several = [item.source.name for item in loads.plain if len(item.places) > 1 and not item.silent]
    if several:
        out.append(f"applied at whichever station of the shaft line is worst for each link: {', '.join(several)}")
    off = [source for source, _ in screening.sources_off]
    if off:
        names = ", ".join(source.name for source in off[:6]) + (f" and {len(off) - 6} more" if len(off) > 6 else "")
        out.append(f"switched off by the file, so not here: {names}")
    idle = [item.source for item in screening.train.amplitudes if any(one.answers_to(item.source) for one in off)]
    if idle:
        out.append(f"an amplitude is stated for a source that is switched off, and not used: {', '.join(idle)}")
    when = sorted({source.name for source in screening.sources if source.when != "continuous"})
    if when:
        out.append(f"not steady, so not here: {', '.join(when)} (they act at the start or in a fault)")
    return out
