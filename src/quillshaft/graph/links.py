"""Each link of the train as a draft for the graph: its stations, stiffness and where it will stand."""

from __future__ import annotations

from fractions import Fraction
from typing import Literal

from quillshaft.elements.belt import belt_ratio, belt_stiffness_at_first, ratio_words
from quillshaft.elements.coupling import coupling_loss_factor, coupling_stiffness, coupling_viscous
from quillshaft.elements.electrical import tie_stiffness
from quillshaft.elements.epicyclic import StageMesh, stage_meshes
from quillshaft.elements.gear import mesh_ratio, mesh_stiffness_at_first
from quillshaft.elements.shaft import shaft_stiffness
from quillshaft.graph.network import Ints
from quillshaft.graph.states import Temperature, coupling_temperature
from quillshaft.graph.torsional import Slot
from quillshaft.records import dataclass
from quillshaft.train.basic_model import Tolerance
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.gear_model import Belt, Epicyclic, GearMesh
from quillshaft.train.model import Train
from quillshaft.train.shaft_model import Shaft


@dataclass(frozen=True)
class LinkDraft:
    """A link before nodes are merged; stiffness [N·m/rad] is actual, at the first-named station.

    signed holds the coefficients of the signed station angles in the link's twist, for gears: the twist at
    the first-named station is sum(signed · signed angle). viscous [N·m·s/rad] stands where the stiffness does.
    """

    name: str
    kind: Literal["shaft", "coupling", "mesh", "epicyclic", "belt", "tie", "damper"]
    stations: tuple[int, ...]
    stiffness: float | None
    tolerance: Tolerance
    loss_factor: float | None
    slot: Slot
    signed: tuple[Fraction, ...] = ()
    ratio_text: str = ""
    viscous: float | None = None

    def station_coefficients(self, ratios: tuple[Fraction, ...]) -> tuple[Fraction, ...]:
        """Coefficients of the referred station angles, scaled so that the torque is the referred one."""
        if len(self.stations) == 1:
            return (Fraction(1),)
        if self.slot != "torque":
            return (Fraction(1), Fraction(-1))
        first = abs(ratios[self.stations[0]]) or Fraction(1)
        pairs = zip(self.stations, self.signed, strict=True)
        return tuple(coefficient * (ratios[station] or Fraction(1)) / first for station, coefficient in pairs)

    def node_coefficients(self, node: Ints, ratios: tuple[Fraction, ...]) -> dict[int, Fraction]:
        """The same by network node, without those that cancel."""
        out: dict[int, Fraction] = {}
        for station, coefficient in zip(self.stations, self.station_coefficients(ratios), strict=True):
            number = int(node[station])
            out[number] = out.get(number, Fraction(0)) + coefficient
        return {number: value for number, value in out.items() if value}


def draft_links(
    train: Train, names: tuple[str, ...], ratios: tuple[Fraction, ...], temperature: Temperature
) -> list[LinkDraft]:
    """Drafts of all links in file order: shafts, couplings, gears, belts, ties."""
    number = {name: index for index, name in enumerate(names)}
    drafts = [_shaft(shaft, number, ratios) for shaft in train.shafts]
    drafts += [_coupling(coupling, number, ratios, temperature) for coupling in train.couplings]
    for gear in train.gears:
        drafts += [_mesh(gear, number, ratios)] if isinstance(gear, GearMesh) else _stage(gear, number, ratios)
    drafts += [_belt(belt, number, ratios) for belt in train.belts]
    drafts += [
        LinkDraft(
            tie.name,
            "tie",
            (number[tie.at],),
            tie_stiffness(tie),
            tie.tolerance,
            tie.loss_factor,
            "tie",
            viscous=tie.viscous_nms_rad,
        )
        for tie in train.ties
    ]
    return drafts


def _unreferred(
    stiffness: float, referred_to: str | None, own: str, number: dict[str, int], ratios: tuple[Fraction, ...]
) -> float:
    """Actual stiffness [N·m/rad] of one that a sheet gives referred to another shaft."""
    if referred_to is None:
        return stiffness
    other, here = ratios[number[referred_to]], ratios[number[own]]
    return stiffness if not other or not here else stiffness * float(other / here) ** 2


