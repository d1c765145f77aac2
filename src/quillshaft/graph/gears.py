"""What gears bring to the graph beside their links: the inertia of planets and of members held by a stiffness."""

from __future__ import annotations

from collections.abc import Iterator

from quillshaft.elements.epicyclic import stage_rules, travelling_inertia
from quillshaft.elements.gear import mesh_by_rule
from quillshaft.graph.torsional import InertiaPart
from quillshaft.train.gear_model import Epicyclic, GearMesh
from quillshaft.train.model import Train
from quillshaft.train.validate import Findings


def gear_parts(train: Train, number: dict[str, int]) -> Iterator[InertiaPart]:
    """Inertia of planets about their own axes, of their mass at the carrier, and of members held by a stiffness."""
    for gear in train.gears:
        if not isinstance(gear, Epicyclic):
            continue
        element, wheels, held = f"gears.{gear.name}", gear.wheels, gear.held
        if wheels is not None:
            planets = number[wheels.station]
            yield InertiaPart(planets, element, gear.planets * wheels.inertia_kgm2, wheels.tolerance)
            travelling = travelling_inertia(gear)
            if travelling:
                yield InertiaPart(number[gear.carrier], element, travelling, wheels.tolerance, planets)
        if held is not None and held.inertia_kgm2:
            yield InertiaPart(number[held.station], element, held.inertia_kgm2, held.tolerance)


def check_rules(train: Train, findings: Findings) -> None:
    """Notes every gear whose stiffness is to follow by the rule from teeth that cannot mesh."""
    for gear in train.gears:
        try:
            results = (mesh_by_rule(gear),) if isinstance(gear, GearMesh) else stage_rules(gear) or ()
        except ValueError as error:
            findings.add(("gears", gear.name, "teeth"), str(error), None, "teeth and profile shifts that can mesh")
            continue
        for result in results:
            if result is not None and result.contact_ratio < 1.0:
                message = f"these teeth lose contact: the transverse contact ratio is {result.contact_ratio:.3g}"
                findings.add(("gears", gear.name, "teeth"), message, None, "a contact ratio of 1 or more")
