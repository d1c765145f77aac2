"""Amplitudes of single sources: what the file states, what a joint's angle makes, or an ordinary figure if wanted."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.response.mean import MeanTorques, torque_words
from quillshaft.elements.joint import joint_amplitude
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.sources.line import TWO_PI, Action, Source
from quillshaft.train.basic_model import Assumed
from quillshaft.train.model import Excitation, Train
from quillshaft.train.validate import Findings

ORDINARY: dict[str, float] = {
    "1x": 0.01,
    "2x": 0.01,
    "vane-pass": 0.02,
    "vane-pass 2x": 0.01,
    "blade-pass": 0.02,
    "blade-pass 2x": 0.01,
    "diffuser-pass": 0.01,
    "mesh": 0.01,
    "out-1x": 0.01,
    "out-2x": 0.01,
    "out-6x": 0.04,
    "out-12x": 0.04,
    "propeller blade-pass": 0.10,
}
"""Amplitude over the mean torque there by kind of source (common practice, upper ordinary figures)."""


@dataclass(frozen=True)
class PlainSource:
    """A source by itself.

    constant_nm, following_nm   parts of its amplitude [N·m] at its own station: fixed, and at rated mean torque
    mean_nm       mean torque there at rated speed and full load, where known
    places        unit loads (stations,), referred: torque of each station for 1 N·m of the source; the worst counts
    inside        place among the links of the link it acts in, None elsewhere; then the link's own torque is less it
    silent        True where the file gives no amplitude
    frequencies   (order per turn of `speed-at`, constant [rad/s]) of its line; several for a supply's band
    """

    source: Source
    constant_nm: float
    following_nm: float
    mean_nm: float | None
    places: tuple[Floats | Complexes, ...]
    inside: int | None
    frequencies: tuple[tuple[float, float], ...]
    phase_rad: float
    basis: str
    silent: bool = False

    def amplitude_nm(self, share: Floats) -> Floats:
        """(S,) amplitude at shares of the rated mean torque (S,)."""
        return np.asarray(self.constant_nm + self.following_nm * share)


def plain_source(
    train: Train, graph: TorsionalGraph, source: Source, mean: MeanTorques, findings: Findings, notes: list[str]
) -> tuple[PlainSource, tuple[Assumed, ...]]:
    """The source with its amplitude, 0 where the file gives none, and what was assumed for it."""
    size, missing = _stated(train, graph, source, mean, findings)
    assumed = _stood_for(source, missing) if size is not None else ()
    if size is None and train.ordinary_amplitudes:
        size, assumed = _ordinary(graph, source, mean)
    silent = size is None
    constant, following, reference, basis = size or (0.0, 0.0, reference_torque(graph, source, mean), "none given")
    inside, places = _places(graph, source, notes)
    return (
        PlainSource(
            source,
            constant,
            following,
            reference,
            places,
            inside,
            _frequencies(source),
            next((item.phase_rad or 0.0 for item in train.excitations if item.name in source.origins), 0.0),
            basis,
            silent,
        ),
        assumed,
    )


Size = tuple[float, float, float | None, str]


def _stood_for(source: Source, missing: list[str]) -> tuple[Assumed, ...]:
    """What is taken of sources on the same line as others that have an amplitude, and without one themselves."""
    others = " and ".join(name for name in source.origins if name not in missing)
    why = f"not given: {others} acts on the same stations along the same line, and stands for it"
    return tuple(Assumed(name, "amplitude", f"that of {others}", why) for name in missing)


def _stated(
    train: Train, graph: TorsionalGraph, source: Source, mean: MeanTorques, findings: Findings
) -> tuple[Size | None, list[str]]:
    """(constant, following the mean torque [N·m], the mean torque there, words) stated, and the names without it."""
    reference = reference_torque(graph, source, mean)
    total: Size | None = None
    missing = []
    for name in source.origins:
        given: tuple[float | None, float | None] = (None, None)
        path: tuple[str, ...] = ("amplitudes", name)
        for amplitude in train.amplitudes:
            if amplitude.source == name or (amplitude.source in source.aliases and name == source.origins[0]):
                given, path = (amplitude.torque_nm, amplitude.torque_share), ("amplitudes", amplitude.source)
        excitation = next((item for item in train.excitations if item.name == name), None)
        if given == (None, None) and excitation is not None:
            given, path = (excitation.torque_nm, excitation.torque_share), ("excitations", name, "torque")
        size = _of_torque(given, reference, path, findings) or _of_joint(train, graph, name, excitation)
        if size is None:
            missing.append(name)
        else:
            total = size if total is None else _sum(total, size)
    return total, missing


def _sum(a: Size, b: Size) -> Size:
    return a[0] + b[0], a[1] + b[1], a[2], f"{a[3]}; {b[3]}"


def _of_torque(
    given: tuple[float | None, float | None], reference: float | None, path: tuple[str, ...], findings: Findings
) -> Size | None:
    torque, share = given
    if torque is not None:
        return abs(torque), 0.0, reference, f"{torque_words(abs(torque))} as stated"
    if share is None:
        return None
    if reference is None:
        message = "is a share of the mean torque there, and no power gives one"
        findings.add(path, message, None, "[power] with the mean power of each station, or an amplitude in N m")
        return None
    return 0.0, share * reference, reference, f"{share * 100:.3g} % of {torque_words(reference)} mean"


def _of_joint(train: Train, graph: TorsionalGraph, name: str, excitation: Excitation | None) -> Size | None:
    """Torque that a universal joint's lead makes in its link held still at both ends: |k| · amplitude of the lead."""
    joint = next((item for item in train.joints if f"{item.name} 2x" == name), None)
    if joint is None or excitation is not None:
        return None
    link = graph.link(joint.at)
    if link.stiffness_nm_rad is None:
        return None
    lead = joint_amplitude(joint.angle_rad)
    return link.stiffness_nm_rad * lead, 0.0, None, f"lead of ±{np.degrees(lead):.3g}° times the link's stiffness"


