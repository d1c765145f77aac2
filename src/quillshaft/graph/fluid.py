"""Fluid couplings in the graph: they join speeds and carry mean torque, and no spring joins their sides."""

from __future__ import annotations

from quillshaft.graph.torsional import InertiaPart, TorsionalGraph
from quillshaft.train.model import Train


def fluid_parts(train: Train, number: dict[str, int]) -> tuple[InertiaPart, ...]:
    """Half inertias of the fluid couplings at the stations they sit at."""
    return tuple(
        InertiaPart(number[name], f"couplings.{coupling.name}", inertia, coupling.inertia_tolerance)
        for coupling in train.fluid_couplings
        for name, inertia in zip(coupling.between, coupling.half_inertias_kgm2, strict=True)
        if inertia
    )


def islands(graph: TorsionalGraph) -> tuple[int, ...]:
    """Number of the torsionally separate part that each station belongs to; one part in an ordinary train."""
    part = list(range(len(graph.stations)))
    for link in graph.links:
        own = {part[station] for station in link.stations}
        part = [min(own) if number in own else number for number in part]
    return tuple(part)
