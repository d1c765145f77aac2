"""Springs, dampers and questions that follow from electrical machines and load curves; they change no verdict."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Literal

from quillshaft.assess.results import DerivedValue, Flag, ModeResult
from quillshaft.elements.electrical import (
    breakdown_slip,
    induction_damping,
    induction_spring_and_damping,
    load_damping,
    swing_frequency_hz,
    tie_stiffness,
)
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.sources.electrical import start_speed_rad_s
from quillshaft.train.model import Machine, Train

RPM = 30.0 / math.pi
LIGHT = 0.05
"""Damping ratio below which a mode inside a drive's control bandwidth is asked about (common practice: ζ of trains with
metal couplings is 0.5 to 4 %)."""
Powers = tuple[tuple[str, float], ...]


@dataclass(frozen=True)
class _Curve:
    """Kloss's curve of an induction motor: slips, torques [N·m] and synchronous speed [rad/s]."""

    slip: float
    slip_k: float
    torque_k_nm: float
    synchronous_rad_s: float
    slip_from: Literal["given", "worked out"]


def derived_values(
    train: Train, graph: TorsionalGraph, modes: tuple[ModeResult, ...], powers: Powers
) -> tuple[DerivedValue, ...]:
    """Values worked out from the electrical data and the load law, each at its own shaft, in file order."""
    return (
        *_tie_values(train, graph),
        *(value for machine in train.machines for value in _motor_values(machine, train, graph, modes, powers)),
        *_load_values(train, graph, powers),
    )


def _tie_values(train: Train, graph: TorsionalGraph) -> Iterator[DerivedValue]:
    for tie in train.ties:
        if tie.synchronizing is None:
            continue
        element, stiffness = f"ties.{tie.name}", tie_stiffness(tie)
        scale = graph.scale / graph.scale[graph.number(tie.at)]
        turning = [float(value) for value, ratio in zip(scale, graph.speed_ratio, strict=True) if ratio]
        moved = [float(value) for value, ratio in zip(graph.inertia_kgm2, graph.speed_ratio, strict=True) if ratio]
        inertia = sum(value * factor**2 for value, factor in zip(moved, turning, strict=True))
        yield DerivedValue(element, "stiffness to the grid", stiffness, "N·m/rad", "p² · P_s / (2π f)")
        if train.fluid_couplings:
            continue
        basis = "the whole train as one inertia on this spring; the first mode lies near it"
        yield DerivedValue(element, "swing against the grid", swing_frequency_hz(stiffness, inertia), "Hz", basis)


def _curve(machine: Machine, train: Train, graph: TorsionalGraph, powers: Powers) -> _Curve | None:
    """The torque curve where the file says enough: breakdown torque, and rated torque or power at the station."""
    given = machine.electrical
    if machine.poles is None or machine.supply_hz is None or machine.at is None:
        return None
    synchronous = 4.0 * math.pi * machine.supply_hz / machine.poles
    speed = train.operation.rated_rad_s * abs(float(graph.speed_ratio[graph.number(machine.at)]))
    slip, rated = 1.0 - speed / synchronous, given.rated_torque_nm
    if rated is None:
        watts = dict(powers).get(machine.at, 0.0)
        rated = watts / speed if watts > 0 else None
    torque_k = given.breakdown_torque_nm
    if torque_k is None and given.breakdown_share is not None and rated is not None:
        torque_k = given.breakdown_share * rated
    if torque_k is None:
        return None
    if given.breakdown_slip is not None:
        return _Curve(slip, given.breakdown_slip, torque_k, synchronous, "given")
    if rated is None or slip <= 0 or torque_k < rated:
        return None
    return _Curve(slip, breakdown_slip(slip, torque_k / rated), torque_k, synchronous, "worked out")