def _shaft(shaft: Shaft, number: dict[str, int], ratios: tuple[Fraction, ...]) -> LinkDraft:
    stiffness = _unreferred(shaft_stiffness(shaft), shaft.referred_to, shaft.between[0], number, ratios)
    ends = (number[shaft.between[0]], number[shaft.between[1]])
    viscous = shaft.viscous_nms_rad
    if viscous is not None:
        viscous = _unreferred(viscous, shaft.referred_to, shaft.between[0], number, ratios)
    slot: Slot = "cut" if shaft.own_inertia == "distributed" else "spring"
    return LinkDraft(shaft.name, "shaft", ends, stiffness, shaft.tolerance, shaft.loss_factor, slot, viscous=viscous)


def _coupling(
    coupling: Coupling, number: dict[str, int], ratios: tuple[Fraction, ...], temperature: Temperature
) -> LinkDraft:
    kelvin, first = coupling_temperature(coupling, temperature), coupling.between[0]
    given = coupling_stiffness(coupling, None, kelvin)
    stiffness = _unreferred(given, coupling.referred_to, first, number, ratios)
    ends = (number[first], number[coupling.between[1]])
    loss, viscous = coupling_loss_factor(coupling, kelvin), coupling_viscous(coupling, kelvin)
    if viscous is not None:
        viscous = _unreferred(viscous, coupling.referred_to, first, number, ratios)
    return LinkDraft(coupling.name, "coupling", ends, stiffness, coupling.tolerance, loss, "spring", viscous=viscous)


def _pair_slot(stiffness: float | None, ends: tuple[int, ...], ratios: tuple[Fraction, ...]) -> Slot:
    if not all(ratios[end] for end in ends):
        return "torque"
    return "rigid" if stiffness is None else "spring"


def _mesh(gear: GearMesh, number: dict[str, int], ratios: tuple[Fraction, ...]) -> LinkDraft:
    ends = (number[gear.between[0]], number[gear.between[1]])
    stiffness = mesh_stiffness_at_first(gear)
    z1, z2 = gear.teeth
    signed = (Fraction(1), -1 / mesh_ratio(gear))
    return LinkDraft(
        gear.name,
        "mesh",
        ends,
        stiffness,
        gear.tolerance,
        gear.loss_factor,
        _pair_slot(stiffness, ends, ratios),
        signed,
        f"{z1} : {z2}" + (" internal" if gear.internal else " bevel" if gear.kind == "bevel" else ""),
        gear.viscous_nms_rad,
    )


def _stage(gear: Epicyclic, number: dict[str, int], ratios: tuple[Fraction, ...]) -> list[LinkDraft]:
    """A stage with a fixed member is a pair; its stiffness moves from the sun to the first member.

    Where planets have inertia the stage is two links in series; each has its share of the viscous coefficient.
    """
    return [_stage_mesh(gear, mesh, number, ratios) for mesh in stage_meshes(gear)]


def _stage_mesh(gear: Epicyclic, mesh: StageMesh, number: dict[str, int], ratios: tuple[Fraction, ...]) -> LinkDraft:
    members = mesh.turning
    stations = tuple(number[name] for name, _ in members)
    leading = members[0][1]
    signed = tuple(coefficient / leading for _, coefficient in members)
    moved = float(leading / gear.sun_teeth) ** 2
    stiffness = None if mesh.at_sun is None else mesh.at_sun * moved
    viscous = None if gear.viscous_nms_rad is None else gear.viscous_nms_rad / mesh.share * moved
    slot: Slot = "torque" if len(members) == 3 else _pair_slot(stiffness, stations, ratios)
    loss = gear.loss_factor
    return LinkDraft(
        mesh.name, "epicyclic", stations, stiffness, gear.tolerance, loss, slot, signed, mesh.text, viscous
    )


def _belt(belt: Belt, number: dict[str, int], ratios: tuple[Fraction, ...]) -> LinkDraft:
    ends = (number[belt.between[0]], number[belt.between[1]])
    stiffness, loss = belt_stiffness_at_first(belt), belt.loss_factor
    signed, text = (Fraction(1), -1 / belt_ratio(belt)), ratio_words(belt)
    slot = _pair_slot(stiffness, ends, ratios)
    return LinkDraft(belt.name, "belt", ends, stiffness, belt.tolerance, loss, slot, signed, text, belt.viscous_nms_rad)
