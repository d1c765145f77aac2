"""Damped modes of a screened train: frequency, damping, energy lost by element, and what is unstable."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.damped_network import damped_network, link_place
from quillshaft.assess.results import Screening
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph, ViscousRing
from quillshaft.records import dataclass
from quillshaft.solve.damped import DampedModes, damped_modes

GROWS = 1e-11  # σ over |s| above which a motion grows
GROUND = "{} to ground"
RING = "{} ring"


@dataclass(frozen=True)
class DampedMode:
    """One damped mode, a motion Re(θ e^{st}) with s = σ + jω.

    mode             number in rising order of damped frequency
    undamped_mode    number of the undamped mode of the most similar shape, undamped_hz its frequency; None where
                     a ring of its own makes a mode that has no undamped one
    frequency_hz     ω / 2π; natural_hz |s| / 2π
    decay_1_s        −σ: amplitudes fall as e^(−decay · t); negative where they grow
    damping_ratio    −σ / |s|; log_decrement −2πσ / ω
    shape            actual angle by station, the largest is 1, and phase_deg how far each leads the largest
    energy_lost      share of the energy lost in a cycle, by link, damper and "<station> to ground"; those that lose
                     sum to 1, and what feeds energy in is negative
    unstable         True where the motion grows
    residual         largest imbalance of torques over the largest torque; verified where below 1e-9
    """

    mode: int
    undamped_mode: int | None
    undamped_hz: float | None
    frequency_hz: float
    natural_hz: float
    decay_1_s: float
    damping_ratio: float
    log_decrement: float
    shape: dict[str, float]
    phase_deg: dict[str, float]
    energy_lost: dict[str, float]
    unstable: bool
    residual: float
    verified: bool


@dataclass(frozen=True)
class AperiodicMotion:
    """A free motion that does not oscillate: overcritical, or a turning that dampers slow down.

    decay_1_s       amplitudes fall as e^(−decay · t); negative where they grow
    time_constant_s 1 / |decay|
    shape           actual angle by station, the largest is 1
    energy_lost     as in `DampedMode`
    """

    decay_1_s: float
    time_constant_s: float
    shape: dict[str, float]
    energy_lost: dict[str, float]
    unstable: bool
    residual: float
    verified: bool


@dataclass(frozen=True)
class DampedResult:
    """All free motions of a damped train.

    zeta             damping ratio whose loss factor 2ζ stands for links that state no damping
    default_links    names of those links
    rings            dampers whose ring turns by itself here
    rings_unknown    dampers whose viscous coefficient is not given: their rings count as in the undamped modes
    """

    screening: Screening
    modes: tuple[DampedMode, ...]
    aperiodic: tuple[AperiodicMotion, ...]
    zeta: float
    default_links: tuple[str, ...]
    rings: tuple[str, ...]
    rings_unknown: tuple[str, ...]

    @property
    def unstable(self) -> tuple[DampedMode | AperiodicMotion, ...]:
        """Motions that grow."""
        return (*(mode for mode in self.modes if mode.unstable), *(own for own in self.aperiodic if own.unstable))

    @property
    def all_verified(self) -> bool:
        """True where every motion satisfies the equations to a residual below 1e-9."""
        return all(mode.verified for mode in self.modes) and all(motion.verified for motion in self.aperiodic)


def damped_results(screening: Screening, zeta: float | None = None) -> DampedResult:
    """The damped modes of a train at rated speed; `zeta` for links that state none is the file's low value if None.

    Raises numpy.linalg.LinAlgError where damping to ground cancels on a station without inertia.
    """
    graph, train = screening.graph, screening.train
    used = train.zeta[0] if zeta is None else zeta
    rings = tuple(ring for ring in graph.rings if ring.viscous_nms_rad)
    network, damping = damped_network(graph, used)
    known = None if rings else screening.network_modes
    found = damped_modes(network, damping, known)
    names = (*graph.stations, *(RING.format(ring.name) for ring in rings))
    node = np.concatenate([graph.node, np.arange(len(graph.network.inertia_kgm2), network.nodes)])
    scale = np.concatenate([graph.scale, [graph.scale[ring.station] for ring in rings]])
    angles = found.oscillating.angle[:, node] * scale
    lost = _energy_lost(graph, rings, found.oscillating)
    matched = _matched(screening, found.oscillating.angle)
    aperiodic_angles = found.other.angle[:, node] * scale
    aperiodic_lost = _energy_lost(graph, rings, found.other)
    return DampedResult(
        screening,
        tuple(
            _mode(screening, index, found.oscillating, dict(zip(names, row, strict=True)), lost[index], matched[index])
            for index, row in enumerate(angles.tolist())
        ),
        tuple(
            _aperiodic(index, found.other, dict(zip(names, row, strict=True)), aperiodic_lost[index])
            for index, row in enumerate(aperiodic_angles.tolist())
        ),
        used,
        tuple(link.name for link in graph.links if link.loss_factor is None and link_place(link) is not None),
        tuple(ring.name for ring in rings),
        tuple(ring.name for ring in graph.rings if not ring.viscous_nms_rad),
    )


def _energy_lost(graph: TorsionalGraph, rings: tuple[ViscousRing, ...], found: DampedModes) -> list[dict[str, float]]:
    """Shares of each motion by name: every elastic link, every ring, and stations with damping to ground."""
    slots = {"spring": found.spring_loss, "tie": found.tie_loss, "torque": found.link_loss}
    places = [(link.name, link_place(link)) for link in graph.links]
    names = [name for name, place in places if place is not None]
    columns = [slots[place[0]][:, place[1]].sum(axis=1) for _, place in places if place is not None]
    first = found.spring_loss.shape[1] - len(rings)
    names += [ring.name for ring in rings]
    columns += [found.spring_loss[:, first + position] for position in range(len(rings))]
    if graph.viscous_nms_rad is not None:
        referred = graph.viscous_nms_rad * graph.scale**2
        whole = np.zeros(found.node_loss.shape[1])
        np.add.at(whole, graph.node, referred)
        for station in np.flatnonzero(referred):
            part = referred[station] / whole[graph.node[station]] if whole[graph.node[station]] else 0.0
            names.append(GROUND.format(graph.stations[station]))
            columns.append(found.node_loss[:, graph.node[station]] * part)
    shares = np.array(columns).reshape(len(columns), len(found.root_1_s)).T
    lost = np.where(shares > 0, shares, 0.0).sum(axis=1, keepdims=True)
    shares = shares / np.where(lost > 0, lost, 1.0)
    return [dict(zip(names, row, strict=True)) for row in shares.tolist()]


def _matched(screening: Screening, angle: Floats) -> list[int | None]:
    """Position of the undamped mode of the most similar shape, each used once; None where none is left.

    The most similar pair first, by |θᴴ M φ| over the size of the damped shape in the same inertia.
    """
    modes, network = screening.network_modes, screening.graph.network
    own = angle[:, : network.nodes]
    size = np.sqrt((np.abs(own) ** 2) @ network.inertia_kgm2)
    similar = np.abs((own * network.inertia_kgm2) @ modes.angle.T) / np.where(size > 0, size, 1.0)[:, None]
    chosen: list[int | None] = [None] * len(own)
    for _ in range(min(similar.shape)):
        row, column = np.unravel_index(int(np.argmax(similar)), similar.shape)
        chosen[int(row)] = int(column)
        similar[row, :] = similar[:, column] = -1.0
    return chosen


def _leading(shape: dict[str, complex]) -> dict[str, complex]:
    """The shape turned and scaled so that the first of its largest angles is 1."""
    largest = max(abs(value) for value in shape.values())
    first = next(value for value in shape.values() if abs(value) >= largest * (1.0 - 1e-6))
    return {name: value / first for name, value in shape.items()}


def _mode(
    screening: Screening,
    index: int,
    found: DampedModes,
    shape: dict[str, complex],
    lost: dict[str, float],
    matched: int | None,
) -> DampedMode:
    root = complex(found.root_1_s[index])
    turned = _leading(shape)
    return DampedMode(
        index + 1,
        None if matched is None else matched + 1,
        None if matched is None else float(screening.network_modes.omega_rad_s[matched]) / (2.0 * math.pi),
        root.imag / (2.0 * math.pi),
        abs(root) / (2.0 * math.pi),
        0.0 - root.real,
        0.0 - root.real / abs(root),
        0.0 - 2.0 * math.pi * root.real / root.imag,
        {name: abs(value) for name, value in turned.items()},
        {name: math.degrees(math.atan2(value.imag, value.real)) + 0.0 for name, value in turned.items()},
        lost,
        root.real > GROWS * abs(root),
        float(found.residual[index]),
        bool(found.verified[index]),
    )


def _aperiodic(index: int, found: DampedModes, shape: dict[str, complex], lost: dict[str, float]) -> AperiodicMotion:
    rate = float(found.root_1_s[index])
    turned = _leading(shape)
    return AperiodicMotion(
        0.0 - rate,
        1.0 / abs(rate) if rate else math.inf,
        {name: float(np.real(value)) for name, value in turned.items()},
        lost,
        rate > 0.0,
        float(found.residual[index]),
        bool(found.verified[index]),
    )
