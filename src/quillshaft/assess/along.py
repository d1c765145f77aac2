"""Natural frequencies along the speed: couplings whose stiffness follows mean torque, pendulums."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np

from quillshaft.assess.mean_torque import mean_torques
from quillshaft.assess.results import LinkDuty
from quillshaft.graph.dampers import follows_pendulums, with_pendulums
from quillshaft.graph.network import Floats, Ints, Network
from quillshaft.graph.states import Temperature, follows_torque, with_mean_torques
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.train.basic_model import table_value
from quillshaft.train.model import Operation, Power, Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.validate import Findings

MOST_ROUNDS = 60
SETTLED = 1e-12
POINTS_A_RANGE = 33
POINTS_IN_ALL = 61
TWO_PI = 2.0 * math.pi


@dataclass(frozen=True)
class Track:
    """Natural frequencies along the speed of `speed-at`.

    speed_rad_s   (speeds,) rising, from near standstill to above the highest speed
    nominal_hz, low_hz, high_hz   (speeds, modes) nominal and over the tolerances; a column follows one mode
                  by its shape from the rated speed outward
    exact_hz      (speed [rad/s]) -> (modes,) nominal frequencies there, in ascending order
    """

    speed_rad_s: Floats
    nominal_hz: Floats
    low_hz: Floats
    high_hz: Floats
    exact_hz: Callable[[float], Floats]


def follows_speed(train: Train) -> bool:
    """True where natural frequencies follow speed: by a coupling's mean torque, or by pendulums."""
    return follows_torque(train) or follows_pendulums(train)


def torque_share(power: Power, speed_rad_s: float, rated_rad_s: float) -> float:
    """Mean torque at a speed over that at rated speed, by the load law; 1 at rated speed.

    square: torque as the square of the speed; constant-torque; constant-power: torque as 1 over the speed; a
    table: share of rated power over share of rated speed, the torque held below its first point and above its last.
    """
    ratio = speed_rad_s / rated_rad_s
    law = power.law
    if law == "square":
        return ratio**2
    if law == "constant-power":
        return 1.0 / ratio
    if isinstance(law, tuple):
        inside = min(max(speed_rad_s, law[0][0]), law[-1][0])
        return table_value(law, inside) * rated_rad_s / inside if inside > 0.0 else 0.0
    return 1.0


@dataclass(frozen=True)
class Settled:
    """A graph whose couplings stand at their mean torques, those torques at rated power, and whether the split
    of torque depends on the stiffness (elastic loops)."""

    graph: TorsionalGraph
    duties: tuple[LinkDuty, ...]
    split_follows_stiffness: bool


def settle(train: Train, graph: TorsionalGraph, temperature: Temperature, share: float = 1.0) -> Settled:
    """Put the couplings at a share of the rated mean torques, repeated until stiffness and torques agree.

    Raises TrainFileError where the file gives no power, so that the mean torque is not known.
    """
    if not follows_torque(train):
        return Settled(graph, mean_torques(train, graph), False)
    if train.power is None:
        findings = Findings(train.file, train.cases)
        text = "a coupling's stiffness is stated against mean torque, but no power is given"
        findings.add(("power",), text, None, "[power] with the mean power of each station")
        raise TrainFileError(tuple(findings.problems))
    duties = mean_torques(train, graph)
    largest = max(abs(duty.mean_torque_nm or 0.0) for duty in duties)
    rounds = 0
    while rounds < MOST_ROUNDS:
        torque = {duty.link: share * (duty.mean_torque_nm or 0.0) for duty in duties}
        graph = with_mean_torques(train, graph, torque, temperature)
        found = mean_torques(train, graph)
        pairs = zip(found, duties, strict=True)
        moved = max(abs((new.mean_torque_nm or 0.0) - (old.mean_torque_nm or 0.0)) for new, old in pairs)
        duties = found
        if moved <= SETTLED * largest:
            break
        rounds += 1
    return Settled(graph, duties, rounds > 0)


def graph_at(
    train: Train, settled: Settled, speed_rad_s: float, temperature: Temperature, share: float | None = None
) -> TorsionalGraph:
    """The graph at a speed: couplings at its mean torque, pendulums. Raises TrainFileError without a load law.

    share is the mean torque over that at rated speed; by the load law where it is not given.
    """
    graph = settled.graph
    if follows_torque(train):
        graph = _torque_graph(train, settled, speed_rad_s, temperature, share)
    return with_pendulums(train, graph, speed_rad_s)