def _motor_values(
    machine: Machine, train: Train, graph: TorsionalGraph, modes: tuple[ModeResult, ...], powers: Powers
) -> Iterator[DerivedValue]:
    curve = _curve(machine, train, graph, powers)
    if curve is None or machine.poles is None or machine.supply_hz is None:
        return
    element = f"machines.{machine.name}"
    if curve.slip_from == "worked out":
        yield DerivedValue(element, "breakdown slip", curve.slip_k, "1", "Kloss, from the rated point")
    slow = induction_damping(curve.slip, curve.slip_k, curve.torque_k_nm, curve.synchronous_rad_s)
    yield DerivedValue(element, "damping of slow swings", slow, "N·m·s/rad", "slope of Kloss's curve at rated speed")
    for mode in modes[:1]:
        spring, damping = induction_spring_and_damping(
            mode.frequency_hz, curve.slip_k, curve.torque_k_nm, machine.poles, machine.supply_hz
        )
        at, lag = f"at mode {mode.mode} ({mode.frequency_hz:.2f} Hz)", "lag of the rotor's circuit; not in the model"
        yield DerivedValue(element, f"electrical spring {at}", spring, "N·m/rad", f"{lag}: add a tie to hold it")
        yield DerivedValue(element, f"electrical damping {at}", damping, "N·m·s/rad", lag)


def _load_values(train: Train, graph: TorsionalGraph, powers: Powers) -> Iterator[DerivedValue]:
    stated = {machine.at for machine in train.machines if machine.load_slope_nms_rad is not None}
    for machine in train.machines:
        if machine.load_slope_nms_rad is not None:
            slope = machine.load_slope_nms_rad
            yield DerivedValue(f"machines.{machine.name}", "damping of the load", slope, "N·m·s/rad", "load-slope")
    law = train.power.law if train.power else None
    if law is None:
        return
    word = law if isinstance(law, str) else "table"
    for station, watts in powers:
        if watts >= 0 or station in stated:
            continue
        speed = train.operation.rated_rad_s * abs(float(graph.speed_ratio[graph.number(station)]))
        slope = load_damping(law, -watts / speed, speed)
        basis = f"slope of the load law at rated speed ({word})" + ("; negative: it drives swings" if slope < 0 else "")
        yield DerivedValue(f"stations.{station}", "damping of the load", slope, "N·m·s/rad", basis)


def electrical_flags(train: Train, graph: TorsionalGraph, modes: tuple[ModeResult, ...]) -> tuple[Flag, ...]:
    """Questions to the makers of converters and synchronous motors about the modes of this train."""
    return tuple(flag for machine in train.machines for flag in _machine_flags(machine, train, graph, modes))


def _machine_flags(
    machine: Machine, train: Train, graph: TorsionalGraph, modes: tuple[ModeResult, ...]
) -> Iterator[Flag]:
    where, bandwidth = f"machines.{machine.name}", machine.electrical.control_bandwidth_hz
    inside = [mode for mode in modes if bandwidth is not None and mode.bounds_hz[0] <= bandwidth]
    for mode in inside:
        if mode.damping_ratio < LIGHT:
            yield Flag(
                where,
                f"mode {mode.mode} ({mode.frequency_hz:.2f} Hz, damping ratio {mode.damping_ratio * 100:.2g} %) lies "
                f"inside the drive's control bandwidth of {bandwidth:g} Hz: what keeps the control from feeding it?",
            )
    if machine.kind == "synchronous-motor":
        yield from _synchronous_flags(machine, train, graph, modes)


def _synchronous_flags(
    machine: Machine, train: Train, graph: TorsionalGraph, modes: tuple[ModeResult, ...]
) -> Iterator[Flag]:
    where = f"machines.{machine.name}"
    if all(tie.at != machine.at for tie in train.ties):
        text = "no tie holds it to the grid: what is its synchronizing power? It gives a low mode, ordinarily 1 to 5 Hz"
        yield Flag(where, text)
    if machine.electrical.start != "asynchronous" or machine.poles is None or machine.supply_hz is None:
        return
    own = abs(float(graph.speed_ratio[graph.number(machine.at or "")]))
    passed = []
    for mode in modes:
        speed = start_speed_rad_s(mode.frequency_hz, machine.poles, machine.supply_hz)
        if speed is not None:
            passed.append(f"mode {mode.mode} ({mode.frequency_hz:.2f} Hz) at {speed / own * RPM:.0f} rpm")
    if passed:
        text = f"while it starts, twice its slip frequency passes {', '.join(reversed(passed))}"
        yield Flag(where, f"{text}: what pulsating torque does it give there, and how long does the start take?")
