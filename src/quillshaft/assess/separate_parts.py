"""What can shake what, in a train that fluid couplings separate torsionally."""

from __future__ import annotations

from quillshaft.assess.results import ModeResult
from quillshaft.graph.cut_links import inside_name
from quillshaft.graph.fluid import islands
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.line import Source

HELD = 1e-9
"""Share of a mode's kinetic energy below which a separate part takes no part in it."""


def out_of_reach(
    graph: TorsionalGraph, modes: tuple[ModeResult, ...], sources: tuple[Source, ...]
) -> frozenset[tuple[int, str]]:
    """(mode, source) pairs that no spring joins; empty where the train is one torsional system.

    Of modes with equal frequencies any basis may be shown, so each of a cluster reaches what any of them does.
    """
    part = islands(graph)
    if len(set(part)) == 1:
        return frozenset()
    reach = {mode.mode: _parts_of(graph, mode, part) for mode in modes}
    joined = {mode.mode: set().union(*(reach[number] for number in mode.cluster)) for mode in modes}
    return frozenset(
        (mode.mode, source.name)
        for mode in modes
        for source in sources
        if not joined[mode.mode] & {part[station] for station in _acts_at(graph, source)}
    )


def _parts_of(graph: TorsionalGraph, mode: ModeResult, part: tuple[int, ...]) -> set[int]:
    shares: dict[int, float] = {}
    for station, number in zip(graph.stations, part, strict=True):
        shares[number] = shares.get(number, 0.0) + mode.kinetic_energy[station]
    for link in graph.links:
        if link.cut is not None:
            number = part[link.stations[0]]
            shares[number] = shares.get(number, 0.0) + mode.kinetic_energy[inside_name(link)]
    return {number for number, share in shares.items() if share > HELD}


def _acts_at(graph: TorsionalGraph, source: Source) -> tuple[int, ...]:
    if source.action.link is not None:
        return graph.link(source.action.link).stations
    return source.action.stations or (source.station,)