def _torque_graph(
    train: Train, settled: Settled, speed_rad_s: float, temperature: Temperature, share: float | None
) -> TorsionalGraph:
    power = train.power
    if power is None or (power.law is None and _wide(train.operation)):
        findings = Findings(train.file, train.cases)
        text = "a coupling's stiffness follows mean torque and the range is wide: how does the load follow speed?"
        findings.add(("power",), text, None, 'law = "square" | "constant-torque" | "constant-power" | a table')
        raise TrainFileError(tuple(findings.problems))
    if share is None:
        share = torque_share(power, speed_rad_s, train.operation.rated_rad_s)
    if not settled.split_follows_stiffness:
        torque = {duty.link: share * (duty.mean_torque_nm or 0.0) for duty in settled.duties}
        return with_mean_torques(train, settled.graph, torque, temperature)
    return settle(train, settled.graph, temperature, share).graph


def _wide(operation: Operation) -> bool:
    low, high = operation.ranges_rad_s[0][0], operation.ranges_rad_s[-1][1]
    return high > 1.1 * low


def follow(train: Train, settled: Settled, temperature: Temperature) -> Track:
    """Natural frequencies along the speed, nominal and at both corners of the tolerances.

    Raises TrainFileError where the load law is needed and missing.
    """
    plan = plan_elimination(settled.graph.network)
    speeds = _speeds(train.operation)
    start = int(np.argmin(np.abs(speeds - train.operation.rated_rad_s)))
    graphs = [graph_at(train, settled, speed, temperature) for speed in speeds.tolist()]

    def along(pick: Callable[[TorsionalGraph], Network]) -> Floats:
        return _followed([natural_modes(pick(item), plan) for item in graphs], graphs[0].network, start)

    def exact(speed_rad_s: float) -> Floats:
        network = graph_at(train, settled, speed_rad_s, temperature).network
        return natural_modes(network, plan).omega_rad_s / TWO_PI

    return Track(
        speeds,
        along(lambda item: item.network),
        along(lambda item: item.soft_heavy),
        along(lambda item: item.stiff_light),
        exact,
    )


def _speeds(operation: Operation) -> Floats:
    top = 1.1 * max(operation.trip_rad_s or 0.0, operation.ranges_rad_s[-1][1], operation.rated_rad_s)
    stretches = [np.linspace(low, high, POINTS_A_RANGE) for low, high in operation.ranges_rad_s]
    whole = np.linspace(0.02 * top, top, POINTS_IN_ALL)
    extra = [operation.rated_rad_s, *(edge for pair in operation.barred_rad_s for edge in pair)]
    joined = sorted({*whole.tolist(), *extra, *(speed for stretch in stretches for speed in stretch.tolist())})
    return np.array(joined)


def _followed(modes: list[Modes], network: Network, start: int) -> Floats:
    """(speeds, modes) frequencies [Hz], each column one mode by its shape from position `start` outward."""
    count = len(modes[start].omega_rad_s)
    order = np.zeros((len(modes), count), dtype=np.intp)
    order[start] = np.arange(count)
    for step, positions in ((1, range(start + 1, len(modes))), (-1, range(start - 1, -1, -1))):
        for position in positions:
            before = modes[position - step].angle[order[position - step]]
            order[position] = match_shapes(before, modes[position].angle, network.inertia_kgm2)
    return np.array([item.omega_rad_s[row] for item, row in zip(modes, order, strict=True)]) / TWO_PI


def match_shapes(before: Floats, after: Floats, inertia_kgm2: Floats) -> Ints:
    """(modes,) position in `after` of each shape of `before`, both (modes, nodes) and inertia-orthonormal.

    The most similar pair first (mass-weighted similarity); ties keep their order.
    """
    similarity = np.abs((before * inertia_kgm2) @ after.T)
    chosen = np.zeros(len(before), dtype=np.intp)
    for _ in range(len(before)):
        row, column = np.unravel_index(int(np.argmax(similarity)), similarity.shape)
        chosen[row] = column
        similarity[row, :] = -1.0
        similarity[:, column] = -1.0
    return chosen
