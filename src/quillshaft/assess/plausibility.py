"""Oddities in the data worth a question before anything is signed (common practice figures throughout)."""

from __future__ import annotations

import math
from collections.abc import Iterator

from quillshaft.assess.coupling_flags import damper_flags, fluid_flags, overspeed_flags, rating_flags, twist_flags
from quillshaft.assess.gear_flags import gear_flags
from quillshaft.assess.mean_torque import fluid_torques
from quillshaft.assess.reciprocating_flags import reciprocating_flags
from quillshaft.assess.results import Flag, LinkDuty
from quillshaft.assess.throw_flags import throw_flags
from quillshaft.elements.coupling import is_rubber
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.gear_model import Epicyclic, GearMesh
from quillshaft.train.model import Station, Train

RPM = 30.0 / math.pi


def plausibility_flags(train: Train, graph: TorsionalGraph, duties: tuple[LinkDuty, ...]) -> tuple[Flag, ...]:
    """Everything odd in a train's data, in file order. A flag is a question, never a verdict."""
    return (
        *_disc_flags(train.stations),
        *_spread_flags(train, graph),
        *_referral_flags(train),
        *_shaft_flags(train),
        *throw_flags(train),
        *_coupling_flags(train),
        *rating_flags(train),
        *overspeed_flags(train, graph),
        *fluid_flags(train),
        *damper_flags(train),
        *_gear_flags(train),
        *gear_flags(train, duties),
        *_duty_flags(train, graph, duties),
        *_power_flags(train),
        *_inertia_flags(train, graph),
        *_operation_flags(train),
        *reciprocating_flags(train, graph),
    )


def _disc_flags(stations: tuple[Station, ...]) -> Iterator[Flag]:
    for station in stations:
        if station.mass_kg is None or station.diameter_m is None or station.inertia_kgm2 == 0:
            continue
        disc = station.mass_kg * station.diameter_m**2 / 8.0
        share = station.inertia_kgm2 / disc
        where = f"stations.{station.name}"
        text = f"its inertia is {share:.3g} × that of a plain disc of its mass and diameter ({disc:.4g} kg·m²)"
        if 3.2 <= share <= 5.0:
            yield Flag(where, f"{text}: a GD² value given as inertia would be 4 ×")
        elif share > 2.0:
            yield Flag(where, f"{text}: more than all its mass at the rim")
        elif share < 0.3:
            yield Flag(where, f"{text}: a quarter would be GD² divided by four twice; ask what the sheet means")


def _spread_flags(train: Train, graph: TorsionalGraph) -> Iterator[Flag]:
    """An inertia out of proportion to the machine's power and speed (a factor-4 slip can hide)."""
    if train.power is None:
        return
    largest = max((abs(watts) for watts in train.power.stations_w.values() if watts), default=0.0)
    if largest == 0:
        return
    for machine in train.machines:
        if machine.kind not in ("induction-motor", "synchronous-motor", "converter-fed-motor", "generator"):
            continue
        index = graph.number(machine.at or "")
        speed = train.operation.rated_rad_s * abs(float(graph.speed_ratio[index]))
        constant = 0.5 * graph.inertia_kgm2[index] * speed**2 / largest
        if not 0.1 <= constant <= 8.0 and constant > 0:
            text = (
                f"the rotor's kinetic energy at speed is {constant:.2g} s of the train's power; "
                "ordinary electrical machines hold 0.1 to 8 s: check for a factor of 4 (GD²) or of 9.81"
            )
            yield Flag(f"stations.{graph.stations[index]}", text)


def _referral_flags(train: Train) -> Iterator[Flag]:
    """A wheel lighter than its pinion hints at an inertia already referred to the other shaft."""
    inertia = {station.name: station for station in train.stations}
    for gear in train.gears:
        if not isinstance(gear, GearMesh) or gear.internal:
            continue
        small, large = sorted(zip(gear.teeth, gear.between, strict=True))
        pinion, wheel = inertia[small[1]], inertia[large[1]]
        ratio = large[0] / small[0]
        given = wheel.inertia_kgm2 > 0 and pinion.inertia_kgm2 > 0 and wheel.referred_to is None
        if given and ratio > 1.5 and wheel.inertia_kgm2 < pinion.inertia_kgm2 * ratio:
            text = (
                f"only {wheel.inertia_kgm2 / pinion.inertia_kgm2:.2g} × the inertia of the pinion at "
                f"{ratio:.2f} × its teeth (equal sections would give {ratio**4:.0f} ×): "
                "is it already referred to the pinion's speed?"
            )
            yield Flag(f"stations.{wheel.name}", text)
        if math.gcd(*gear.teeth) > 1:
            teeth = f"{gear.teeth[0]} : {gear.teeth[1]}"
            text = f"the teeth {teeth} share a factor: a nominal ratio in place of tooth numbers?"
            yield Flag(f"gears.{gear.name}", text)


def _shaft_flags(train: Train) -> Iterator[Flag]:
    for shaft in train.shafts:
        material = shaft.material
        if material is not None and material.density_kgm3 > 7000:
            modulus = material.shear_modulus_pa / 1e9
            if material.density_kgm3 < 8100 and not 60 <= modulus <= 85:
                yield Flag(f"shafts.{shaft.name}", f"G = {modulus:.4g} GPa; steel has 79 to 83 GPa")
        if shaft.pieces and not any(piece.hub_m or piece.flange for piece in shaft.pieces):
            text = "no hub engagement on any piece: are both ends integral flanges or forged on?"
            yield Flag(f"shafts.{shaft.name}", text)


