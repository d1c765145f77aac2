"""The sources that shafts, gears and machines imply."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from quillshaft.elements.gear import turning_members
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.electrical import converter_lines, grid_lines, start_lines
from quillshaft.sources.line import Action, Source
from quillshaft.sources.reciprocating_sources import KINDS as RECIPROCATING
from quillshaft.sources.reciprocating_sources import reciprocating_sources
from quillshaft.train.gear_model import Epicyclic, GearMesh
from quillshaft.train.model import Machine, Train
from quillshaft.train.validate import Findings

FAMILY = {
    "induction-motor": "line",
    "synchronous-motor": "line",
    "generator": "line",
    "converter-fed-motor": "converter",
    "reciprocating-engine": "engine",
    "other": "pass",
}


def _source(
    graph: TorsionalGraph,
    name: str,
    labels: tuple[str, ...],
    station: int,
    order: float,
    frequency_hz: float = 0.0,
    band: float = 0.0,
    action: Action | None = None,
    at: str | None = None,
    major: bool | None = None,
) -> Source:
    return Source(
        name,
        (name,),
        ((name, *labels, "default"),),
        at or graph.stations[station],
        station,
        order,
        frequency_hz,
        band,
        abs(float(graph.speed_ratio[station])),
        "continuous",
        action or Action("point", (station,), (0.0,)),
        major,
    )


def shaft_sources(graph: TorsionalGraph) -> Iterator[Source]:
    """1x and 2x of every shaft line that turns, named after its first station in file order."""
    for line in graph.lines:
        if graph.speed_ratio[line[0]] == 0:
            continue
        for order in (1, 2):
            tail = f"{order}x"
            name = f"{graph.stations[line[0]]} {tail}"
            source = _source(graph, name, (tail, "shaft"), line[0], order, action=Action("line", line))
            yield replace(source, aliases=tuple(f"{graph.stations[station]} {tail}" for station in line[1:]))


def gear_sources(train: Train, graph: TorsionalGraph) -> Iterator[Source]:
    """Tooth mesh of every gear; of an epicyclic stage also the passing of its planets."""
    for gear in train.gears:
        action = Action("link", link=gear.name)
        if isinstance(gear, GearMesh):
            station = graph.number(gear.between[0])
            if graph.speed_ratio[station] != 0:
                labels = ("mesh", "gear")
                yield _source(graph, f"{gear.name} mesh", labels, station, gear.teeth[0], action=action, at=gear.name)
        else:
            yield from _stage_sources(gear, graph, action)


def _stage_sources(gear: Epicyclic, graph: TorsionalGraph, action: Action) -> Iterator[Source]:
    """z_ring · |n_ring − n_carrier| at the teeth; planets · the same for their passing."""

    def speed(name: str) -> float:
        return float(graph.speed_ratio[graph.number(name)]) if name in graph.stations else 0.0

    relative = abs(speed(gear.ring) - speed(gear.carrier))
    moving = [name for name, _ in turning_members(gear) if speed(name) != 0]
    if not moving or relative == 0:
        return
    station = graph.number(gear.carrier if gear.carrier in moving else moving[0])
    per_turn = relative / abs(float(graph.speed_ratio[station]))
    for tail, count in (("mesh", gear.ring_teeth), ("planet-pass", gear.planets)):
        name = f"{gear.name} {tail}"
        yield _source(graph, name, (tail, "gear"), station, count * per_turn, action=action, at=gear.name)


def _machine_lines(machine: Machine, supply_band: float) -> list[tuple[str, float, float, float]]:
    """(tail of the name, order, frequency [Hz], band) of the lines a machine implies at its station."""
    lines: list[tuple[str, float, float, float]] = []
    pairs = (machine.poles or 0) / 2.0
    word = "blade-pass" if machine.kind in ("fan", "propeller") else "vane-pass"
    if machine.blades:
        lines += [(word, machine.blades, 0.0, 0.0), (f"{word} 2x", 2.0 * machine.blades, 0.0, 0.0)]
    if machine.diffuser_vanes:
        lines.append(("diffuser-pass", machine.diffuser_vanes, 0.0, 0.0))
    lines += [(f"pass-{count}", count, 0.0, 0.0) for count in machine.passes]
    if machine.kind == "converter-fed-motor":
        lines += converter_lines(machine, supply_band)
    if machine.supply_hz is not None and machine.electrical.grid_resonance_hz is not None:
        lines += grid_lines(machine.electrical.grid_resonance_hz, machine.supply_hz, supply_band)
    if machine.supply_hz is not None and (machine.line_side or machine.kind != "converter-fed-motor"):
        lines += [(f"line-{k}x", 0.0, k * machine.supply_hz, supply_band) for k in (1, 2)]
    elif machine.kind == "generator":
        lines += [(f"line-{k}x", k * pairs, 0.0, 0.0) for k in (1, 2)]
    return lines


def machine_sources(train: Train, graph: TorsionalGraph, findings: Findings) -> Iterator[Source]:
    """What the machines imply; contradictions between a machine and the speeds go to `findings`."""
    for machine in train.machines:
        if machine.kind in RECIPROCATING:
            yield from reciprocating_sources(machine, train, graph, findings)
            continue
        station = graph.number(machine.at or "")
        if graph.speed_ratio[station] == 0:
            findings.add(("machines", machine.name, "at"), "this station does not turn", machine.at)
            continue
        _check_supply(machine, station, train, graph, findings)
        for tail, order, frequency, band in _machine_lines(machine, train.operation.supply_band):
            family = FAMILY.get(machine.kind, "pass")
            kind = "line" if tail.startswith("line-") else "pass" if "pass" in tail else family
            kind = next((word for word in ("switch", "beat", "grid") if tail.startswith(f"{word}-")), kind)
            labels = (tail, kind, machine.kind, machine.name)
            yield _source(graph, f"{machine.name} {tail}", labels, station, order, frequency, band)
        yield from _start_sources(machine, station, graph)


def _start_sources(machine: Machine, station: int, graph: TorsionalGraph) -> Iterator[Source]:
    """Slip-frequency lines of a synchronous motor that runs up on its damper winding; they act at the start only."""
    if machine.electrical.start != "asynchronous" or machine.poles is None or machine.supply_hz is None:
        return
    for tail, order, frequency, band in start_lines(machine.poles, machine.supply_hz):
        labels = (tail, "slip", machine.kind, machine.name)
        source = _source(graph, f"{machine.name} {tail}", labels, station, order, frequency, band)
        yield replace(source, when="start")


def _check_supply(machine: Machine, station: int, train: Train, graph: TorsionalGraph, findings: Findings) -> None:
    """A machine on a fixed supply runs near its synchronous speed, and only there."""
    if machine.supply_hz is None or machine.poles is None or machine.kind == "converter-fed-motor":
        return
    rpm = 30.0 / 3.141592653589793
    ratio = abs(float(graph.speed_ratio[station])) * rpm
    synchronous, rated = 120.0 * machine.supply_hz / machine.poles, train.operation.rated_rad_s * ratio
    induction = machine.kind == "induction-motor"
    if not (0.85 if induction else 0.995) <= rated / synchronous <= 1.005:
        message = (
            f"{machine.poles} poles at {machine.supply_hz:g} Hz turn at {synchronous:.5g} rpm, "
            f"but {machine.at} runs at {rated:.5g} rpm at the rated speed"
        )
        findings.add(("machines", machine.name, "poles"), message, machine.poles, "poles and supply that fit")
        return
    low, high = (edge * ratio for edge in (train.operation.ranges_rad_s[0][0], train.operation.ranges_rad_s[-1][1]))
    band = train.operation.speed_band
    if low < min(rated, synchronous) * (1 - band) * 0.9999 or high > synchronous * (1 + band) * 1.0001:
        message = (
            f"{machine.name} is on a fixed supply and runs between {rated:.5g} and {synchronous:.5g} rpm, "
            f"but the range asks for {low:.5g} to {high:.5g} rpm: was a converter-fed-motor meant?"
        )
        findings.add(("operation", "range"), message, None, "the rated speed alone, or another machine kind")