def _ordinary(graph: TorsionalGraph, source: Source, mean: MeanTorques) -> tuple[Size | None, tuple[Assumed, ...]]:
    reference = reference_torque(graph, source, mean)
    kinds = [label for chain in source.labels for label in chain]
    kind = next((label for label in kinds if label in ORDINARY), None)
    if kind is None or reference is None:
        return None, ()
    share = ORDINARY["propeller blade-pass" if kind == "blade-pass" and "propeller" in kinds else kind]
    text = f"{share * 100:.3g} % of {torque_words(reference)} mean"
    why = "not given: an ordinary figure (common practice), since [assumptions] amplitudes = ordinary"
    return (0.0, share * reference, reference, f"{text}, ordinary"), (Assumed(source.name, "amplitude", text, why),)


def reference_torque(graph: TorsionalGraph, source: Source, mean: MeanTorques) -> float | None:
    """Mean torque [N·m] at rated speed that a share refers to: at the station, on the line, or in the link."""
    if not mean.known:
        return None
    action = source.action
    if action.kind == "link":
        position = [link.name for link in graph.links].index(action.link or "")
        value = mean.link_nm[position]
        return abs(float(value)) or None if np.isfinite(value) else None
    stations = action.stations or (source.station,)
    if action.kind == "line":
        found = [mean.in_links(graph, station) or 0.0 for station in stations]
        return max(found, default=0.0) or None
    return mean.at_station(graph, stations[0])


def _places(
    graph: TorsionalGraph, source: Source, notes: list[str]
) -> tuple[int | None, tuple[Floats | Complexes, ...]]:
    """Where it acts: stations of a line one by one, a pair of torques inside an elastic link, else one station."""
    action = source.action
    if action.kind == "link":
        position = [link.name for link in graph.links].index(action.link or "")
        link = graph.links[position]
        if link.stiffness_nm_rad is not None and link.slot not in ("rigid", "slack"):
            return position, (_pair(graph, link),)
        notes.append(
            f"{source.name}: its link is rigid, so its amplitude is applied as a torque at "
            f"{graph.stations[link.stations[0]]} (common practice)"
        )
        return None, (_unit(graph, link.stations[0]),)
    if action.kind == "line":
        return None, tuple(_unit(graph, station) for station in action.stations)
    if len(action.stations) == 1:
        return None, (_unit(graph, action.stations[0]),)
    return None, (_spread(graph, action),)


def _spread(graph: TorsionalGraph, action: Action) -> Complexes:
    """One amplitude at each of several stations, with the phases of the action."""
    load = np.zeros(len(graph.stations), dtype=complex)
    weights = action.weights or (1.0,) * len(action.stations)
    for station, phase, weight in zip(action.stations, action.phases_rad, weights, strict=True):
        load += _unit(graph, station) * weight * np.exp(-1j * phase)
    return load


def _unit(graph: TorsionalGraph, station: int) -> Floats:
    load = np.zeros(len(graph.stations))
    load[station] = graph.scale[station]
    return load


def _pair(graph: TorsionalGraph, link: GraphLink) -> Floats:
    load = np.zeros(len(graph.stations))
    for station, coefficient in zip(link.stations, link.coefficients, strict=True):
        load[station] += coefficient / link.torque_scale
    return load


def _frequencies(source: Source) -> tuple[tuple[float, float], ...]:
    order, constant = source.order * source.speed_ratio, TWO_PI * source.frequency_hz
    if not source.band or not constant:
        return ((order, constant),)
    return tuple((order, constant * factor) for factor in (1.0, 1.0 - source.band, 1.0 + source.band))
