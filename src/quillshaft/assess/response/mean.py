"""Mean torque of links and at stations over speed and load, by the load law."""

from __future__ import annotations

import numpy as np

from quillshaft.assess.along import torque_share
from quillshaft.assess.results import LinkDuty
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.train.model import Train


@dataclass(frozen=True)
class MeanTorques:
    """Mean torques [N·m] at rated speed and full load, actual.

    link_nm      (links,) at the first-named station; nan where not known
    station_nm   (stations,) of the power at each station; nan where [power] does not name it
    known        False where the file gives no power
    """

    link_nm: Floats
    station_nm: Floats
    known: bool

    def at_station(self, graph: TorsionalGraph, station: int) -> float | None:
        """Size of the mean torque [N·m] at a station: of its own power, else the largest of its links there."""
        own = self.station_nm[station]
        if np.isfinite(own) and own != 0:
            return abs(float(own))
        return self.in_links(graph, station)

    def in_links(self, graph: TorsionalGraph, station: int) -> float | None:
        """Largest mean torque [N·m] that a link passes on at a station, at that station's own speed."""
        found = [0.0]
        for index, link in enumerate(graph.links):
            if station in link.stations and np.isfinite(self.link_nm[index]):
                coefficient = abs(link.coefficients[link.stations.index(station)])
                referred = abs(float(self.link_nm[index])) / link.torque_scale
                found.append(referred * coefficient / float(graph.scale[station]))
        return max(found) or None


def mean_torques_of(
    train: Train, graph: TorsionalGraph, duties: tuple[LinkDuty, ...], powers: tuple[tuple[str, float], ...]
) -> MeanTorques:
    """The mean torques of a train from its link duties and its station powers [W]."""
    link = np.array([np.nan if duty.mean_torque_nm is None else duty.mean_torque_nm for duty in duties])
    station = np.full(len(graph.stations), np.nan)
    for name, watts in powers:
        number = graph.number(name)
        station[number] = watts / (train.operation.rated_rad_s * float(graph.scale[number]))
    return MeanTorques(link, station, train.power is not None)


def shares_along(train: Train, speed_rad_s: Floats) -> Floats:
    """(S,) mean torque over that at rated speed, by the load law; 1 where the file gives none.

    A train with an engine that gives torques runs at light load well below its idle speed, as when it is started.
    """
    share = _by_law(train, speed_rad_s)
    idle = train.operation.idle_rad_s
    if idle is None or not any(machine.gas is not None for machine in train.machines):
        return share
    low = STARTING * min(idle, train.operation.ranges_rad_s[0][0])
    return np.where(speed_rad_s < low, np.minimum(share, train.operation.light_load), share)


def _by_law(train: Train, speed_rad_s: Floats) -> Floats:
    if train.power is None or train.power.law is None:
        return np.ones(len(speed_rad_s))
    rated = train.operation.rated_rad_s
    if train.power.law == "constant-power":
        return np.asarray(1.0 / np.maximum(speed_rad_s / rated, CONSTANT_POWER_LOW))
    return np.array([torque_share(train.power, speed, rated) for speed in speed_rad_s.tolist()])


STARTING = 0.8
"""Share of idle speed below which an engine is being started."""
CONSTANT_POWER_LOW = 0.5
"""Share of rated speed below which a constant-power drive holds its torque (common practice)."""


def torque_words(torque_nm: float) -> str:
    """A torque [N·m] as written in words: four digits, thousands in full."""
    return f"{torque_nm:.0f} N·m" if abs(torque_nm) >= 1000.0 else f"{torque_nm:.4g} N·m"