def _coupling_flags(train: Train) -> Iterator[Flag]:
    for coupling in train.couplings:
        where = f"couplings.{coupling.name}"
        yield from twist_flags(coupling)
        psi = (coupling.loss_factor or 0.0) * 2.0 * math.pi
        if psi > 2.5:
            asked = "is it a magnifier, or a loss factor in per cent?"
            text = f"ψ = {psi:.3g} is more than rubber gives (0.4 to 1.6): {asked}"
            yield Flag(where, text)
        if is_rubber(coupling.kind) or (coupling.kind is None and coupling.loss_factor is not None):
            yield Flag(where, "rubber: is this the dynamic stiffness, at what temperature and at what mean torque?")


def _stage_flags(gear: Epicyclic) -> Iterator[Flag]:
    """Planets that cannot be spaced evenly, or that would touch."""
    where, planet = f"gears.{gear.name}", (gear.ring_teeth - gear.sun_teeth) / 2.0
    if (gear.sun_teeth + gear.ring_teeth) % gear.planets:
        yield Flag(where, f"{gear.planets} planets cannot be spaced evenly: sun + ring teeth are not a multiple")
    if (gear.sun_teeth + planet) * math.sin(math.pi / gear.planets) <= planet + 2.0:
        yield Flag(where, f"{gear.planets} planets of about {planet:.0f} teeth would touch each other")


def _gear_flags(train: Train) -> Iterator[Flag]:
    for gear in train.gears:
        if isinstance(gear, Epicyclic):
            yield from _stage_flags(gear)
        if not isinstance(gear, GearMesh) or gear.mesh_n_m is None or gear.geometry is None:
            continue
        if gear.geometry.face_m:
            unit = gear.mesh_n_m / gear.geometry.face_m / 1e9
            if not 8.0 <= unit <= 30.0:
                yield Flag(f"gears.{gear.name}", f"mesh stiffness {unit:.3g} N/(mm·µm); steel gears have 10 to 25")


def _duty_flags(train: Train, graph: TorsionalGraph, duties: tuple[LinkDuty, ...]) -> Iterator[Flag]:
    twist_limit = {"coupling": math.radians(15.0), "shaft": math.radians(2.0)}
    rated = {coupling.name: coupling for coupling in train.couplings}
    for duty in duties:
        link = graph.link(duty.link)
        table = "couplings" if link.kind == "coupling" else "shafts"
        limit = twist_limit.get(link.kind)
        if duty.wind_up_rad is not None and limit is not None and abs(duty.wind_up_rad) > limit:
            text = f"wind-up of {math.degrees(abs(duty.wind_up_rad)):.3g}° at rated power; ordinary is up to"
            yield Flag(f"{table}.{duty.link}", f"{text} {math.degrees(limit):.3g}°")
        coupling: Coupling | None = rated.get(duty.link)
        if coupling is None or coupling.rated_torque_nm is None or duty.mean_torque_nm is None:
            continue
        yield from _overloaded(duty.link, duty.mean_torque_nm, coupling.rated_torque_nm)
    through = fluid_torques(train, graph)
    for fluid in train.fluid_couplings:
        if fluid.rated_torque_nm is not None and fluid.name in through:
            yield from _overloaded(fluid.name, through[fluid.name], fluid.rated_torque_nm)


def _overloaded(name: str, torque_nm: float, rated_nm: float) -> Iterator[Flag]:
    if abs(torque_nm) > rated_nm:
        yield Flag(f"couplings.{name}", f"mean torque {abs(torque_nm):.5g} N·m exceeds its rated {rated_nm:.5g} N·m")


def _power_flags(train: Train) -> Iterator[Flag]:
    bare = {station.name for station in train.stations if station.inertia_kgm2 == 0}
    for name in train.power.stations_w if train.power else ():
        if name in bare:
            yield Flag(f"stations.{name}", "it drives or absorbs power and has no inertia")


def _inertia_flags(train: Train, graph: TorsionalGraph) -> Iterator[Flag]:
    """A shaft heavy against its ends is poorly held by two lumps."""
    for shaft in train.shafts:
        if shaft.own_inertia == "distributed":
            continue
        own = sum(part.inertia_kgm2 for part in graph.parts if part.element == f"shafts.{shaft.name}")
        ends = [graph.inertia_kgm2[graph.number(name)] for name in shaft.between]
        if own > 0.3 * min(ends) and own > 0.1 * sum(ends):
            text = f"its own inertia is {own / sum(ends):.0%} of that at its ends: two lumps are coarse, add a station"
            yield Flag(f"shafts.{shaft.name}", text)


def _operation_flags(train: Train) -> Iterator[Flag]:
    operation = train.operation
    rated, ranges = operation.rated_rad_s, operation.ranges_rad_s
    if not any(low * 0.9999 <= rated <= high * 1.0001 for low, high in ranges):
        text = f"the rated speed of {rated * RPM:.0f} rpm lies outside the running range: is it judged as meant?"
        yield Flag("operation.rated", text)
    engine = any(machine.kind == "reciprocating-engine" for machine in train.machines)
    if engine and operation.idle_rad_s is None:
        yield Flag(
            "operation",
            "an engine without an idle speed: give idle, and a range that holds it if it runs there",
        )
    if operation.range_given and operation.trip_rad_s is None:
        yield Flag("operation", "no trip speed is given: the diagram ends at the top of the range")
