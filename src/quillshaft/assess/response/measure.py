"""Where to measure each mode: the section to gauge, what to expect there, and where an encoder sees it."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.mode_results import mode_torques
from quillshaft.assess.response.ground import Ground
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response_results import Gauge
from quillshaft.assess.results import Screening
from quillshaft.elements.stress import section_modulus
from quillshaft.graph.network import Floats
from quillshaft.solve.steady import steady_response
from quillshaft.train.shaft_model import Shaft

RPM = 30.0 / math.pi
MOST_MODES = 8
MEASURABLE = 1e-4
"""Of the largest alternating torque of a link: what a source makes of less is not expected to be seen."""


def gauges(screening: Screening, ground: Ground, swept: Swept) -> tuple[Gauge, ...]:
    """One row for each judged mode, the lowest first."""
    torques = mode_torques(screening.graph, screening.graph.network, screening.network_modes)
    return tuple(
        _gauge(screening, ground, swept, mode, torques[mode - 1]) for mode in screening.judged_modes[:MOST_MODES]
    )


def _gauge(screening: Screening, ground: Ground, swept: Swept, number: int, torques: Floats) -> Gauge:
    mode, graph = screening.mode(number), screening.graph
    shafts = {shaft.name: shaft for shaft in screening.train.shafts}
    place, note = _best_place(screening, ground, torques, shafts)
    encoder = max(mode.shape, key=lambda name: abs(mode.shape[name]))
    link = None if place is None else graph.links[place]
    name = None if link is None else link.name
    strain = None if name is None else _strain(shafts[name])
    torque, at_rpm, source = (None, None, None) if place is None else _expected(screening, swept, number, place)
    return Gauge(
        number,
        mode.frequency_hz,
        name,
        "" if name is None else _words(shafts[name]),
        strain,
        torque,
        None if torque is None or strain is None else torque * strain,
        at_rpm,
        source,
        None if place is None else _per_torque(screening, swept, number, place),
        encoder,
        _encoder(screening, number, encoder, None if place is None else place),
        note,
    )


def _best_place(
    screening: Screening, ground: Ground, torques: Floats, shafts: dict[str, Shaft]
) -> tuple[int | None, str]:
    """The shaft outside crank throws whose gauge strain in the mode is largest; without any section, its torque."""
    cranks = {cylinder.at for machine in screening.train.machines for cylinder in machine.cylinders}
    open_to_hand = [
        place
        for place, link in enumerate(screening.graph.links)
        if link.kind == "shaft"
        and np.isfinite(torques[place])
        and shafts[link.name].throw is None
        and not all(screening.graph.stations[end] in cranks for end in link.stations)
    ]
    if not open_to_hand:
        return None, "no shaft outside the crank can be gauged: use an encoder or torsiograph at the station named"
    actual = {place: abs(torques[place]) * screening.graph.links[place].torque_scale for place in open_to_hand}
    known = [place for place in open_to_hand if ground.limits[place].mpa_per_nm is not None]
    largest = max(actual.values())
    if known:
        best = max(known, key=lambda place: actual[place] * (ground.limits[place].mpa_per_nm or 0.0))
        if actual[best] >= 0.1 * largest:
            return best, "gauges at 45° in a full bridge on the plain part of the section named; check its access"
        return best, "this shaft carries little of the mode: prefer an encoder at the station named"
    best = max(open_to_hand, key=lambda place: actual[place])
    return best, "its section is not in the file: strain follows once the diameter is known"


def _strain(shaft: Shaft) -> float | None:
    """Strain of a gauge at 45° [microstrain per N·m]: τ / (2 G) at the gauged section (pure shear).

    Source: strength of materials.
    """
    section = _section(shaft)
    if section is None or shaft.material is None:
        return None
    return 1e6 / section_modulus(section[0], section[1]) / (2.0 * shaft.material.shear_modulus_pa)


def _words(shaft: Shaft) -> str:
    section = _section(shaft)
    return "section not known" if section is None else section[2]


def _section(shaft: Shaft) -> tuple[float, float, str] | None:
    """Outer and inner diameter [m] where a gauge goes, and its words: the weakest section, else the thinnest piece."""
    own = shaft.strength.weakest if shaft.strength is not None else None
    if own is not None:
        return own.od_m, own.id_m, f"{own.od_m * 1e3:.4g} mm"
    round_pieces = [piece for piece in shaft.pieces if not piece.flange and piece.section_m is None]
    if not round_pieces:
        return None
    thinnest = min(round_pieces, key=lambda piece: min(piece.od_m))
    small = int(thinnest.od_m[1] < thinnest.od_m[0])
    words = f"{thinnest.od_m[small] * 1e3:.4g} mm, {thinnest.length_m * 1e3:.4g} mm long"
    return thinnest.od_m[small], thinnest.id_m[small], words


def _expected(
    screening: Screening, swept: Swept, mode: int, place: int
) -> tuple[float | None, float | None, str | None]:
    """Largest torque amplitude of one source in the link at a critical speed of the mode: value, rpm, source."""
    shares = {share.source: share for share in swept.shares}
    best: tuple[float, float, str] | None = None
    least = MEASURABLE * float(np.nanmax(swept.cases[0].alternating_torque_nm[place], initial=0.0))
    for pair in screening.interferences:
        share = shares.get(pair.source)
        if pair.mode != mode or share is None:
            continue
        for rpm in pair.critical_speeds_rpm:
            near = np.flatnonzero(np.abs(swept.speed_rad_s * RPM - rpm) <= 0.02 * rpm)
            if len(near):
                value = float(share.torque_nm[place, near].max())
                if value > least and (best is None or value > best[0]):
                    best = (value, rpm, pair.source)
    return best if best is not None else (None, None, None)


def _per_torque(screening: Screening, swept: Swept, mode: int, place: int) -> float | None:
    """Torque in the link per N·m at the station that the mode moves most, at its natural frequency."""
    state, graph = swept.states[0], screening.graph
    shape = screening.mode(mode).shape
    station = graph.number(max(shape, key=lambda name: abs(shape[name])))
    load = np.zeros((state.network.nodes, 1), dtype=complex)
    load[state.graph.node[station], 0] = graph.scale[station]
    omega = np.array([screening.mode(mode).omega_rad_s])
    solved = steady_response(state.network, state.damping, state.plan, omega, [load])[0]
    link = graph.links[place]
    index = link.index if link.cut is None else link.cut.springs[0]
    return float(np.abs(solved.spring_torque[index, 0])) * link.torque_scale


def _encoder(screening: Screening, mode: int, station: str, place: int | None) -> float:
    """Angle [deg] of a station per N·m of torque in the gauged link, in the mode's shape; 0 without a link."""
    graph, modes = screening.graph, screening.network_modes
    if place is None:
        return 0.0
    link, number = graph.links[place], graph.number(station)
    index = link.index if link.cut is None else link.cut.springs[0]
    torque = float(graph.network.spring_nm_rad[index] * modes.spring_twist[mode - 1, index]) * link.torque_scale
    angle = float(modes.angle[mode - 1, graph.node[number]]) * float(graph.scale[number])
    return abs(math.degrees(angle / torque)) if torque else 0.0
